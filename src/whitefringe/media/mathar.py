"""Moist air in the infrared, after Mathar 2007."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cache
from typing import Any, ClassVar, NamedTuple

import numpy as np

from ..errors import InputError
from ..io import read_packaged
from ..units import FloatArray
from ._air import Air, State
from ._derivatives import polynomial, rescaled
from .medium import ADVICE, Range

PER_CENTIMETRE = 1e-2
"""Wavenumber [1/cm] over wavenumber [1/m]."""

_ABSTRACT = "Mathar 2007, abstract, from memory"


class Window(NamedTuple):
    """One infrared window: its ends and reference wavelength [um], and the coefficients by name, each for the powers 0 to 5."""

    low: float
    high: float
    reference: float
    coefficients: dict[str, FloatArray]


@cache
def mathar_windows() -> tuple[Window, ...]:
    """Return the five windows, from short to long wavelengths."""
    table = read_packaged("air_mathar.ecsv")
    found: dict[float, Window] = {}
    for row in table:
        window = found.setdefault(float(row["low"]), Window(float(row["low"]), float(row["high"]), float(row["reference"]), {}))
        window.coefficients[str(row["coefficient"])] = np.array([float(row[f"j{k}"]) for k in range(6)])
    return tuple(found.values())


@dataclass(frozen=True, kw_only=True)
class Mathar2007(Air):
    """Moist air in five infrared windows, 1.3-2.5, 2.8-4.2, 4.35-5.2, 7.5-14.1 and 16-24 um; carbon dioxide 370 ppm.

    n - 1 = sum over j = 0..5 of c_j(T, p, H) (sigma - sigma_ref)^j, sigma in 1/cm, with
    c_j = cref + cT th + cTT th^2 + cH h + cHH h^2 + cp q + cpp q^2 + cTH th h + cTp th q + cHp h q;
    th = 1/T - 1/290.65 K, h = H - 10 %, q = p - 75 000 Pa.

    Parameters
    ----------
    temperature, pressure, humidity, extrapolate, saturation
        See `Air`.

    Notes
    -----
    Fitted to line-by-line spectra from 10 to 25 degrees C, 500 to 1023 hPa and 5 to 60 % of relative humidity. Drier air is let through
    with a flag, since the published values for dry air are computed in that way too. Where the model meets Ciddor 1996, at 1.3 to
    1.7 um, it lies 5.1e-8 above it in dry air of sea level, less in moist air: see `TwoModelAir`.

    References
    ----------
    Mathar, J. Opt. A: Pure Appl. Opt. 9, 470 (2007), doi:10.1088/1464-4258/9/5/008, tables 1 to 5.

    Examples
    --------
    >>> import astropy.units as u
    >>> air = Mathar2007(temperature=288.15 * u.K, pressure=743.5 * u.hPa, humidity=20 * u.percent)
    >>> print(f"{1e8 * (air.refractive_index(3.5 * u.um) - 1):.4f} {1e8 * (air.group_index(3.5 * u.um) - 1):.4f}")
    19994.8569 20026.3223
    """

    co2: Any = 370e-6
    name: str = field(default="Mathar 2007", init=False)
    shape: ClassVar[str] = "mathar 2007"
    stated: ClassVar[tuple[Range, Range, Range]] = (
        Range(name="temperature", low=10.0, high=25.0, unit="deg_C", source=_ABSTRACT),
        Range(name="pressure", low=50.0, high=102.3, unit="kPa", source=_ABSTRACT),
        Range(name="relative humidity", low=0.0, high=60.0, unit="%", source="fitted from 5 to 60 %; " + _ABSTRACT),
    )

    @property
    def co2_si(self) -> float:
        """Mole fraction of carbon dioxide that the fits are for."""
        return 370e-6

    def _condition_flags(self) -> tuple[str, ...]:
        dry = self.relative_humidity < 0.05
        words = f"{self.name} below the humidity it was fitted to: {100 * self.relative_humidity:.3g} % of 5 to 60 %"
        return (*super()._condition_flags(), *([words] if dry else []))

    def flags_si(self, wavenumber: FloatArray) -> tuple[str, ...]:
        """Say what is extrapolated; wavelengths must lie in one of the windows."""
        _, outside = _window_of(np.asarray(wavenumber, dtype=float))
        if not np.any(outside):
            return self._condition_flags()
        at = 1e6 / np.asarray(wavenumber, dtype=float)[outside]
        ends = ", ".join(f"{window.low:g} to {window.high:g}" for window in mathar_windows())
        words = f"wavelength {float(at.flat[0]):.6g} um lies outside the windows {ends} um"
        if not self.extrapolate:
            raise InputError(f"{self.name}: {words}; {ADVICE}")
        return (*self._condition_flags(), f"{self.name} extrapolated: {words}")

    def refractivity_at_si(self, wavenumber: FloatArray, state: State) -> FloatArray:
        """Refractivity n - 1 and the derivatives of n, shape (4, ...); beyond a window's ends, of the window that is nearest."""
        sigma = np.asarray(wavenumber, dtype=float)
        chosen, _ = _window_of(sigma)
        humidity = 100 * state.vapour / self.saturated_si(state.temperature)
        result = np.empty((4, *sigma.shape))
        for k, window in enumerate(mathar_windows()):
            here = chosen == k
            if np.any(here):
                offset = (sigma[here] - 1e6 / window.reference) * PER_CENTIMETRE
                result[:, here] = polynomial(offset, _coefficients(window.coefficients, state, humidity))
        return rescaled(result, PER_CENTIMETRE)


def _window_of(sigma: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Index of the window in or nearest which each wavenumber [1/m] lies, and whether it lies outside all."""
    at = 1e6 / sigma
    beyond = np.array([np.maximum(window.low - at, at - window.high) / window.reference for window in mathar_windows()])
    return np.argmin(beyond, axis=0), np.min(beyond, axis=0) > 1e-9


def _coefficients(c: dict[str, FloatArray], state: State, humidity: float) -> FloatArray:
    th, h, q = 1 / state.temperature - 1 / 290.65, humidity - 10.0, state.pressure - 75_000.0
    linear = c["cref"] + c["cT"] * th + c["cH"] * h + c["cp"] * q
    square = c["cTT"] * th**2 + c["cHH"] * h**2 + c["cpp"] * q**2
    return np.asarray(linear + square + c["cTH"] * th * h + c["cTp"] * th * q + c["cHp"] * h * q)
