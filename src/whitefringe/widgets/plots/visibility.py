"""The contrast that the object leaves to the fringes through the night."""

from __future__ import annotations

from html import escape
from typing import Any

import astropy.units as u
import bqplot
import ipywidgets as widgets
import numpy as np

from ...errors import UndefinedWidthError, WhitefringeError
from ...sky import Observation, field_of_view
from ...sky.observables import band_visibility_si
from ...units import FloatArray
from .._sky import SkyView, clock, hours_of, middle_row, night_of, observable
from .._style import FITTED, PREDICTED
from ..bench import Bench
from ._figures import draw, figure, legend, line
from ._night import time_axis

NULL = 0.003
"""A minimum of |V| below this counts as a null: the grid below comes so near to one."""

SAME = 5e-4
"""A change of |V| below this is none in the digits shown."""

GRID, FARTHEST = 4000, 20.0
"""Steps, and how far out, in lengths of the baseline, the first null is looked for."""


class VisibilityPlot(SkyView):
    """|V| of the object that is looked at, on its baseline: in the band of the bench's light, and at its mean wavelength.

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

    def __init__(self, bench: Bench, height: int = 260) -> None:
        night_of(bench)
        self.x, self.y = bqplot.LinearScale(), bqplot.LinearScale(min=0.0, max=1.02)
        self.seen = line(self.x, self.y, PREDICTED, width=4)
        self.whole = line(self.x, self.y, PREDICTED, width=1.5, style="dotted")
        self.mean = line(self.x, self.y, FITTED, width=1.5, style="dashed")
        entries = [(self.seen, "|V| in the band"), (self.whole, "not observable"), (self.mean, "|V| at the mean wavelength")]
        self.names, self.text = legend(entries), widgets.HTML()
        ticks = [0.0, 0.25, 0.5, 0.75, 1.0]
        self.figure = figure([self.mean, self.whole, self.seen], self.x, self.y, "UTC", "visibility |V|", height, ticks)
        super().__init__(bench, [self.names, self.figure, self.text], "wf-visibility-plot")

    def show(self, night: Observation) -> None:
        """Draw again what has changed."""
        light = self.bench.results.light
        if not self.new("curves", night.table, night.target, night.baseline, night.chosen_object, light):
            return
        hours, seen = hours_of(night), observable(night)
        east, north = (np.asarray(night.rows[name].to_value(u.m)) for name in ("u_icrs", "v_icrs"))
        wavelength = float(self.bench.results.wavelength.to_value(u.m))
        mean = np.abs(night.chosen_object.visibility_si(east / wavelength, north / wavelength))
        try:
            band, problem = np.abs(band_visibility_si(night.chosen_object, east, north, light)), ""
        except WhitefringeError as reason:  # an object too wide for the band: its monochromatic contrast is still shown
            band, problem = np.full(hours.size, np.nan), str(reason)
        time_axis([self.figure], self.x, night)
        draw(self.whole, hours, band)
        draw(self.seen, hours, np.where(seen, band, np.nan))
        draw(self.mean, hours, mean)
        lines = [problem] if problem else [extremes_text(hours, band, seen)]
        lines += [self._null_words(night, east, north, wavelength), self._field_words(night, east, north)]
        self.text.value = f"<div style='line-height:1.5;max-width:640px'>{''.join(f'<div>{escape(part)}</div>' for part in lines)}</div>"

    @staticmethod
    def _null_words(night: Observation, east: FloatArray, north: FloatArray, wavelength: float) -> str:
        row = middle_row(night)
        length = float(np.hypot(east[row], north[row]))
        now = f"mid-window projected baseline {length:.1f} m"
        if length == 0:
            return now
        found = first_null_si(night.chosen_object, east[row] / length / wavelength, north[row] / length / wavelength, FARTHEST * length)
        if found is None:
            return f"{now}; no null in its direction up to {FARTHEST * length:.0f} m"
        return f"{now}; first null in its direction at {found:.1f} m (mean wavelength {wavelength * 1e6:.4f} µm)"

    def _field_words(self, night: Observation, east: FloatArray, north: FloatArray) -> str:
        row = middle_row(night)
        length = float(np.hypot(east[row], north[row]))
        if length == 0:
            return ""
        try:
            field = field_of_view(self.bench.results.light, length * u.m, self.bench.setup.definition)
        except UndefinedWidthError as reason:
            return str(reason)
        return f"field that coherence allows there: {field.to_value(u.mas):.4g} mas ({field.definition.split(':')[0]})"


def extremes_text(hours: FloatArray, contrast: FloatArray, seen: Any) -> str:
    """Say how low and how high the contrast is while the target can be observed, and when."""
    if not np.any(seen):
        return f"not observable; |V| would be {contrast.min():.3f} to {contrast.max():.3f}"
    low, high = (np.flatnonzero(seen)[pick(contrast[seen])] for pick in (np.argmin, np.argmax))
    if contrast[high] - contrast[low] < SAME:
        return f"while observable |V| in the band is {contrast[low]:.3f} throughout"
    ends = [f"{contrast[k]:.3f} at {clock(hours[k])} UTC" for k in (low, high)]
    return f"while observable |V| in the band is least {ends[0]}, greatest {ends[1]}"


def first_null_si(obj: Any, u_per_metre: float, v_per_metre: float, farthest: float) -> float | None:
    """Shortest projected baseline [m] in a direction, given as cycles per radian and metre, at which |V| has a null."""
    lengths = np.linspace(0.0, farthest, GRID)
    contrast = np.abs(obj.visibility_si(lengths * u_per_metre, lengths * v_per_metre))
    inner = contrast[1:-1]
    for k in np.flatnonzero((inner <= contrast[:-2]) & (inner < contrast[2:])) + 1:
        fine = np.linspace(lengths[k - 1], lengths[k + 1], GRID)
        values = np.abs(obj.visibility_si(fine * u_per_metre, fine * v_per_metre))
        if values.min() < NULL:
            return float(fine[np.argmin(values)])
    return None
