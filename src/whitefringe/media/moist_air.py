"""Water vapour in air: saturation pressure, enhancement factor, compressibility (the parts of the air formulas that know no wavelength)."""

from __future__ import annotations

import math
from typing import Any

import astropy.units as u

from ..errors import InputError
from ..units import as_si
from .medium import one_temperature_si

FREEZING = 273.15
"""Below this temperature [K], saturation is taken over ice, as the NIST documentation does."""

SATURATED = (190.0, 647.0)
"""Temperatures [K] from the lowest of the ice formula to the critical point of water (from memory)."""


def saturation_vapour_pressure(temperature: Any, form: str = "iapws") -> u.Quantity:
    """Return the saturation vapour pressure of water, over ice below 0 degrees C.

    Parameters
    ----------
    temperature : Quantity [K or deg_C], scalar
    form : str
        ``"iapws"``: IAPWS industrial formulation over water and its ice formula (as Stone & Zimmerman use them); ``"cipm"``: the formula
        in Ciddor 1996 (after Giacomo and Davis), svp = exp(A T^2 + B T + C + D / T), over ice log10 svp = 12.537 - 2663.5 / T.

    Returns
    -------
    Quantity [Pa]

    Raises
    ------
    InputError
        Unknown form, or a temperature beyond what the formulas are for.

    References
    ----------
    Ciddor 1996, doi:10.1364/AO.35.001566, appendix; Stone & Zimmerman, appendix A.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(f"{saturation_vapour_pressure(20 * u.deg_C, 'cipm'):.3f}")
    2339.163 Pa
    """
    if form not in SATURATION_FORMS:
        raise InputError(f"form must be one of {', '.join(SATURATION_FORMS)}; got {form!r}")
    return saturation_si(one_temperature_si(temperature), form) * u.Pa


def saturation_si(T: float, form: str) -> float:
    """Twin of `saturation_vapour_pressure`: kelvin in, pascal out."""
    low, high = SATURATED
    if not low <= T <= high:
        raise InputError(
            f"temperature {T:.6g} K lies outside {low:g} to {high:g} K, where the saturation pressure of ice and water is known; "
            "give a temperature of air"
        )
    return SATURATION_FORMS[form](T)


def _cipm(T: float) -> float:
    if T < FREEZING:
        return float(10 ** (12.537 - 2663.5 / T))
    return math.exp(1.2378847e-5 * T**2 - 1.9121316e-2 * T + 33.93711047 - 6.3431645e3 / T)


def _iapws(T: float) -> float:
    if T < FREEZING:
        theta = T / 273.16
        return 611.657 * math.exp(-13.928169 * (1 - theta**-1.5) + 34.7078238 * (1 - theta**-1.25))
    k = _IAPWS
    omega = T + k[8] / (T - k[9])
    a = omega**2 + k[0] * omega + k[1]
    b = k[2] * omega**2 + k[3] * omega + k[4]
    c = k[5] * omega**2 + k[6] * omega + k[7]
    return 1e6 * (2 * c / (-b + math.sqrt(b**2 - 4 * a * c))) ** 4


_IAPWS = (
    1.16705214528e3,
    -7.24213167032e5,
    -1.70738469401e1,
    1.20208247025e4,
    -3.23255503223e6,
    1.49151086135e1,
    -4.82326573616e3,
    4.05113405421e5,
    -2.38555575678e-1,
    6.50175348448e2,
)
"""K1 to K10 of the IAPWS saturation formula."""

SATURATION_FORMS = {"iapws": _iapws, "cipm": _cipm}


def enhancement_factor(pressure: Any, temperature: Any) -> float:
    """Return the factor by which moist air's saturation pressure exceeds that of pure water: f = alpha + beta p + gamma t^2.

    References
    ----------
    Ciddor 1996, doi:10.1364/AO.35.001566, appendix A (Giacomo 1982).

    Examples
    --------
    >>> import astropy.units as u
    >>> round(enhancement_factor(110 * u.kPa, 30 * u.deg_C), 4)
    1.0046
    """
    return enhancement_si(float(as_si(pressure, u.Pa, "pressure", "hPa")), one_temperature_si(temperature))


def enhancement_si(p: float, T: float) -> float:
    """Twin of `enhancement_factor`: pascal and kelvin."""
    return 1.00062 + 3.14e-8 * p + 5.6e-7 * (T - 273.15) ** 2


def compressibility_si(p: float, T: float, x: float) -> float:
    """Compressibility Z of moist air at `p` [Pa], `T` [K] and water mole fraction `x` (Ciddor 1996, eq. 12)."""
    t = T - 273.15
    first = 1.58123e-6 - 2.9331e-8 * t + 1.1043e-10 * t**2 + (5.707e-6 - 2.051e-8 * t) * x + (1.9898e-4 - 2.376e-6 * t) * x**2
    return 1 - (p / T) * first + (p / T) ** 2 * (1.83e-11 - 0.765e-8 * x**2)
