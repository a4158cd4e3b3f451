"""The delay cursor."""

from __future__ import annotations

import math
from typing import Any

import astropy.units as u
import numpy as np

from .._base import BenchView, NumberRow, guarded
from ..bench import Bench, plotted_half_range


class DelayControl(BenchView):
    """Moves the delay cursor, in micrometres of path difference.

    Parameters
    ----------
    bench : Bench
    half_range : Quantity [length], optional
        The cursor goes from minus to plus this; by default about two and a half packet widths.
    """

    def __init__(self, bench: Bench, half_range: u.Quantity | None = None) -> None:
        self.fixed = None if half_range is None else float(half_range.to_value(u.um))
        half = self._half(bench)
        start, step = float(bench.setup.delay.to_value(u.um)), rounded_up(half / 500, below=True)
        self.row = NumberRow(label="delay", unit="µm", low=-half, high=half, step=step, value=start, lock=bench.lock)
        self.row.observe(self._moved, names="value")
        super().__init__(bench, [self.row], "wf-delay-control")

    @guarded
    def _moved(self, change: Any) -> None:
        self.bench.update(delay=change["new"] * u.um)

    def _half(self, bench: Bench) -> float:
        """Half of the slider's range: whole steps, about as far as the packet plot goes."""
        if self.fixed is not None:
            return self.fixed
        half = plotted_half_range(bench.results)
        step = rounded_up(half / 500, below=True)
        return float(f"{np.floor(half / step) * step:.10g}")

    def refresh(self) -> None:
        """Show the bench's delay; the range follows the packet's width."""
        half = self._half(self.bench)
        slider = self.row.slider
        if slider.max != half:
            slider.step = rounded_up(half / 500, below=True)
            slider.min, slider.max = (-half, half) if half > slider.max else (slider.min, half)
            slider.min = -half
            self.row.box.step = slider.step
        self.row.value = float(self.bench.setup.delay.to_value(u.um))


def rounded_up(value: float, below: bool = False) -> float:
    """Return the next of 1, 2, 5, 10 ... times a power of ten; `below`: the one before.

    Examples
    --------
    >>> rounded_up(30.7), rounded_up(0.0614, below=True)
    (50.0, 0.05)
    """
    scale = 10.0 ** math.floor(math.log10(value))
    digits = (1.0, 2.0, 5.0, 10.0)
    chosen = max(d for d in digits if d <= value / scale) if below else min(d for d in digits if d >= value / scale)
    return float(f"{chosen * scale:.12g}")
