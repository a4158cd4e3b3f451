"""Published sources, filters and laboratory lines."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.coherence import coherence_length, coherence_time, fringe_contrast
from whitefringe.spectra import Flat, Gaussian, Line, Spectrum, TopHat, detected, full_width_half_maximum

from ..published import rows


def band(row):
    return detected(Flat(), TopHat(centre=row.quantity("centre"), width=row.quantity("width")))


@pytest.mark.parametrize("row", rows("sources", "spectral width"))
def test_spectral_width(row):
    assert full_width_half_maximum(band(row)).to_value(row.unit) == row.approx()


@pytest.mark.parametrize("row", rows("sources", "coherence time"))
def test_coherence_time(row):
    assert coherence_time(band(row), "power").to_value(row.unit) == row.approx(absolute=0)


@pytest.mark.parametrize("row", rows("sources", "coherence length"))
def test_coherence_length(row):
    assert coherence_length(band(row), "power").to_value(row.unit) == row.approx(absolute=0)


def as_line(row):
    line = Line(wavelength=row.quantity("centre"), fwhm=row.quantity("approximate"))
    return Spectrum(lines=(line,))


@pytest.mark.parametrize("row", rows("sources", "filter bandwidth length"))
def test_wavelength_squared_over_width(row):
    assert coherence_length(as_line(row)).to_value(row.unit) == row.approx()


@pytest.mark.parametrize("row", rows("sources", "filter gaussian power length"))
def test_gaussian_power_length(row):
    filtered = detected(Flat(), Gaussian(centre=row.quantity("centre"), fwhm=row.quantity("approximate")))
    for light in (as_line(row), filtered):
        assert coherence_length(light, "power").to_value(row.unit) == row.approx()


@pytest.mark.parametrize("row", rows("sources", "filter gaussian power time"))
def test_gaussian_power_time(row):
    assert coherence_time(as_line(row), "power").to_value(row.unit) == row.approx()


@pytest.mark.parametrize("row", rows("sources", "lamp line length"))
def test_lamp_lines(row):
    line = Line(wavelength=row.quantity("wavelength"), fwhm=row.quantity("fwhm"))
    assert coherence_length(Spectrum(lines=(line,))).to_value(row.unit) == row.approx()


def doublet(row):
    first, second = (Line(wavelength=row.quantity(name)) for name in ("first", "second"))
    return Spectrum(lines=(Line(wavelength=first.wavelength, strength=2.0), second))


@pytest.mark.parametrize("row", rows("sources", "doublet splitting"))
def test_sodium_splitting(row):
    low, high = doublet(row).extent_si
    assert ((high - low) * u.Hz).to_value(row.unit) == row.approx()


@pytest.mark.parametrize("row", rows("sources", "doublet beat"))
def test_sodium_contrast_comes_back_after_a_beat(row):
    path = np.linspace(0.9, 1.1, 20001) * row.value
    contrast = fringe_contrast(doublet(row), path * row.unit)
    assert path[np.argmax(contrast)] == row.approx()
    assert np.max(contrast) == pytest.approx(1, abs=1e-8)


@pytest.mark.parametrize("row", rows("sources", "doublet first minimum"))
def test_sodium_first_minimum(row):
    path = np.linspace(0, 1.9, 190_001) * row.value
    contrast = fringe_contrast(doublet(row), path * row.unit)
    assert path[np.argmin(contrast)] == row.approx()


@pytest.mark.parametrize("row", rows("sources", "doublet least contrast"))
def test_sodium_least_contrast(row):
    light = doublet(row)
    beat = 1 / (light.extent_si[1] - light.extent_si[0])
    assert fringe_contrast(light, beat / 2 * u.s) == row.approx()
