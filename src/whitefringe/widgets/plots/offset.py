"""How far apart the zero points of the two bands are, as a table."""

from __future__ import annotations

from collections.abc import Sequence
from html import escape

import astropy.units as u
import ipywidgets as widgets

from ...media import BandOffset
from ...results import Measured
from .._base import BenchView
from ..bench import NO_ARMS, Bench

NO_TRACKING = "There is no tracking band: give Setup(tracking=(a filter,)), or a [[tracking]] entry in the setup file."
CELL = "style='text-align:left;padding:0 16px 0 0;white-space:nowrap'"


class BandOffsetTable(BenchView):
    """Zero point of the science band from that of the tracking band, how it drifts with the air, and what was extrapolated.

    Parameters
    ----------
    bench : Bench
    """

    def __init__(self, bench: Bench) -> None:
        self.html = widgets.HTML()
        super().__init__(bench, [self.html], "wf-band-offset")

    def refresh(self) -> None:
        """Write the table, or why there is none."""
        results = self.bench.results
        if results.packet is None:
            body = NO_ARMS
        elif results.offset is None:
            body = escape(NO_TRACKING) + _notes(results.packet.flags)
        else:
            body = _table(results.offset) + _notes(results.offset.flags)
        self.html.value = f"<div style='line-height:1.5;max-width:640px'>{body}</div>"

    def summary(self) -> str:
        """Return the offset in one line."""
        offset = self.bench.results.offset
        if offset is None:
            return f"BandOffsetTable: {'no arms' if self.bench.results.packet is None else 'no tracking band'}"
        return f"BandOffsetTable: science band at {_value(offset.offset)} um from the tracking band"


def _table(offset: BandOffset) -> str:
    rows = "".join(
        f"<tr><td {CELL}>{escape(name)}</td>"
        + (f"<td {CELL}>{_value(item)}</td><td {CELL}>{_unit(item.unit)}</td>" if isinstance(item, Measured) else f"<td {CELL}>{item}</td>")
        + "</tr>"
        for name, item in offset.rows
    )
    return (
        f"<table style='border-collapse:collapse;font-variant-numeric:tabular-nums'>"
        f"<tr><th {CELL}>science band less tracking band</th><th {CELL}>value</th><th {CELL}>unit</th></tr>{rows}</table>{_parts(offset)}"
    )


def _parts(offset: BandOffset) -> str:
    shares = [f"{escape(name)} {part.to_value(u.um):.3f} µm" for name, part in offset.parts.items() if part.value > 0]
    return f"<div>uncertainty of the offset: {', '.join(shares)}</div>" if shares else ""


def _value(item: Measured) -> str:
    """Fixed digits, so that the column does not dance; those of the uncertainty where there is one."""
    if item.uncertainty is not None:
        return item.text.removesuffix(f" {item.unit}")
    return f"{item.value.value:.3f}" if item.unit == u.um else f"{item.value.value:.4f}"


def _unit(unit: u.UnitBase) -> str:
    return escape(unit.to_string("unicode", fraction="inline"))


def _notes(flags: Sequence[str]) -> str:
    return "".join(f"<div role='note'>⚠ {escape(flag)}</div>" for flag in flags)
