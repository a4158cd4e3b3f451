"""Widths of atomic lines against tabulated values, and what they refuse."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import InputError, UnitsError
from whitefringe.spectra import doppler_fwhm, natural_fwhm, pressure_fwhm

from ..published import rows


@pytest.mark.parametrize("row", rows("sources", "Doppler width"))
def test_doppler_width(row):
    found = doppler_fwhm(row.quantity("line"), row.quantity("temperature"), row.quantity("mass"))
    assert found.unit == row.unit
    assert found.value == row.approx()


def test_doppler_width_of_a_frequency():
    wavelength = 632.9912 * u.nm
    arguments = (400 * u.K, 19.99244 * u.u)
    assert doppler_fwhm(wavelength.to(u.THz, u.spectral()), *arguments).value == pytest.approx(doppler_fwhm(wavelength, *arguments).value)


def test_doppler_width_in_the_handbook_form():
    # 7.1623265e-7 nu0 sqrt(T/M), M in u (references 3.1)
    assert doppler_fwhm(500 * u.THz, 400 * u.K, 4 * u.u).to_value(u.Hz) == pytest.approx(7.1623265e-7 * 5e14 * 10, rel=1e-7)


@pytest.mark.parametrize("row", rows("sources", "natural width"))
def test_natural_width(row):
    assert natural_fwhm(row.quantity("lifetime")).to_value(row.unit) == row.approx()


@pytest.mark.parametrize(
    ("coefficient", "gas", "hertz"),
    [
        (10 * u.MHz / u.Torr, 3 * u.Torr, 30e6),
        (10 * u.MHz / u.Torr, (3 * u.Torr).to(u.Pa), 30e6),
        (2e-9 * u.Hz * u.cm**3, 1e17 / u.cm**3, 2e8),
        # angular coefficient of the sodium D2 line in helium at 450 K, seen in an abstract (J. Phys. B): 1.62e-9 rad/s cm3
        (1.62e-9 * u.rad / u.s * u.cm**3, 1e17 / u.cm**3, 1.62e8 / (2 * np.pi)),
    ],
)
def test_pressure_width(coefficient, gas, hertz):
    assert pressure_fwhm(coefficient, gas).to_value(u.Hz) == pytest.approx(hertz, rel=1e-12)


@pytest.mark.parametrize(
    ("call", "error", "message"),
    [
        (lambda: doppler_fwhm(633, 400 * u.K, 20 * u.u), UnitsError, "line must carry a unit"),
        (lambda: doppler_fwhm(633 * u.nm, 400, 20 * u.u), UnitsError, "temperature must carry a unit"),
        (lambda: doppler_fwhm(633 * u.nm, 400 * u.K, 20), UnitsError, "mass must carry a unit"),
        (lambda: doppler_fwhm(633 * u.nm, 400 * u.K, 20 * u.m), UnitsError, "mass must be convertible to kg .for example 1 u.; got m"),
        (lambda: doppler_fwhm(633 * u.nm, 0 * u.K, 20 * u.u), InputError, "temperature must be above zero"),
        (lambda: natural_fwhm(16), UnitsError, "lifetime must carry a unit"),
        (lambda: natural_fwhm(-16 * u.ns), InputError, "lifetime must be above zero"),
        (lambda: pressure_fwhm(10, 3 * u.Torr), UnitsError, "coefficient must carry a unit"),
        (lambda: pressure_fwhm(10 * u.MHz / u.Torr, 3), UnitsError, "gas must carry a unit .a pressure or a number density"),
        (
            lambda: pressure_fwhm(10 * u.MHz / u.Torr, 3 * u.K),
            UnitsError,
            "coefficient times gas must be a frequency, for example .*; got MHz / Torr times K",
        ),
        (lambda: pressure_fwhm(-10 * u.MHz / u.Torr, 3 * u.Torr), InputError, "coefficient times gas must be above zero"),
    ],
)
def test_what_widths_refuse(call, error, message):
    with pytest.raises(error, match=message):
        call()
