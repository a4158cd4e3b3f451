"""Where the packet is through the night, how well that is known, and what the delay line must do about it."""

from __future__ import annotations

from html import escape
from typing import Any

import astropy.units as u
import bqplot
import ipywidgets as widgets
import numpy as np

from ...sky import Observation, opd_text
from ...units import FloatArray
from .._base import guarded
from .._sky import SkyView, clock, hours_of, hours_si, middle_row, night_of, observable
from .._style import AXIS, CURSOR, FITTED, PREDICTED, RECORDED
from ..bench import Bench
from ._figures import draw, figure, legend, line
from ._night import time_axis, value_axis

VIEWS = ("uncertainty", "rate and speeds", "carriages", "altitude")
STYLES = ((PREDICTED, 2.5, "solid"), (FITTED, 1.5, "solid"), (RECORDED, 2.0, "dashed"), (CURSOR, 2.0, "dotted"), (AXIS, 1.5, "dashed"))
"""Colour, width and stroke of the lower plot's lines, in order."""

Curves = list[tuple[str, FloatArray]]


class DelayTrackPlot(SkyView):
    """Path difference of the target and baseline that are looked at against time; below it what belongs to it, to choose.

    The stretch that can be observed is drawn strong, the rest dashed, with the reasons in words. The uncertainty, micrometres on tens of
    metres, is drawn by its causes in a plot of its own.

    Parameters
    ----------
    bench : Bench
    height : int
        Of the upper figure, in pixels.

    Raises
    ------
    InputError
        The bench has no night.
    """

    def __init__(self, bench: Bench, height: int = 260) -> None:
        night = night_of(bench)
        self.x, self.y, self.lower_y = bqplot.LinearScale(), bqplot.LinearScale(), bqplot.LinearScale()
        self.whole = line(self.x, self.y, PREDICTED, width=1.5, style="dashed")
        self.seen = line(self.x, self.y, PREDICTED, width=4)
        self.names = legend([(self.seen, "path difference, observable"), (self.whole, "not observable")])
        self.figure = figure([self.whole, self.seen], self.x, self.y, "UTC", "path difference [m]", height, [0.0])
        self.curves = [line(self.x, self.lower_y, colour, width=width, style=style) for colour, width, style in STYLES]
        self.lower = figure(self.curves, self.x, self.lower_y, "UTC", "", height, [0.0])
        self.view = widgets.ToggleButtons(options=views_of(night), style={"button_width": "auto"})
        self.view.observe(self._viewed, names="value")
        self.lower_names, self.text = widgets.HTML(), widgets.HTML()
        parts = [self.names, self.figure, self.text, self.view, self.lower_names, self.lower]
        super().__init__(bench, parts, "wf-track-plot")

    @guarded
    def _viewed(self, change: Any) -> None:
        self._draw_lower(night_of(self.bench))

    def show(self, night: Observation) -> None:
        """Draw again what has changed."""
        if not self.new("rows", night.table, night.target, night.baseline):
            return
        if self.view.options != views_of(night):
            self.view.options = views_of(night)
        hours, seen = hours_of(night), observable(night)
        opd = np.asarray(night.rows["opd"].to_value(u.m))
        time_axis([self.figure, self.lower], self.x, night)
        value_axis(self.figure, [opd])
        draw(self.whole, hours, opd)
        draw(self.seen, hours, np.where(seen, opd, np.nan))
        self.text.value = f"<div style='line-height:1.5;max-width:640px'>{self._words(night)}</div>"
        self._draw_lower(night)

    def _draw_lower(self, night: Observation) -> None:
        label, curves = lower_curves(night, self.view.value)
        hours, shown = hours_of(night), [values for _, values in curves]
        for mark, values in zip(self.curves, [*shown, *[np.full(hours.size, np.nan)] * (len(self.curves) - len(shown))], strict=True):
            draw(mark, hours, values)
        value_axis(self.lower, shown, label, zero=self.view.value == "uncertainty")
        entries = [(mark, escape(name)) for mark, (name, _) in zip(self.curves, curves, strict=False)]
        drawn = legend(entries)
        self.lower_names.value = drawn.value
        for part in (drawn.layout, drawn.style, drawn):
            part.close()

    def _words(self, night: Observation) -> str:
        row = middle_row(night)
        where = "mid-window" if np.any(observable(night)) else "mid-night, not observable"
        lines = [f"{where} {clock(hours_of(night)[row])} UTC: <b>{opd_text(night.rows[row]).replace(' um', ' µm')}</b>, one sigma"]
        lines += [f"not observable {words}" for words in closed_text(night)]
        return "".join(f"<div>{part}</div>" for part in lines)


def views_of(night: Observation) -> tuple[str, ...]:
    """What the lower plot can show: carriages only where there are delay lines."""
    return tuple(name for name in VIEWS if night.delay_lines or name != "carriages")


def lower_curves(night: Observation, view: str) -> tuple[str, Curves]:
    """Label of the axis, and name and values of each curve of a view."""
    rows = night.rows

    def column(name: str, unit: u.UnitBase) -> FloatArray:
        return np.asarray(rows[name].to_value(unit), dtype=float)

    if view == "uncertainty":
        causes = (("all", ""), ("UT1", "_ut1"), ("target's place", "_target"), ("stations", "_stations"), ("pole", "_pole"))
        return "one sigma [µm]", [(name, column(f"opd_uncertainty{end}", u.um)) for name, end in causes]
    if view == "altitude":
        altitude = column("altitude", u.deg)
        limit = np.full(altitude.size, night.least_altitude.to_value(u.deg))
        return "altitude [deg]", [("target", altitude), ("least altitude", limit)]
    stations = (night.chosen_baseline.first, night.chosen_baseline.second)
    if view == "rate and speeds":
        curves = [("path difference", column("opd_rate", u.mm / u.s))]
        if night.delay_lines:
            curves += [(f"carriage of {name}", column(f"speed_{k}", u.mm / u.s)) for k, name in enumerate(stations, 1)]
        return "rate [mm/s]", curves
    strokes = {item.station: item.stroke.to_value(u.m) for item in night.delay_lines}
    curves = [(f"carriage of {name}", column(f"carriage_{k}", u.m)) for k, name in enumerate(stations, 1)]
    ends = {f"{strokes[name]:g}": name for name in stations}
    words = {end: " and ".join(name for name in stations if f"{strokes[name]:g}" == end) for end in ends}
    return "carriage position [m]", curves + [
        (f"end of stroke: {words[end]}", np.full(len(rows), strokes[name])) for end, name in ends.items()
    ]


def closed_text(night: Observation) -> list[str]:
    """Say for each stretch that cannot be observed when it is and why."""
    found = night.windows
    if found is None:
        low = f"below the least altitude of {night.least_altitude.to_value(u.deg):g} deg"
        return [] if np.all(observable(night)) else [f"where the target is {low}; no delay lines in the setup"]
    mine = found[(found["target"] == night.target) & (found["baseline"] == night.baseline) & ~np.asarray(found["observable"])]
    starts, ends = hours_si(mine["start"], night), hours_si(mine["end"], night)
    return [
        f"{clock(start)} to {clock(end)} UTC: {escape(str(reason))}"
        for start, end, reason in zip(starts, ends, mine["reason"], strict=True)
    ]
