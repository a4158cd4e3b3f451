"""Sums of sources: rates, ends, lines, shares, and what is refused."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.coherence import self_coherence
from whitefringe.errors import InputError
from whitefringe.spectra import (
    LASER_CAUTION,
    Diode,
    Flat,
    Lamp,
    Line,
    Lines,
    SingleModeLaser,
    TabulatedSource,
    Thermal,
    Together,
    TopHat,
    detected,
)
from whitefringe.units import SPEED_OF_LIGHT as C

BODY = Thermal(temperature=2900 * u.K)
DIODE = Diode(centre=1.6 * u.um, fwhm=40 * u.nm)
LASER = SingleModeLaser(wavelength=1.55 * u.um, linewidth=1 * u.MHz)
BAND = TopHat(centre=1.6 * u.um, width=0.2 * u.um)
RAMP = TabulatedSource(wavelength=[1.5, 1.6, 1.61] * u.um, values=[0, 1, 0], quantity="photons", per="hertz")


def test_rates_add():
    both = Together(sources=(BODY, DIODE), weights=(2, 0.5))
    at = np.linspace(*BAND.support_si, 51)
    assert both.rate_si(at) == pytest.approx(2 * BODY.rate_si(at) + 0.5 * DIODE.rate_si(at))


def test_plus_makes_a_sum():
    both = BODY + LASER
    assert isinstance(both, Together)
    assert (both.sources, both.weights) == ((BODY, LASER), (1.0, 1.0))
    three = Together(sources=(BODY, LASER), weights=(2, 3)) + DIODE
    assert (three.sources, three.weights) == ((BODY, LASER, DIODE), (2.0, 3.0, 1.0))
    assert Together(sources=(BODY, DIODE, LASER)) == (BODY + DIODE) + LASER
    with pytest.raises(TypeError, match="unsupported operand"):
        BODY + 3
    with pytest.raises(TypeError, match="unsupported operand"):
        Together(sources=(BODY,)) + Flat


def test_outside_its_ends_a_source_gives_nothing():
    both = DIODE + RAMP
    low, high = RAMP.support_si
    at = np.array([low * 0.999, high * 1.001])
    assert both.rate_si(at) == pytest.approx(DIODE.rate_si(at))
    assert both.support_si == pytest.approx((DIODE.support_si[0], DIODE.support_si[1]))
    assert set(RAMP.support_si) < set(both.breakpoints_si)


def test_the_sum_of_two_is_detected_like_the_two():
    both = detected(RAMP + DIODE, BAND)
    parts = [detected(part, BAND) for part in (RAMP, DIODE)]
    assert both.total_rate == pytest.approx(sum(part.total_rate for part in parts), rel=1e-9)
    delay = np.linspace(0, 200, 41) * u.um
    mean = sum(part.total_rate * self_coherence(part, delay) for part in parts) / sum(part.total_rate for part in parts)
    assert self_coherence(both, delay) == pytest.approx(mean, abs=2e-6)


def test_lines_keep_their_place_on_a_continuum():
    light = detected(Together(sources=(DIODE, LASER), weights=(1, 4e12)), BAND)
    assert light.lines[0].strength == 4e12
    assert light.density.size > 0


def test_lines_only():
    both = LASER + Lines([Line(wavelength=1.6 * u.um, strength=2)])
    assert both.support_si == (0.0, 0.0)
    assert [line.strength for line in detected(both).lines] == [1, 2]
    assert np.all(both.rate_si(np.array([1e14, 2e14])) == 0)


def test_a_weight_of_zero_takes_a_source_out():
    assert Together(sources=(BODY, LASER), weights=(1, 0)).lines == ()
    assert Together(sources=(BODY, LASER), weights=(0, 1)).support_si == (0.0, 0.0)


@pytest.mark.parametrize("shares", [[3, 1], (0.3, 0.1)])
def test_shares_of_the_photons(shares):
    both = Together.with_shares([BODY, LASER], shares, [BAND])
    light = detected(both, BAND)
    assert light.continuum_rate / light.total_rate == pytest.approx(0.75, rel=1e-12)


def test_the_caution_of_a_laser_is_that_of_the_sum():
    assert (BODY + LASER).caution == LASER_CAUTION
    assert ((DIODE + BODY) + LASER).caution == LASER_CAUTION
    assert (BODY + Lamp.named("neon")).caution == ""


def test_the_finest_ripple_of_any_source():
    rippled = Diode(centre=1.6 * u.um, fwhm=40 * u.nm, ripple=0.1, ripple_period=50 * u.GHz)
    assert (BODY + rippled).finest_si == 50e9
    assert (BODY + DIODE).finest_si == np.inf


def test_a_sum_of_sums():
    inner = Together(sources=(DIODE, LASER), weights=(2, 3))
    outer = Together(sources=(inner, RAMP), weights=(10, 1))
    assert float(outer.rate_si(np.array([C / 1.6e-6]))[0]) == pytest.approx(21.0)
    assert outer.lines[0].strength == pytest.approx(30)


@pytest.mark.parametrize(
    ("given", "message"),
    [
        ({"sources": ()}, "sources must be one or more sources such as"),
        ({"sources": (BODY, 3)}, "sources must be one or more sources such as"),
        ({"sources": (BODY, Flat)}, "sources must be one or more sources such as"),
        ({"sources": BODY}, "sources must be one or more sources such as"),
        ({"sources": (BODY, LASER), "weights": (1,)}, "weights must be one per source; got 1 for 2 sources"),
        ({"sources": (BODY, LASER), "weights": (1, -1)}, "weights must be zero or more, and at least one above zero"),
        ({"sources": (BODY, LASER), "weights": (0, 0)}, "weights must be zero or more, and at least one above zero"),
        ({"sources": (BODY,), "weights": (np.nan,)}, "weights must be zero or more, and at least one above zero"),
    ],
)
def test_what_a_sum_refuses(given, message):
    with pytest.raises(InputError, match=message):
        Together(**given)


def test_shares_refuse():
    with pytest.raises(InputError, match="shares must be one per source; got 1 for 2 sources"):
        Together.with_shares([BODY, LASER], [1])
    with pytest.raises(InputError, match="the filters pass none of the lines"):
        Together.with_shares([BODY, Lamp.named("sodium")], [1, 1], [BAND])
