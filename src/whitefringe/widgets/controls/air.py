"""The air in the arms: temperature, pressure and humidity, within what its model is stated for."""

from __future__ import annotations

from html import escape
from typing import Any

import astropy.units as u
import ipywidgets as widgets

from ...media import Air, ArmPair, Mathar2007, Medium, TwoModelAir
from ...media.mathar import mathar_windows
from ...media.medium import CONDITIONS
from ...parameters import Parameter, parameters_of
from .._base import BenchView, NumberRow, guarded
from ..bench import NO_ARMS, Bench

STATED_UNITS = {"temperature": u.deg_C, "pressure": u.kPa, "humidity": u.percent}
"""Units in which a model's `stated` ranges are given."""


class AirControl(BenchView):
    """Moves temperature, pressure and relative humidity of all air in the arms; segments with conditions of their own keep them.

    Parameters
    ----------
    bench : Bench

    Notes
    -----
    A row reaches as far as the air's model is stated for (all models, where there are more), or as far as the parameter's usual range where
    that is narrower or the air may be extrapolated. A condition that every segment sets for itself has no row.
    """

    def __init__(self, bench: Bench) -> None:
        self._rows: dict[tuple[Any, ...], NumberRow] = {}
        self.rows: dict[str, NumberRow] = {}
        self.text, self.body = widgets.HTML(), widgets.VBox()
        super().__init__(bench, [self.body], "wf-air-control")

    @guarded
    def _moved(self, change: Any) -> None:
        arms = self.bench.setup.arms
        for name, row in self.rows.items():
            if row is change["owner"] and arms is not None:
                self.bench.update(arms=arms.in_air(**{name: u.Quantity(change["new"], parameters_of(Air)[name].unit)}))
                return

    def refresh(self) -> None:
        """Show the air of the arms, or that there is none."""
        arms = self.bench.setup.arms
        air = None if arms is None else arms.air
        self.rows = {}
        if arms is not None and air is not None:
            self.rows = {name: self._row(name, air, models) for name in CONDITIONS if (models := _moved_by(arms, name))}
        self.text.value = f"<div style='max-width:470px;line-height:1.4'>{_words(arms, air)}</div>"
        wanted = (*self.rows.values(), self.text)
        if self.body.children != wanted:
            self.body.children = wanted

    def _row(self, name: str, air: Medium, models: list[Air]) -> NumberRow:
        """The row of a condition: one for each range, made at once with its value."""
        item, value = parameters_of(Air)[name], _value(air, name)
        low, high = _range(name, item, models)
        low, high = min(low, value), max(high, value)
        key = (name, low, high)
        if key not in self._rows:
            row = NumberRow(
                label=item.label, unit=f"{item.unit:unicode}", low=low, high=high, step=item.step, value=value, lock=self.bench.lock
            )
            row.observe(self._moved, names="value")
            self._rows[key] = row
        self._rows[key].value = value
        return self._rows[key]

    def hidden_parts(self) -> list[Any]:
        """Rows of other ranges."""
        return list(self._rows.values())


def _models(air: Medium) -> tuple[Air, ...]:
    if isinstance(air, TwoModelAir):
        return air.short, air.long
    return (air,) if isinstance(air, Air) else ()


def _value(air: Medium, name: str) -> float:
    """A condition in its display unit."""
    model = _models(air)[0]
    shown = {"temperature": model.temperature_si - 273.15, "pressure": model.pressure_si / 100, "humidity": 100 * model.relative_humidity}
    return float(f"{shown[name]:.8g}")


def _range(name: str, item: Parameter, models: list[Air]) -> tuple[float, float]:
    """Ends of a condition's row in its display unit: the usual range, within what every model is stated for."""
    low, high = item.low, item.high
    for model in models:
        stated = model.stated[CONDITIONS.index(name)]
        ends = [float(u.Quantity(end, STATED_UNITS[name]).to_value(item.unit)) for end in (stated.low, stated.high)]
        if not model.extrapolate:
            low, high = max(low, ends[0]), min(high, ends[1])
    return float(f"{low:.10g}"), float(f"{high:.10g}")


def _moved_by(arms: ArmPair, name: str) -> list[Air]:
    """The models of all air that does not set this condition for itself."""
    return [model for _, item in arms.signed if item.medium.is_air and getattr(item, name) is None for model in _models(item.medium)]


def _words(arms: ArmPair | None, air: Medium | None) -> str:
    if arms is None:
        return NO_ARMS
    if air is None:
        return "There is no air in these arms."
    lines = list(dict.fromkeys(_stated(model) for _, item in arms.signed for model in _models(item.medium)))
    if isinstance(air, TwoModelAir):
        what = "taken out" if air.levelled else "left in"
        lines.append(
            f"they meet at {air.meet.to_value(u.um, u.spectral()):g} µm with a step in n of {air.step:.2e}, {what}: "
            f"{air.step * 1e8:.2f} µm of path per 100 m of air"
        )
    return "<br>".join([*map(escape, lines), *map(escape, _notes(arms, air))])


def _stated(model: Air) -> str:
    temperature, pressure, humidity = (f"{end.low:g} to {end.high:g}" for end in model.stated)
    beyond = "; may be extrapolated" if model.extrapolate else ""
    return f"{model.name}: {_wavelengths(model)}, {temperature} °C, {pressure} kPa, {humidity} % humidity{beyond}"


def _wavelengths(model: Air) -> str:
    if isinstance(model, Mathar2007):
        windows = mathar_windows()
        return f"{len(windows)} windows in {windows[0].low:g} to {windows[-1].high:g} µm"
    ends = model.wavelengths
    return "all wavelengths" if ends is None else f"{ends.low:g} to {ends.high:g} µm"


def _notes(arms: ArmPair, air: Medium) -> list[str]:
    """What the rows do not move, and what they would make alike."""
    notes = []
    for arm, segments in (("first", arms.first), ("second", arms.second)):
        for number, item in enumerate(segments, start=1):
            if not item.medium.is_air:
                continue
            own = [f"{name} {getattr(item, name):g}" for name in CONDITIONS if getattr(item, name) is not None]
            if own:
                notes.append(f"{arm} arm, segment {number} keeps its own {', '.join(own)}")
            elif any(_value(item.medium, name) != _value(air, name) for name in CONDITIONS):
                notes.append(f"{arm} arm, segment {number} is air under other conditions; a move of a row sets it alike")
    return notes
