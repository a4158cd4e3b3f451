"""``whitefringe track``: the night's table to a file, the windows to the terminal."""

from __future__ import annotations

import argparse
import json
from contextlib import nullcontext
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
from rich import box
from rich.console import Console
from rich.table import Table
from rich.text import Text

from .errors import InputError
from .io import write_table
from .setup import Setup
from .setup_entries import KeyPath
from .sky import CAUTION, Observation, opd_text
from .sky._carriage_rows import span_text
from .sky.windows import minute_text

MIDDLE = "path difference in mid-window"


def track_night(options: argparse.Namespace) -> int:
    """Compute, write and print; returns the exit status 0."""
    setup = Setup.read(options.setup)
    if setup.observation is None:
        raise InputError(f"{options.setup}: there is no [array] in this setup, so there is no night to track")
    with KeyPath(Path(options.setup), "night") if not options.date else nullcontext():
        night = replace(setup.observation, date=options.date) if options.date else setup.observation
        _ = night.times  # says where the sun does not sink low enough
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
    entries = _entries(night)
    if any(entry["window"]["observable"] for entry in entries):
        console.print(_windows_table(entries, night))
    for line in _not_observable(entries):
        console.print(Text(line, style="dim"), soft_wrap=True)
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


def _windows_table(entries: list[dict[str, Any]], night: Observation) -> Table:
    """Three or four columns, narrow enough for a terminal of 80 and for a pipe; whatever is wider is folded, not cut."""
    shown = Table(title="windows", title_justify="left", box=box.SIMPLE_HEAD, padding=(0, 1, 0, 0), show_edge=False)
    rows = []
    for entry in entries:
        window = entry["window"]
        if window["observable"]:
            # the causes of the uncertainty stand below the number
            middle, reason = opd_text(entry["middle"]).replace(" (", "\n("), str(window["reason"])
            cells = [f"{window['target']} {window['baseline']}\n{_hours(window)}", middle, reason]
            rows.append([cells[0], _carriages(window), *cells[1:]] if night.delay_lines else cells)
    names = ["UTC", *(["carriages [m]"] if night.delay_lines else []), MIDDLE, "ends"]
    for name, column in zip(names, zip(*rows, strict=True), strict=True):
        longest = max(len(line) for cell in column for line in cell.splitlines())
        # what is short stays whole, at the cost of the columns of words
        whole = name not in (MIDDLE, "ends") and longest <= 22
        shown.add_column(name, overflow="fold", no_wrap=whole, min_width=20 if name == MIDDLE else None)
    for cells in rows:
        shown.add_row(*(Text(cell) for cell in cells))
    return shown


def _hours(window: Any) -> str:
    return f"{minute_text(window['start'])[-5:]}-{minute_text(window['end'])[-5:]}"


def _carriages(window: Any) -> str:
    parts = []
    for k in (1, 2):
        least, greatest = (float(window[f"carriage_{k}_{end}"].to_value("m")) for end in ("least", "greatest"))
        parts.append(f"{window[f'station_{k}']} {span_text(least, greatest, 3)}")
    return "\n".join([*parts, f"fastest {float(window['greatest_speed'].to_value('mm/s')):.2f} mm/s"])


def _not_observable(entries: list[dict[str, Any]]) -> list[str]:
    """One line per target and baseline with the times outside its windows and why, in full only where there is no window at all."""
    pairs: dict[tuple[str, str], list[Any]] = {}
    for entry in entries:
        window = entry["window"]
        pairs.setdefault((str(window["target"]), str(window["baseline"])), []).append(window)
    lines = []
    for (target, baseline), windows in pairs.items():
        some = any(window["observable"] for window in windows)
        closed = [f"{_hours(w)}: {_brief(str(w['reason'])) if some else w['reason']}" for w in windows if not w["observable"]]
        if closed:
            lines.append(f"not observable: {target} {baseline} {'; '.join(closed)}")
    return lines


def _brief(reason: str) -> str:
    """The limits of a reason without their numbers."""
    return ", ".join(dict.fromkeys(part.partition(":")[0] for part in reason.split("; ")))


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
