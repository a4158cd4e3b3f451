"""The filter shapes against their formulas: values, widths, what is cut off, what is refused."""

import astropy.units as u
import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import gamma as gamma_function

from whitefringe.errors import InputError, UnitsError
from whitefringe.spectra import (
    Flat,
    Gaussian,
    LongPass,
    Lorentzian,
    MultiCavity,
    ShortPass,
    SuperGaussian,
    TopHat,
    Trapezoid,
    detected,
    equivalent_width,
    full_width_half_maximum,
    mean_wavelength,
)
from whitefringe.units import SPEED_OF_LIGHT as C

CENTRE, WIDTH = 200 * u.THz, 10 * u.THz

PEAKS = {
    "gaussian": lambda **given: Gaussian(**given),
    "super-gaussian 2": lambda **given: SuperGaussian(order=2, **given),
    "super-gaussian 6": lambda **given: SuperGaussian(order=6, **given),
    "trapezoid": lambda **given: Trapezoid(edge=0.3 * given["fwhm"], **given),
    "lorentzian": lambda **given: Lorentzian(reach=8, **given),
    "multi-cavity 2": lambda **given: MultiCavity(cavities=2, reach=8, **given),
    "multi-cavity 5": lambda **given: MultiCavity(cavities=5, **given),
}

AREAS = {
    # integral over maximum in units of the full width, by substitution and the gamma function; derived
    "gaussian": np.sqrt(np.pi / (4 * np.log(2))),
    "super-gaussian 2": gamma_function(1.25) / np.log(2) ** 0.25,
    "super-gaussian 6": gamma_function(1 + 1 / 12) / np.log(2) ** (1 / 12),
    "trapezoid": 1.0,
    "lorentzian": np.arctan(16),
    "multi-cavity 5": (np.pi / 10) / np.sin(np.pi / 10),
}


@pytest.mark.parametrize("name", PEAKS)
@pytest.mark.parametrize(
    ("centre", "fwhm"), [(1.65 * u.um, 0.1 * u.um), (200 * u.THz, 10 * u.THz), (1.65 * u.um, 10 * u.THz), (200 * u.THz, 50 * u.nm)]
)
def test_half_passes_at_half_the_width_on_the_axis_of_the_width(name, centre, fwhm):
    shape = PEAKS[name](centre=centre, fwhm=fwhm)
    middle = centre.to(fwhm.unit, u.spectral())
    assert shape.transmission(u.Quantity([middle - fwhm / 2, middle, middle + fwhm / 2])) == pytest.approx([0.5, 1, 0.5], abs=1e-12)


@pytest.mark.parametrize("name", PEAKS)
def test_full_width_by_the_measure(name):
    by_frequency = detected(Flat(), PEAKS[name](centre=CENTRE, fwhm=WIDTH))
    assert full_width_half_maximum(by_frequency).to_value(u.THz) == pytest.approx(10, rel=1e-5)
    by_wavelength = detected(Flat(), PEAKS[name](centre=1.65 * u.um, fwhm=50 * u.nm))
    assert full_width_half_maximum(by_wavelength, "wavelength").to_value(u.nm) == pytest.approx(50, rel=1e-5)


@pytest.mark.parametrize("name", AREAS)
def test_equivalent_width(name):
    light = detected(Flat(), PEAKS[name](centre=CENTRE, fwhm=WIDTH))
    assert equivalent_width(light).to_value(u.THz) == pytest.approx(10 * AREAS[name], rel=1e-5)


def test_a_super_gaussian_of_order_one_is_the_gaussian():
    at = np.linspace(1.2, 2.1, 301) * u.um
    given = {"centre": 1.65 * u.um, "fwhm": 0.15 * u.um}
    first, second = SuperGaussian(order=1, **given), Gaussian(**given)
    assert first.support_si == pytest.approx(second.support_si, rel=1e-12)
    assert first.transmission(at) == pytest.approx(second.transmission(at), abs=1e-15)


