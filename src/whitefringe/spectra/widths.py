"""Widths of atomic lines: from the motion of the atoms, from their lifetime, and from collisions.

All are full widths at half maximum in hertz: of a Gaussian (Doppler) or of a Lorentzian (natural, pressure). Lorentzian widths
add; a Gaussian and a Lorentzian together make a Voigt line, ``spectra.Line(gaussian_fwhm=..., lorentzian_fwhm=...)``.
"""

from __future__ import annotations

from typing import Any

import astropy.units as u
import numpy as np
from astropy.constants import k_B

from ..errors import UnitsError
from ..units import SPEED_OF_LIGHT, as_quantity, one_frequency_si, positive_si


def doppler_fwhm(line: Any, temperature: Any, mass: Any) -> u.Quantity:
    """Full width at half maximum of a line emitted by atoms in thermal motion.

    dnu = (nu0 / c) sqrt(8 k T ln2 / m), of a Gaussian; nu0 the line's frequency, k Boltzmann's constant, T the temperature of the
    gas, m the mass of one atom.

    Parameters
    ----------
    line : Quantity [vacuum wavelength or frequency]
    temperature : Quantity [K]
        Of the emitting gas, which may be well above that of the lamp's wall.
    mass : Quantity [mass]
        Of one atom, for example ``198 * u.u``.

    Returns
    -------
    Quantity [MHz]

    Raises
    ------
    UnitsError, InputError
        A unit is missing or wrong, or a value is not above zero.

    Notes
    -----
    For slow atoms and dilute gas; hyperfine structure and isotopes of other wavelength come on top.

    References
    ----------
    Demtroeder, Laser Spectroscopy 1, 5th ed., sec. 3.2.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(doppler_fwhm(632.9912 * u.nm, 400 * u.K, 19.99244 * u.u).round(2))
    1517.31 MHz
    """
    frequency = one_frequency_si(line, "line")
    kelvin = positive_si(temperature, u.K, "temperature")
    return (doppler_fwhm_si(frequency, kelvin, positive_si(mass, u.kg, "mass", "u")) * u.Hz).to(u.MHz)


def doppler_fwhm_si(frequency: float, temperature: float, mass: float) -> float:
    """Twin of `doppler_fwhm`: hertz, kelvin and kilograms in, hertz out."""
    return float(frequency / SPEED_OF_LIGHT * np.sqrt(8 * k_B.si.value * temperature * np.log(2) / mass))


def natural_fwhm(lifetime: Any) -> u.Quantity:
    """Full width at half maximum that the lifetime of the upper level leaves: dnu = 1 / (2 pi tau), of a Lorentzian.

    Parameters
    ----------
    lifetime : Quantity [time]
        tau, in which the level's population falls to 1/e.

    Returns
    -------
    Quantity [MHz]

    Raises
    ------
    UnitsError, InputError
        No time, or not above zero.

    Notes
    -----
    Of a transition to the ground level. Where the lower level decays as well, add its own width.

    References
    ----------
    Demtroeder, Laser Spectroscopy 1, 5th ed., sec. 3.1.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(natural_fwhm(16.249 * u.ns).round(4))
    9.7948 MHz
    """
    return (natural_fwhm_si(positive_si(lifetime, u.s, "lifetime", "ns")) * u.Hz).to(u.MHz)


def natural_fwhm_si(lifetime: float) -> float:
    """Twin of `natural_fwhm`: seconds in, hertz out."""
    return float(1 / (2 * np.pi * lifetime))


def pressure_fwhm(coefficient: Any, gas: Any) -> u.Quantity:
    """Full width at half maximum that collisions leave: dnu = coefficient x pressure, or x number density, of a Lorentzian.

    Parameters
    ----------
    coefficient : Quantity [frequency / pressure, or frequency x volume]
        Full width per pressure or per number density. One in radians per second is divided by 2 pi. A coefficient of the
        half width, as some tables give it, must be doubled first.
    gas : Quantity [pressure or number density]

    Returns
    -------
    Quantity [MHz]

    Raises
    ------
    UnitsError
        The product is neither a frequency nor an angular frequency.
    InputError
        Not above zero.

    Notes
    -----
    Linear in density, as long as collisions are brief and between two atoms. The shift of the line is left out.

    References
    ----------
    Demtroeder, Laser Spectroscopy 1, 5th ed., sec. 3.3.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(pressure_fwhm(10 * u.MHz / u.Torr, 3 * u.Torr))
    30.0 MHz
    >>> print(pressure_fwhm(1.62e-9 * u.rad / u.s * u.cm**3, 1e17 / u.cm**3).round(3))
    25.783 MHz
    """
    factor = as_quantity(coefficient, "coefficient", "for example 10 MHz / Torr")
    amount = as_quantity(gas, "gas", "a pressure or a number density, for example 100 Pa or 1e16 / cm3")
    product = factor * amount
    angular = u.rad / u.s
    if product.unit.is_equivalent(angular):
        width = positive_si(product, angular, "coefficient times gas") / (2 * np.pi)
    elif product.unit.is_equivalent(u.Hz):
        width = positive_si(product, u.Hz, "coefficient times gas")
    else:
        raise UnitsError(
            f"coefficient times gas must be a frequency, for example 10 MHz / Torr times 3 Torr; got {factor.unit} times {amount.unit}"
        )
    return (width * u.Hz).to(u.MHz)


__all__ = ["doppler_fwhm", "natural_fwhm", "pressure_fwhm"]
