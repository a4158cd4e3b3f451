"""Filter and source: choose a shape of the family, and move its parameters. One control draws any member, from its field descriptions."""

from __future__ import annotations

from typing import Any

import astropy.units as u
import ipywidgets as widgets

from ...errors import UndefinedWidthError
from ...spectra import FILTER_SHAPES, SOURCE_SHAPES, Lines, Parameter, Spectrum, Tabulated, parameters_of, read_filter
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
        names = [name for name in self.family if parameters_of(self.family[name]) or name in self._kept or self._has_default(name)]
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

    def rows_of(self, name: str) -> dict[str, NumberRow]:
        """Return the rows of a shape's parameters, made when they are first needed."""
        if name not in self.rows:
            self.rows[name] = {}
            for key, item in parameters_of(self.family[name]).items():
                unit = f"{item.unit:unicode}"
                limits = {"low": item.low, "high": item.high, "step": item.step}
                row = NumberRow(label=item.label, unit=unit, value=item.start, lock=self.bench.lock, **limits)
                row.observe(self._moved, names="value")
                self.rows[name][key] = row
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
        values = {"centre": 0.5 * (low + high), "width": high - low, "fwhm": high - low}
        for key, item in parameters_of(self.family[name]).items():
            row = self.rows_of(name)[key]
            if key in values and item.unit.is_equivalent(u.m):
                row.value = row.slider.snapped(values[key].to_value(item.unit))
        return self._from_rows(name)

    @guarded
    def _moved(self, change: Any) -> None:
        self.put(self._from_rows(self.choice.value))

    def _from_rows(self, name: str) -> Any:
        described = parameters_of(self.family[name])
        values = {key: self.rows_of(name)[key].value * item.unit for key, item in described.items()}
        return self.family[name](**values)

    def refresh(self) -> None:
        """Show the shape in the bench's setup."""
        shape = self.current()
        self._keep(shape)
        if self.choice.value != shape.shape:
            self.choice.value = shape.shape
        rows = self.rows_of(shape.shape)
        for name, row in rows.items():
            row.value = float(f"{_shown(getattr(shape, name), parameters_of(shape)[name], shape):.10g}")
        wanted = (*rows.values(), *self.extra(shape.shape))
        if self.parameters.children != wanted:
            self.parameters.children = wanted

    def hidden_parts(self) -> list[Any]:
        """Rows of the shapes that are not chosen."""
        return [row for rows in self.rows.values() for row in rows.values()]


def half_maximum_edges(light: Spectrum) -> tuple[u.Quantity, u.Quantity]:
    """Return the wavelengths of the half-maximum points; for light of lines, 5 % about its mean."""
    try:
        edges = half_maximum_edges_si(light)
    except UndefinedWidthError:
        mean = mean_frequency_si(light)
        edges = (0.975 * mean, 1.025 * mean)
    return SPEED_OF_LIGHT / edges[1] * u.m, SPEED_OF_LIGHT / edges[0] * u.m


def _shown(value: u.Quantity, item: Parameter, shape: Any) -> float:
    """Value of a field in its display unit; a width in frequency is turned into one in wavelength at the shape's centre."""
    if value.unit.is_equivalent(item.unit):
        return float(value.to_value(item.unit))
    if item.unit.is_equivalent(u.m) and value.unit.is_equivalent(u.Hz) and value is not getattr(shape, "centre", None):
        centre = shape.centre.to(u.m, equivalencies=u.spectral())
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
        """Return the filter."""
        return self.bench.setup.filters[self.index]

    def put(self, shape: Any) -> None:
        """Replace the filter in the bench."""
        filters = list(self.bench.setup.filters)
        filters[self.index] = shape
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
    """Chooses and moves the bench's source. A lamp of lines is shown where the setup has one."""

    def __init__(self, bench: Bench) -> None:
        super().__init__(bench, SOURCE_SHAPES, "source", "wf-source-control")

    def current(self) -> Any:
        """Return the source."""
        return self.bench.setup.source

    def put(self, shape: Any) -> None:
        """Replace the source in the bench."""
        self.bench.update(source=shape)

    def _has_default(self, name: str) -> bool:
        return name != Lines.shape
