"""Source times filters: what is left, what is refused, what is warned of."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import InputError, ResolutionWarning
from whitefringe.spectra import Flat, Gaussian, Line, Lines, Tabulated, Thermal, TopHat, detected

BAND = TopHat(centre=1.65 * u.um, width=0.3 * u.um)
RAMP = Tabulated(wavelength=[600, 650, 700] * u.nm, transmission_values=[0, 1, 0])


def test_the_product_of_source_and_filters():
    source, bell = Thermal(temperature=1500 * u.K), Gaussian(centre=1.6 * u.um, fwhm=0.2 * u.um)
    light = detected(source, BAND, bell)
    assert light.extent_si == pytest.approx(BAND.support_si)
    at = light.frequency_si[1:-1:500]
    product = source.rate_si(at) * bell.transmission_si(at)
    assert light.density_si(at) == pytest.approx(product, rel=1e-7)


def test_filters_commute():
    bell = Gaussian(centre=1.6 * u.um, fwhm=0.2 * u.um)
    assert np.array_equal(detected(Flat(), BAND, bell).density, detected(Flat(), bell, BAND).density)


def test_samples_set_the_cells():
    assert detected(Flat(), BAND).density.size == 8192
    assert detected(Flat(), BAND, samples=100).density.size == 100
    with pytest.raises(InputError, match="samples must be at least 4; got 2"):
        detected(Flat(), BAND, samples=2)


def test_a_line_is_weakened_by_the_filter():
    lamp = Lines([Line(wavelength=625 * u.nm, strength=4.0), Line(wavelength=800 * u.nm)])
    light = detected(lamp, RAMP)
    assert light.density.size == 0
    assert [line.strength for line in light.lines] == pytest.approx([2.0])


def test_a_filter_edge_across_a_line_warns():
    wide = Lines([Line(wavelength=625 * u.nm, fwhm=1 * u.nm)])
    with pytest.warns(ResolutionWarning, match=r"changes by 3\.9% across the line at 625 nm; only its strength is changed"):
        light = detected(wide, RAMP)
    assert light.lines[0].strength == pytest.approx(0.5)
    detected(Lines([Line(wavelength=625 * u.nm, fwhm=0.2 * u.nm)]), RAMP)


def test_the_edge_counts_against_the_peak_of_a_weak_filter():
    step = Tabulated(wavelength=[600, 632.999, 633.001, 700] * u.nm, transmission_values=[0, 0, 0.009, 0])
    with pytest.warns(ResolutionWarning, match="across the line at 633 nm"):
        detected(Lines([Line(wavelength=633 * u.nm, fwhm=10 * u.GHz)]), step)


@pytest.mark.parametrize(
    ("source", "filters", "message"),
    [
        (Flat(), (), "nothing bounds the light: give at least one filter, or a source that ends"),
        (Flat(), (BAND, TopHat(centre=1 * u.um, width=0.1 * u.um)), "source and filters have no common band"),
        (Thermal(temperature=3 * u.K), (BAND,), "source and filters have no common band"),
        (Lines([Line(wavelength=1 * u.um)]), (BAND,), "no light is left: the filters pass none of the lines"),
        (Flat(), (BAND, 3), "filters must be filter shapes such as spectra.TopHat; number 2 is 3"),
        (Flat(), ([BAND],), "filters must be filter shapes such as spectra.TopHat; number 1 is"),
        ("lamp", (BAND,), "source must be one such as spectra.Thermal; got 'lamp'"),
        (Flat(), (TopHat,), "filters must be filter shapes such as spectra.TopHat; number 1 is"),
        (Thermal, (BAND,), "source must be one such as spectra.Thermal; got"),
    ],
)
def test_what_cannot_be_detected(source, filters, message):
    with pytest.raises(InputError, match=message):
        detected(source, *filters)


def test_a_common_band_without_light():
    wavelength, values = [1.4, 1.45, 1.5, 1.6, 1.7] * u.um, [0, 1, 0, 0, 0]

    gap = Tabulated(wavelength=wavelength, transmission_values=values)
    with pytest.raises(InputError, match="no light: the continuum and the lines are all zero"):
        detected(Flat(), gap, TopHat(centre=1.55 * u.um, width=0.02 * u.um))
