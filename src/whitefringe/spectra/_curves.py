"""From the columns of a measured filter curve to a clean one, with every fault named.

A fault is an error that names the file, the row and the repair that would mend it; a repair that was asked for is made and noted.
"""

from __future__ import annotations

import warnings
from dataclasses import dataclass
from typing import Any

import astropy.units as u
import numpy as np

from ..errors import CurveEndsWarning, FileContentError, InputError, UnitsError
from ..io import read_table
from ..standard_air import vacuum_from_air
from ..units import FloatArray, read_only

REPAIRS = ("sort", "merge-duplicates", "drop-non-finite", "clip-negative")
"""Names of the repairs: put rows in order; average rows of equal wavelength; leave out rows that are not finite; set values below
zero to zero."""

NEAR_ZERO = 0.01
"""An end value above this fraction of the peak means that the curve was cut off."""

FRACTION_LIMIT = 1.05
"""A transmission without a unit above this cannot be a fraction (a little over 1 is calibration error)."""


@dataclass(frozen=True, kw_only=True, eq=False)
class Curve:
    """A clean curve: wavelengths [m] strictly rising, transmissions as fractions, and notes."""

    wavelength_si: FloatArray
    transmission: FloatArray
    notes: tuple[str, ...]


MEDIA = ("vacuum", "air")
"""In what a table's wavelengths may be."""


def read_curve(
    path: Any,
    wavelength_unit: Any,
    transmission_unit: Any,
    wavelength_column: str | int,
    transmission_column: str | int,
    medium: str | None,
) -> tuple[u.Quantity, u.Quantity, tuple[str, ...]]:
    """Return the two columns of a file as Quantities in vacuum, units from the header or from the call, and what was taken for what."""
    table = read_table(path)
    wavelength = _column(table, wavelength_column, path)
    values = _column(table, transmission_column, path)
    notes = [note for note in table.meta["unit_notes"] if any(f"column {column.name!r}" in note for column in (wavelength, values))]
    if getattr(wavelength, "unit", None) == u.A:
        wavelength.unit = u.AA
        notes.append(f"{path}: column {wavelength.name!r}: the unit 'A' is the ampere by every standard; taken as Angstrom")
    first = _with_unit(wavelength, wavelength_unit, "wavelength_unit", path, None)
    second = _with_unit(values, transmission_unit, "transmission_unit", path, u.dimensionless_unscaled)
    stated = _medium(table.meta, medium, path)
    if stated is None and first.unit.physical_type in ("length", "wavenumber"):
        notes.append(
            f'{path}: nothing says whether the wavelengths are in vacuum or in air; taken as vacuum (say medium="vacuum" or "air")'
        )
    return _in_vacuum(first, stated, path), second, tuple(notes)


def _medium(header: Any, stated: str | None, path: Any) -> str | None:
    """What the call says of the medium, else the header by a key ``medium`` or ``AIRORVAC``; both must agree."""
    if stated is not None and stated not in MEDIA:
        raise InputError(f'medium must be "vacuum" or "air"; got {stated!r}')
    words = [str(value).strip().lower() for key, value in header.items() if str(key).lower() in ("medium", "airorvac")]
    written = next((name for name in MEDIA for word in words if word in (name, name[:3])), None)
    if stated is not None and written is not None and stated != written:
        raise InputError(f'{path}: the wavelengths are in {written} by the header, but medium="{stated}" was stated')
    return stated or written


def _in_vacuum(wavelength: u.Quantity, medium: str | None, path: Any) -> u.Quantity:
    if medium != "air":
        return wavelength
    if not wavelength.unit.is_equivalent(u.m):
        raise InputError(f"{path}: only wavelengths can be in air; this column is in {wavelength.unit}: leave medium out")
    return vacuum_from_air(np.asarray(wavelength.to_value(u.m)), str(path)) * u.m


