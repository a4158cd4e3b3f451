"""Two arms made of segments, and what their difference does to the light: path difference, group delay, dispersion."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..spectra import Spectrum
from ..units import SPEED_OF_LIGHT, FloatArray, as_frequency_si, as_si, frozen_quantities
from ._derivatives import times_wavenumber
from .medium import Medium, Vacuum, flagged


@dataclass(frozen=True, kw_only=True)
class Segment:
    """A stretch of one medium that the light goes through.

    Parameters
    ----------
    medium : Medium
        An air model, a `Glass`, or `Vacuum`.
    length : Quantity [length]
        Geometric length of the light's way.
    temperature, pressure, humidity : Quantity, optional
        Of this segment, where they differ from the medium's.
    length_uncertainty : Quantity [length]
        One standard deviation.
    temperature_uncertainty : Quantity [K]
        Of this segment alone, one standard deviation; what all air has in common is an `AirUncertainty`.
    """

    medium: Medium
    length: u.Quantity
    temperature: u.Quantity | None = None
    pressure: u.Quantity | None = None
    humidity: u.Quantity | None = None
    length_uncertainty: u.Quantity = 0.0 * u.m
    temperature_uncertainty: u.Quantity = 0.0 * u.K

    def __post_init__(self) -> None:
        frozen_quantities(self)
        if not isinstance(self.medium, Medium):
            raise InputError(f"medium must be one such as media.Ciddor1996(...) or media.Glass.named(...); got {self.medium!r}")
        for name, unit in (("length", u.m), ("length_uncertainty", u.m), ("temperature_uncertainty", u.K)):
            value = as_si(getattr(self, name), unit, name)
            if np.ndim(value) or value < 0:
                raise InputError(f"{name} must be one number, zero or more; got {getattr(self, name)}")
        here = self.medium_here
        if as_si(self.temperature_uncertainty, u.K, "temperature_uncertainty") > 0 and not here.feels_temperature:
            raise InputError(
                f"{self.medium.name} has no temperature coefficients, so nothing follows from a temperature_uncertainty: leave it out"
            )

    @cached_property
    def length_si(self) -> float:
        """Length [m]."""
        return float(as_si(self.length, u.m, "length"))

    @cached_property
    def medium_here(self) -> Medium:
        """The medium under the segment's own conditions."""
        return self.medium.under(temperature=self.temperature, pressure=self.pressure, humidity=self.humidity)


