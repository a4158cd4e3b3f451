"""Means and widths of spectra against closed forms; which light has none."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import InputError, UndefinedWidthError
from whitefringe.spectra import (
    Flat,
    Gaussian,
    Line,
    Spectrum,
    Tabulated,
    TopHat,
    detected,
    equivalent_width,
    full_width_half_maximum,
    mean_frequency,
    mean_wavelength,
    resolving_power,
)

C = 299792458.0
BAND = detected(Flat(), TopHat(centre=200 * u.THz, width=30 * u.THz))
BELL = detected(Flat(), Gaussian(centre=200 * u.THz, fwhm=20 * u.THz))
LINE = Spectrum(lines=(Line(wavelength=500 * u.THz, fwhm=2 * u.GHz),))


def triangle(samples=8192):
    """A triangle in frequency: peak at 200 THz, feet at 170 and 230 THz, so width and equivalent width are 30 THz."""
    return Spectrum.from_function(lambda f: 1 - np.abs(f - 200e12) / 30e12, (170e12, 230e12), breakpoints=[200e12], samples=samples)


def test_mean_frequency_of_symmetric_light():
    for light in (BAND, BELL, triangle()):
        assert mean_frequency(light).to_value(u.THz) == pytest.approx(200, rel=1e-12)
        assert mean_wavelength(light).to_value(u.um) == pytest.approx(C / 200e12 * 1e6, rel=1e-12)


def test_mean_frequency_of_a_ramp():
    # S = nu - 100 THz from 100 to 160 THz: the mean lies at two thirds
    light = Spectrum.from_function(lambda f: f - 100e12, (100e12, 160e12), samples=16)
    assert mean_frequency(light).to_value(u.THz) == pytest.approx(140, rel=1e-12)


def test_mean_frequency_counts_lines_and_weights():
    pair = Spectrum(lines=(Line(wavelength=100 * u.THz), Line(wavelength=200 * u.THz)))
    assert mean_frequency(pair).to_value(u.THz) == pytest.approx(150)
    # weighted by nu: (100^2 + 200^2) / (100 + 200)
    assert mean_frequency(pair.power_weighted()).to_value(u.THz) == pytest.approx(500 / 3)
    assert "photon-weighted" in mean_frequency(pair).definition
    assert "power-weighted" in mean_wavelength(pair.power_weighted()).definition


@pytest.mark.parametrize(("light", "terahertz"), [(BAND, 30), (BELL, 20), (LINE, 0.002)])
def test_full_width_in_frequency(light, terahertz):
    assert full_width_half_maximum(light).to_value(u.THz) == pytest.approx(terahertz, rel=1e-6)


@pytest.mark.parametrize("samples", [64, 8192])
def test_widths_of_a_triangle(samples):
    # the greatest cell mean stands one over the number of cells below a pointed peak
    light, near = triangle(samples), 1.1 / samples
    assert full_width_half_maximum(light).to_value(u.THz) == pytest.approx(30, rel=near)
    assert equivalent_width(light).to_value(u.THz) == pytest.approx(30, rel=near)


def test_full_width_in_wavelength():
    light = detected(Flat(), TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    assert full_width_half_maximum(light, "wavelength").to_value(u.nm) == pytest.approx(300, rel=1e-9)
    with pytest.raises(InputError, match='axis must be "frequency" or "wavelength"; got \'time\''):
        full_width_half_maximum(light, "time")


def test_full_width_spans_the_outermost_crossings():
    # two peaks with a deep gap: half maximum is met at 1525 and 1675 nm
    peaks = Tabulated(wavelength=[1500, 1550, 1600, 1650, 1700] * u.nm, transmission_values=[0, 1, 0, 1, 0])
    found = full_width_half_maximum(detected(Flat(), peaks), "wavelength").to_value(u.nm)
    assert found == pytest.approx(150, rel=1e-3)


def test_equivalent_width_of_known_shapes():
    # Tokunaga & Vacca 2005, appendix: integral over maximum; Gaussian: sqrt(pi / (4 ln 2)) times its full width
    assert equivalent_width(BAND).to_value(u.THz) == pytest.approx(30)
    assert equivalent_width(BELL).to_value(u.THz) == pytest.approx(20 * np.sqrt(np.pi / (4 * np.log(2))), rel=1e-6)
    assert equivalent_width(BELL).citation == "tokunaga-vacca"


def test_equivalent_width_of_a_triangle_in_wavelength():
    # T rises over a and falls over b on either side of l0; per hertz, int T c / l^2 dl by parts is
    # c [ln(l0 / l1) / a - ln(l2 / l0) / b]
    short, middle, long = 1.5e-6, 1.6e-6, 1.8e-6
    table = Tabulated(wavelength=[short, middle, long] * u.m, transmission_values=[0, 1, 0])
    area = C * (np.log(middle / short) / (middle - short) - np.log(long / middle) / (long - middle))
    assert equivalent_width(detected(Flat(), table)).to_value(u.Hz) == pytest.approx(area, rel=2e-4)
    assert detected(Flat(), table).total_rate == pytest.approx(area, rel=1e-12)


def test_resolving_power():
    assert resolving_power(BELL).to_value(u.one) == pytest.approx(10, rel=1e-6)
    assert resolving_power(LINE).to_value(u.one) == pytest.approx(250_000)
    assert resolving_power(BELL).unit == u.dimensionless_unscaled


TWO = Spectrum(lines=(Line(wavelength=1 * u.um), Line(wavelength=2 * u.um)))
MIXED = Spectrum(start=1 * u.THz, step=1 * u.THz, density=np.ones(9), lines=TWO.lines[:1])


@pytest.mark.parametrize("light", [TWO, MIXED])
def test_several_parts_have_no_full_width(light):
    for measure in (full_width_half_maximum, resolving_power):
        with pytest.raises(UndefinedWidthError, match=r"no meaning for several lines, or lines on a continuum; ask for"):
            measure(light)


def test_a_monochromatic_line_has_no_full_width():
    with pytest.raises(UndefinedWidthError, match="a monochromatic line has no width, and its coherence length has no end"):
        full_width_half_maximum(Spectrum(lines=TWO.lines[:1]))


def test_lines_have_no_equivalent_width():
    with pytest.raises(UndefinedWidthError, match="light of lines only has no equivalent width"):
        equivalent_width(TWO)


def test_equivalent_width_is_that_of_the_continuum():
    assert equivalent_width(MIXED).to_value(u.THz) == pytest.approx(9)
