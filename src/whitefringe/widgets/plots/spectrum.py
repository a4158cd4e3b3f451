"""The light that the detector counts."""

from __future__ import annotations

import bqplot
import numpy as np

from ...spectra import Spectrum
from ...units import SPEED_OF_LIGHT
from .._base import BenchView
from .._style import CURSOR, FITTED, PREDICTED
from ..bench import Bench
from ._figures import FloatArray, draw, figure, legend, line, round_ticks, span

POINTS = 1500


class SpectrumPlot(BenchView):
    """Photon rate per hertz against vacuum wavelength, lines as stems, and the edges of the spectral channels.

    Parameters
    ----------
    bench : Bench
    height : int
        In pixels.
    """

    def __init__(self, bench: Bench, height: int = 300) -> None:
        self.x, self.y = bqplot.LinearScale(), bqplot.LinearScale(min=0, max=1.1)
        self.continuum = line(self.x, self.y, PREDICTED, width=2.5)
        self.stems = line(self.x, self.y, FITTED, width=2)
        self.edges = line(self.x, self.y, CURSOR, width=1, style="dashed")
        names = legend([(self.continuum, "continuum"), (self.stems, "lines"), (self.edges, "channel edges")])
        marks = [self.continuum, self.stems, self.edges]
        ticks = [0.0, 0.25, 0.5, 0.75, 1.0]
        self.figure = figure(marks, self.x, self.y, "vacuum wavelength [µm]", "photon rate per hertz, relative", height, ticks)
        self._drawn: object = None
        super().__init__(bench, [names, self.figure], "wf-spectrum-plot")

    def refresh(self) -> None:
        """Redraw when the light or the number of channels has changed."""
        now = (self.bench.results.light, self.bench.setup.channels)
        if self._drawn != now:
            self._draw(*now)
            self._drawn = now

    def _draw(self, light: Spectrum, channels: int) -> None:
        low, high = _shown_range(light)
        span(self.x, low, high)
        self.figure.axes[0].tick_values = round_ticks(low, high)
        draw(self.continuum, *_continuum(light))
        draw(self.stems, *_stems(light))
        draw(self.edges, *_channel_edges(light, channels))


def _shown_range(light: Spectrum) -> tuple[float, float]:
    """Wavelengths [um] to show: all light, and some room about a single line."""
    ends = [SPEED_OF_LIGHT / frequency * 1e6 for frequency in light.extent_si]
    low, high = min(ends), max(ends)
    room = 0.02 * (high - low) or 0.001 * high
    return low - room, high + room


def _continuum(light: Spectrum) -> tuple[FloatArray, FloatArray]:
    if not light.density.size:
        return np.array([np.nan]), np.array([np.nan])
    every = max(1, light.density.size // POINTS)
    top = float(np.max(light.density))
    wavelength = SPEED_OF_LIGHT / light.frequency_si[::every] * 1e6
    return wavelength[::-1], light.density[::every][::-1] / top


def _stems(light: Spectrum) -> tuple[FloatArray, FloatArray]:
    """One line with gaps: NaN lifts the pen between stems."""
    strongest = max((item.strength for item in light.lines), default=1.0)
    x = [[SPEED_OF_LIGHT / item.frequency_si * 1e6] * 2 + [np.nan] for item in light.lines]
    y = [[0.0, item.strength / strongest, np.nan] for item in light.lines]
    return (np.concatenate(x), np.concatenate(y)) if light.lines else (np.array([np.nan]), np.array([np.nan]))


def _channel_edges(light: Spectrum, channels: int) -> tuple[FloatArray, FloatArray]:
    if channels < 1 or not light.density.size:
        return np.array([np.nan]), np.array([np.nan])
    low = light.start_si
    edges = SPEED_OF_LIGHT / np.linspace(low, low + light.step_si * light.density.size, channels + 1) * 1e6
    return np.repeat(edges, 3), np.tile([0.0, 1.05, np.nan], edges.size)
