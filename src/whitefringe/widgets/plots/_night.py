"""Figures over the hours of a night."""

from __future__ import annotations

from typing import Any

import bqplot
import numpy as np

from ...sky import Observation
from ...units import FloatArray
from .._sky import dates_text, hours_of
from ._figures import span

MOST_TICKS = 8
LEAST_RANGE = 1e-3
"""Where all values are the same, the axis reaches so far to either side."""


def time_axis(figures: list[bqplot.Figure], x: bqplot.LinearScale, night: Observation) -> None:
    """Bring a time axis into step with the night: whole hours as the clock shows them, and the dates in its label."""
    hours = hours_of(night)
    first, last = float(hours[0]), float(hours[-1])
    span(x, first, last)
    step = next(each for each in (1, 2, 3, 4, 6) if (last - first) / each <= MOST_TICKS)
    ticks = np.arange(np.ceil(first / step) * step, last + 1e-9, step)
    for shown in figures:
        axis = shown.axes[0]
        with axis.hold_sync():
            axis.label = dates_text(night)
            axis.tick_labels = {f"{tick:g}": f"{int(tick) % 24:02d}:00" for tick in ticks}
            axis.tick_values = ticks


def value_axis(shown: bqplot.Figure, values: list[FloatArray], label: str | None = None, zero: bool = False) -> None:
    """Bring the other axis into step with what is drawn: its ends, round ticks, and its label."""
    every = np.concatenate(values)
    every = every[np.isfinite(every)]
    low, high = (float(every.min()), float(every.max())) if every.size else (0.0, 0.0)
    if zero:
        low = min(low, 0.0)
    if high - low < LEAST_RANGE:
        low, high = low - (0.0 if zero else LEAST_RANGE), high + LEAST_RANGE
    step = tick_step(low, high)
    low, high = step * np.floor(low / step), step * np.ceil(high / step)
    axis: Any = shown.axes[1]
    span(axis.scale, low, high)
    with axis.hold_sync():
        axis.tick_values = np.arange(round(low / step), round(high / step) + 1) * step
        if label is not None:
            axis.label = label


def tick_step(low: float, high: float, most: int = 5) -> float:
    """Return the round number that divides a range into at most `most` steps or so.

    Examples
    --------
    >>> tick_step(-48.1, 93.2), tick_step(0, 5.7)
    (50.0, 2.0)
    """
    raw = (high - low) / most
    scale = 10.0 ** np.floor(np.log10(raw))
    return float(next(digit for digit in (1, 2, 5, 10) if digit * scale >= raw) * scale)
