"""Filter and source: choose a shape of the family, and move its parameters. One control draws any member, from its field descriptions."""

from __future__ import annotations

from dataclasses import fields, replace
from html import escape
from typing import Any

import astropy.units as u
import ipywidgets as widgets

from ...errors import InputError, UndefinedWidthError
from ...setup import caution_of
from ...spectra import (
    FILTER_SHAPES,
    LAMPS,
    SOURCE_SHAPES,
    Flat,
    Lamp,
    Parameter,
    Spectrum,
    Tabulated,
    bare_of,
    parameters_of,
    read_filter,
    with_bare,
)
from ...spectra.measures import half_maximum_edges_si, mean_frequency_si
from ...units import SPEED_OF_LIGHT
from .._base import BenchView, NumberRow, guarded
from .._style import LABEL_WIDTH
from ..bench import Bench


class ShapeControl(BenchView):
    """A choice of shapes, and a row for every parameter of the chosen one.

    Parameters
    ----------
    bench : Bench
    family : tuple of classes
    label : str
    css : str
    """

    def __init__(self, bench: Bench, family: tuple[type[Any], ...], label: str, css: str) -> None:
        self.family = {cls.shape: cls for cls in family}
        self._kept: dict[str, Any] = {}
        self.bench = bench
        self._keep(self.current())
        self.family.setdefault(self.current().shape, type(self.current()))  # such as a mirror in the place of a filter
        names = [name for name in self.family if adjustable(self.family[name]) or name in self._kept or self._has_default(name)]
        self.choice = widgets.Dropdown(
            options=names,
            value=self.current().shape,
            description=label,
            layout={"width": "270px"},
            style={"description_width": LABEL_WIDTH},
        )
        self.rows: dict[str, dict[str, NumberRow]] = {}
        self.parameters = widgets.VBox()
        self.choice.observe(self._chosen, names="value")
        super().__init__(bench, [self.choice, self.parameters], css)

    def current(self) -> Any:
        """Return the shape in the bench's setup."""
        raise NotImplementedError

    def put(self, shape: Any) -> None:
        """Put a shape into the bench's setup."""
        raise NotImplementedError

    def extra(self, name: str) -> list[Any]:
        """Return further widgets for a shape."""
        return []

    def row(self, parameter: str) -> NumberRow:
        """Return the row of a parameter of the shape that is chosen now."""
        return self.rows_of(self.choice.value)[parameter]

    def _has_default(self, name: str) -> bool:
        try:
            self.family[name]()
        except TypeError:
            return False
        return True

    def rows_of(self, name: str, values: dict[str, float] | None = None) -> dict[str, NumberRow]:
        """Return the rows of a shape's parameters, made when they are first needed, at once with their values.

        A slider that is made with one value and moved before it is drawn sends the first one back as if a user had moved it.
        """
        if name not in self.rows:
            self.rows[name] = {}
            for key, item in adjustable(self.family[name]).items():
                value = (values or {}).get(key, item.start)
                unit = f"{item.unit:unicode}" or "1"
                row = NumberRow(label=item.label, unit=unit, value=value, lock=self.bench.lock, **_limits(item, value))
                row.observe(self._moved, names="value")
                self.rows[name][key] = row
        else:
            for key, value in (values or {}).items():
                self.rows[name][key].value = value
        return self.rows[name]

    def _keep(self, shape: Any) -> None:
        self._kept[shape.shape] = shape

    @guarded
    def _chosen(self, change: Any) -> None:
        name = change["new"]
        kept = self._kept.get(name)
        self.put(self._like_now(name) if kept is None else kept)

    def _like_now(self, name: str) -> Any:
        """Return a shape with the centre and width of the light as it is now, where it has such parameters."""
        low, high = half_maximum_edges(self.bench.results.light)
        middle, width = 0.5 * (low + high), high - low
        known = {"centre": middle, "wavelength": middle, "width": width, "fwhm": width}
        if "centre" not in adjustable(self.family[name]):
            known["edge"] = middle
        described = adjustable(self.family[name])
        values = {
            key: float(f"{known[key].to_value(item.unit):.4g}")
            for key, item in described.items()
            if key in known and item.unit.is_equivalent(u.m)
        }
        self.silent = True
        try:
            self.rows_of(name, values)
        finally:
            self.silent = False
        return self._from_rows(name)

    @guarded
    def _moved(self, change: Any) -> None:
        self.put(self._from_rows(self.choice.value))

    def _from_rows(self, name: str) -> Any:
        """Build the shape from its rows; what has no row stays as it was in the shape of this kind that was here last."""
        described = adjustable(self.family[name])
        values: dict[str, Any] = {}
        for key, item in described.items():
            number = self.rows_of(name)[key].value
            whole = item.unit == u.dimensionless_unscaled and item.step == 1
            values[key] = (round(number) if whole else number) if item.unit == u.dimensionless_unscaled else number * item.unit
        kept = self._kept.get(name)
        return self.family[name](**values) if kept is None else replace(kept, **values)

    def refresh(self) -> None:
        """Show the shape in the bench's setup."""
        shape = self.current()
        self._keep(shape)
        if self.choice.value != shape.shape:
            self.choice.value = shape.shape
        values = {key: float(f"{_shown(getattr(shape, key), item, shape):.10g}") for key, item in adjustable(type(shape)).items()}
        wanted = (*self.rows_of(shape.shape, values).values(), *self.extra(shape.shape))
        if self.parameters.children != wanted:
            self.parameters.children = wanted

    def hidden_parts(self) -> list[Any]:
        """Rows of the shapes that are not chosen."""
        return [row for rows in self.rows.values() for row in rows.values()]


