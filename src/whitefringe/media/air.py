"""Air from the ultraviolet to the near infrared: Ciddor 1996, and Edlen's formula as revised by Birch and Downs."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import ClassVar

import numpy as np

from ..standard_air import DISPERSION
from ..units import FloatArray
from ._air import Air, State, co2_fraction
from ._derivatives import poles, polynomial, rescaled
from .medium import Range
from .moist_air import compressibility_si, enhancement_si

PER_MICROMETRE = 1e-6
"""Wavenumber [1/um] over wavenumber [1/m]."""

STATED = "Stone & Zimmerman, from memory"
_STATED = (
    Range(name="temperature", low=-40.0, high=100.0, unit="deg_C", source=STATED),
    Range(name="pressure", low=10.0, high=140.0, unit="kPa", source=STATED),
    Range(name="relative humidity", low=0.0, high=100.0, unit="%", source=STATED),
)


@dataclass(frozen=True, kw_only=True)
class Ciddor1996(Air):
    """Moist air after Ciddor 1996.

    n - 1 = (rho_a / rho_axs) (n_axs - 1) + (rho_w / rho_ws) (n_ws - 1), with the dispersion of dry air at 15 degrees C and 101 325 Pa
    and of water vapour at 20 degrees C and 1333 Pa, and densities by the CIPM gas law.

    Parameters
    ----------
    temperature, pressure, humidity, extrapolate, saturation
        See `Air`. The paper's own tables use ``saturation="cipm"``.
    co2 : float or Quantity
        Mole fraction of carbon dioxide, 450e-6 by default.

    Notes
    -----
    Stated for 0.3 to 1.7 um, -40 to 100 degrees C, 10 to 140 kPa (Stone & Zimmerman); the paper itself says 1.69 um and 80 to 120 kPa.
    The sum of the two refractivities is linear; the paper's Lorentz-Lorenz form differs by less than 3e-9 in its table 1. One entry of
    the paper's table 3 (40 degrees C, 80 kPa, 75 %) is a misprint: 19996.5 for 19896.5.

    References
    ----------
    Ciddor, Appl. Opt. 35, 1566 (1996), doi:10.1364/AO.35.001566, eqs 1 to 5 and appendices; group index as its derivative with
    wavenumber (Ciddor & Hill, Appl. Opt. 38, 1663, 1999).

    Examples
    --------
    >>> import astropy.units as u
    >>> air = Ciddor1996(temperature=20 * u.deg_C, pressure=1013.25 * u.hPa, humidity=50 * u.percent)
    >>> print(f"{1e8 * (air.refractive_index(633 * u.nm) - 1):.3f} {1e8 * (air.group_index(633 * u.nm) - 1):.3f}")
    27137.273 27925.601
    """

    name: str = field(default="Ciddor 1996", init=False)
    shape: ClassVar[str] = "ciddor 1996"
    wavelengths: ClassVar[Range] = Range(name="wavelength", low=0.3, high=1.7, unit="um", source=STATED)
    stated: ClassVar[tuple[Range, Range, Range]] = _STATED

    @property
    def co2_si(self) -> float:
        """Mole fraction of carbon dioxide."""
        return co2_fraction(self.co2)

    def refractivity_at_si(self, wavenumber: FloatArray, state: State) -> FloatArray:
        """Refractivity n - 1 and the derivatives of n, shape (4, ...)."""
        s = np.asarray(wavenumber, dtype=float) * PER_MICROMETRE
        dry, wet = _densities(state)
        air = poles(s, *DISPERSION) * (1 + 0.534 * (self.co2_si - 450e-6))
        vapour = 1.022e-8 * polynomial(s, _VAPOUR)
        return rescaled(dry * air + wet * vapour, PER_MICROMETRE)


def _densities(state: State) -> tuple[float, float]:
    """Densities of dry air and of water vapour over those for which the dispersion is given."""
    T, p, vapour = state
    x = enhancement_si(p, T) * vapour / p
    amount = p / (compressibility_si(p, T, x) * T)
    dry = amount * (1 - x) / (101325 / (compressibility_si(101325, 288.15, 0) * 288.15))
    wet = amount * x / (1333 / (compressibility_si(1333, 293.15, 1) * 293.15))
    return dry, wet


_VAPOUR = (295.235, 0, 2.6422, 0, -0.032380, 0, 0.004028)
"""w0 to w3 of the water vapour's dispersion with even powers of the wavenumber (Ciddor 1996, eq. 3)."""