def test_one_cavity_is_the_lorentzian():
    at = np.linspace(1.2, 2.1, 301) * u.um
    given = {"centre": 1.65 * u.um, "fwhm": 0.02 * u.um, "reach": 12}
    first, second = MultiCavity(cavities=1, **given), Lorentzian(**given)
    assert first.support_si == second.support_si
    assert first.missing == second.missing
    assert np.array_equal(first.transmission(at), second.transmission(at))


def test_a_top_hat_in_wavelength_is_none_in_frequency():
    by_wavelength = TopHat(centre=1.65 * u.um, width=0.3 * u.um)
    low, high = by_wavelength.support_si
    by_frequency = TopHat(centre=1.65 * u.um, width=(high - low) * u.Hz)
    assert np.subtract(*by_frequency.support_si[::-1]) == pytest.approx(high - low)
    # the same width in hertz, but 1.51 THz apart
    shift = (low + high) / 2 - C / 1.65e-6
    assert by_frequency.support_si == pytest.approx((low - shift, high - shift))
    assert shift == pytest.approx(C * (1.65 / (1.5 * 1.8) - 1 / 1.65) * 1e6)
    assert mean_wavelength(detected(Flat(), by_frequency)).to_value(u.um) == pytest.approx(1.65)
    assert mean_wavelength(detected(Flat(), by_wavelength)).to_value(u.um) == pytest.approx(2 / (1 / 1.5 + 1 / 1.8))


@pytest.mark.parametrize("reach", [10, 50, 500])
def test_what_a_lorentzian_leaves_out(reach):
    shape = Lorentzian(centre=200 * u.THz, fwhm=0.1 * u.THz, reach=reach)
    assert shape.missing == pytest.approx(1 - 2 / np.pi * np.arctan(2 * reach), rel=1e-9)
    low, high = shape.support_si
    assert (high - low) / 0.1e12 == pytest.approx(2 * reach)


@pytest.mark.parametrize("cavities", [2, 3, 7, 20])
def test_what_a_multi_cavity_filter_leaves_out(cavities):
    shape = MultiCavity(centre=200 * u.THz, fwhm=0.1 * u.THz, cavities=cavities)
    assert shape.missing == pytest.approx(1e-6, rel=1e-6)
    end = (shape.support_si[1] - 200e12) / 0.1e12
    tail = quad(lambda x: 1 / (1 + (2 * x) ** (2 * cavities)), end, np.inf)[0]
    whole = np.pi / (2 * cavities) / np.sin(np.pi / (2 * cavities))
    assert 2 * tail / whole == pytest.approx(1e-6, rel=1e-4)


def test_the_default_of_one_cavity_and_a_wing_that_meets_the_short_end():
    assert Lorentzian(centre=1 * u.um, fwhm=1 * u.nm).missing == pytest.approx(0.006366, rel=1e-3)
    wide = Lorentzian(centre=1 * u.um, fwhm=0.1 * u.um)
    assert C / wide.support_si[1] == pytest.approx(0.1e-6)
    # from x = -9 to x = 50 full widths: 1 - (atan 18 + atan 100) / pi
    assert wide.missing == pytest.approx(1 - (np.arctan(18) + np.arctan(100)) / np.pi, rel=1e-9)


@pytest.mark.parametrize("axis", ["wavelength", "frequency"])
def test_edges(axis):
    rise = 20 * u.nm if axis == "wavelength" else 2 * u.THz
    for shape, sign in ((LongPass(edge=1.65 * u.um, rise=rise), 1), (ShortPass(edge=1.65 * u.um, rise=rise), -1)):
        sign = sign if axis == "wavelength" else -sign
        at = (1.65 * u.um).to(rise.unit, u.spectral()) + sign * np.array([-3, -0.5, 0, 0.5, 3]) * rise
        # the standard normal is 0.9 at 1.28155 and 1 - 7.4e-15 at 7.6893
        assert shape.transmission(at) == pytest.approx([0, 0.1, 0.5, 0.9, 1], abs=1e-14)
        assert shape.transmission_si(np.array(shape.support_si)).min() < 1e-15


