"""Glasses against printed indices and dispersion, and the change from catalogue index to absolute index by other means."""

import astropy.units as u
import mpmath as mp
import numpy as np
import pytest
from scipy.optimize import brentq

from whitefringe import media
from whitefringe.units import SPEED_OF_LIGHT

from ..published import rows

MICRON = 1e-6


def catalogue(row):
    """The glass of a row as its source prints it: relative index, wavelengths in air."""
    return media.Glass.named(row.inputs["glass"]).in_catalogue_terms


@pytest.mark.parametrize("row", rows("glass", "index"))
def test_index(row):
    assert catalogue(row).refractive_index(row.quantity("wavelength")).value == row.approx()


@pytest.mark.parametrize("row", rows("glass", "group index"))
def test_group_index(row):
    assert catalogue(row).group_index(row.quantity("wavelength")).value == row.approx()


@pytest.mark.parametrize("row", rows("glass", "slope"))
def test_slope_with_wavelength(row):
    sigma = 1 / row.quantity("wavelength").to_value(u.m)
    first = catalogue(row).refractivity_si(np.array(sigma))[1]
    assert -(sigma**2) * first * MICRON == row.approx()  # dn/dL = -sigma^2 dn/dsigma


@pytest.mark.parametrize("row", rows("glass", "curvature"))
def test_curvature_with_wavelength(row):
    sigma = 1 / row.quantity("wavelength").to_value(u.m)
    _, first, second, _ = catalogue(row).refractivity_si(np.array(sigma))
    assert (sigma**4 * second + 2 * sigma**3 * first) * MICRON**2 == row.approx()


@pytest.mark.parametrize("row", rows("glass", "group velocity dispersion"))
def test_group_velocity_dispersion(row):
    assert catalogue(row).group_velocity_dispersion(row.quantity("wavelength")).to_value(row.unit) == row.approx()


@pytest.mark.parametrize("row", rows("glass", "dispersion parameter"))
def test_dispersion_parameter(row):
    """D = -(2 pi c / L^2) d^2k/domega^2, the form that fibre data are given in."""
    wavelength = row.quantity("wavelength")
    found = -2 * np.pi * (SPEED_OF_LIGHT * u.m / u.s) / wavelength**2 * catalogue(row).group_velocity_dispersion(wavelength)
    assert found.to_value(row.unit) == row.approx()


@pytest.mark.parametrize("row", rows("glass", "dispersive power"))
def test_dispersive_power(row):
    """(n_d - 1) / (n_F - n_C), and the same with the lines e, F' and C'."""
    glass = catalogue(row)
    sigma = np.array([1 / row.quantity(name).to_value(u.m) for name in ("short", "middle", "long")])
    short, middle, long = glass.refractivity_si(sigma)[0]
    assert middle / (short - long) == row.approx()


@pytest.mark.parametrize("row", rows("glass", "zero of dispersion"))
def test_zero_of_dispersion(row):
    glass = catalogue(row)
    ends = (row.quantity(name).to_value(u.um) for name in ("low", "high"))
    assert brentq(lambda x: glass.group_velocity_dispersion(x * u.um).value, *ends, xtol=1e-9) == row.approx()


@pytest.mark.parametrize("row", rows("glass", "thermal coefficient"))
def test_thermal_coefficient(row):
    glass, wavelength = media.Glass.named(row.inputs["glass"]), row.quantity("wavelength")
    cold, warm = (glass.under(temperature=row.quantity(name)) for name in ("cold", "warm"))
    kelvin = (warm.now - cold.now).value
    change = (warm.refractive_index(wavelength) - cold.refractive_index(wavelength)).value / kelvin
    assert change == row.approx(absolute=0)


# ---------------------------------------------------------------- absolute index, independently

AIR_POLES = (("0.05792105", "238.0185"), ("0.00167917", "57.362"))
"""Dispersion of dry standard air, Ciddor 1996, eq. 1."""


def compressibility(kelvin):
    t = kelvin - mp.mpf("273.15")
    first = mp.mpf("1.58123e-6") - mp.mpf("2.9331e-8") * t + mp.mpf("1.1043e-10") * t**2
    return 1 - 101325 / kelvin * first + (101325 / kelvin) ** 2 * mp.mpf("1.83e-11")


