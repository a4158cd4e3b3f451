"""Filter shapes against their formulas, and what they refuse."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import InputError, UnitsError
from whitefringe.spectra import Flat, Gaussian, Tabulated, Tilted, TopHat, detected
from whitefringe.units import SPEED_OF_LIGHT as C

from ..published import rows


@pytest.mark.parametrize("row", rows("sources", "filter width exact"))
def test_width_in_wavelength_is_converted_exactly(row):
    low, high = TopHat(centre=row.quantity("centre"), width=row.quantity("width")).support_si
    assert high - low == row.approx()


def test_top_hat_ends_at_its_edges():
    shape = TopHat(centre=1.65 * u.um, width=0.3 * u.um)
    assert shape.support_si == pytest.approx((C / 1.8e-6, C / 1.5e-6))
    assert shape.transmission([1.49, 1.51, 1.65, 1.79, 1.81] * u.um).tolist() == [0, 1, 1, 1, 0]
    by_frequency = TopHat(centre=200 * u.THz, width=40 * u.THz)
    assert by_frequency.support_si == pytest.approx((180e12, 220e12))


@pytest.mark.parametrize(
    ("centre", "fwhm"),
    [
        (1.65 * u.um, 0.2 * u.um),
        (200 * u.THz, 20 * u.THz),
        (1.65 * u.um, 20 * u.THz),
        (200 * u.THz, 50 * u.nm),
    ],
)
def test_gaussian_falls_to_half_at_half_its_width_on_the_axis_of_the_width(centre, fwhm):
    shape = Gaussian(centre=centre, fwhm=fwhm)
    middle = centre.to(fwhm.unit, u.spectral())
    at = u.Quantity([middle - fwhm, middle - fwhm / 2, middle, middle + fwhm / 2, middle + fwhm])
    assert shape.transmission(at) == pytest.approx([1 / 16, 0.5, 1, 0.5, 1 / 16])


def test_gaussian_is_followed_to_2e_15():
    shape = Gaussian(centre=1.65 * u.um, fwhm=0.2 * u.um)
    assert shape.transmission_si(np.array(shape.support_si)) == pytest.approx(16.0 ** -(3.5**2) * np.ones(2))
    assert 16.0 ** -(3.5**2) < 2e-15


def test_a_wide_gaussian_stops_at_a_tenth_of_its_centre():
    low, high = Gaussian(centre=1 * u.um, fwhm=1 * u.um).support_si
    assert high == pytest.approx(C / 0.1e-6)
    assert low == pytest.approx(C / 4.5e-6)


def test_tabulated_is_linear_in_wavelength():
    shape = Tabulated(wavelength=[1.5, 1.6, 1.8] * u.um, transmission_values=[0, 80, 0] * u.percent)
    assert shape.transmission([1.4, 1.5, 1.55, 1.6, 1.7, 1.8, 1.9] * u.um) == pytest.approx([0, 0, 0.4, 0.8, 0.4, 0, 0])
    assert shape.breakpoints_si == pytest.approx(C / np.array([1.8e-6, 1.6e-6, 1.5e-6]))
    assert shape.notes == ()


def test_a_table_in_frequency_or_falling_is_the_same_curve():
    wavelength = np.array([1.5, 1.6, 1.8]) * u.um
    values = [0, 0.8, 0]
    upright = Tabulated(wavelength=wavelength, transmission_values=values)
    falling = Tabulated(wavelength=wavelength[::-1], transmission_values=values[::-1])
    by_frequency = Tabulated(wavelength=wavelength.to(u.THz, u.spectral()), transmission_values=values)
    at = np.linspace(1.5, 1.8, 31)[1:-1] * u.um
    assert falling.transmission(at) == pytest.approx(upright.transmission(at))
    assert by_frequency.transmission(at) == pytest.approx(upright.transmission(at))


def test_tilted_filter_shifts_to_the_blue():
    # Macleod, Thin-Film Optical Filters: lambda = lambda0 sqrt(1 - (sin theta / n)^2); 30 deg, n = 2: sqrt(15)/4
    tilted = Tilted(filter=TopHat(centre=1.6 * u.um, width=10 * u.nm), angle=30 * u.deg, effective_index=2.0)
    assert tilted.factor == pytest.approx(np.sqrt(15) / 4)
    edges = C / np.array(tilted.support_si)
    assert edges == pytest.approx(np.array([1.605e-6, 1.595e-6]) * np.sqrt(15) / 4)
    assert Tilted(filter=tilted, angle=0 * u.deg).factor == 1.0


def test_tilted_table_is_the_table_at_scaled_wavelengths():
    table = Tabulated(wavelength=[1500, 1510, 1520, 1560] * u.nm, transmission_values=[0, 0.5, 1, 0])
    tilted = Tilted(filter=table, angle=10 * u.deg, effective_index=1.5)
    upright = np.array([1505, 1510, 1530])
    assert tilted.transmission(upright * tilted.factor * u.nm) == pytest.approx(table.transmission(upright * u.nm))
    light = detected(Flat(per="wavelength"), tilted)
    assert light.extent_si == pytest.approx(np.array(table.support_si) / tilted.factor)


REFUSED = [
    (TopHat, {"centre": 1.65, "width": 1 * u.nm}, UnitsError, "centre must carry a unit"),
    (TopHat, {"centre": 1.65 * u.um, "width": 300}, UnitsError, "width must carry a unit"),
    (TopHat, {"centre": 1.65 * u.um, "width": 3 * u.K}, UnitsError, "width must be convertible to Hz"),
    (TopHat, {"centre": 1.65 * u.um, "width": 0 * u.nm}, InputError, "width must be above zero"),
    (TopHat, {"centre": 1.65 * u.um, "width": -1 * u.THz}, InputError, "width must be above zero"),
    (
        TopHat,
        {"centre": 1 * u.um, "width": 2 * u.um},
        InputError,
        "less than twice the centre, .* got 2 of it",
    ),
    (TopHat, {"centre": 1 * u.um, "width": np.nan * u.um}, InputError, "width must be finite"),
    (TopHat, {"centre": [1, 2] * u.um, "width": 0.1 * u.um}, InputError, "centre must be one number"),
    (TopHat, {"centre": 1 * u.um, "width": [0.1, 0.2] * u.um}, InputError, "width must be one number"),
    (Gaussian, {"centre": 1.65 * u.um, "fwhm": 300}, UnitsError, "fwhm must carry a unit"),
    (Gaussian, {"centre": 1.65 * u.um, "fwhm": -3 * u.nm}, InputError, "fwhm must be above zero"),
    (Gaussian, {"centre": 1 * u.um, "fwhm": 3 * u.um}, InputError, "fwhm must be less than twice the centre"),
    (Gaussian, {"centre": [1, 2] * u.um, "fwhm": 0.1 * u.um}, InputError, "centre must be one number"),
]


@pytest.mark.parametrize(("shape", "given", "error", "message"), REFUSED)
def test_what_a_shape_refuses(shape, given, error, message):
    with pytest.raises(error, match=message):
        shape(**given)


@pytest.mark.parametrize(
    ("angle", "index", "error", "message"),
    [
        (5, 1.8, UnitsError, "angle must carry a unit"),
        (90 * u.deg, 1.8, InputError, "angle must be from 0 to below 90 deg; got 90.0 deg"),
        (-1 * u.deg, 1.8, InputError, "angle must be from 0 to below 90 deg"),
        (5 * u.deg, 1.0, InputError, "effective_index must be above 1; got 1.0"),
        (5 * u.deg, np.nan, InputError, "effective_index must be above 1; got nan"),
    ],
)
def test_what_a_tilted_filter_refuses(angle, index, error, message):
    with pytest.raises(error, match=message):
        Tilted(filter=TopHat(centre=1.6 * u.um, width=10 * u.nm), angle=angle, effective_index=index)
