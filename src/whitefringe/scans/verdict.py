"""Measured against predicted: ratios with uncertainties, tolerances, and an outcome that respects both."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from enum import StrEnum
from typing import Any

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..results import Measured

COVERAGE = 2.0
"""Outcomes use the interval value -+ this many standard deviations (95 %)."""


class Outcome(StrEnum):
    """What a comparison with a tolerance says."""

    INSIDE = "inside"
    OUTSIDE = "outside"
    UNDECIDED = "undecided"
    NOT_MEASURED = "not measured"


@dataclass(frozen=True, kw_only=True)
class Tolerances:
    """Allowed ranges of measured over predicted; None: not judged.

    Parameters
    ----------
    contrast, wavelength, packet_width, coherence_length : (low, high) or None
        The coherence length is by the definition asked for, and not judged by default.
    """

    contrast: tuple[float, float] | None = (0.8, 1.05)
    wavelength: tuple[float, float] | None = (0.99, 1.01)
    packet_width: tuple[float, float] | None = (0.9, 1.1)
    coherence_length: tuple[float, float] | None = None

    def __post_init__(self) -> None:
        for name in ("contrast", "wavelength", "packet_width", "coherence_length"):
            limits = getattr(self, name)
            numbers = isinstance(limits, (tuple, list)) and len(limits) == 2 and all(isinstance(x, (int, float)) for x in limits)
            if limits is not None and not (numbers and 0 <= limits[0] < limits[1]):
                raise InputError(f"tolerance {name} must be (low, high) with 0 <= low < high; got {limits}")


@dataclass(frozen=True, kw_only=True)
class Comparison:
    """One quantity: measured, predicted, their ratio, the tolerance on it and the outcome."""

    name: str
    measured: Measured | None
    predicted: Measured
    tolerance: tuple[float, float] | None
    reason: str = ""

    @property
    def ratio(self) -> Measured | None:
        """Measured over predicted."""
        if self.measured is None:
            return None
        predicted = self.predicted.value
        value = (self.measured.value / predicted).to(u.dimensionless_unscaled)
        sigma = None if self.measured.uncertainty is None else (self.measured.uncertainty / predicted).to(u.dimensionless_unscaled)
        return Measured(value=value, uncertainty=sigma, definition=f"{self.name}, measured over predicted", method="ratio")

    @property
    def outcome(self) -> Outcome | None:
        """Inside, outside, undecided or not measured; None where no tolerance is set."""
        if self.tolerance is None:
            return None
        ratio = self.ratio
        if ratio is None:
            return Outcome.NOT_MEASURED
        sigma = 0.0 if ratio.uncertainty is None else float(ratio.uncertainty.value)
        return judged(float(ratio.value.value), sigma, self.tolerance)


def judged(value: float, sigma: float, limits: tuple[float, float]) -> Outcome:
    """Compare value -+ 2 sigma with limits: wholly within, wholly without, or undecided.

    Examples
    --------
    >>> print(judged(1.0, 0.01, (0.9, 1.1)), judged(1.09, 0.01, (0.9, 1.1)), judged(1.2, 0.01, (0.9, 1.1)))
    inside undecided outside
    """
    low, high = value - COVERAGE * sigma, value + COVERAGE * sigma
    if not np.isfinite(low + high):
        return Outcome.NOT_MEASURED
    if limits[0] <= low and high <= limits[1]:
        return Outcome.INSIDE
    if high < limits[0] or low > limits[1]:
        return Outcome.OUTSIDE
    return Outcome.UNDECIDED


def overall(outcomes: Iterable[Outcome | None]) -> Outcome:
    """Outside if any is; else not measured or undecided if any is; inside when all are."""
    found: set[Any] = set(outcomes) - {None}
    for outcome in (Outcome.OUTSIDE, Outcome.NOT_MEASURED, Outcome.UNDECIDED):
        if outcome in found:
            return outcome
    return Outcome.INSIDE if found else Outcome.NOT_MEASURED


def comparisons_text(comparisons: Iterable[Comparison]) -> str:
    """Lay out comparisons as lines of text, with fixed digits: stable for notebooks under test."""
    lines = []
    for item in comparisons:
        ratio = "none" if item.ratio is None else item.ratio.text
        limits = "not set" if item.tolerance is None else f"{item.tolerance[0]:g} to {item.tolerance[1]:g}"
        outcome = "not judged" if item.outcome is None else str(item.outcome)
        reason = f" ({item.reason})" if item.reason else ""
        lines.append(f"{item.name:<16} {ratio:<18} tolerance {limits:<15} {outcome}{reason}")
    return "\n".join(lines)
