"""What every medium offers: index, group index and dispersion, within the range for which its formula is stated."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any, ClassVar, Self

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..units import SPEED_OF_LIGHT, FloatArray, as_frequency_si, as_temperature_si
from ._derivatives import times_wavenumber

ADVICE = "use a medium that is stated there (media.TwoModelAir joins two air models), or say extrapolate=True to have the result flagged"


CONDITIONS = ("temperature", "pressure", "humidity")
"""Names of what acts on air."""

STEPS = {"temperature": 0.02, "pressure": 20.0, "humidity": 1e-3}
"""Steps [K, Pa, 1] of the central differences: the models are so smooth that what they leave is below 1e-8 of the derivative."""

DERIVATIVE_UNITS = {"temperature": u.K, "pressure": u.Pa, "humidity": u.dimensionless_unscaled}


@dataclass(frozen=True, kw_only=True)
class Range:
    """Where a formula holds: `name` of the quantity, `low` to `high` in `unit`, and who says so."""

    name: str
    low: float
    high: float
    unit: str
    source: str

    def outside(self, values: Any) -> str:
        """Say which of the values lie outside, or return nothing."""
        if not np.size(values):
            return ""
        low, high = float(np.min(values)), float(np.max(values))
        slack = 1e-9 * (self.high - self.low)  # a value typed in another unit may miss an end by rounding
        if low >= self.low - slack and high <= self.high + slack:
            return ""
        shown = f"{low:.6g}" if low == high else f"{low:.6g} to {high:.6g}"
        return f"{self.name} {shown} {self.unit} lies outside {self.low:g} to {self.high:g} {self.unit} ({self.source})"


class Medium:
    """A medium that light goes through.

    A subclass has `name`, `extrapolate`, `wavelengths` (the `Range` in um of vacuum wavelength, or None) and `refractivity_si`; the rest
    follows.
    """

    name: str
    extrapolate: bool = False
    wavelengths: ClassVar[Range | None] = None

    def refractivity_si(self, wavenumber: FloatArray) -> FloatArray:
        """Refractivity n - 1 and the first three derivatives of n with vacuum wavenumber [1/m], shape (4, ...)."""
        raise NotImplementedError

    def refractivity_shifted_si(self, wavenumber: FloatArray, **shift: float) -> FloatArray:
        """Like `refractivity_si`, in air that is warmer [K], denser [Pa] or moister [fraction]; other media do not change."""
        return self.refractivity_si(wavenumber)

    def under(self, *, temperature: Any = None, pressure: Any = None, humidity: Any = None) -> Self:
        """Return the same medium under other conditions.

        Raises
        ------
        InputError
            The medium does not depend on what is given.
        """
        given = {"temperature": temperature, "pressure": pressure, "humidity": humidity}
        for key, value in given.items():
            if value is not None:
                raise InputError(f"{self.name} has no {key} to set here; leave it out")
        return self

    @property
    def is_air(self) -> bool:
        """Whether temperature, pressure and humidity of the air act on it."""
        return False

    @property
    def feels_temperature(self) -> bool:
        """Whether its index is known to change with the temperature of a segment."""
        return self.is_air

    def flags(self, wavelength: Any = None) -> tuple[str, ...]:
        """Return what was extrapolated, in words, for vacuum wavelengths (or frequencies); empty where everything is in range."""
        if wavelength is None:
            return self._condition_flags()
        frequency = np.asarray(as_frequency_si(wavelength, "wavelength"), dtype=float)
        return self.flags_si(frequency / SPEED_OF_LIGHT)

    def flags_si(self, wavenumber: FloatArray) -> tuple[str, ...]:
        """Twin of `flags` for wavenumbers [1/m].

        Raises
        ------
        InputError
            Out of range without ``extrapolate=True``.
        """
        words = self.wavelengths.outside(1e6 / wavenumber) if self.wavelengths is not None else ""
        if words and not self.extrapolate:
            raise InputError(f"{self.name}: {words}; {ADVICE}")
        return (*self._condition_flags(), *([f"{self.name} extrapolated: {words}"] if words else []))

    def _condition_flags(self) -> tuple[str, ...]:
        return ()

    def refractive_index(self, wavelength: Any) -> u.Quantity:
        """Return the phase index n.

        Parameters
        ----------
        wavelength : Quantity [vacuum wavelength or frequency], any shape

        Returns
        -------
        Quantity, same shape, dimensionless
            ``info.description`` says so where it was extrapolated.

        Raises
        ------
        InputError
            Outside the formula's range, unless the medium was made with ``extrapolate=True``.
        """
        return self._flagged(wavelength, lambda sigma: 1.0 + self.refractivity_si(sigma)[0], u.dimensionless_unscaled)

    def refractivity(self, wavelength: Any) -> u.Quantity:
        """Return n - 1, which loses no digits where n is close to 1; arguments as for `refractive_index`."""
        return self._flagged(wavelength, lambda sigma: self.refractivity_si(sigma)[0], u.dimensionless_unscaled)

    def group_index(self, wavelength: Any) -> u.Quantity:
        """Return the group index n_g = n + sigma dn/dsigma = n - lambda dn/dlambda; arguments as for `refractive_index`."""
        return self._flagged(wavelength, lambda sigma: 1.0 + self._path_si(sigma)[1], u.dimensionless_unscaled)

    def group_velocity_dispersion(self, wavelength: Any) -> u.Quantity:
        """Return d^2k/domega^2 = (1 / 2 pi c^2) d^2(n sigma)/dsigma^2 [fs^2/mm]; arguments as for `refractive_index`.

        References
        ----------
        Saleh & Teich, Fundamentals of Photonics, 2nd ed., sec. 5.6 (from memory).
        """
        scale = 1 / (2 * np.pi * SPEED_OF_LIGHT**2)
        return self._flagged(wavelength, lambda sigma: scale * self._path_si(sigma)[2] * 1e27, u.fs**2 / u.mm)

    def third_order_dispersion(self, wavelength: Any) -> u.Quantity:
        """Return d^3k/domega^3 = (1 / 4 pi^2 c^3) d^3(n sigma)/dsigma^3 [fs^3/mm]; arguments as for `refractive_index`."""
        scale = 1 / (4 * np.pi**2 * SPEED_OF_LIGHT**3)
        return self._flagged(wavelength, lambda sigma: scale * self._path_si(sigma)[3] * 1e42, u.fs**3 / u.mm)

    def index_derivative(self, wavelength: Any, by: str) -> u.Quantity:
        """Return the derivative of the phase index with a condition, the others fixed (the relative humidity too).

        Parameters
        ----------
        wavelength : Quantity [vacuum wavelength or frequency], any shape
        by : str
            ``"temperature"``, ``"pressure"`` or ``"humidity"``.

        Returns
        -------
        Quantity [1/K, 1/Pa, or per unit of relative humidity; 0.01 of it is per percent]

        Notes
        -----
        A central difference of the model, see `STEPS`.
        """
        return self._derivative(wavelength, by, lambda sigma, shift: self.refractivity_shifted_si(sigma, **shift)[0])

    def group_index_derivative(self, wavelength: Any, by: str) -> u.Quantity:
        """Return the derivative of the group index with a condition; arguments as for `index_derivative`."""

        def group(sigma: FloatArray, shift: dict[str, float]) -> FloatArray:
            return np.asarray(times_wavenumber(self.refractivity_shifted_si(sigma, **shift), sigma)[1])

        return self._derivative(wavelength, by, group)

    def _derivative(self, wavelength: Any, by: str, function: Callable[[FloatArray, dict[str, float]], FloatArray]) -> u.Quantity:
        if not self.is_air:
            raise InputError(f"{self.name} does not change with the conditions of the air")
        if by not in STEPS:
            raise InputError(f"by must be one of {', '.join(STEPS)}; got {by!r}")
        sigma = np.asarray(as_frequency_si(wavelength, "wavelength"), dtype=float) / SPEED_OF_LIGHT
        flags = self.flags_si(sigma)
        step = STEPS[by]
        change = (function(sigma, {by: step}) - function(sigma, {by: -step})) / (2 * step)
        return flagged(u.Quantity(change, 1 / DERIVATIVE_UNITS[by]), flags)

    def _path_si(self, sigma: FloatArray) -> FloatArray:
        """(n - 1) sigma and its derivatives: wavenumber that the medium adds to the vacuum's."""
        return times_wavenumber(self.refractivity_si(sigma), sigma)

    def _flagged(self, wavelength: Any, function: Any, unit: u.UnitBase) -> u.Quantity:
        sigma = np.asarray(as_frequency_si(wavelength, "wavelength"), dtype=float) / SPEED_OF_LIGHT
        flags = self.flags_si(sigma)
        return flagged(u.Quantity(function(sigma), unit), flags)


def flagged(value: u.Quantity, flags: tuple[str, ...]) -> u.Quantity:
    """Return the value with what was extrapolated as its description."""
    if flags:
        value.info.description = "; ".join(flags)
    return value


@dataclass(frozen=True, kw_only=True)
class Vacuum(Medium):
    """Vacuum: index one at every wavelength."""

    name: str = field(default="vacuum", init=False)
    shape: ClassVar[str] = "vacuum"

    def refractivity_si(self, wavenumber: FloatArray) -> FloatArray:
        """Zero."""
        return np.zeros((4, *np.shape(wavenumber)))


def one_temperature_si(value: Any, name: str = "temperature") -> float:
    """Return one temperature in kelvin."""
    kelvin = as_temperature_si(value, name)
    if np.ndim(kelvin):
        raise InputError(f"{name} must be one number; got an array of shape {np.shape(kelvin)}")
    return float(kelvin)
