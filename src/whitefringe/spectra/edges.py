"""Long-pass and short-pass edges."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import astropy.units as u
import numpy as np
from scipy.special import ndtr, ndtri

from ..errors import InputError
from ..parameters import parameter
from ..units import SPEED_OF_LIGHT, FloatArray, as_si, is_length, one_frequency_si
from ._shape import SHORTEST, FilterShape
from .lines import width_si

_TEN_TO_NINETY = 2.0 * float(ndtri(0.9))
"""Standard deviations between 10 % and 90 % of the normal cumulative: 2.563."""

_BLOCKED = 3.2
"""An edge is followed to this many rises into its blocked side, where 1e-16 is left."""


class _Edge(FilterShape):
    """A step blurred by a Gaussian: the normal cumulative of 2.563 (axis - edge) / rise, its passing side named by the subclass."""

    passes_long: ClassVar[bool]
    farthest: ClassVar[float]
    edge: u.Quantity
    rise: u.Quantity
    end: u.Quantity | None

    def __post_init__(self) -> None:
        at = one_frequency_si(self.edge, "edge")
        width_si(at, self.rise, "rise")
        if self.end is None:
            object.__setattr__(self, "end", (self.farthest * SPEED_OF_LIGHT / at * u.m).to(u.um))
        end = one_frequency_si(self.end, "end")
        if (end < at) != self.passes_long or end == at:
            side = "longer" if self.passes_long else "shorter"
            raise InputError(f"end must be a {side} wavelength than the edge, {self.edge}; got {self.end}")

    @cached_property
    def _axis_si(self) -> tuple[bool, float, float]:
        """Whether the axis is wavelength; edge and signed rise on it [m or Hz], positive where the light passes above the edge."""
        at = one_frequency_si(self.edge, "edge")
        if is_length(u.Quantity(self.rise)):
            return True, SPEED_OF_LIGHT / at, float(as_si(self.rise, u.m, "rise")) * (1 if self.passes_long else -1)
        return False, at, float(as_si(self.rise, u.Hz, "rise")) * (-1 if self.passes_long else 1)

    @cached_property
    def support_si(self) -> tuple[float, float]:
        """Frequencies [Hz] of `end`, and of the place on the blocked side beyond which less than 1e-15 passes."""
        in_wavelength, at, rise = self._axis_si
        blocked = max(at - _BLOCKED * rise, SHORTEST * at)
        other = SPEED_OF_LIGHT / blocked if in_wavelength else blocked
        first, last = sorted((one_frequency_si(self.end, "end"), other))
        return first, last

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Transmission at `frequency` [Hz]."""
        in_wavelength, at, rise = self._axis_si
        place = SPEED_OF_LIGHT / frequency if in_wavelength else frequency
        return np.asarray(ndtr(_TEN_TO_NINETY * (place - at) / rise))


@dataclass(frozen=True, kw_only=True)
class LongPass(_Edge):
    """An edge that passes the longer wavelengths: T = Phi(2.563 (lambda - edge) / rise), Phi the normal cumulative.

    Parameters
    ----------
    edge : Quantity [vacuum wavelength or frequency]
        Where half passes.
    rise : Quantity [wavelength or frequency]
        From 10 % to 90 %; in wavelength or, when it is a frequency, in frequency.
    end : Quantity [vacuum wavelength or frequency], optional
        Where the band ends, sharply: no substrate passes for ever. By default at ten times the edge; state it, or let source, detector or
        another filter bound the light.

    Raises
    ------
    InputError, UnitsError

    References
    ----------
    Derived: a sharp step blurred by a Gaussian; 2.563 is twice the 90 % quantile of the normal distribution.

    Examples
    --------
    >>> import astropy.units as u
    >>> glass = LongPass(edge=1.5 * u.um, rise=20 * u.nm, end=2.5 * u.um)
    >>> print(glass.transmission([1.45, 1.49, 1.5, 1.51, 1.6, 2.6] * u.um).round(6))
    [0.  0.1 0.5 0.9 1.  0. ]
    """

    shape: ClassVar[str] = "long-pass"
    passes_long: ClassVar[bool] = True
    farthest: ClassVar[float] = 10.0
    edge: u.Quantity = parameter("edge", u.um, low=0.4, high=2.5, step=0.005, start=1.5)
    rise: u.Quantity = parameter("rise, 10 to 90 %", u.nm, low=1.0, high=200.0, step=1.0, start=20.0)
    end: u.Quantity | None = parameter("end", u.um, low=1.0, high=5.0, step=0.05, start=2.5, default=None)


@dataclass(frozen=True, kw_only=True)
class ShortPass(_Edge):
    """An edge that passes the shorter wavelengths: T = Phi(2.563 (edge - lambda) / rise), Phi the normal cumulative.

    Parameters
    ----------
    edge : Quantity [vacuum wavelength or frequency]
        Where half passes.
    rise : Quantity [wavelength or frequency]
        From 90 % to 10 %; in wavelength or, when it is a frequency, in frequency.
    end : Quantity [vacuum wavelength or frequency], optional
        Where the band ends, sharply, on the short side. By default at a tenth of the edge; state it, or let source, detector or another
        filter bound the light.

    Raises
    ------
    InputError, UnitsError

    References
    ----------
    Derived, as for `LongPass`.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(ShortPass(edge=1.8 * u.um, rise=20 * u.nm).transmission([0.17, 1.6, 1.79, 1.8, 1.81, 1.9] * u.um).round(6))
    [0.  1.  0.9 0.5 0.1 0. ]
    """

    shape: ClassVar[str] = "short-pass"
    passes_long: ClassVar[bool] = False
    farthest: ClassVar[float] = 0.1
    edge: u.Quantity = parameter("edge", u.um, low=0.4, high=2.5, step=0.005, start=1.8)
    rise: u.Quantity = parameter("rise, 90 to 10 %", u.nm, low=1.0, high=200.0, step=1.0, start=20.0)
    end: u.Quantity | None = parameter("end", u.um, low=0.2, high=1.0, step=0.05, start=0.4, default=None)


__all__ = ["LongPass", "ShortPass"]
