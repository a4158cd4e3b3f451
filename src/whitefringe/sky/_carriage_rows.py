"""Rows of a carriage table as plain arrays, and the words for what keeps a row from being observed."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields
from functools import cached_property
from typing import Any

import astropy.units as u
import numpy as np
from astropy.table import Table

from ..errors import InputError, UnitsError
from ..units import FloatArray, as_si

LIMITS = ("below the horizon limit", "out of stroke", "too fast")
"""What a row can fail, in the order of the margins."""

LINE_NOTE = "delay line of "
"""How a note on a delay line begins in the table's ``meta``."""

ROW_COLUMNS = (
    *("target", "baseline", "time", "altitude", "station_1", "station_2", "carriage_1", "carriage_2", "speed_1", "speed_2"),
    *("moving", "line_difference", "margin_altitude", "margin_stroke", "margin_speed"),
)
"""What must stand in a table of carriages."""


def need_columns(table: Any, names: Sequence[str], what: str, advice: str) -> None:
    """Refuse anything but a table that has rows and these columns."""
    if not isinstance(table, Table):
        raise InputError(f"{what} must be an astropy table; got {type(table).__name__}; {advice}")
    missing = [name for name in names if name not in table.colnames]
    if missing:
        raise InputError(f"{what} has no column {', '.join(missing)}; {advice}")
    if len(table) == 0:
        raise InputError(f"{what} has no rows; give at least one target, baseline and time")


def column_si(table: Any, name: str, unit: u.UnitBase, finite: bool = True) -> FloatArray:
    """Return a column in `unit`; with ``finite=False`` empty entries are allowed, as not-a-number."""
    column = table[name]
    if hasattr(column, "filled"):
        column = column.filled(np.nan)
    if finite:
        return np.asarray(as_si(u.Quantity(column), unit, f"column {name}"), dtype=float)
    try:
        return np.asarray(u.Quantity(column).to_value(unit), dtype=float)
    except u.UnitConversionError:
        raise UnitsError(f"column {name} must be convertible to {unit}; got {u.Quantity(column).unit}") from None


@dataclass(frozen=True, kw_only=True, eq=False)
class CarriageRows:
    """A table of carriages as arrays: altitude [deg], position [m] and speed [mm/s] of the moving carriage, margins in these units.

    `margins` has shape (rows, 3): altitude, stroke, speed; negative is beyond the limit, not-a-number has none.
    """

    altitude: FloatArray
    positions: FloatArray
    speed: FloatArray
    second: Any
    moving: Any
    difference: FloatArray
    margins: FloatArray

    @classmethod
    def of(cls, table: Any) -> CarriageRows:
        """Take the arrays from a table."""
        need_columns(table, ROW_COLUMNS, "the table of carriages", "sky.carriages gives it")
        speeds = [column_si(table, name, u.mm / u.s) for name in ("speed_1", "speed_2")]
        moving = np.asarray(table["moving"]).astype(str)
        units = {"margin_altitude": u.deg, "margin_stroke": u.m, "margin_speed": u.mm / u.s}
        return cls(
            altitude=column_si(table, "altitude", u.deg, finite=False),
            positions=np.stack([column_si(table, name, u.m) for name in ("carriage_1", "carriage_2")], axis=1),
            speed=np.max(np.abs(speeds), axis=0),
            second=(moving == np.asarray(table["station_2"]).astype(str)).astype(int),
            moving=moving,
            difference=column_si(table, "line_difference", u.m),
            margins=np.stack([column_si(table, name, unit, finite=False) for name, unit in units.items()], axis=1),
        )

    def taken(self, order: Any) -> CarriageRows:
        """Return these rows in another order."""
        return CarriageRows(**{item.name: getattr(self, item.name)[order] for item in fields(self)})

    @cached_property
    def inside(self) -> Any:
        """Tell of every row whether it is inside all limits."""
        return ~np.any(self.margins < 0, axis=1)

    def reason(self, start: int, stop: int) -> str:
        """Words for the limits that rows from `start` to before `stop` break, with how far they go; empty if none."""
        beyond = self.margins[start:stop] < 0
        if not beyond.any():
            return ""
        rows = np.arange(start, stop)
        parts = []
        if (low := rows[beyond[:, 0]]).size:
            limit = self.altitude[low[0]] - self.margins[low[0], 0]
            parts.append(f"{LIMITS[0]}: altitude {_span(self.altitude[low], 1)} deg, limit {limit:.6g} deg")
        for kind, words in ((1, "{} needs {} m, stroke {:.6g} m"), (2, "{} {} mm/s, limit {:.6g} mm/s")):
            value = self.positions[rows, self.second[rows]] if kind == 1 else self.speed[rows]
            for station in dict.fromkeys(self.moving[rows[beyond[:, kind]]].tolist()):
                these = beyond[:, kind] & (self.moving[rows] == station)
                limit = float((value + self.margins[rows, kind])[these][0])
                parts.append(f"{LIMITS[kind]}: {words.format(station, _span(value[these], 3 if kind == 1 else 1), limit)}")
        return "; ".join(parts)


def _span(values: FloatArray, digits: int) -> str:
    return span_text(float(np.min(values)), float(np.max(values)), digits)


def span_text(least: float, greatest: float, digits: int) -> str:
    """Format a range in fixed digits, or the one number if both ends are the same in these.

    Examples
    --------
    >>> span_text(0.41234, 7.98, 3), span_text(0.0, 0.0, 3)
    ('0.412 to 7.980', '0.000')
    """
    # adding zero turns -0.0 into 0.0
    first, last = (f"{round(end, digits) + 0.0:.{digits}f}" for end in (least, greatest))
    return first if first == last else f"{first} to {last}"