@dataclass(frozen=True, kw_only=True)
class ArmPair:
    """Two arms of an interferometer, each a sequence of segments.

    Parameters
    ----------
    first, second : sequence of Segment

    Notes
    -----
    Path difference is second arm minus first: positive where the second arm's light arrives later. Segments of the same medium and
    length in both arms cancel, so it is enough to name what differs.

    Examples
    --------
    100 m of air in the first arm against 100 m of vacuum in the second:

    >>> import astropy.units as u
    >>> from whitefringe import media
    >>> pair = ArmPair(
    ...     first=[Segment(medium=media.Ciddor1996(), length=100 * u.m)], second=[Segment(medium=media.Vacuum(), length=100 * u.m)]
    ... )
    >>> print(f"{pair.opd(0.55 * u.um).to(u.mm):.4f}, group {pair.group_opd(0.55 * u.um).to(u.mm):.4f}")
    -27.7838 mm, group -28.8588 mm
    """

    first: Sequence[Segment]
    second: Sequence[Segment]

    def __post_init__(self) -> None:
        for name in ("first", "second"):
            given = getattr(self, name)
            arm = tuple(given) if isinstance(given, Iterable) else (given,)
            object.__setattr__(self, name, arm)
            if not isinstance(given, Iterable) or not all(isinstance(item, Segment) for item in arm):
                raise InputError(f"{name} must be a list of media.Segment; got {given!r}")

    @property
    def signed(self) -> Iterator[tuple[float, Segment]]:
        """Segments with the sign they have in the path difference."""
        yield from ((-1.0, item) for item in self.first)
        yield from ((1.0, item) for item in self.second)

    @cached_property
    def geometric_si(self) -> float:
        """Difference of the geometric lengths [m]."""
        return math.fsum(sign * item.length_si for sign, item in self.signed)

    def refraction_si(self, wavenumber: FloatArray) -> FloatArray:
        """Sum of (n - 1) L sigma with its sign, in cycles, and its first three derivatives with wavenumber [1/m]: shape (4, ...)."""
        return self.refraction_shifted_si(wavenumber)

    def refraction_shifted_si(self, wavenumber: FloatArray, only: int | None = None, **shift: float) -> FloatArray:
        """Like `refraction_si`, with all air (or `only` that of one segment, by its number in `signed`) warmer, denser or moister."""
        sigma = np.asarray(wavenumber, dtype=float)
        total = np.zeros((4, *sigma.shape))
        for number, (sign, item) in enumerate(self.signed):
            if not isinstance(item.medium_here, Vacuum):
                change = shift if only in (None, number) else {}
                total += sign * item.length_si * item.medium_here.refractivity_shifted_si(sigma, **change)
        return times_wavenumber(total, sigma)

    def check_si(self, wavenumber: FloatArray) -> tuple[str, ...]:
        """Return flags of what is extrapolated at these wavenumbers [1/m], each once; raise where it may not be."""
        flags = dict.fromkeys(words for _, item in self.signed for words in item.medium_here.flags_si(np.asarray(wavenumber, dtype=float)))
        models = dict.fromkeys(item.medium.name for _, item in self.signed if item.medium.is_air)
        if len(models) > 1:
            words = f"the arms' air is by different models, {' and '.join(models)}"
            flags[f"{words}: what parts the models does not cancel between the arms"] = None
        return tuple(flags)

    def flags(self, *lights: Spectrum) -> tuple[str, ...]:
        """Return flags of what is extrapolated in these lights; raise where it may not be. The last 1e-3 of a light's rate is not asked."""
        return self.check_si(np.concatenate([asked_si(light) for light in lights]) / SPEED_OF_LIGHT)

    def opd(self, wavelength: Any) -> u.Quantity:
        """Return the phase path difference: sum of n L over the second arm less that over the first [m].

        Parameters
        ----------
        wavelength : Quantity [vacuum wavelength or frequency], any shape
        """
        sigma, flags = self._checked(wavelength)
        return flagged((self.geometric_si + self.refraction_si(sigma)[0] / sigma) * u.m, flags)

    def group_opd(self, wavelength: Any) -> u.Quantity:
        """Return the group path difference: sum of n_g L over the second arm less that over the first [m]."""
        sigma, flags = self._checked(wavelength)
        return flagged((self.geometric_si + self.refraction_si(sigma)[1]) * u.m, flags)

    def phase_delay(self, wavelength: Any) -> u.Quantity:
        """Return the phase delay, `opd` over c [fs]."""
        sigma, flags = self._checked(wavelength)
        return flagged(self._over_c(self.refraction_si(sigma)[0] / sigma), flags)

    def group_delay(self, wavelength: Any) -> u.Quantity:
        """Return the group delay d(omega opd / c)/domega, `group_opd` over c [fs]."""
        sigma, flags = self._checked(wavelength)
        return flagged(self._over_c(self.refraction_si(sigma)[1]), flags)

    def _over_c(self, refraction: FloatArray) -> u.Quantity:
        """A path difference [m] with that of the geometry, as a time."""
        return (self.geometric_si + refraction) / SPEED_OF_LIGHT * 1e15 * u.fs

    def group_delay_dispersion(self, wavelength: Any) -> u.Quantity:
        """Return the dispersion of order 2, d^2(omega opd / c)/domega^2 [fs^2]."""
        sigma, flags = self._checked(wavelength)
        return flagged(self.refraction_si(sigma)[2] / (2 * np.pi * SPEED_OF_LIGHT**2) * 1e30 * u.fs**2, flags)

    def third_order_dispersion(self, wavelength: Any) -> u.Quantity:
        """Return the dispersion of order 3, d^3(omega opd / c)/domega^3 [fs^3]."""
        sigma, flags = self._checked(wavelength)
        return flagged(self.refraction_si(sigma)[3] / (4 * np.pi**2 * SPEED_OF_LIGHT**3) * 1e45 * u.fs**3, flags)

    def _checked(self, wavelength: Any) -> tuple[FloatArray, tuple[str, ...]]:
        sigma = np.asarray(as_frequency_si(wavelength, "wavelength"), dtype=float) / SPEED_OF_LIGHT
        return sigma, self.check_si(sigma)

    @property
    def air(self) -> Medium | None:
        """The air of the first segment that is air, or None."""
        return next((item.medium for _, item in self.signed if item.medium.is_air), None)

    def in_air(self, **conditions: Any) -> ArmPair:
        """Return the pair with all its air under other conditions (temperature, pressure, humidity); segments keep their own."""

        def changed(item: Segment) -> Segment:
            return replace(item, medium=item.medium.under(**conditions)) if item.medium.is_air else item

        return ArmPair(first=[changed(item) for item in self.first], second=[changed(item) for item in self.second])

    @property
    def has_air(self) -> bool:
        """Whether any segment is air."""
        return any(item.medium.is_air for _, item in self.signed)


def band_si(light: Spectrum) -> tuple[float, float]:
    """Frequencies [Hz] between which all but 1e-3 of the light's rate lies, half of that on either side."""
    frequency, rate = _rates(light)
    share = np.cumsum(rate)
    inside = frequency[(share > 5e-4) & (share - rate < 1 - 5e-4)]
    return float(inside[0]), float(inside[-1])


def asked_si(light: Spectrum) -> FloatArray:
    """Frequencies [Hz] at which a formula must hold: the band of `band_si` but for its faintest cells, 1e-3 of the rate together.

    Not the band's ends alone: a formula may have gaps inside it.
    """
    frequency, rate = _rates(light)
    low, high = band_si(light)
    rising = np.sort(rate)
    faint = rising[np.searchsorted(np.cumsum(rising), 1e-3)]
    return np.array([low, *frequency[(frequency > low) & (frequency < high) & (rate >= faint)], high])


def _rates(light: Spectrum) -> tuple[FloatArray, FloatArray]:
    """Frequencies [Hz] of cells and lines, rising, and the share of the rate in each."""
    lines = [(line.frequency_si, line.strength) for line in light.lines if line.strength > 0]
    frequency = np.concatenate([light.frequency_si, [place for place, _ in lines]])
    rate = np.concatenate([light.density * light.step_si, [strength for _, strength in lines]]) / light.total_rate
    order = np.argsort(frequency)
    return frequency[order], rate[order]