def adjustable(cls: type[Any]) -> dict[str, Parameter]:
    """Return the described fields of a shape that always have a number; what may be left out (None) has no slider."""
    optional = {item.name for item in fields(cls) if item.default is None}
    return {name: item for name, item in parameters_of(cls).items() if name not in optional}


def _limits(item: Parameter, value: float) -> dict[str, float]:
    """Range and step of a slider: as described, widened or made finer where the value asks for it."""
    step = item.step
    while value > 0 and item.step != 1 and step > value / 20:
        step /= 10
    steps = max(1, round((max(item.high, 2 * value) - min(item.low, value)) / step))
    low = min(item.low, value)
    return {"low": low, "high": low + steps * step, "step": float(f"{step:.3g}")}


def half_maximum_edges(light: Spectrum) -> tuple[u.Quantity, u.Quantity]:
    """Return the wavelengths of the half-maximum points; for light of lines, 5 % about its mean."""
    try:
        edges = half_maximum_edges_si(light)
    except UndefinedWidthError:
        mean = mean_frequency_si(light)
        edges = (0.975 * mean, 1.025 * mean)
    return SPEED_OF_LIGHT / edges[1] * u.m, SPEED_OF_LIGHT / edges[0] * u.m


def _shown(value: Any, item: Parameter, shape: Any) -> float:
    """Value of a field in its display unit; a width in frequency is turned into one in wavelength at the shape's centre (or edge)."""
    if not isinstance(value, u.Quantity):
        return float(value)
    if value.unit.is_equivalent(item.unit):
        return float(value.to_value(item.unit))
    middle = getattr(shape, "centre", getattr(shape, "edge", None))
    place = value is middle or value is getattr(shape, "end", None)
    if item.unit.is_equivalent(u.m) and value.unit.is_equivalent(u.Hz) and not place and middle is not None:
        centre = middle.to(u.m, equivalencies=u.spectral())
        return float((value / centre.to(u.Hz, equivalencies=u.spectral()) * centre).to_value(item.unit))
    return float(value.to_value(item.unit, equivalencies=u.spectral()))


