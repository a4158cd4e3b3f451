"""`Scan`: one recorded delay scan, as it was recorded, and how to read one."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from types import MappingProxyType
from typing import Any

import astropy.units as u
import numpy as np

from ..errors import FileContentError, ScanLayoutError
from ..io import read_table, sha256_of
from ..units import STEP, FloatArray, read_only
from .layout import Column, ScanLayout


@dataclass(frozen=True, kw_only=True, eq=False)
class Scan:
    """A recorded delay scan. Values are as recorded: no dark subtracted, nothing left out.

    Parameters
    ----------
    position : Quantity [length or step], shape (n,)
        Stage position.
    signals : mapping of str to array, each shape (n,)
        ``"signal"``, and ``"reference"`` where there is one [counts].
    layout : ScanLayout
    time : Quantity [s], shape (n,), optional
    provenance : mapping of str to str
        Where it is from: path, format, checksum, rows.
    """

    position: u.Quantity = field(repr=False)
    signals: Mapping[str, Any] = field(repr=False)
    layout: ScanLayout = field(default_factory=ScanLayout)
    time: u.Quantity | None = field(default=None, repr=False)
    provenance: Mapping[str, str] = field(default_factory=dict)

    def __post_init__(self) -> None:
        position = _frozen_quantity(self.position, "position", u.m, "a length, or units.STEP for a stage without scale")
        if position.unit != STEP and self.layout.opd_per_step_si is not None:
            raise ScanLayoutError("the position is a length already: leave opd_per_step and stage_per_step out of the layout")
        signals = {name: read_only(values) for name, values in self.signals.items()}
        if "signal" not in signals:
            raise ScanLayoutError(f'signals must hold "signal"; got {", ".join(signals) or "nothing"}')
        if self.layout.reference is not None and "reference" not in signals:
            raise ScanLayoutError('the layout names a reference channel, but signals hold no "reference"')
        idle = self.layout.stage_per_step is None and (self.layout.passes != 1 or self.layout.index != 1)
        if position.unit == STEP and idle and self.layout.reference is None:
            raise ScanLayoutError(
                "passes and index have no effect on steps of unknown length: give the step's length as stage_per_step (such as "
                '"1 um"), or a position column with a unit'
            )
        for name, values in signals.items():
            if values.shape != position.shape or values.ndim != 1:
                raise ScanLayoutError(f"{name} has shape {values.shape}, but position has {position.shape}")
        object.__setattr__(self, "position", position)
        object.__setattr__(self, "signals", MappingProxyType(signals))
        object.__setattr__(self, "provenance", MappingProxyType(dict(self.provenance)))
        if self.time is not None:
            object.__setattr__(self, "time", _frozen_quantity(self.time, "time", u.s, "a time"))

    @property
    def signal(self) -> FloatArray:
        """Detector counts, shape (n,)."""
        return np.asarray(self.signals["signal"])

    def __len__(self) -> int:
        return int(self.position.size)

    @property
    def name(self) -> str:
        """File name, or "scan" for one that was not read from a file."""
        return Path(self.provenance.get("path", "scan")).name


def _frozen_quantity(value: Any, name: str, unit: u.UnitBase, accepted: str) -> u.Quantity:
    steps = isinstance(value, u.Quantity) and name == "position" and value.unit == STEP
    if not isinstance(value, u.Quantity) or not (steps or value.unit.is_equivalent(unit)):
        raise ScanLayoutError(f"{name} must be a Quantity ({accepted})")
    quantity = u.Quantity(value, dtype=float, copy=True)
    quantity.setflags(write=False)
    return quantity


def read_scan(path: str | Path, layout: ScanLayout) -> Scan:
    """Read a recorded scan.

    Parameters
    ----------
    path : path
        Columns of numbers without a header (blanks or commas), CSV, ECSV, or a FITS table.
    layout : ScanLayout
        Which column is what.

    Returns
    -------
    Scan

    Raises
    ------
    FileContentError
        The file cannot be read; file, row and column are named.
    ScanLayoutError
        A column of the layout is not in the file.
    """
    table = read_table(path)
    signals = {"signal": _numbers(table, layout.signal, "signal", path)}
    if layout.reference is not None:
        signals["reference"] = _numbers(table, layout.reference, "reference", path)
    if layout.position is None:
        position = np.arange(len(table), dtype=float) * STEP
    else:
        values = _numbers(table, layout.position, "position", path)
        unit = _column(table, layout.position, "position", path).unit
        position = values * (STEP if unit is None or unit == u.dimensionless_unscaled else unit)
    if position.unit != STEP and not position.unit.is_equivalent(u.m):
        raise ScanLayoutError(f"{path}: the position column is in {position.unit}; it must be a length, or steps without a unit")
    if position.unit != STEP and layout.opd_per_step_si is not None:
        raise ScanLayoutError(f"{path}: the position column is in {position.unit}, so the layout must not give a length per step as well")
    return Scan(
        position=position,
        signals=signals,
        layout=layout,
        time=_time(table, layout, path),
        provenance={
            "path": str(path),
            "format": table.meta["format"],
            "rows": str(len(table)),
            "sha256": sha256_of(path),
        },
    )


def _time(table: Any, layout: ScanLayout, path: Any) -> u.Quantity | None:
    if layout.time is None:
        return None
    values = _numbers(table, layout.time, "time", path)
    return values * (_column(table, layout.time, "time", path).unit or u.s)


def _column(table: Any, which: Column, role: str, path: Any) -> Any:
    names = table.colnames
    if isinstance(which, int) and 0 <= which < len(names):
        return table[names[which]]
    if isinstance(which, str) and which in names:
        return table[which]
    raise ScanLayoutError(f"{path}: the layout's {role} column {which!r} is not there; the file has {len(names)}: {', '.join(names)}")


def _numbers(table: Any, which: Column, role: str, path: Any) -> FloatArray:
    column = _column(table, which, role, path)
    if column.dtype.kind not in "fiub" or column.ndim != 1:
        raise FileContentError(f"{path}: column {column.name!r} ({role}) does not hold one number per row")
    floats = column.astype(float)
    values = np.asarray(floats.filled(np.nan) if hasattr(floats, "filled") else floats, dtype=float)
    bad = np.flatnonzero(~np.isfinite(values))
    if bad.size:
        raise FileContentError(
            f"{path}: column {column.name!r} ({role}), data row {int(bad[0]) + 1}: not a finite number ({bad.size} such rows)"
        )
    return values