@dataclass(frozen=True, kw_only=True)
class BirchDowns1994(Air):
    """Moist air by Edlen's formula as revised by Birch and Downs; carbon dioxide 450 ppm.

    n_s - 1 = 1e-8 [A + B / (130 - s^2) + C / (38.9 - s^2)], s in 1/um; n_tp - 1 = (n_s - 1) p X / D with
    X = [1 + 1e-8 (E - F t) p] / (1 + G t); n = n_tp - 1e-10 (3.7345 - 0.0401 s^2) p_v.

    Parameters
    ----------
    temperature, pressure, humidity, extrapolate, saturation
        See `Air`.

    Notes
    -----
    Stated for 0.35 to 0.65 um, where the vapour's term was measured, and taken for laboratory air of 10 to 30 degrees C: in saturated air
    it falls 6e-8 below Ciddor 1996 at 30 and 2e-7 at 40 degrees C. For hot and moist air see `BirchDowns1994WaterScaled`.

    References
    ----------
    Birch & Downs, Metrologia 30, 155 (1993) and 31, 315 (1994), doi:10.1088/0026-1394/31/4/006.

    Examples
    --------
    >>> import astropy.units as u
    >>> air = BirchDowns1994(temperature=15 * u.deg_C, pressure=101325 * u.Pa)
    >>> print(f"{air.refractive_index(0.5 * u.um):.12f}")
    1.000278971266
    """

    name: str = field(default="Birch & Downs 1994", init=False)
    shape: ClassVar[str] = "birch-downs 1994"
    wavelengths: ClassVar[Range] = Range(name="wavelength", low=0.35, high=0.65, unit="um", source="Birch & Downs")
    stated: ClassVar[tuple[Range, Range, Range]] = (
        Range(name="temperature", low=10.0, high=30.0, unit="deg_C", source="laboratory air, common practice"),
        *_STATED[1:],
    )

    def refractivity_at_si(self, wavenumber: FloatArray, state: State) -> FloatArray:
        """Refractivity n - 1 and the derivatives of n, shape (4, ...)."""
        s = np.asarray(wavenumber, dtype=float) * PER_MICROMETRE
        p, t = state.pressure, state.temperature - 273.15
        density = p * (1 + 1e-8 * (0.601 - 0.00972 * t) * p) / (1 + 0.0036610 * t) / 96095.43
        dry = polynomial(s, [8342.54e-8]) + poles(s, [2406147e-8, 15998e-8], [130.0, 38.9])
        vapour = -1e-10 * self._vapour_scale(state) * state.vapour * polynomial(s, [3.7345, 0, -0.0401])
        return rescaled(density * dry + vapour, PER_MICROMETRE)

    def _vapour_scale(self, state: State) -> float:
        return 1.0


@dataclass(frozen=True, kw_only=True)
class BirchDowns1994WaterScaled(BirchDowns1994):
    """`BirchDowns1994` with its vapour term times 292.75 K / T, the later modification for hot and moist air.

    Notes
    -----
    Stated for 0.3 to 1.7 um, -40 to 100 degrees C, 10 to 140 kPa, where it keeps to Ciddor 1996 within a few 1e-8 (1.6e-7 at -40 degrees
    C).

    References
    ----------
    Stone & Zimmerman, Index of refraction of air, appendix B.

    Examples
    --------
    >>> import astropy.units as u
    >>> air = BirchDowns1994WaterScaled(temperature=50 * u.deg_C, pressure=120 * u.kPa, humidity=100 * u.percent)
    >>> print(f"{air.refractive_index(633 * u.nm):.9f}")
    1.000287864
    """

    name: str = field(default="Birch & Downs 1994, water term scaled", init=False)
    shape: ClassVar[str] = "birch-downs 1994, water term scaled"
    wavelengths: ClassVar[Range] = Range(name="wavelength", low=0.3, high=1.7, unit="um", source=STATED)
    stated: ClassVar[tuple[Range, Range, Range]] = _STATED

    def _vapour_scale(self, state: State) -> float:
        return 292.75 / state.temperature
