"""What shifts a filter's curve or adds to it: tilt, temperature, leak. Each is a filter that holds another one."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any, ClassVar

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..units import SPEED_OF_LIGHT, FloatArray, as_si, number, one_frequency_si
from ._shape import Filter, FilterShape, within


def check_filter(shape: Any) -> None:
    """Refuse what is no filter shape."""
    if not isinstance(shape, Filter) or isinstance(shape, type):
        raise InputError(f"filter must be a filter shape such as spectra.TopHat; got {shape!r}")


def check_index(value: Any) -> None:
    """Refuse an effective index that is not above 1."""
    if not value > 1:
        raise InputError(f"effective_index must be above 1; got {value}")


@dataclass(frozen=True, kw_only=True, eq=False)
class Tilted(FilterShape):
    """A filter turned in a collimated beam: its curve shifts to the blue.

    lambda(theta) = lambda0 sqrt(1 - (sin theta / n_eff)^2), applied to every wavelength of the curve
    (effective-index approximation, good for small angles and narrow bands).

    Parameters
    ----------
    filter : Filter
        The filter at normal incidence.
    angle : Quantity [angle]
        Angle of incidence in air or vacuum, 0 to below 90 degrees.
    effective_index : float
        Effective index of the coating, above 1; from the maker, or fitted. Common practice: 1.4 to 2.2.

    References
    ----------
    Macleod, Thin-Film Optical Filters, 4th ed., tilted narrow-band filters.
    """

    shape: ClassVar[str] = "tilted"
    filter: Filter
    angle: u.Quantity
    effective_index: float = 1.8

    def __post_init__(self) -> None:
        angle = as_si(self.angle, u.rad, "angle", "deg")
        check_filter(self.filter)
        if np.ndim(angle) != 0:
            raise InputError(f"angle must be one number; got an array of shape {np.shape(angle)}")
        if not 0 <= angle < np.pi / 2:
            raise InputError(f"angle must be from 0 to below 90 deg; got {self.angle}")
        check_index(self.effective_index)

    @cached_property
    def factor(self) -> float:
        """Wavelengths of the tilted curve over those of the upright one, at most 1."""
        angle = float(as_si(self.angle, u.rad, "angle", "deg"))
        return float(np.sqrt(1.0 - (np.sin(angle) / self.effective_index) ** 2))

    @property
    def support_si(self) -> tuple[float, float]:
        """Lowest and highest frequency [Hz] that pass."""
        low, high = self.filter.support_si
        return low / self.factor, high / self.factor

    @property
    def breakpoints_si(self) -> FloatArray:  # type: ignore[override]
        """Frequencies [Hz] where the slope jumps."""
        return np.asarray(self.filter.breakpoints_si) / self.factor

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Transmission at `frequency` [Hz]."""
        return self.filter.transmission_si(frequency * self.factor)


@dataclass(frozen=True, kw_only=True, eq=False)
class Warmed(FilterShape):
    """A filter at another temperature: T(lambda) = T0(lambda - drift by), every wavelength shifted by the same length.

    Parameters
    ----------
    filter : Filter
        The filter at the temperature of its curve.
    by : Quantity [K]
        Its temperature less that of the curve; may be below zero.
    drift : Quantity [length/K]
        Shift to longer wavelengths per kelvin; from the maker. Common practice: 0.01 to 0.03 nm/K for dielectric coatings.

    Raises
    ------
    InputError, UnitsError

    References
    ----------
    Macleod, Thin-Film Optical Filters, 4th ed., temperature effects (from memory).
    """

    shape: ClassVar[str] = "warmed"
    filter: Filter
    by: u.Quantity
    drift: u.Quantity

    def __post_init__(self) -> None:
        check_filter(self.filter)
        if np.ndim(self.shift_si) != 0:
            raise InputError(f"by and drift must each be one number; got {self.by} and {self.drift}")
        shortest = SPEED_OF_LIGHT / self.filter.support_si[1]
        if shortest + self.shift_si <= 0:
            raise InputError(
                f"drift times by shifts the filter's shortest wavelength, {shortest * 1e6:.4g} um, below zero; got {self.drift}"
            )

    @cached_property
    def shift_si(self) -> float:
        """Shift of all wavelengths [m], positive to the red."""
        product: float = as_si(self.by, u.K, "by") * as_si(self.drift, u.m / u.K, "drift", "nm / K")
        return product

    def _moved(self, frequency: Any, sign: int) -> FloatArray:
        """Frequencies [Hz] whose wavelengths are `sign` times the shift away."""
        return np.asarray(SPEED_OF_LIGHT / (SPEED_OF_LIGHT / np.asarray(frequency, dtype=float) + sign * self.shift_si))

    @property
    def support_si(self) -> tuple[float, float]:
        """Lowest and highest frequency [Hz] that pass."""
        low, high = self._moved(self.filter.support_si, 1)
        return float(low), float(high)

    @property
    def breakpoints_si(self) -> FloatArray:  # type: ignore[override]
        """Frequencies [Hz] where the slope jumps."""
        return self._moved(self.filter.breakpoints_si, 1)

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Transmission at `frequency` [Hz]."""
        return self.filter.transmission_si(self._moved(frequency, -1))


@dataclass(frozen=True, kw_only=True, eq=False)
class Leaky(FilterShape):
    """A filter that never blocks completely: T = T0 + leak (1 - T0) between `low` and `high`, T0 elsewhere.

    Parameters
    ----------
    filter : Filter
    leak : float
        Fraction let through where the filter blocks, 0 to 1: the inverse of the maker's blocking (optical density 4 is 1e-4).
    low, high : Quantity [vacuum wavelength or frequency]
        The band over which it leaks, in any order: that of the source and the detector.

    Raises
    ------
    InputError, UnitsError

    Notes
    -----
    The leak acts on the light that the filter does not pass, so the sum never exceeds 1; where T0 is small it is `leak` added. A wide
    leak has a short coherence: it takes about its share of the light from the contrast once the delay exceeds its own coherence length.

    References
    ----------
    Derived: a second way through for the light that is not passed.
    """

    shape: ClassVar[str] = "leaky"
    filter: Filter
    leak: float
    low: u.Quantity
    high: u.Quantity

    def __post_init__(self) -> None:
        check_filter(self.filter)
        object.__setattr__(self, "leak", number(self.leak, "leak", low=0.0, high=1.0))
        first, last = self.band_si
        if not first < last * (1 - 1e-9):
            raise InputError(f"low and high must differ: the leak needs a band; got {self.low} and {self.high}")

    @cached_property
    def band_si(self) -> tuple[float, float]:
        """Lowest and highest frequency [Hz] that leak."""
        first, last = sorted((one_frequency_si(self.low, "low"), one_frequency_si(self.high, "high")))
        return first, last

    @property
    def support_si(self) -> tuple[float, float]:
        """Lowest and highest frequency [Hz] that pass."""
        (low, high), (first, last) = self.filter.support_si, self.band_si
        return min(low, first), max(high, last)

    @cached_property
    def breakpoints_si(self) -> FloatArray:  # type: ignore[override]
        """Frequencies [Hz] where the slope or the value jumps: those of the filter, its ends, and the ends of the leak."""
        return np.unique(np.concatenate([np.asarray(self.filter.breakpoints_si), self.filter.support_si, self.band_si]))

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Transmission at `frequency` [Hz]."""
        first, last = self.band_si
        passed = within(self.filter, frequency)
        return np.where((frequency >= first) & (frequency <= last), passed + self.leak * (1.0 - passed), passed)


__all__ = ["Leaky", "Tilted", "Warmed"]