def air(s, celsius):
    """Index of dry air of 1 atm at wavenumber s [1/um]."""
    kelvin, standard = mp.mpf("273.15") + celsius, mp.mpf("288.15")
    density = compressibility(standard) * standard / (compressibility(kelvin) * kelvin)
    return 1 + density * mp.fsum(mp.mpf(k) / (mp.mpf(c) - s**2) for k, c in AIR_POLES)


TERMS = {
    "fused silica": (20, [("0.6961663", "0.0684043"), ("0.4079426", "0.1162414"), ("0.8974794", "9.896161")]),
    "CaF2": (24, [("0.5675888", "0.050263605"), ("0.4710914", "0.1003909"), ("3.8484723", "34.649040")]),
    "ZnSe": (23, [("4.45813734", "0.200859853"), ("0.467216334", "0.391371166"), ("2.89566290", "47.1362108")]),
}
"""Stated temperature [deg_C] and (b, root of c [um]) of some glasses."""


def absolute(name, s):
    """Absolute index at a vacuum wavenumber s [1/um]: the catalogue's at the wavelength in air, times that of the air."""
    celsius, terms = TERMS[name]
    square = 1 / (air(s, celsius) * s) ** 2  # of the wavelength in air
    relative = mp.sqrt(1 + mp.fsum(mp.mpf(b) * square / (square - mp.mpf(c) ** 2) for b, c in terms))
    return relative * air(s, celsius)


@pytest.mark.parametrize("micron", ["0.65", "1.55", "2.2", "3.5"])
@pytest.mark.parametrize("name", TERMS)
def test_absolute_index_and_its_derivatives(name, micron):
    glass = media.Glass.named(name)
    with mp.workdps(40):
        s = 1 / mp.mpf(micron)
        n, first, second, third = (mp.diff(lambda x: x * absolute(name, x), s, order) for order in range(4))
        c = mp.mpf("299.792458")  # um/ps
        expected = n / s, first, second / (2 * mp.pi * c**2) * 1e9, third / (4 * mp.pi**2 * c**3) * 1e12
    where = float(micron) * u.um
    found = (
        glass.refractive_index(where).value,
        glass.group_index(where).value,
        glass.group_velocity_dispersion(where).to_value(u.fs**2 / u.mm),
        glass.third_order_dispersion(where).to_value(u.fs**3 / u.mm),
    )
    assert found[0] == pytest.approx(float(expected[0]), rel=1e-15)
    assert found[1] == pytest.approx(float(expected[1]), rel=3e-15)
    # the two left are differences of larger terms
    assert found[2] == pytest.approx(float(expected[2]), rel=1e-12, abs=1e-10)
    assert found[3] == pytest.approx(float(expected[3]), rel=1e-12, abs=1e-10)


def test_absolute_and_catalogue_index_differ_by_the_air():
    silica = media.Glass.named("fused silica")
    difference = silica.refractive_index(1.55 * u.um) - silica.in_catalogue_terms.refractive_index(1.55 * u.um)
    assert difference.value == pytest.approx(1.444 * 2.69e-4 + 0.0119825 * 1.55 * 2.69e-4, rel=0.02)
    vacuum = media.Glass(name="x", strengths=[1.0], resonances=[0.1] * u.um, low=0.3 * u.um, high=2 * u.um)
    assert vacuum.in_catalogue_terms.refractive_index(1 * u.um) == vacuum.refractive_index(1 * u.um)


def test_packaged_glasses_have_sources():
    glasses = media.packaged_glasses()
    assert len({glass.name for glass in glasses}) == len(glasses) == 7
    for glass in glasses:
        assert glass.source
        inside = np.linspace(glass.low.value, glass.high.value, 50) * u.um
        index = glass.refractive_index(inside)
        assert np.all(np.isfinite(index) & (index > 1.2) & (index < 2.9))
        assert not glass.flags(inside)
    assert media.Glass.named("FUSED Silica") is not None
