"""A filter in a converging beam."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import numpy as np

from ..errors import InputError
from ..units import FloatArray, number
from ._means import SquareMean
from ._shape import Filter, FilterShape, within
from .effects import check_filter, check_index

_NO_SPREAD = 1e-9
"""Below this spread of squared wavelength factors a cone counts as a tilt; at f/10 000 it is about 1e-9."""


@dataclass(frozen=True, kw_only=True, eq=False)
class InCone(FilterShape):
    """A filter in a converging (or diverging) beam: its transmission averaged over the rays.

    T(nu) = 1/(s1 - s0) int_s0^s1 T0(nu sqrt(1 - s / n_eff^2)) ds, with s = sin^2 theta, s1 = 1 / (2 f_number)^2, s0 = obstruction^2 s1

    Every ray sees the filter tilted (effective-index formula, see `Tilted`).

    Parameters
    ----------
    filter : Filter
        The filter at normal incidence.
    f_number : float
        Working f-number, 1 / (2 sin theta) of the outermost ray; at least 0.5.
    effective_index : float
        Effective index of the coating, above 1; from the maker, or fitted. Common practice: 1.4 to 2.2.
    obstruction : float
        Diameter of a central obstruction over that of the pupil, 0 to below 1.

    Raises
    ------
    InputError, UnitsError

    Notes
    -----
    Rays are weighted by d(sin^2 theta): the pupil is evenly lit and the optics obey the sine condition (a ray's height in the pupil goes
    as sin theta), so equal areas of the pupil are equal steps of sin^2 theta. The axis of the cone is normal to the filter. Around
    another filter in the beam the wavelength factors multiply: for a `Tilted` one that leaves out the spread of angles around the tilted
    axis, sin theta times sin of the tilt, and the true band is then wider and softer.

    With q = nu sqrt(1 - s/n^2) the average is the mean of T0(q) over q^2, which is closed for polynomials: the transmission is fitted by
    pieces, cut at its breakpoints, to 2e-10, so edges and tables are as exact as smooth shapes.

    References
    ----------
    Macleod, Thin-Film Optical Filters, 4th ed., tilted narrow-band filters; weights derived from the sine condition (Born & Wolf, 7th ed.,
    sec. 4.5; section from memory).
    """

    shape: ClassVar[str] = "cone"
    filter: Filter
    f_number: float
    effective_index: float = 1.8
    obstruction: float = 0.0

    def __post_init__(self) -> None:
        check_filter(self.filter)
        check_index(self.effective_index)
        object.__setattr__(self, "f_number", number(self.f_number, "f_number", low=0.5))
        object.__setattr__(self, "obstruction", number(self.obstruction, "obstruction", low=0.0))
        if not self.obstruction < 1:
            raise InputError(f"obstruction must be below 1, the whole pupil; got {self.obstruction}")

    @cached_property
    def factors(self) -> tuple[float, float]:
        """Wavelengths over those of the upright filter for the innermost and the outermost ray, at most 1 and falling."""
        outermost = 0.25 / (self.f_number * self.effective_index) ** 2
        return float(np.sqrt(1.0 - self.obstruction**2 * outermost)), float(np.sqrt(1.0 - outermost))

    @property
    def support_si(self) -> tuple[float, float]:
        """Lowest and highest frequency [Hz] that pass."""
        low, high = self.filter.support_si
        inner, outer = self.factors
        return low / inner, high / outer

    @cached_property
    def breakpoints_si(self) -> FloatArray:  # type: ignore[override]
        """Frequencies [Hz] where the slope jumps: where the innermost or the outermost ray meets a kink or an end of the filter."""
        kinks = np.concatenate([np.asarray(self.filter.breakpoints_si), self.filter.support_si])
        return np.unique(np.concatenate([kinks / factor for factor in self.factors]))

    @cached_property
    def _mean(self) -> SquareMean:
        return SquareMean(self.filter)

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Transmission at `frequency` [Hz]."""
        inner, outer = self.factors
        if inner**2 - outer**2 < _NO_SPREAD:
            return within(self.filter, frequency * 0.5 * (inner + outer))
        value = np.maximum(self._mean(frequency * outer, frequency * inner), 0.0)
        return np.where(np.abs(value - 1.0) < _NO_SPREAD, np.minimum(value, 1.0), value)


__all__ = ["InCone"]