class FilterControl(ShapeControl):
    """Chooses and moves one filter of the bench: a shape with its parameters, or a file.

    Parameters
    ----------
    bench : Bench
    index : int
        Which of the bench's filters.
    """

    def __init__(self, bench: Bench, index: int = 0) -> None:
        if not 0 <= index < len(bench.setup.filters):
            raise InputError(f"index must name one of the bench's filters, 0 to {len(bench.setup.filters) - 1}; got {index}")
        self.index = index
        self.file = widgets.Text(
            description="curve file",
            placeholder="path of a CSV, ECSV or FITS table",
            continuous_update=False,
            layout={"width": "460px"},
            style={"description_width": LABEL_WIDTH},
        )
        self.file.observe(self._file_named, names="value")
        super().__init__(bench, FILTER_SHAPES, "filter", "wf-filter-control")

    def current(self) -> Any:
        """Return the filter, without what happens to it in the beam."""
        return bare_of(self.bench.setup.filters[self.index])

    def put(self, shape: Any) -> None:
        """Replace the filter in the bench; what happens to it in the beam stays."""
        filters = list(self.bench.setup.filters)
        filters[self.index] = with_bare(filters[self.index], shape)
        self.bench.update(filters=tuple(filters))

    def extra(self, name: str) -> list[Any]:
        """The entry for a file belongs to the table shape."""
        return [self.file] if name == Tabulated.shape else []

    def _has_default(self, name: str) -> bool:
        return name == Tabulated.shape

    @guarded
    def _chosen(self, change: Any) -> None:
        if change["new"] == Tabulated.shape and Tabulated.shape not in self._kept:
            self.parameters.children = (self.file,)
            return
        ShapeControl._chosen.__wrapped__(self, change)  # type: ignore[attr-defined]

    @guarded
    def _file_named(self, change: Any) -> None:
        if change["new"].strip():
            self.put(read_filter(change["new"].strip()))
        else:
            self.file.value = self.current().origin

    def refresh(self) -> None:
        """Show the filter, and a table's file."""
        super().refresh()
        shape = self.current()
        if isinstance(shape, Tabulated) and self.file.value != shape.origin:
            self.file.value = shape.origin

    def hidden_parts(self) -> list[Any]:
        """Rows and file entry of the shapes that are not chosen."""
        return [*super().hidden_parts(), self.file]


class SourceControl(ShapeControl):
    """Chooses and moves the bench's source; a lamp by its element. Sources of tables, lines or sums are shown where the setup has one.

    Parameters
    ----------
    bench : Bench
    """

    def __init__(self, bench: Bench) -> None:
        self.element = widgets.Dropdown(
            options=LAMPS, description="element", layout={"width": "270px"}, style={"description_width": LABEL_WIDTH}
        )
        self.element.observe(self._element_chosen, names="value")
        self.caution = widgets.HTML()
        super().__init__(bench, SOURCE_SHAPES, "source", "wf-source-control")

    def current(self) -> Any:
        """Return the source."""
        return self.bench.setup.source

    def put(self, shape: Any) -> None:
        """Replace the source in the bench."""
        self.bench.update(source=shape)

    def extra(self, name: str) -> list[Any]:
        """The choice of elements belongs to the lamp, the caution line to what can hurt."""
        words = caution_of(self.bench.setup)
        self.caution.value = f"<div role='note' style='max-width:470px;line-height:1.4'>⚠ <b>{escape(words)}</b></div>"
        return ([self.element] if name == Lamp.shape else []) + ([self.caution] if words else [])

    def _has_default(self, name: str) -> bool:
        return name in (Flat.shape, Lamp.shape)

    def _like_now(self, name: str) -> Any:
        return Lamp.named(self.element.value) if name == Lamp.shape else super()._like_now(name)

    @guarded
    def _element_chosen(self, change: Any) -> None:
        self.put(Lamp.named(change["new"]))

    def refresh(self) -> None:
        """Show the source, and a lamp's element."""
        super().refresh()
        source = self.current()
        if isinstance(source, Lamp) and self.element.value != source.name:
            self.element.value = source.name

    def hidden_parts(self) -> list[Any]:
        """Rows, choice of elements and caution of the shapes that are not chosen."""
        return [*super().hidden_parts(), self.element, self.caution]
