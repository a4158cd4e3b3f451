"""The projected baselines of the night."""

from __future__ import annotations

import astropy.units as u
import bqplot
import ipywidgets as widgets
import numpy as np

from ...sky import Observation
from ...units import FloatArray
from .._sky import SkyView, night_of
from .._style import AXIS, FITTED, RECORDED
from ..bench import Bench
from ._figures import draw, figure, legend, line, round_ticks, span

GAP = np.array([np.nan])


class UvPlot(SkyView):
    """Projected baselines u (east) and v (north) of the target that is looked at, all pairs of stations, both signs.

    u grows to the left, as east does on pictures of the sky. The baseline that is looked at stands out; what can be observed is drawn
    strong.

    Parameters
    ----------
    bench : Bench
    height : int
        In pixels.

    Raises
    ------
    InputError
        The bench has no night.
    """

    def __init__(self, bench: Bench, height: int = 420) -> None:
        night_of(bench)
        self.x, self.y = bqplot.LinearScale(reverse=True), bqplot.LinearScale()
        self.axes_cross = line(self.x, self.y, AXIS, width=0.5)
        self.others = line(self.x, self.y, RECORDED, width=1, style="dashed")
        self.others_seen = line(self.x, self.y, RECORDED, width=2.5)
        self.chosen = line(self.x, self.y, FITTED, width=1.5, style="dashed")
        self.chosen_seen = line(self.x, self.y, FITTED, width=4.5)
        marks = [self.axes_cross, self.others, self.others_seen, self.chosen, self.chosen_seen]
        self.figure = figure(marks, self.x, self.y, "u, east on the sky, to the left [m]", "v, north on the sky [m]", height, [0.0])
        self.figure.min_aspect_ratio = self.figure.max_aspect_ratio = 1.0
        entries = [(self.chosen_seen, "the baseline looked at"), (self.others_seen, "the others"), (self.others, "not observable")]
        self.names, self.text = legend(entries), widgets.HTML()
        super().__init__(bench, [self.names, self.figure, self.text], "wf-uv-plot")

    def show(self, night: Observation) -> None:
        """Draw again what has changed."""
        if not self.new("rows", night.table, night.target, night.baseline):
            return
        tracks = uv_tracks(night)
        for mark, mine, strong in (
            (self.others, False, False),
            (self.others_seen, False, True),
            (self.chosen, True, False),
            (self.chosen_seen, True, True),
        ):
            east, north = joined([(e, n, seen) for name, e, n, seen in tracks if (name == night.baseline) is mine], strong)
            draw(mark, east, north)
        half = 1.05 * max(float(np.max(np.hypot(e, n))) for _, e, n, _ in tracks) or 1.0
        draw(self.axes_cross, np.array([-half, half, np.nan, 0, 0]), np.array([0, 0, np.nan, -half, half]))
        for scale, axis in zip((self.x, self.y), self.figure.axes, strict=True):
            span(scale, -half, half)
            axis.tick_values = round_ticks(-half, half, most=5)
        self.text.value = f"<div style='line-height:1.5'>{self._words(night, tracks)}</div>"

    @staticmethod
    def _words(night: Observation, tracks: list[tuple[str, FloatArray, FloatArray, FloatArray]]) -> str:
        parts = []
        for name, east, north, seen in tracks:
            length = np.hypot(east, north)[seen]
            words = f"{length.min():.1f} to {length.max():.1f} m" if length.size else "not observable"
            parts.append(f"<b>{name}</b> {words}" if name == night.baseline else f"{name} {words}")
        return f"projected length of {night.target}'s baselines: {'; '.join(parts)}"


def uv_tracks(night: Observation) -> list[tuple[str, FloatArray, FloatArray, FloatArray]]:
    """Name, u, v [m] and what is observable of every baseline, for the target that is looked at."""
    found, low = [], night.least_altitude.to_value(u.deg)
    table = night.table
    for baseline in night.array.baselines:
        mine = np.flatnonzero((table["target"] == night.target) & (table["baseline"] == baseline.name))
        east, north = (np.asarray(table[name].to_value(u.m))[mine] for name in ("u_icrs", "v_icrs"))
        altitude = np.asarray(table["altitude"].to_value(u.deg))[mine]
        seen = np.asarray(table["observable"])[mine] if "observable" in table.colnames else ~(altitude < low)
        found.append((baseline.name, east, north, seen))
    return found


def joined(tracks: list[tuple[FloatArray, FloatArray, FloatArray]], strong: bool) -> tuple[FloatArray, FloatArray]:
    """Join tracks and their mirror images to one line with gaps; `strong`: only what can be observed."""
    u_parts, v_parts = [GAP], [GAP]
    for east, north, seen in tracks:
        for sign in (1, -1):
            u_parts += [sign * (np.where(seen, east, np.nan) if strong else east), GAP]
            v_parts += [sign * (np.where(seen, north, np.nan) if strong else north), GAP]
    return np.concatenate(u_parts), np.concatenate(v_parts)
