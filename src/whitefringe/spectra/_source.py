"""What every source offers, and what sources share: sums by ``+``, and the empty continuum of light of lines only."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Protocol, runtime_checkable

import numpy as np

from ..units import FloatArray
from .lines import Line

if TYPE_CHECKING:
    from .together import Together

NOWHERE: FloatArray = np.empty(0)
"""Breakpoints of a smooth source."""


@runtime_checkable
class Source(Protocol):
    """What every source offers."""

    @property
    def support_si(self) -> tuple[float, float]:
        """Lowest and highest frequency [Hz] of the continuum; equal when there is none."""
        ...

    @property
    def breakpoints_si(self) -> FloatArray:
        """Frequencies [Hz] where the slope jumps."""
        ...

    @property
    def lines(self) -> tuple[Line, ...]:
        """Spectral lines on top of the continuum."""
        ...

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Relative photon rate per hertz at `frequency` [Hz]."""
        ...


class SourceShape:
    """Shared by all sources: ``a + b`` is both at once."""

    def __add__(self, other: Any) -> Together:
        """Return both sources at once, each with weight 1."""
        from .together import Together

        if not isinstance(other, Source) or isinstance(other, type):
            return NotImplemented
        return Together(sources=(self, other))  # type: ignore[arg-type]


class LineSource(SourceShape):
    """Shared by the sources that emit lines only."""

    support_si = (0.0, 0.0)
    breakpoints_si = NOWHERE

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Zero: there is no continuum."""
        return np.zeros_like(frequency)