def test_edges_end_where_they_say():
    long, short = LongPass(edge=1.5 * u.um, rise=10 * u.nm), ShortPass(edge=1.5 * u.um, rise=10 * u.nm)
    assert long.end.to_value(u.um) == pytest.approx(15)
    assert short.end.to_value(u.um) == pytest.approx(0.15)
    assert C / long.support_si[0] == pytest.approx(15e-6)
    assert C / short.support_si[1] == pytest.approx(0.15e-6)
    band = detected(Flat(), LongPass(edge=1.5 * u.um, rise=10 * u.nm, end=2 * u.um), ShortPass(edge=1.8 * u.um, rise=10 * u.nm))
    assert full_width_half_maximum(band, "wavelength").to_value(u.nm) == pytest.approx(300, rel=1e-4)


def test_whole_numbers_stay_whole():
    shape = MultiCavity(centre=1 * u.um, fwhm=1 * u.nm, cavities=3.0 * u.dimensionless_unscaled)
    assert type(shape.cavities) is int
    assert shape.cavities == 3
    assert type(SuperGaussian(centre=1 * u.um, fwhm=1 * u.nm, order=2.0).order) is int


GIVEN = {"centre": 1.65 * u.um, "fwhm": 100 * u.nm}

REFUSED = [
    (SuperGaussian, {**GIVEN, "order": 1.5}, InputError, r"order must be a whole number; got 1\.5"),
    (SuperGaussian, {**GIVEN, "order": 0}, InputError, "order must be at least 1 and at most 20; got 0"),
    (MultiCavity, {**GIVEN, "cavities": 21}, InputError, "cavities must be at least 1 and at most 20; got 21"),
    (MultiCavity, {**GIVEN, "cavities": "two"}, InputError, "cavities must be one number without a unit; got 'two'"),
    (MultiCavity, {**GIVEN, "cavities": 2 * u.um}, InputError, "cavities must be one number without a unit"),
    (Lorentzian, {**GIVEN, "reach": 0.5}, InputError, r"reach must be at least 1 and at most 100000; got 0\.5"),
    (Lorentzian, {**GIVEN, "reach": np.nan}, InputError, "reach must be at least 1"),
    (Lorentzian, {"centre": 1.65 * u.um, "fwhm": 100}, UnitsError, "fwhm must carry a unit"),
    (Trapezoid, {**GIVEN, "edge": 110 * u.nm}, InputError, r"edge must be at most fwhm, 100\.0 nm; got 110\.0 nm"),
    (Trapezoid, {**GIVEN, "edge": 0 * u.nm}, InputError, "edge must be above zero"),
    (Trapezoid, {**GIVEN, "edge": 1 * u.THz}, InputError, "edge and fwhm must both be wavelengths or both be frequencies"),
    (Trapezoid, {"centre": 1 * u.um, "fwhm": 1.2 * u.um, "edge": 1.1 * u.um}, InputError, "reach below a tenth of the centre"),
    (LongPass, {"edge": 1.5 * u.um, "rise": 4 * u.um}, InputError, "rise must be less than twice the centre"),
    (
        LongPass,
        {"edge": 1.5 * u.um, "rise": 1 * u.nm, "end": 1 * u.um},
        InputError,
        "end must be a longer wavelength than the edge",
    ),
    (ShortPass, {"edge": 1.5 * u.um, "rise": 1 * u.nm, "end": 2 * u.um}, InputError, "end must be a shorter wavelength than the edge"),
    (ShortPass, {"edge": 1.5 * u.um, "rise": 1 * u.nm, "end": 1.5 * u.um}, InputError, "end must be a shorter wavelength"),
    (ShortPass, {"edge": 1.5, "rise": 1 * u.nm}, UnitsError, "edge must carry a unit"),
]


@pytest.mark.parametrize(("shape", "given", "error", "message"), REFUSED)
def test_what_a_shape_refuses(shape, given, error, message):
    with pytest.raises(error, match=message):
        shape(**given)
