"""What every filter shape has in common: the protocol, the public twin of its transmission, and what may happen to it in the beam."""

from __future__ import annotations

from functools import cached_property
from typing import TYPE_CHECKING, Any, Protocol, runtime_checkable

import astropy.units as u
import numpy as np

from ..units import SPEED_OF_LIGHT, FloatArray, as_frequency_si, as_quantity, as_si, is_length, one_frequency_si, positive_si
from .lines import WIDTHS, edges_of, width_si

if TYPE_CHECKING:
    from .cone import InCone
    from .effects import Leaky, Tilted, Warmed

SHORTEST = 0.1
"""A wing in wavelength is followed down to this part of the centre, since a wavelength cannot be below zero."""


@runtime_checkable
class Filter(Protocol):
    """What every filter shape offers."""

    @property
    def support_si(self) -> tuple[float, float]:
        """Lowest and highest frequency [Hz] that pass."""
        ...

    @property
    def breakpoints_si(self) -> FloatArray:
        """Frequencies [Hz] where the slope jumps."""
        ...

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Fraction of photons let through at `frequency` [Hz]."""
        ...


class FilterShape:
    """Shared by all shapes: the public twin of `transmission_si`, and what happens to a filter in the beam.

    The methods return a filter that has the same methods, so that they follow each other in any order.
    """

    breakpoints_si: FloatArray = np.empty(0)

    def transmission(self, at: Any) -> FloatArray:
        """Fraction of photons let through.

        Parameters
        ----------
        at : Quantity [vacuum wavelength or frequency], any shape

        Returns
        -------
        ndarray, same shape
        """
        return within(self, np.asarray(as_frequency_si(at, "at"), dtype=float))  # type: ignore[arg-type]

    def tilted(self, *, angle: Any, effective_index: float = 1.8) -> Tilted:
        """Return the filter turned by `angle` in a collimated beam; see `Tilted`.

        Examples
        --------
        >>> import astropy.units as u
        >>> from whitefringe.spectra import TopHat
        >>> tilted = TopHat(centre=1.65 * u.um, width=10 * u.nm).tilted(angle=4 * u.deg, effective_index=2.0)
        >>> print(f"{1650 * tilted.factor:.4f}")
        1648.9961
        """
        from .effects import Tilted

        return Tilted(filter=self, angle=angle, effective_index=effective_index)  # type: ignore[arg-type]

    def in_cone(self, *, f_number: float, effective_index: float = 1.8, obstruction: float = 0.0) -> InCone:
        """Return the filter in a converging beam, averaged over its rays; see `InCone`.

        Examples
        --------
        >>> import astropy.units as u
        >>> from whitefringe.spectra import TopHat
        >>> cone = TopHat(centre=1.65 * u.um, width=10 * u.nm).in_cone(f_number=5, effective_index=2.0)
        >>> print(cone.transmission([1644.5, 1650, 1654] * u.nm).round(4))
        [0.7569 1.     0.4832]
        """
        from .cone import InCone

        return InCone(filter=self, f_number=f_number, effective_index=effective_index, obstruction=obstruction)  # type: ignore[arg-type]

    def warmed(self, *, by: Any, drift: Any) -> Warmed:
        """Return the filter at a temperature higher `by` so much, its wavelengths shifted by ``by * drift``; see `Warmed`.

        Examples
        --------
        >>> import astropy.units as u
        >>> from whitefringe.spectra import TopHat
        >>> warm = TopHat(centre=1.65 * u.um, width=10 * u.nm).warmed(by=10 * u.K, drift=0.02 * u.nm / u.K)
        >>> warm.transmission([1645.1, 1645.3, 1655.1] * u.nm).tolist()
        [0.0, 1.0, 1.0]
        """
        from .effects import Warmed

        return Warmed(filter=self, by=by, drift=drift)  # type: ignore[arg-type]

    def with_leak(self, leak: float, *, low: Any, high: Any) -> Leaky:
        """Return the filter with a constant leak between two wavelengths (or frequencies); see `Leaky`.

        Examples
        --------
        >>> import astropy.units as u
        >>> from whitefringe.spectra import TopHat
        >>> leaky = TopHat(centre=1.65 * u.um, width=10 * u.nm).with_leak(1e-4, low=1 * u.um, high=2.5 * u.um)
        >>> leaky.transmission([0.9, 1.2, 1.65] * u.um).tolist()
        [0.0, 0.0001, 1.0]
        """
        from .effects import Leaky

        return Leaky(filter=self, leak=leak, low=low, high=high)  # type: ignore[arg-type]


class Peak(FilterShape):
    """A shape with a centre and a full width at half maximum, on the axis (wavelength or frequency) of the width's unit.

    Subclasses have the fields `centre` and `fwhm`, and write `_profile(x)` and `_reach`, with x = (axis - centre) / fwhm.
    """

    centre: u.Quantity
    fwhm: u.Quantity

    def __post_init__(self) -> None:
        width_si(one_frequency_si(self.centre, "centre"), self.fwhm, "fwhm")

    @property
    def _reach(self) -> float:
        """Full widths to which the shape is followed on either side."""
        raise NotImplementedError

    def _profile(self, x: FloatArray) -> FloatArray:
        raise NotImplementedError

    @cached_property
    def _axis_si(self) -> tuple[bool, float, float]:
        """Whether the axis is wavelength; centre and width on it [m or Hz]."""
        centre = float(as_frequency_si(self.centre, "centre"))
        if is_length(u.Quantity(self.fwhm)):
            return True, SPEED_OF_LIGHT / centre, float(as_si(self.fwhm, u.m, "fwhm"))
        return False, centre, float(as_si(self.fwhm, u.Hz, "fwhm"))

    @cached_property
    def _ends(self) -> tuple[float, float]:
        """Where the shape is cut off, as x = (axis - centre) / fwhm."""
        _, centre, width = self._axis_si
        return max(-self._reach, (SHORTEST - 1) * centre / width), self._reach

    def _on_axis(self, x: Any) -> FloatArray:
        """Frequencies [Hz] of places x, rising when x rises on a frequency axis and falling on a wavelength axis."""
        in_wavelength, centre, width = self._axis_si
        at = centre + np.asarray(x, dtype=float) * width
        return np.asarray(SPEED_OF_LIGHT / at if in_wavelength else at)

    @cached_property
    def support_si(self) -> tuple[float, float]:
        """Frequencies [Hz] between which the shape is followed."""
        first, last = sorted(float(end) for end in self._on_axis(self._ends))
        return first, last

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Transmission at `frequency` [Hz]."""
        in_wavelength, centre, width = self._axis_si
        at = SPEED_OF_LIGHT / frequency if in_wavelength else frequency
        return self._profile((at - centre) / width)


def within(shape: Filter, frequency: FloatArray) -> FloatArray:
    """Transmission at any `frequency` [Hz]: zero outside the support."""
    low, high = shape.support_si
    inside = (frequency >= low) & (frequency <= high)
    return np.where(inside, shape.transmission_si(np.clip(frequency, low, high)), 0.0)


def band_edges_si(centre: Any, width: Any, reach: float = 0.5) -> tuple[float, float]:
    """Frequencies [Hz] at centre -+ reach x width, on the axis (wavelength or frequency) of the width's unit."""
    centre_si = one_frequency_si(centre, "centre")
    if is_length(as_quantity(width, "width", WIDTHS)):
        low, high = edges_of(SPEED_OF_LIGHT / centre_si, 2 * reach * positive_si(width, u.m, "width", "nm"), "width")
        return SPEED_OF_LIGHT / high, SPEED_OF_LIGHT / low
    return edges_of(centre_si, 2 * reach * positive_si(width, u.Hz, "width", "THz"), "width")
