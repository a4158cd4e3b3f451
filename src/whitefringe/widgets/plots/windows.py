"""When what can be observed, and why not."""

from __future__ import annotations

from html import escape
from typing import Any

import astropy.units as u
import ipywidgets as widgets
import numpy as np

from ...sky import CAUTION, Observation, opd_text
from ...units import FloatArray
from .._sky import SkyView, clock, dates_text, hours_si, night_of
from .._style import BAD, GOOD
from ..bench import Bench

HEADS = ("", "target", "baseline", "UTC", "carriages [m]", "fastest [mm/s]", "path difference in mid-window", "ends, or why not")
RIGHT = 5
"""Column whose numbers stand to the right."""

OPD_COLUMNS = ("opd", *(f"opd_uncertainty{part}" for part in ("", "_ut1", "_target", "_stations", "_pole")))


class WindowsTable(SkyView):
    """Windows of all targets on all baselines, those that can be observed first, the one that is looked at marked; why not the others.

    With the caution that belongs to carriage positions, and what is to be known of the Earth orientation.

    Parameters
    ----------
    bench : Bench

    Raises
    ------
    InputError
        The bench has no night.
    """

    def __init__(self, bench: Bench) -> None:
        night_of(bench)
        self.html, self.notes = widgets.HTML(), widgets.HTML()
        caution = f"<div role='note' style='line-height:1.4;max-width:900px'>⚠ <b>{escape(CAUTION)}</b></div>"
        self.caution = widgets.HTML(caution)
        super().__init__(bench, [self.html, self.caution, self.notes], "wf-windows-table")

    def show(self, night: Observation) -> None:
        """Write the table again where it has changed."""
        if self.new("windows", night.table, night.target, night.baseline):
            self.html.value = self._table(night)
            notes = [orientation_text(night), *(str(night.table.meta[key]) for key in night.table.meta if key.startswith("NOTE"))]
            body = "".join(f"<div>{escape(note)}</div>" for note in notes)
            self.notes.value = f"<div style='line-height:1.5;max-width:900px'>{body}</div>"

    def _table(self, night: Observation) -> str:
        found = night.windows
        if found is None:
            return "<div>no delay lines in the setup: nothing can be said of windows and carriages</div>"
        cell = "padding:1px 12px 1px 0;vertical-align:top;text-align:"
        heads = "".join(f"<th style='{cell}{'right' if k == RIGHT else 'left'}'>{name}</th>" for k, name in enumerate(HEADS))
        order = np.argsort(~np.asarray(found["observable"]), kind="stable")
        starts, ends = hours_si(found["start"], night), hours_si(found["end"], night)
        rows = "".join(_row(night, found[int(k)], (starts[k], ends[k]), cell) for k in order)
        style = "border-collapse:collapse;line-height:1.4;font-variant-numeric:tabular-nums"
        return f"<div style='overflow-x:auto'><div>{dates_text(night)}</div><table style='{style}'><tr>{heads}</tr>{rows}</table></div>"


def _row(night: Observation, window: Any, ends: tuple[float, float], cell: str) -> str:
    seen = bool(window["observable"])
    chosen = str(window["target"]) == night.target and str(window["baseline"]) == night.baseline
    mark = f"<span style='color:{GOOD if seen else BAD}'>{'✓' if seen else '✗'}</span>{' ▶' if chosen else ''}"
    hours = f"{clock(ends[0])} to {clock(ends[1])}"
    words = [str(window["target"]), str(window["baseline"]), hours if seen else f"not {hours}"]
    words += [*_carriages(window), middle_text(night, window, ends)] if seen else []
    cells = [f"<td style='{cell}left;white-space:nowrap'>{mark}</td>"]
    for k, word in enumerate(words, 1):
        text = "<br>".join(escape(part) for part in word.split("\n"))
        cells.append(f"<td style='{cell}{'right' if k == RIGHT else 'left'};white-space:nowrap'>{text}</td>")
    # the reason why not takes the place of the numbers that are not there
    wrap = ";white-space:nowrap" if seen else ""
    cells.append(f"<td style='{cell}left{wrap}' colspan='{len(HEADS) - len(cells)}'>{escape(str(window['reason']))}</td>")
    return f"<tr style='font-weight:{'bold' if chosen else 'normal'}'>{''.join(cells)}</tr>"


def _carriages(window: Any) -> list[str]:
    parts = []
    for k in (1, 2):
        low, high = (float(window[f"carriage_{k}_{end}"].to_value(u.m)) for end in ("least", "greatest"))
        parts.append(f"{window[f'station_{k}']} {low:.3f} to {high:.3f}")
    return ["\n".join(parts), f"{float(window['greatest_speed'].to_value(u.mm / u.s)):.2f}"]


def middle_text(night: Observation, window: Any, ends: tuple[float, float]) -> str:
    """Path difference with its uncertainty in the middle of a window, from the row that is nearest."""
    table = night.table
    rows = np.flatnonzero((table["target"] == window["target"]) & (table["baseline"] == window["baseline"]))
    hours: FloatArray = hours_si(night.times, night)
    row = int(rows[np.argmin(np.abs(hours - 0.5 * (ends[0] + ends[1])))])
    return opd_text({name: table[name][row] for name in OPD_COLUMNS}).replace(" um", " µm")


def orientation_text(night: Observation) -> str:
    """Say which UT1 was used and how old it is."""
    meta = night.table.meta
    age = f"; last measured {meta['LASTMEAS']}, {meta['AGEDAYS']:.0f} d before the night's end" if meta["LASTMEAS"] else ""
    return f"Earth orientation: {meta['ORIENT']}{age}"
