"""The predicted packet."""

from __future__ import annotations

import astropy.units as u
import bqplot
import ipywidgets as widgets
import numpy as np

from ...coherence import self_coherence_si
from ...units import SPEED_OF_LIGHT
from .._base import BenchView
from .._style import CURSOR, PREDICTED, RECORDED
from ..bench import Bench, plotted_half_range
from ._figures import draw, figure, legend, line, span

POINTS, MOST = 2001, 8001
PER_FRINGE, FEWEST_PER_FRINGE = 24, 8


class PacketPlot(BenchView):
    """Predicted contrast |gamma| and fringes against path difference, with the delay cursor.

    Parameters
    ----------
    bench : Bench
    height : int
        In pixels.
    """

    def __init__(self, bench: Bench, height: int = 300) -> None:
        self.x, self.y = bqplot.LinearScale(), bqplot.LinearScale(min=-1.05, max=1.05)
        self.fringes = line(self.x, self.y, RECORDED, width=1)
        self.contrast = line(self.x, self.y, PREDICTED, width=2.5)
        self.cursor = line(self.x, self.y, CURSOR, width=2, style="dashed")
        names = legend(
            [(self.fringes, "predicted fringes, real part of γ"), (self.contrast, "contrast |γ|"), (self.cursor, "delay cursor")]
        )
        marks = [self.fringes, self.contrast, self.cursor]
        ticks = [-1.0, -0.5, 0.0, 0.5, 1.0]
        self.figure = figure(marks, self.x, self.y, "path difference [µm]", "degree of coherence γ", height, ticks)
        self._drawn: object = None
        self.note = widgets.HTML()
        super().__init__(bench, [names, self.figure, self.note], "wf-packet-plot")

    def refresh(self) -> None:
        """Redraw the curves when the light has changed, the cursor always."""
        results, delay = self.bench.results, float(self.bench.setup.delay.to_value(u.um))
        if self._drawn is not results.light:
            self._draw_curves()
            self._drawn = results.light
        draw(self.cursor, np.array([delay, delay]), np.array([-1.0, 1.0]))

    def _draw_curves(self) -> None:
        results = self.bench.results
        half = plotted_half_range(results)
        fringes = 2 * half / results.wavelength.to_value(u.um)
        opd = np.linspace(-half, half, int(np.clip(PER_FRINGE * fringes, POINTS, MOST)) | 1)
        gamma = self_coherence_si(results.light, opd * 1e-6 / SPEED_OF_LIGHT)
        span(self.x, -half, half)
        fine = opd.size >= FEWEST_PER_FRINGE * fringes
        draw(self.fringes, opd, gamma.real if fine else np.full(opd.size, np.nan))
        self.note.value = "" if fine else "the fringes are too many to be drawn"
        draw(self.contrast, opd, np.abs(gamma))
