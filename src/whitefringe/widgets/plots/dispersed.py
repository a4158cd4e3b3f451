"""The packet behind the arms, beside the one that equal arms would show."""

from __future__ import annotations

from html import escape

import astropy.units as u
import bqplot
import ipywidgets as widgets
import numpy as np

from ...coherence import self_coherence_si
from ...errors import WhitefringeError
from ...media import DispersedPacket
from ...units import SPEED_OF_LIGHT
from .._base import BenchView
from .._style import FITTED, MOST_POINTS, PREDICTED, RECORDED
from ..bench import NO_ARMS, Bench
from ._figures import FloatArray, draw, figure, legend, line, span

FEWEST = 1201
PER_FRINGE, FEWEST_PER_FRINGE = 24, 8
OTHERS = {
    "centre": "centre of |γ|² at {:+.2f} µm",
    "broadening": "{:.3f} times as wide as with equal arms",
    "asymmetry": "asymmetry {:+.3f}",
}
NOTHING = np.array([np.nan, np.nan])


class DispersedPacketPlot(BenchView):
    """Dispersed fringes and contrast, and the contrast of equal arms, against path difference.

    Zero is where the group delay of the mean frequency is balanced; the line under the plot says which added path difference that is.

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
        self.equal = line(self.x, self.y, FITTED, width=2, style="dashed")
        self.names = legend(
            [
                (self.fringes, "fringes, real part of γ"),
                (self.contrast, "contrast |γ| behind these arms"),
                (self.equal, "|γ| of equal arms"),
            ]
        )
        marks = [self.fringes, self.equal, self.contrast]
        label = "path difference from the zero of the mean frequency [µm]"
        self.figure = figure(marks, self.x, self.y, label, "degree of coherence γ", height, [-1.0, -0.5, 0.0, 0.5, 1.0])
        self.text, self.body = widgets.HTML(), widgets.VBox()
        self._drawn: object = None
        super().__init__(bench, [self.body], "wf-dispersed-plot")

    def refresh(self) -> None:
        """Redraw when arms or light have changed; without arms, say so."""
        packet = self.bench.results.packet
        if packet is None:
            self.text.value = NO_ARMS
        elif packet is not self._drawn:
            self.text.value = f"<div style='line-height:1.5;max-width:720px'>{self._draw(packet)}</div>"
        self._drawn = packet
        wanted = (self.text,) if packet is None else (self.names, self.figure, self.text)
        if self.body.children != wanted:
            self.body.children = wanted

    def hidden_parts(self) -> list[widgets.Widget]:
        """The figure is not shown where there are no arms."""
        return [self.names, self.figure]

    def summary(self) -> str:
        """Return the packet's numbers in one line."""
        packet = self.bench.results.packet
        try:
            words = "no arms" if packet is None else numbers_text(packet).replace("µm", "um")
        except WhitefringeError as reason:
            words = str(reason)
        return f"DispersedPacketPlot: {words}"

    def _draw(self, packet: DispersedPacket) -> str:
        """Draw the curves, and return what stands under them."""
        try:
            half = packet.reach_si
            words = numbers_text(packet)
        except WhitefringeError as reason:
            for mark in (self.fringes, self.contrast, self.equal):
                draw(mark, NOTHING, NOTHING)
            return escape(str(reason))
        fringes = 2e6 * half / self.bench.results.wavelength.to_value(u.um)
        offset = np.linspace(-half, half, int(np.clip(PER_FRINGE * fringes, FEWEST, MOST_POINTS - 2)) | 1)
        gamma = packet.about_zero_si(offset)
        fine = offset.size >= FEWEST_PER_FRINGE * fringes
        span(self.x, -1e6 * half, 1e6 * half)
        self._curve(self.contrast, offset, np.abs(gamma))
        self._curve(self.equal, offset, np.abs(self_coherence_si(packet.light, offset / SPEED_OF_LIGHT)))
        self._curve(self.fringes, offset, gamma.real if fine else np.full(offset.size, np.nan))
        return escape(words) + ("" if fine else "; the fringes are too many to be drawn")

    @staticmethod
    def _curve(mark: bqplot.Lines, offset: FloatArray, values: FloatArray) -> None:
        draw(mark, 1e6 * offset, values)


def numbers_text(packet: DispersedPacket) -> str:
    """Where zero is, and the packet's numbers from there, with fixed digits; a number that does not exist is left out."""
    zero, found = packet.zero.to_value(u.um), packet.numbers_si()
    place = 1e6 * found["position"] - zero if "position" in found else np.nan
    parts = [
        f"zero: {zero:.1f} µm of added path difference",
        f"greatest contrast {packet.peak_height:.4f} at {place:+.2f} µm from there",
    ]
    for name, words in OTHERS.items():
        if name in found:
            parts.append(words.format(1e6 * found[name] - zero if name == "centre" else found[name]))
    return "; ".join(parts)
