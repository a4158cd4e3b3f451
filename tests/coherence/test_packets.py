"""How far the contrast holds, and false packets."""

import astropy.units as u
import numpy as np
import pytest
from scipy.optimize import brentq, minimize_scalar

from whitefringe import coherence, spectra
from whitefringe.errors import InputError, UndefinedWidthError
from whitefringe.units import SPEED_OF_LIGHT

BAND = spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um)
LIGHT = spectra.detected(spectra.Flat(), BAND)
LENGTH = SPEED_OF_LIGHT / (BAND.support_si[1] - BAND.support_si[0])


@pytest.mark.parametrize("level", [0.95, 0.8, 0.5, 0.3])
def test_delay_for_contrast_of_a_top_hat(level):
    # closed form: |gamma| = sinc(x), x = path difference over c / dnu (Goodman, Statistical Optics, sec. 5.1)
    x = brentq(lambda x: np.sinc(x) - level, 1e-6, 1, xtol=1e-14)
    assert coherence.delay_for_contrast(LIGHT, level).to_value(u.m) == pytest.approx(x * LENGTH, rel=1e-9)


def test_delay_for_contrast_of_a_gaussian():
    light = spectra.detected(spectra.Flat(), spectra.Gaussian(centre=200 * u.THz, fwhm=20 * u.THz))
    tau = np.sqrt(-np.log(0.8) * 4 * np.log(2)) / (np.pi * 20e12)
    assert coherence.delay_for_contrast(light, 0.8).to_value(u.m) == pytest.approx(tau * SPEED_OF_LIGHT, rel=1e-9)


@pytest.mark.parametrize("level", [0, 1, -0.1, 1.2])
def test_impossible_levels(level):
    with pytest.raises(InputError, match="contrast must be between 0 and 1; got"):
        coherence.delay_for_contrast(LIGHT, level)


def test_a_contrast_that_never_falls():
    two = spectra.Spectrum(lines=(spectra.Line(wavelength=500 * u.nm, strength=9), spectra.Line(wavelength=501 * u.nm)))
    with pytest.raises(UndefinedWidthError, match=r"does not fall to 0\.5"):
        coherence.delay_for_contrast(two, 0.5)


def test_side_lobes_of_a_top_hat():
    found = coherence.false_packets(LIGHT, delay_range=6 * LENGTH * u.m, above=0.05)
    assert len(found) == 5
    for order, packet in enumerate(found, start=1):
        top = minimize_scalar(lambda x: -abs(np.sinc(x)), bounds=(order, order + 1), method="bounded", options={"xatol": 1e-10})
        assert packet.opd.to_value(u.m) == pytest.approx(top.x * LENGTH, rel=1e-6)
        assert packet.height == pytest.approx(-top.fun, abs=1e-9)


def test_beats_of_two_lines_come_back_at_full_height():
    # sodium doublet, vacuum wavelengths (memory): beat period 581.542 um of path difference
    pair = [spectra.Line(wavelength=w * u.nm, strength=s) for w, s in ((589.15833, 2), (589.75581, 1))]
    found = coherence.false_packets(spectra.detected(spectra.Lines(pair)), delay_range=3 * u.mm, above=0.5)
    assert [packet.opd.to_value(u.um) for packet in found] == pytest.approx([581.542 * k for k in range(1, 6)], rel=1e-5)
    assert [packet.height for packet in found] == pytest.approx([1.0] * 5, abs=1e-9)


def test_revivals_of_an_even_comb():
    # modes at c / 2L for L = 0.3 m (references: 499.654 MHz) revive at multiples of 2L
    spacing = SPEED_OF_LIGHT / 0.6
    centre = 473.6127e12
    modes = [
        spectra.Line(wavelength=(centre + k * spacing) * u.Hz, fwhm=1 * u.kHz, profile="lorentzian", strength=np.exp(-(k**2) / 3))
        for k in range(-4, 5)
    ]
    found = coherence.false_packets(spectra.detected(spectra.Lines(modes)), delay_range=1.3 * u.m, above=0.5)
    assert [packet.opd.to_value(u.m) for packet in found] == pytest.approx([0.6, 1.2], rel=1e-6)
    expected = [np.exp(-np.pi * 1e3 * opd / SPEED_OF_LIGHT) for opd in (0.6, 1.2)]
    assert [packet.height for packet in found] == pytest.approx(expected, abs=1e-5)


def test_a_lower_bound_leaves_the_higher_packets():
    low, high = (coherence.false_packets(LIGHT, delay_range=100 * u.um, above=above) for above in (0.05, 0.15))
    assert high == tuple(packet for packet in low if packet.height >= 0.15)
    assert str(high[0]) == "12.8727 um: contrast 0.2172"


def test_a_gaussian_has_none():
    light = spectra.detected(spectra.Flat(), spectra.Gaussian(centre=200 * u.THz, fwhm=20 * u.THz))
    assert coherence.false_packets(light, delay_range=1 * u.mm, above=0.001) == ()


@pytest.mark.parametrize(
    ("settings", "message"),
    [
        ({"delay_range": 1 * u.mm, "above": 0}, "above must be between 0 and 1"),
        ({"delay_range": -1 * u.mm}, "delay_range must be one positive delay"),
        ({"delay_range": [1, 2] * u.mm}, "delay_range must be one positive delay"),
        ({"delay_range": 5.0}, "delay_range must carry a unit"),
    ],
)
def test_impossible_searches(settings, message):
    with pytest.raises(InputError, match=message):
        coherence.false_packets(LIGHT, **settings)


def test_a_range_of_too_many_beats_is_refused_for_lines_and_ends_with_the_grid_for_a_continuum():
    pair = spectra.detected(spectra.Lines([spectra.Line(wavelength=w * u.nm) for w in (589, 590)]))
    with pytest.raises(InputError, match=r"delay_range is too long for this light, .* at most 86\.\d m"):
        coherence.false_packets(pair, delay_range=100 * u.m)
    far = coherence.false_packets(LIGHT, delay_range=100 * u.m, above=0.05)
    assert far == coherence.false_packets(LIGHT, delay_range=1 * u.mm, above=0.05)


@pytest.mark.parametrize(("definition", "microns"), [("half", 400.36), ("e-fold", 240.0)])
def test_a_cold_lamp_of_distant_lines_has_its_first_crossing(definition, microns):
    # all lines of the packaged sodium lamp; values by an independent dense search
    light = spectra.detected(spectra.Lamp.named("sodium"))
    assert coherence.coherence_length(light, definition).to_value(u.um) == pytest.approx(microns, abs=0.1)


def test_a_narrow_band_on_a_wide_table_or_with_a_leak_has_its_width():
    bell = spectra.Gaussian(centre=650 * u.nm, fwhm=3 * u.nm)
    leaky = spectra.detected(spectra.Flat(), bell.with_leak(1e-4, low=400 * u.nm, high=1000 * u.nm))
    assert coherence.coherence_length(leaky, "half").to_value(u.um) == pytest.approx(122.6, abs=0.3)
    wavelength = np.arange(400, 1000.05, 0.1)
    table = spectra.Tabulated(wavelength=wavelength * u.nm, transmission_values=np.exp(-4 * np.log(2) * (wavelength - 650) ** 2))
    direct = spectra.detected(spectra.Flat(), spectra.Gaussian(centre=650 * u.nm, fwhm=1 * u.nm))
    for level in (0.8, 0.5):
        wide, narrow = (
            coherence.delay_for_contrast(item, level).to_value(u.um) for item in (spectra.detected(spectra.Flat(), table), direct)
        )
        assert wide == pytest.approx(narrow, rel=2e-2)
