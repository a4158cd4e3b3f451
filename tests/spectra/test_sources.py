"""Sources against Planck's law, an independent library and their own definitions."""

import astropy.units as u
import numpy as np
import pytest
from astropy.constants import h, k_B
from astropy.modeling.models import BlackBody
from scipy.optimize import minimize_scalar

from whitefringe.coherence import fringe_contrast
from whitefringe.errors import InputError, ResolutionWarning, UnitsError
from whitefringe.spectra import Diode, Flat, Line, Lines, Thermal, TopHat, detected
from whitefringe.spectra.measures import mean_frequency_si
from whitefringe.units import SPEED_OF_LIGHT as C

from ..published import rows

BAND = np.linspace(1.2, 2.5, 60) * u.um


@pytest.mark.parametrize("kelvin", [900, 2900, 5772])
def test_thermal_photon_rates_agree_with_astropy(kelvin):
    frequency = BAND.to(u.Hz, u.spectral())
    radiance = BlackBody(temperature=kelvin * u.K)(frequency)
    photons = (radiance / frequency).value
    rate = Thermal(temperature=kelvin * u.K).rate_si(frequency.value)
    assert rate / rate[0] == pytest.approx(photons / photons[0], rel=1e-10)


@pytest.mark.parametrize("row", rows("thermal", "peak of photons per hertz"))
def test_wien_displacement_of_the_photon_rate(row):
    scale = 3000.0 * k_B.value / h.value
    source = Thermal(temperature=3000 * u.K)
    found = minimize_scalar(
        lambda x: -source.rate_si(np.array(x * scale)),
        bounds=(1, 3),
        method="bounded",
        options={"xatol": 1e-9},
    )
    # at a maximum, the place is known to the square root of the rounding of the value only
    assert found.x == pytest.approx(row.value, abs=1e-7)


@pytest.mark.parametrize("row", rows("thermal", "mean photon energy over kT"))
def test_mean_photon_energy_of_a_black_body(row):
    light = detected(Thermal(temperature=3000 * u.K))
    assert mean_frequency_si(light) * h.value / (k_B.value * 3000) == row.approx()


def test_thermal_is_followed_to_40_kt():
    low, high = Thermal(temperature=3000 * u.K).support_si
    assert (low, high) == (0.0, pytest.approx(40 * 3000 * k_B.value / h.value))


def test_a_hot_source_is_bluer():
    band = TopHat(centre=1.65 * u.um, width=0.3 * u.um)
    cool, hot = (mean_frequency_si(detected(Thermal(temperature=t * u.K), band)) for t in (1000, 5000))
    assert hot > cool


def test_thermal_refuses():
    with pytest.raises(UnitsError, match="temperature must carry a unit"):
        Thermal(temperature=3000)
    with pytest.raises(InputError, match="temperature must be above zero"):
        Thermal(temperature=-1 * u.K)
    with pytest.raises(UnitsError, match="temperature must be convertible to K"):
        Thermal(temperature=3000 * u.eV)


def test_flat_per_hertz_and_per_wavelength():
    frequency = np.array([1e14, 2e14])
    assert Flat().rate_si(frequency).tolist() == [1, 1]
    assert Flat(per="wavelength").rate_si(frequency) == pytest.approx([1, 0.25])
    assert Flat().support_si == (0.0, np.inf)


def test_flat_per_wavelength_counts_equal_photons_in_equal_widths():
    shape = {"width": 20 * u.nm}
    counts = [detected(Flat(per="wavelength"), TopHat(centre=centre * u.um, **shape)).total_rate for centre in (1.0, 1.6, 2.4)]
    assert counts == pytest.approx([counts[0]] * 3, rel=1e-9)


def test_flat_refuses():
    with pytest.raises(InputError, match='per must be "hertz" or "wavelength"; got \'metre\''):
        Flat(per="metre")


@pytest.mark.parametrize("fwhm", [60 * u.nm, 6 * u.THz])
def test_diode_is_gaussian_on_the_axis_of_its_width(fwhm):
    source = Diode(centre=1.65 * u.um, fwhm=fwhm)
    middle = (1.65 * u.um).to(fwhm.unit, u.spectral())
    at = u.Quantity([middle - fwhm / 2, middle, middle + fwhm / 2]).to_value(u.Hz, u.spectral())
    assert source.rate_si(at) == pytest.approx([0.5, 1, 0.5])
    light = detected(source)
    assert light.extent_si == pytest.approx(source.support_si)


def test_diode_refuses():
    with pytest.raises(InputError, match="fwhm must be above zero"):
        Diode(centre=1.65 * u.um, fwhm=0 * u.nm)
    with pytest.raises(UnitsError, match="centre must carry a unit"):
        Diode(centre=1.65, fwhm=1 * u.nm)


