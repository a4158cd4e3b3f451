"""Tilt, cone, temperature and leak of every shape against averages and shifts that are computed here by other means."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import InputError, UnitsError
from whitefringe.spectra import (
    BEAM_EFFECTS,
    FILTER_SHAPES,
    Flat,
    Gaussian,
    InCone,
    Leaky,
    Tabulated,
    Tilted,
    TopHat,
    Trapezoid,
    Warmed,
    bare_of,
    detected,
    full_width_half_maximum,
    in_beam,
    mean_wavelength,
    parameters_of,
    with_bare,
)
from whitefringe.units import SPEED_OF_LIGHT as C

from .. import contracts

TABLE = Tabulated(
    wavelength=np.array([1500, 1540, 1550, 1553, 1610, 1700]) * u.nm, transmission_values=[0, 0.1, 0.85, 0.3, 0.9, 0], origin="invented"
)
BAND = TopHat(centre=1.65 * u.um, width=10 * u.nm)


def built(member):
    return TABLE if member is Tabulated else member(**{name: item.start * item.unit for name, item in parameters_of(member).items()})


SHAPES = {member.shape: built(member) for member in FILTER_SHAPES}

EFFECTS = {
    "warmed": lambda band: band.warmed(by=10 * u.K, drift=0.02 * u.nm / u.K),
    "cooled": lambda band: band.warmed(by=-80 * u.K, drift=0.02 * u.nm / u.K),
    "tilted": lambda band: band.tilted(angle=4 * u.deg, effective_index=2.0),
    "cone": lambda band: band.in_cone(f_number=5, effective_index=2.0),
    "ring": lambda band: band.in_cone(f_number=1.5, effective_index=1.4, obstruction=0.4),
    "leaky": lambda band: band.with_leak(1e-4, low=0.9 * u.um, high=2.6 * u.um),
}


def inside(shape, wavelength):
    """Transmission at wavelengths [m], zero outside the support."""
    return shape.transmission(wavelength * u.m)


def over_pupil(shape, wavelength, f_number, index, obstruction):
    """Average over an evenly lit pupil: 600 000 rings of equal area, each ray by the effective-index formula."""
    area = obstruction**2 + (1 - obstruction**2) * (np.arange(600_000) + 0.5) / 600_000
    sine = np.sqrt(area) / (2 * f_number)
    return np.array([np.mean(inside(shape, at / np.sqrt(1 - (sine / index) ** 2))) for at in wavelength])


def places(shape, others=()):
    """Wavelengths [m] across the support, and near its kinks."""
    low, high = (C / edge for edge in shape.support_si[::-1])
    kinks = C / np.asarray(shape.breakpoints_si)
    at = np.concatenate([np.linspace(low, high, 7)[1:-1], kinks * (1 + 3e-4), kinks * (1 - 3e-4), np.asarray(others)])
    return at[(at > low) & (at < high)]


@pytest.mark.parametrize("name", SHAPES)
@pytest.mark.parametrize("effect", EFFECTS)
def test_it_is_a_filter(name, effect):
    band = EFFECTS[effect](SHAPES[name])
    contracts.is_a_filter(band)
    contracts.takes_every_spectral_axis(band)
    contracts.is_frozen(band)
    contracts.has_a_docstring(type(band))


@pytest.mark.parametrize("name", SHAPES)
@pytest.mark.parametrize(("f_number", "index", "obstruction"), [(5, 2.0, 0.0), (1.2, 1.5, 0.3), (0.5, 1.4, 0.0), (40, 1.8, 0.2)])
def test_cone_against_the_average_over_the_pupil(name, f_number, index, obstruction):
    shape = SHAPES[name]
    cone = shape.in_cone(f_number=f_number, effective_index=index, obstruction=obstruction)
    at = places(cone, others=[1.6e-6, 1.65e-6])
    # so many rings know the place of a jump to 8e-7 of the pupil
    assert inside(cone, at) == pytest.approx(over_pupil(shape, at, f_number, index, obstruction), abs=1e-6)


def test_cone_of_a_top_hat_in_closed_form():
    # the short edge reaches wavelength lambda at sin^2 theta = n^2 (1 - (lambda / edge)^2), from where on the rays pass
    cone = BAND.in_cone(f_number=4, effective_index=1.7)
    at = np.linspace(1637e-9, 1644.9e-9, 50)
    passing = 1 - np.clip(1.7**2 * (1 - (at / 1645e-9) ** 2) * (2 * 4) ** 2, 0, 1)
    assert inside(cone, at) == pytest.approx(passing, abs=1e-12)


def test_cone_of_a_table_in_closed_form():
    # T = a + b / q with q = c over lambda: its mean over q^2 between q1 and q2 is a + 2 b / (q1 + q2)
    slope = Tabulated(wavelength=[1.4, 1.6, 1.8] * u.um, transmission_values=[0, 1, 0])
    cone = slope.in_cone(f_number=3, effective_index=1.6)
    at = np.linspace(1.45e-6, 1.55e-6, 30)
    outer = np.sqrt(1 - 1 / (6 * 1.6) ** 2)
    upright = 2 * at / (1 + outer)
    assert inside(cone, at) == pytest.approx((upright - 1.4e-6) / 0.2e-6, abs=1e-9)


def test_a_slow_cone_is_no_cone():
    bell = Gaussian(centre=1.65 * u.um, fwhm=5 * u.nm)
    at = np.linspace(1.64e-6, 1.66e-6, 41)
    for f_number in (3e3, 1e4, 1e5, 1e8):
        assert inside(bell.in_cone(f_number=f_number), at) == pytest.approx(inside(bell, at), abs=1e-4 * (3e3 / f_number) ** 2 + 1e-8)


def test_cone_edges_are_breakpoints_so_that_light_is_kept():
    # int T dnu of the cone: every ray only scales the frequencies, by 1 / sqrt(1 - s / n^2), whose mean over s is closed
    cone = BAND.in_cone(f_number=2, effective_index=1.5)
    outermost = 1 / (2 * 2 * 1.5) ** 2
    mean_scale = 2 * (1 - np.sqrt(1 - outermost)) / outermost
    upright = np.subtract(*BAND.support_si[::-1])
    assert detected(Flat(), cone, samples=64).total_rate == pytest.approx(upright * mean_scale, rel=1e-12)


@pytest.mark.parametrize("name", SHAPES)
def test_tilt_scales_every_wavelength(name):
    # Macleod: lambda0 sqrt(1 - (sin theta / n)^2); 30 degrees and n = 2: sqrt(15) / 4
    shape = SHAPES[name]
    tilted = shape.tilted(angle=30 * u.deg, effective_index=2.0)
    at = places(shape)
    assert inside(tilted, at * np.sqrt(15) / 4) == pytest.approx(inside(shape, at), abs=1e-9)


@pytest.mark.parametrize("name", SHAPES)
def test_warmth_shifts_every_wavelength(name):
    shape = SHAPES[name]
    warm = shape.warmed(by=50 * u.K, drift=20 * u.pm / u.K)
    at = places(shape)
    assert inside(warm, at + 1e-9) == pytest.approx(inside(shape, at), abs=1e-6)
    assert C / np.array(warm.support_si) == pytest.approx(C / np.array(shape.support_si) + 1e-9, rel=1e-12)
    assert C / warm.breakpoints_si == pytest.approx(C / shape.breakpoints_si + 1e-9, rel=1e-12)


def test_warmth_moves_the_light_by_drift_times_kelvin():
    before, after = (mean_wavelength(detected(Flat(), band)) for band in (BAND, BAND.warmed(by=10 * u.K, drift=0.02 * u.nm / u.K)))
    assert after.to_value(u.nm) - before.to_value(u.nm) == pytest.approx(0.2, abs=1e-5)


@pytest.mark.parametrize("name", SHAPES)
def test_leak(name):
    shape = SHAPES[name]
    leaky = shape.with_leak(1e-3, low=2.6 * u.um, high=0.9 * u.um)
    at = np.array([0.85e-6, 0.95e-6, *places(shape), 2.55e-6, 2.65e-6])
    passed = inside(shape, at)
    within = (at > 0.9e-6) & (at < 2.6e-6)
    assert inside(leaky, at) == pytest.approx(np.where(within, passed + 1e-3 * (1 - passed), passed), abs=1e-12)


def test_leak_far_from_a_sharp_band_is_all_there():
    leaky = BAND.with_leak(0.01, low=100 * u.THz, high=150 * u.THz)
    low, high = BAND.support_si
    assert detected(Flat(), leaky, samples=64).total_rate == pytest.approx(0.01 * 50e12 + (high - low), rel=1e-12)


@pytest.mark.parametrize("first", EFFECTS)
@pytest.mark.parametrize("second", EFFECTS)
def test_they_follow_each_other_in_any_order(first, second):
    slope = Trapezoid(centre=1.65 * u.um, fwhm=30 * u.nm, edge=10 * u.nm)
    inner = EFFECTS[first](slope)
    both = EFFECTS[second](inner)
    contracts.is_a_filter(both)
    at = np.array([*places(both)[::4], 1.63e-6, 1.65e-6])
    factor = np.sqrt(1 - (np.sin(np.radians(4)) / 2) ** 2)
    passed = inside(inner, at)
    expected = {
        "warmed": lambda: inside(inner, at - 0.2e-9),
        "cooled": lambda: inside(inner, at + 1.6e-9),
        "tilted": lambda: inside(inner, at / factor),
        "cone": lambda: over_pupil(inner, at, 5, 2.0, 0.0),
        "ring": lambda: over_pupil(inner, at, 1.5, 1.4, 0.4),
        "leaky": lambda: np.where((at > 0.9e-6) & (at < 2.6e-6), passed + 1e-4 * (1 - passed), passed),
    }
    assert inside(both, at) == pytest.approx(expected[second](), abs=1e-6)


def test_all_at_once_in_the_stated_order():
    given = {"tilt": 4 * u.deg, "effective_index": 2.0, "f_number": 5, "obstruction": 0.3, "warmed_by": 10 * u.K}
    band = in_beam(TABLE, **given, drift=0.02 * u.nm / u.K, leak=1e-4, leak_low=1 * u.um, leak_high=2.5 * u.um)
    by_hand = (
        TABLE.warmed(by=10 * u.K, drift=0.02 * u.nm / u.K)
        .tilted(angle=4 * u.deg, effective_index=2.0)
        .in_cone(f_number=5, effective_index=2.0, obstruction=0.3)
        .with_leak(1e-4, low=1 * u.um, high=2.5 * u.um)
    )
    at = np.linspace(0.9, 2.6, 101) * u.um
    assert np.array_equal(band.transmission(at), by_hand.transmission(at))
    assert [type(band), type(band.filter), type(band.filter.filter), type(band.filter.filter.filter)] == [Leaky, InCone, Tilted, Warmed]
    assert in_beam(TABLE) is TABLE
    assert bare_of(band) is TABLE
    changed = with_bare(band, BAND)
    assert bare_of(changed) is BAND
    assert (changed.leak, changed.filter.f_number, changed.filter.filter.angle) == (1e-4, 5.0, 4 * u.deg)
    assert with_bare(TABLE, BAND) is BAND
    assert len({item.shape for item in BEAM_EFFECTS}) == len(BEAM_EFFECTS)


def test_a_cone_widens_and_shifts_to_the_blue():
    upright, cone = (detected(Flat(), band) for band in (BAND, BAND.in_cone(f_number=2, effective_index=1.5)))
    assert mean_wavelength(cone).value < mean_wavelength(upright).value
    assert full_width_half_maximum(cone, "wavelength").value > full_width_half_maximum(upright, "wavelength").value


REFUSED = [
    (lambda: BAND.in_cone(f_number=0.4), InputError, r"f_number must be at least 0\.5; got 0\.4"),
    (lambda: BAND.in_cone(f_number="fast"), InputError, "f_number must be one number without a unit; got 'fast'"),
    (lambda: BAND.in_cone(f_number=np.inf), InputError, "f_number must be at least"),
    (lambda: BAND.in_cone(f_number=5, effective_index=1.0), InputError, r"effective_index must be above 1; got 1\.0"),
    (lambda: BAND.in_cone(f_number=5, obstruction=-0.1), InputError, r"obstruction must be at least 0; got -0\.1"),
    (lambda: BAND.in_cone(f_number=5, obstruction=1), InputError, "obstruction must be below 1, the whole pupil"),
    (lambda: InCone(filter=3, f_number=5), InputError, "filter must be a filter shape such as spectra.TopHat; got 3"),
    (lambda: BAND.warmed(by=10, drift=0.02 * u.nm / u.K), UnitsError, "by must carry a unit"),
    (lambda: BAND.warmed(by=10 * u.K, drift=0.02 * u.nm), UnitsError, "drift must be convertible to m / K .*for example 1 nm / K"),
    (lambda: BAND.warmed(by=[1, 2] * u.K, drift=1 * u.nm / u.K), InputError, "by and drift must each be one number"),
    (lambda: BAND.warmed(by=-10 * u.K, drift=1 * u.um / u.K), InputError, r"shortest wavelength, 1\.645 um, below zero"),
    (lambda: Warmed(filter=TopHat, by=1 * u.K, drift=1 * u.nm / u.K), InputError, "filter must be a filter shape"),
    (lambda: BAND.with_leak(1.5, low=1 * u.um, high=2 * u.um), InputError, r"leak must be at least 0 and at most 1; got 1\.5"),
    (lambda: BAND.with_leak(1e-4, low=1 * u.um, high=1000 * u.nm), InputError, "low and high must differ: the leak needs a band"),
    (lambda: BAND.with_leak(1e-4, low=1, high=2 * u.um), UnitsError, "low must carry a unit"),
    (lambda: Leaky(filter="glass", leak=0, low=1 * u.um, high=2 * u.um), InputError, "filter must be a filter shape"),
    (lambda: in_beam(BAND, tilt=1 * u.deg), InputError, "effective_index belongs to tilt or f_number: state it with them"),
    (lambda: in_beam(BAND, effective_index=2.0), InputError, "effective_index belongs to tilt or f_number"),
    (lambda: in_beam(BAND, obstruction=0.2), InputError, "obstruction belongs to f_number: state both"),
    (lambda: in_beam(BAND, warmed_by=2 * u.K), InputError, "warmed_by, drift go together; not stated: drift"),
    (lambda: in_beam(BAND, leak=1e-4), InputError, "leak, leak_low, leak_high go together; not stated: leak_low, leak_high"),
]


@pytest.mark.parametrize(("build", "error", "message"), REFUSED)
def test_what_is_refused(build, error, message):
    with pytest.raises(error, match=message):
        build()
