"""Which pair of stations, and what if one stood elsewhere."""

from __future__ import annotations

from typing import Any

import astropy.units as u
import ipywidgets as widgets
import numpy as np

from ...sky import Observation
from ...sky._moved import polar_si
from .._base import NumberRow, guarded
from .._sky import SkyView, back_button, box_style, night_of, note_html, widened
from ..bench import Bench

LENGTH_STEP, AZIMUTH_STEP = 0.5, 0.5
"""Metres and degrees per step of a slider."""

SAME = 5e-8
"""Metres below which a station counts as not moved: rounding of geocentric coordinates is below it."""


class BaselineControl(SkyView):
    """Chooses a pair of stations; length and azimuth move the second about the first, to see what would be. A button puts all back.

    The station's height, its delay line and the uncertainty of its place are kept.

    Parameters
    ----------
    bench : Bench

    Raises
    ------
    InputError
        The bench has no night.
    """

    def __init__(self, bench: Bench) -> None:
        night = night_of(bench)
        names = [item.name for item in night.array.baselines]
        self.choice = widgets.Dropdown(
            options=names,
            value=night.baseline,
            description="baseline",
            **box_style(),
        )
        length, azimuth = polar_of(night)
        high = 100.0 * np.ceil(2 * max(item.length.to_value(u.m) for item in night.array.baselines) / 100)
        common: dict[str, Any] = {"lock": bench.lock}
        self.length = NumberRow(label="length over ground", unit="m", low=LENGTH_STEP, high=high, step=LENGTH_STEP, value=length, **common)
        self.azimuth = NumberRow(
            label="azimuth, north to east", unit="deg", low=0.0, high=360.0 - AZIMUTH_STEP, step=AZIMUTH_STEP, value=azimuth, **common
        )
        for row in (self.length, self.azimuth):
            widened(row)
        self.note, self.more = widgets.HTML(), widgets.VBox()
        self.back = back_button("put the stations back")
        self.choice.observe(self._chosen, names="value")
        self.length.observe(self._lengthened, names="value")
        self.azimuth.observe(self._turned, names="value")
        self.back.on_click(self._put_back)
        super().__init__(bench, [self.choice, self.length, self.azimuth, self.more], "wf-baseline-control")

    @guarded
    def _chosen(self, change: Any) -> None:
        self.bench.update(observation=night_of(self.bench).choosing(baseline=change["new"]))

    @guarded
    def _lengthened(self, change: Any) -> None:
        self.bench.update(observation=night_of(self.bench).station_at(length=change["new"] * u.m))

    @guarded
    def _turned(self, change: Any) -> None:
        self.bench.update(observation=night_of(self.bench).station_at(azimuth=change["new"] * u.deg))

    @guarded
    def _put_back(self, button: Any) -> None:
        self.bench.update(observation=night_of(self.bench).stations_back())

    def show(self, night: Observation) -> None:
        """Show the baseline, and which stations were moved."""
        names = tuple(item.name for item in night.array.baselines)
        if self.choice.options != names:
            self.choice.options = names
        if self.choice.value != night.baseline:
            self.choice.value = night.baseline
        self.length.value, self.azimuth.value = polar_of(night)
        words = moved_text(night)
        self.note.value = note_html(words)
        wanted = (self.note, self.back) if words else ()
        if self.more.children != wanted:
            self.more.children = wanted

    def hidden_parts(self) -> list[Any]:
        """Note and button where they are not shown."""
        return [self.note, self.back]


def polar_of(night: Observation) -> tuple[float, float]:
    """Length over ground [m] and azimuth [deg] of the baseline, as the rows show them: to 0.1 um and 1e-6 deg."""
    length, azimuth = polar_si(night.chosen_baseline)
    return round(length, 7), round(float(np.degrees(azimuth)) % 360.0, 6) % 360.0


def moved_text(night: Observation) -> str:
    """Say which stations were moved from where the setup states them, and by how much; empty where none was."""
    if night.stated is None:
        return ""
    home, parts = night.stated.array, []
    for name, now, then in zip(night.array.names, night.array.enu_si, home.enu_si, strict=True):
        east, north, _ = now - then
        if np.hypot(east, north) > SAME:
            parts.append(f"{name} moved by {np.hypot(east, north):.3f} m (east {east:+.3f} m, north {north:+.3f} m)")
    return f"{'; '.join(parts)} from the setup's place; all its baselines change" if parts else ""
