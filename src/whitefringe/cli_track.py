"""``whitefringe track``: the night's table to a file, the windows to the terminal."""

from __future__ import annotations

import argparse
import json
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
from rich.console import Console
from rich.table import Table
from rich.text import Text

from .errors import InputError
from .io import write_table
from .setup import Setup
from .sky import CAUTION, Observation, opd_text
from .sky.windows import minute_text

MIDDLE = "path difference in mid-window"


def track_night(options: argparse.Namespace) -> int:
    """Compute, write and print; returns the exit status 0."""
    setup = Setup.read(options.setup)
    if setup.observation is None:
        raise InputError(f"{options.setup}: there is no [array] in this setup, so there is no night to track")
    night = replace(setup.observation, date=options.date) if options.date else setup.observation
    path = Path(options.out or f"track_{night.date}.ecsv")
    table = night.table
    write_table(table, path, overwrite=options.overwrite)
    notes = [str(table.meta[key]) for key in table.meta if key.startswith("NOTE")]
    if options.json:
        answer = {"setup": setup.name, "date": night.date, "table": str(path), "rows": len(table), "windows": _json(night)}
        print(json.dumps(answer | {"notes": notes, "earth_orientation": table.meta["ORIENT"], "caution": CAUTION}, indent=2))
        return 0
    console = Console(markup=False, emoji=False, highlight=False)
    first, last = (minute_text(night.times[k]) for k in (0, -1))
    console.print(f"{setup.name}, night of {night.date}: {first} to {last} UTC", soft_wrap=True)
    console.print(_windows_table(night))
    for note in notes:
        console.print(f"note: {note}", soft_wrap=True)
    console.print(f"table of {len(table)} rows: {path}", soft_wrap=True)
    if night.delay_lines:
        console.print(Text(CAUTION, style="bold yellow"), soft_wrap=True)
    return 0


def _entries(night: Observation) -> list[dict[str, Any]]:
    """One entry per window, in the order of the tables; without delay lines one per target and baseline, of what is above the horizon."""
    found = []
    table = night.table
    rows = night.windows if night.windows is not None else _pairs(night)
    for window in rows:
        same = (table["target"] == window["target"]) & (table["baseline"] == window["baseline"])
        days = table["time"].mjd
        inside = same & (days >= window["start"].mjd - 1e-9) & (days <= window["end"].mjd + 1e-9)
        picked = np.flatnonzero(inside if np.any(inside) else same)
        found.append({"window": window, "middle": table[int(picked[len(picked) // 2])]})
    return found


def _pairs(night: Observation) -> list[dict[str, Any]]:
    ends = {"start": night.times[0], "end": night.times[-1], "observable": True, "reason": "no delay lines in the setup"}
    names = [(target.name, baseline.name) for target in night.targets for baseline in night.array.baselines]
    return [{"target": target, "baseline": baseline, **ends} for target, baseline in names]


def _windows_table(night: Observation) -> Table:
    shown = Table(title="windows", title_justify="left")
    for name in ("target", "baseline", "UTC"):
        shown.add_column(name, no_wrap=True)
    shown.add_column("carriages [m]")
    shown.add_column("fastest [mm/s]", justify="right")
    shown.add_column(MIDDLE)
    shown.add_column("ends, or why not")
    for entry in _entries(night):
        window = entry["window"]
        hours = f"{minute_text(window['start'])[-5:]} to {minute_text(window['end'])[-5:]}"
        open_now = bool(window["observable"])
        cells = [str(window["target"]), str(window["baseline"]), hours if open_now else f"not {hours}"]
        cells += _carriage_cells(window) if open_now and night.delay_lines else ["", ""]
        cells += [opd_text(entry["middle"]) if open_now else "", str(window["reason"])]
        shown.add_row(*(Text(cell, style="" if open_now else "dim") for cell in cells))
    return shown


def _carriage_cells(window: Any) -> list[str]:
    parts = []
    for k in (1, 2):
        least, greatest = (float(window[f"carriage_{k}_{end}"].to_value("m")) for end in ("least", "greatest"))
        parts.append(f"{window[f'station_{k}']} {least:.3f} to {greatest:.3f}")
    return ["\n".join(parts), f"{float(window['greatest_speed'].to_value('mm/s')):.2f}"]


def _json(night: Observation) -> list[dict[str, Any]]:
    found = []
    for entry in _entries(night):
        window, row = entry["window"], entry["middle"]
        found.append(
            {
                "target": str(window["target"]),
                "baseline": str(window["baseline"]),
                "start": minute_text(window["start"]),
                "end": minute_text(window["end"]),
                "observable": bool(window["observable"]),
                "reason": str(window["reason"]),
                "middle": {
                    name: {"value": float(row[name].value), "unit": row[name].unit.to_string()}
                    for name in ("opd", "opd_uncertainty", "opd_rate", "altitude")
                },
            }
        )
    return found
