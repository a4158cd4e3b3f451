"""What the target looks like."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import astropy.units as u
import ipywidgets as widgets
import numpy as np

from ...sky import OBJECT_SHAPES, Binary, Group, Picture, WithBackground
from .._base import NumberRow
from .._sky import WIDE, night_of, note_html, problem_text, widened
from ..bench import Bench
from .shapes import ShapeControl, adjustable


class ObjectControl(ShapeControl):
    """Chooses and moves the brightness of the target that is looked at. Groups and pictures are shown where the setup has one.

    Each target's objects are kept apart. A double star or a background is made of the object that was there before, and keeps it.

    Parameters
    ----------
    bench : Bench

    Raises
    ------
    InputError
        The bench has no night.
    """

    def __init__(self, bench: Bench) -> None:
        self._target = night_of(bench).target
        self._kept_of: dict[str, dict[str, Any]] = {}
        self.parts = widgets.HTML()
        super().__init__(bench, OBJECT_SHAPES, "object", "wf-object-control")
        self.choice.layout.width, self.choice.style.description_width = "370px", WIDE

    def current(self) -> Any:
        """Return the object of the target that is looked at."""
        return night_of(self.bench).chosen_object

    def put(self, shape: Any) -> None:
        """Replace the object of the target that is looked at."""
        self.bench.update(observation=night_of(self.bench).looking_like(shape))

    def rows_of(self, name: str, values: dict[str, float] | None = None) -> dict[str, NumberRow]:
        """Return the rows of a shape's parameters, with room for their labels."""
        fresh = name not in self.rows
        found = super().rows_of(name, values)
        for row in found.values() if fresh else ():
            widened(row)
        return found

    def _like_now(self, name: str) -> Any:
        # an object has nothing in common with the light
        self.silent = True
        try:
            self.rows_of(name)
        finally:
            self.silent = False
        shape, now = self._from_rows(name), self.current()
        if type(shape) is type(now):
            return shape
        # a companion, or a background, is added to what is there
        if isinstance(shape, Binary):
            return replace(shape, first=now)
        return replace(shape, object=now) if isinstance(shape, WithBackground) else shape

    def extra(self, name: str) -> list[Any]:
        """What the object is made of, where it is made of others."""
        words = parts_text(self.current())
        self.parts.value = note_html(words)
        return [self.parts] if words else []

    def refresh(self) -> None:
        """Show the object of the target that is looked at; not shown while the bench has no night."""
        night = self.bench.setup.observation
        self.layout.display = "none" if night is None else None
        if night is None:
            return
        if night.target != self._target:
            self._kept_of[self._target] = self._kept
            self._target, self._kept = night.target, self._kept_of.get(night.target, {})
        self._keep(self.current())
        names = tuple(name for name, cls in self.family.items() if cls not in (Group, Picture) or name in self._kept)
        if self.choice.options != names:
            self.choice.options = names
        super().refresh()

    def summary(self) -> str:
        """Return the object in one line, with the parameters that have a row."""
        night = self.bench.setup.observation
        if night is None:
            return "ObjectControl: no array"
        return f"ObjectControl: {night.target}: {object_text(night.chosen_object)}{problem_text(self.bench)}"

    def hidden_parts(self) -> list[Any]:
        """Rows of the shapes that are not chosen, and the words on parts."""
        return [*super().hidden_parts(), self.parts]


def object_text(shape: Any) -> str:
    """Say in words what an object is: its shape, what has a number, and what it is made of."""
    values = (f"{item.label} {_text(getattr(shape, name), item)}" for name, item in adjustable(type(shape)).items())
    parts = parts_text(shape)
    return ", ".join([str(getattr(shape, "shape", type(shape).__name__)), *values, *([parts] if parts else [])])


def parts_text(shape: Any) -> str:
    """Say what an object is made of; empty where it is one."""
    if isinstance(shape, Binary):
        return f"first: {object_text(shape.first)}; second: {object_text(shape.second)}"
    if isinstance(shape, WithBackground):
        return f"before the background: {object_text(shape.object)}"
    if isinstance(shape, Group):
        return "; ".join(object_text(item) for item in shape.objects)
    if isinstance(shape, Picture):
        rows, columns = np.shape(shape.image)
        return f"{rows} by {columns} pixels of {shape.pixel.to_value(u.mas):.6g} mas"
    return ""


def _text(value: Any, item: Any) -> str:
    number = value.to_value(item.unit) if hasattr(value, "to_value") else value
    unit = f" {item.unit}" if str(item.unit) else ""
    return f"{float(number):.6g}{unit}"
