"""What is looked at, and on which night."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import astropy.units as u
import ipywidgets as widgets

from ...sky import FixedDirection, LampTarget, Observation, Star
from .._base import NumberRow, guarded
from .._sky import SkyView, back_button, box_style, night_of, note_html, widened
from ..bench import Bench

STEP = 0.1
"""Degrees per step of a slider. The slider ends one step before a whole turn: 360 would come back as 0."""


class TargetControl(SkyView):
    """Chooses target and night; for a star also its place, to see what would be, with a button that puts it back.

    A star that is moved keeps its motion, distance and uncertainties. The place is that of the epoch that the setup states.

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
        names = [target.name for target in night.targets]
        self.choice = widgets.Dropdown(options=names, value=night.target, description="target", **box_style())
        self.date = widgets.Text(
            value=night.date, description="night of (YYYY-MM-DD)", continuous_update=False, placeholder="evening at the site", **box_style()
        )
        self.rows: dict[str, NumberRow] = {}
        self.place, self.note = widgets.VBox(), widgets.HTML()
        self.back = back_button("put the star back")
        self.choice.observe(self._chosen, names="value")
        self.date.observe(self._dated, names="value")
        self.back.on_click(self._put_back)
        super().__init__(bench, [self.choice, self.date, self.place], "wf-target-control")

    @guarded
    def _chosen(self, change: Any) -> None:
        self.bench.update(observation=night_of(self.bench).choosing(target=change["new"]))

    @guarded
    def _dated(self, change: Any) -> None:
        self.bench.update(observation=replace(night_of(self.bench), date=change["new"].strip()))

    @guarded
    def _moved(self, change: Any) -> None:
        # only the angle that was moved: the other one keeps the digits that the row does not show
        which = next(name for name, row in self.rows.items() if row is change["owner"])
        self.bench.update(observation=night_of(self.bench).star_at(**{which: change["new"] * u.deg}))

    @guarded
    def _put_back(self, button: Any) -> None:
        self.bench.update(observation=night_of(self.bench).star_back())

    def show(self, night: Observation) -> None:
        """Show what is looked at, and where it is."""
        names = tuple(target.name for target in night.targets)
        if self.choice.options != names:
            self.choice.options = names
        if self.choice.value != night.target:
            self.choice.value = night.target
        if self.date.value != night.date:
            self.date.value = night.date
        target = night.chosen_target
        wanted: tuple[Any, ...] = (*self._star_rows(target),) if isinstance(target, Star) else ()
        moved = moved_text(night)
        words = moved or ("" if isinstance(target, Star) else kind_text(target))
        self.note.value = note_html(words)
        wanted += ((self.note,) if words else ()) + ((self.back,) if moved else ())
        if self.place.children != wanted:
            self.place.children = wanted

    def _star_rows(self, star: Star) -> list[NumberRow]:
        """Rows of the star's place, made with their values when a star is shown first."""
        values = {"ra": float(f"{star.coordinates.ra.deg:.12g}"), "dec": float(f"{star.coordinates.dec.deg:.12g}")}
        if not self.rows:
            ends = {"ra": ("right ascension", 0.0, 360.0 - STEP), "dec": ("declination", -90.0, 90.0)}
            for name, (label, low, high) in ends.items():
                row = NumberRow(label=label, unit="deg", low=low, high=high, step=STEP, value=values[name], lock=self.bench.lock)
                row.observe(self._moved, names="value")
                self.rows[name] = widened(row)
        for name, row in self.rows.items():
            row.value = values[name]
        return list(self.rows.values())

    def hidden_parts(self) -> list[Any]:
        """Rows, note and button where they are not shown."""
        return [*self.rows.values(), self.note, self.back]


def moved_text(night: Observation) -> str:
    """Say how far the star was moved from where the setup states it; empty where it was not."""
    target = night.chosen_target
    if night.stated is None or not isinstance(target, Star):
        return ""
    home = next(item for item in night.stated.targets if item.name == target.name)
    if home == target:
        return ""
    far = target.coordinates.separation(home.coordinates).to_value(u.deg)
    where = f"right ascension {home.coordinates.ra.deg:.6g} deg, declination {home.coordinates.dec.deg:.6g} deg"
    return f"moved by {far:.6g} deg from the setup's place, {where}"


def kind_text(target: Any) -> str:
    """Say where a target is that is no star."""
    if isinstance(target, LampTarget):
        return "the array's own lamp: no place on the sky, no path difference"
    if isinstance(target, FixedDirection):
        angles = (f"{getattr(target, name).to_value(u.deg):.6g} deg" for name in ("azimuth", "altitude"))
        return "fixed direction: azimuth {}, altitude {}".format(*angles)
    return ""