def test_lines_refuse():
    with pytest.raises(InputError, match=r"lines must be one or more spectra\.Line\("):
        Lines([])
    with pytest.raises(InputError, match=r"lines must be one or more spectra\.Line\("):
        Lines([633 * u.nm])
    with pytest.raises(InputError, match="at least one line needs a strength above zero"):
        Lines([Line(wavelength=633 * u.nm, strength=0.0)])


RIPPLED = {"centre": 1.55 * u.um, "fwhm": 5 * u.THz, "ripple": 0.1}


@pytest.mark.parametrize("depth", [0.02, 0.1, 1.0])
@pytest.mark.parametrize("period", [0.15, 0.4])
def test_a_ripple_in_frequency_makes_ghosts_of_half_its_depth(depth, period):
    """The transform of a product with 1 + m cos(2 pi nu / P) is the packet and two copies of m/2 at -+1/P."""
    source = Diode(**{**RIPPLED, "ripple": depth}, ripple_period=period * u.THz)
    light = detected(source)
    tau = 1 / (period * 1e12)
    ghosts = fringe_contrast(light, [-tau, tau] * u.s)
    assert ghosts == pytest.approx([depth / 2] * 2, rel=3e-3)
    # the copy is as wide as the packet: a Gaussian whose contrast is 1/2 at 0.4412712 / fwhm (references 3.1)
    beside = tau + 0.4412712 / 5e12
    assert float(fringe_contrast(light, beside * u.s)) == pytest.approx(depth / 4, rel=5e-3)
    peak = minimize_scalar(
        lambda at: -float(fringe_contrast(light, at * u.s)),
        bounds=(0.95 * tau, 1.05 * tau),
        method="bounded",
        options={"xatol": 1e-7 * tau},
    )
    assert peak.x == pytest.approx(tau, rel=1e-4)


def test_a_ripple_in_wavelength_makes_ghosts_at_wavelength_squared_over_its_period():
    source = Diode(centre=1.55 * u.um, fwhm=10 * u.nm, ripple=0.1, ripple_period=0.5 * u.nm)
    light = detected(source)
    expected = 1.55e-6**2 / 0.5e-9
    peak = minimize_scalar(
        lambda at: -float(fringe_contrast(light, at * u.m)),
        bounds=(0.95 * expected, 1.05 * expected),
        method="bounded",
    )
    assert peak.x == pytest.approx(expected, rel=2e-3)
    # smeared, for the period in frequency changes across the band
    assert 0.03 < -peak.fun < 0.05


@pytest.mark.parametrize("period", [0.15 * u.THz, 1.2 * u.nm])
def test_the_depth_of_the_ripple(period):
    source = Diode(**RIPPLED, ripple_period=period)
    centre = C / 1.55e-6
    plain = Diode(centre=1.55 * u.um, fwhm=5 * u.THz)
    assert float(source.rate_si(np.array(centre))) == pytest.approx(1.1)
    half = centre + 0.075e12 if period.unit == u.THz else C / (1.55e-6 + 0.6e-9)
    assert float(source.rate_si(np.array(half)) / plain.rate_si(np.array(half))) == pytest.approx(0.9, rel=1e-6)
    assert source.finest_si == pytest.approx(period.to_value(u.THz) * 1e12 if period.unit == u.THz else C * 1.2e-9 / 1.55e-6**2)


def test_a_ripple_finer_than_the_grid_warns():
    source = Diode(**RIPPLED, ripple_period=10 * u.GHz)
    with pytest.warns(ResolutionWarning, match=r"ripple has 2.34 cells per period, fewer than 12.*: ask for samples=42000 or more"):
        detected(source)
    light = detected(source, samples=42000)
    assert float(fringe_contrast(light, 1e-10 * u.s)) == pytest.approx(0.05, rel=3e-3)


@pytest.mark.parametrize(
    ("given", "error", "message"),
    [
        ({"ripple": -0.1}, InputError, "ripple must be from 0 to 1; got -0.1"),
        ({"ripple": 1.1, "ripple_period": 1 * u.nm}, InputError, "ripple must be from 0 to 1; got 1.1"),
        ({"ripple": 0.1}, InputError, "ripple and ripple_period go together; give both, or neither"),
        ({"ripple_period": 1 * u.nm}, InputError, "ripple and ripple_period go together; give both, or neither"),
        ({"ripple": 0.1, "ripple_period": 0 * u.nm}, InputError, "ripple_period must be above zero"),
        ({"ripple": 0.1, "ripple_period": 1}, UnitsError, "ripple_period must carry a unit"),
        ({"ripple": 0.1, "ripple_period": 1 * u.kg}, UnitsError, "ripple_period must be convertible to Hz"),
    ],
)
def test_what_a_ripple_refuses(given, error, message):
    with pytest.raises(error, match=message):
        Diode(centre=1.55 * u.um, fwhm=5 * u.THz, **given)
