"""The recorded scan, against what was fitted and what was predicted."""

from __future__ import annotations

from typing import Any

import bqplot
import ipywidgets as widgets
import numpy as np
from numpy.typing import NDArray

from ...coherence import self_coherence_si
from ...scans import ScanResult, thinned
from ...units import SPEED_OF_LIGHT
from .._base import BenchView
from .._style import FITTED, MOST_POINTS, PREDICTED, RECORDED
from ..bench import Bench
from ._figures import draw, figure, legend, line, span

FloatArray = NDArray[np.float64]


class ScanPlot(BenchView):
    """Recorded signal over its mean with fitted and predicted envelope, and the residuals below.

    Parameters
    ----------
    bench : Bench
    height : int
        Of the upper figure, in pixels.
    """

    def __init__(self, bench: Bench, height: int = 300) -> None:
        self.x, self.y, self.residual_y = bqplot.LinearScale(), bqplot.LinearScale(min=0, max=2), bqplot.LinearScale()
        self.signal = line(self.x, self.y, RECORDED, width=1)
        self.fitted = [line(self.x, self.y, FITTED, width=2) for _ in range(2)]
        self.predicted = [line(self.x, self.y, PREDICTED, width=2.5, style="dashed") for _ in range(2)]
        self.residual = line(self.x, self.residual_y, RECORDED, width=1)
        label = "path difference [µm]" if self._path_known(bench) else "stage position [step]"
        upper = [self.signal, *self.fitted, *self.predicted]
        ticks = [0.0, 0.5, 1.0, 1.5, 2.0]
        self.figure = figure(upper, self.x, self.y, label, "signal over mean", height, ticks)
        self.residual_figure = figure([self.residual], self.x, self.residual_y, label, "residual", height // 2 + 10, [0.0])
        self.names = legend([(self.signal, "recorded"), (self.fitted[0], "fitted envelope"), (self.predicted[0], "predicted envelope")])
        parts = [self.names, self.figure, self.residual_figure]
        if bench.scan is None:
            parts = [widgets.HTML("No scan is loaded: give one with Bench(setup, scan).")]
        self._drawn: object = None
        super().__init__(bench, parts, "wf-scan-plot")

    def hidden_parts(self) -> list[Any]:
        """The figures are not shown where there is no scan."""
        return [self.names, self.figure, self.residual_figure]

    @staticmethod
    def _path_known(bench: Bench) -> bool:
        return bench.results.reduction is None or bench.results.reduction.wavelength is not None

    def refresh(self) -> None:
        """Draw the scan once, and the predicted envelope at every change of the light."""
        reduction = self.bench.results.reduction
        if reduction is None:
            return
        if self._drawn is not reduction.curves:
            self._draw_scan(reduction)
            self._drawn = reduction.curves
        axis, envelope = self._predicted_envelope(reduction)
        for mark, sign in zip(self.predicted, (1, -1), strict=True):
            draw(mark, axis, 1 + sign * envelope)

    def _draw_scan(self, reduction: ScanResult) -> None:
        curves = reduction.curves
        axis = self._shown(reduction, curves.axis)
        draw(self.signal, *thinned(axis, curves.signal, MOST_POINTS))
        for mark, sign in zip(self.fitted, (1, -1), strict=True):
            draw(mark, *thinned(axis, 1 + sign * curves.envelope, MOST_POINTS))
        residual = curves.signal - curves.fringes
        draw(self.residual, *thinned(axis, residual, MOST_POINTS))
        top = 1.1 * float(np.max(np.abs(residual)))
        tick = float(f"{0.7 * top:.1g}")
        self.residual_figure.axes[1].tick_values = np.array([-tick, 0.0, tick])
        span(self.x, float(axis[0]), float(axis[-1]))
        span(self.residual_y, -top, top)

    def _shown(self, reduction: ScanResult, axis: FloatArray) -> FloatArray:
        return axis * 1e6 if reduction.wavelength is not None else axis

    def _predicted_envelope(self, reduction: ScanResult) -> tuple[FloatArray, FloatArray]:
        """Expected contrast about the measured centre; steps are turned into path by the fringe period where the scale is unknown."""
        curves, centre = reduction.curves, float(reduction.opd_centre.value.value)
        axis = np.linspace(curves.axis[0], curves.axis[-1], 1201)
        shown = self._shown(reduction, axis)
        if reduction.wavelength is not None:
            opd = (shown - centre) * 1e-6
        else:
            period = float(reduction.fringe_period.value.value)
            opd = (shown - centre) / period * float(self.bench.results.wavelength.value.to_value("m"))
        gamma = self_coherence_si(self.bench.results.light, opd / SPEED_OF_LIGHT)
        return shown, self.bench.setup.expected_contrast * np.abs(gamma)