def _column(table: Any, which: str | int, path: Any) -> Any:
    names = table.colnames
    if isinstance(which, int) and 0 <= which < len(names):
        return table[names[which]]
    if which in names:
        return table[which]
    raise FileContentError(f"{path}: no column {which!r}; the columns are {', '.join(names)}")


def _with_unit(column: Any, stated: Any, argument: str, path: Any, default: Any) -> u.Quantity:
    header = getattr(column, "unit", None)
    if stated is not None and header is not None and u.Unit(stated) != header:
        raise UnitsError(f"{path}: column {column.name!r} is in {header} by its header, but {argument}={stated} was stated")
    unit = stated if stated is not None else header if header is not None else default
    if unit is None:
        advice = f'state it, for example {argument}=u.nm (in a setup file: {argument} = "nm")'
        raise UnitsError(f"{path}: column {column.name!r} has no unit in the header; {advice}")
    return u.Quantity(np.asarray(column.value if hasattr(column, "value") else column, dtype=float), unit)


def prepare_curve(wavelength: Any, values: Any, repair: tuple[str, ...], origin: str) -> Curve:
    """Check and, where allowed, repair a curve.

    Raises
    ------
    InputError, UnitsError
        Unknown repair; shapes that differ; fewer than two points; a fault that no listed repair mends.
    """
    unknown = [name for name in repair if name not in REPAIRS]
    if unknown:
        raise InputError(f"repair: unknown name {unknown[0]!r}; the repairs are {', '.join(REPAIRS)}")
    x, y = _wavelength_si(wavelength, origin), _fraction(values, origin)
    if x.shape != y.shape or x.ndim != 1:
        raise InputError(f"{origin}: wavelength and transmission must be two columns of one length; got {x.shape} and {y.shape}")
    notes: list[str] = []
    x, y, rows = _finite(x, y, repair, origin, notes)
    x, y, rows = _ordered(x, y, rows, repair, origin, notes)
    row_of = dict(zip(x.tolist(), rows.tolist(), strict=True))
    x, y = _single(x, y, rows, repair, origin, notes)
    y = _not_negative(x, y, row_of, repair, origin, notes)
    if x.size < 2 or not np.any(y > 0):
        raise InputError(f"{origin}: a curve needs two points or more and some transmission above zero; got {x.size} points")
    if x[0] <= 0:
        raise InputError(f"{origin}: wavelengths must be above zero; got {x[0]:g} m")
    notes += _missing_light(x, y, origin)
    return Curve(wavelength_si=read_only(x), transmission=read_only(y), notes=tuple(notes))


def _wavelength_si(wavelength: Any, origin: str) -> FloatArray:
    if not isinstance(wavelength, u.Quantity):
        raise UnitsError(f"{origin}: wavelength must be a Quantity, for example [1.5, 1.6] * u.um")
    with np.errstate(divide="ignore", invalid="ignore"):
        try:
            return np.asarray(wavelength.to_value(u.m, equivalencies=u.spectral()), dtype=float)
        except u.UnitConversionError:
            raise UnitsError(f"{origin}: wavelength must be a length or a frequency; got {wavelength.unit}") from None


def _fraction(values: Any, origin: str) -> FloatArray:
    quantity = u.Quantity(values, dtype=float)
    try:
        y = np.asarray(quantity.to_value(u.dimensionless_unscaled), dtype=float)
    except u.UnitConversionError:
        raise UnitsError(f"{origin}: transmission must be a fraction or percent; got {quantity.unit}") from None
    highest = np.where(np.isfinite(y), y, 0.0)
    if np.max(highest, initial=0.0) > FRACTION_LIMIT:
        row, most = int(np.argmax(highest)) + 1, float(np.max(highest))
        advice = (
            "if the column is in percent, state it with transmission_unit=u.percent, or give the values as a Quantity in percent"
            if quantity.unit == u.dimensionless_unscaled
            else "no filter passes more light than it gets; correct the table"
        )
        raise UnitsError(f"{origin}: data row {row}: transmission {most:g} is above 1; {advice}")
    return y


def _finite(x: FloatArray, y: FloatArray, repair: tuple[str, ...], origin: str, notes: list[str]) -> Any:
    good = np.isfinite(x) & np.isfinite(y)
    if np.all(good):
        return x, y, np.arange(x.size) + 1
    bad = int(np.sum(~good))
    _may(repair, "drop-non-finite", f"{origin}: data row {int(np.argmin(good)) + 1}: not a finite number ({bad} such rows)")
    notes.append(f"drop-non-finite: {bad} rows left out")
    return x[good], y[good], np.flatnonzero(good) + 1


def _ordered(x: FloatArray, y: FloatArray, rows: Any, repair: tuple[str, ...], origin: str, notes: list[str]) -> Any:
    steps = np.diff(x)
    if np.all(steps >= 0):
        return x, y, rows
    if np.all(steps <= 0):
        return x[::-1], y[::-1], rows[::-1]
    turn = int(np.argmax(steps * steps[steps != 0][0] < 0)) + 1
    _may(repair, "sort", f"{origin}: data row {rows[turn]}: the wavelengths are neither rising nor falling")
    order = np.argsort(x, kind="stable")
    notes.append(f"sort: {x.size} rows put in order")
    return x[order], y[order], rows[order]


def _single(x: FloatArray, y: FloatArray, rows: Any, repair: tuple[str, ...], origin: str, notes: list[str]) -> Any:
    same = np.diff(x) == 0
    if not np.any(same):
        return x, y
    pair = int(np.argmax(same))
    fault = f"data row {max(rows[pair], rows[pair + 1])}: wavelength {x[pair] * 1e6:.6g} um stands in the table more than once"
    _may(repair, "merge-duplicates", f"{origin}: {fault}")
    unique, inverse, counts = np.unique(x, return_inverse=True, return_counts=True)
    notes.append(f"merge-duplicates: {x.size - unique.size} rows averaged into others")
    return unique, np.bincount(inverse, weights=y) / counts


def _not_negative(
    x: FloatArray, y: FloatArray, row_of: dict[float, int], repair: tuple[str, ...], origin: str, notes: list[str]
) -> FloatArray:
    below = y < 0
    if not np.any(below):
        return y
    worst = int(np.argmin(y))
    fault = f"transmission {y[worst]:.3g} at {x[worst] * 1e6:.6g} um is below zero ({int(np.sum(below))} such rows)"
    _may(repair, "clip-negative", f"{origin}: data row {row_of[float(x[worst])]}: {fault}")
    notes.append(f"clip-negative: {int(np.sum(below))} values set to zero, the lowest {y[worst]:.3g}")
    return np.maximum(y, 0.0)


def _may(repair: tuple[str, ...], name: str, fault: str) -> None:
    if name not in repair:
        raise InputError(f'{fault}; correct the table, or allow repair=("{name}",)')


def _missing_light(x: FloatArray, y: FloatArray, origin: str) -> list[str]:
    """Say how much light lies beyond ends that are not near zero, if the curve went on falling at its last slope.

    The last slope is that of the chord from the end to the point a twentieth of the table's range inside; a curve that does not
    fall there is followed at its end value for the width of the table.
    """
    notes = []
    area, span = float(np.trapezoid(y, x)), float(x[-1] - x[0])
    for end, inside, name in ((0, x[0] + span / 20, "short"), (-1, x[-1] - span / 20, "long")):
        value = float(y[end])
        if value <= NEAR_ZERO * float(np.max(y)):
            continue
        drop = float(np.interp(inside, x, y)) - value
        lost = value**2 * (span / 20) / (2 * drop) if drop > 0 else value * span
        share = min(lost, value * span) / area
        note = (
            f"{origin}: at its {name}-wavelength end ({x[end] * 1e6:.6g} um) the curve is still at {value / np.max(y):.1%} of its "
            f"peak; about {share:.2g} of the light that it lets through may be missing there"
        )
        warnings.warn(note, CurveEndsWarning, stacklevel=4)
        notes.append(note)
    return notes
