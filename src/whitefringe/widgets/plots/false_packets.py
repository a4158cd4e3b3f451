"""Where else a packet stands."""

from __future__ import annotations

from html import escape
from typing import Any

import astropy.units as u
import ipywidgets as widgets

from ...coherence import FalsePacket, false_packets
from ...errors import WhitefringeError
from .._base import BenchView, guarded
from .._style import LABEL_WIDTH
from ..bench import Bench

MOST_ROWS = 12


class FalsePacketTable(BenchView):
    """Secondary maxima of |gamma| up to a path difference, the highest ones listed, so that nobody locks on the wrong packet.

    Parameters
    ----------
    bench : Bench
    delay_range : Quantity [length], optional
        Five packet widths by default.
    above : float
        Least height.
    """

    def __init__(self, bench: Bench, delay_range: u.Quantity | None = None, above: float = 0.05) -> None:
        width = bench.results.width
        reach = 5 * width.to_value(u.um) if width is not None else 1000.0
        if delay_range is not None:
            reach = float(delay_range.to_value(u.um))
        common = {"layout": {"width": "290px"}, "style": {"description_width": LABEL_WIDTH}}
        self.reach = widgets.BoundedFloatText(
            value=float(f"{reach:.6g}"), min=1e-3, max=1e9, step=None, description="search up to ± [µm]", **common
        )
        self.above = widgets.BoundedFloatText(value=above, min=1e-3, max=0.99, step=0.01, description="contrast above", **common)
        for box in (self.reach, self.above):
            box.observe(self._changed, names="value")
        self.html = widgets.HTML()
        self.found: tuple[FalsePacket, ...] = ()
        super().__init__(bench, [self.reach, self.above, self.html], "wf-false-packets")

    @guarded
    def _changed(self, change: Any) -> None:
        self.refresh()

    def summary(self) -> str:
        """Return the highest false packet in one line."""
        highest = max(self.found, key=lambda packet: packet.height, default=None)
        words = "none" if highest is None else f"{len(self.found)}, the highest at {highest}"
        return f"FalsePacketTable: false packets up to {self.reach.value:g} um: {words}"

    def refresh(self) -> None:
        """Search again and write the table."""
        try:
            self.found = false_packets(self.bench.results.light, self.reach.value * u.um, self.above.value)
            body = self._table()
        except WhitefringeError as reason:
            self.found, body = (), escape(str(reason))
        self.html.value = f"<div style='line-height:1.5;max-width:640px'>{body}</div>"

    def _table(self) -> str:
        if not self.found:
            return "no false packet: |γ| has no other maximum so high in this range"
        highest = sorted(sorted(self.found, key=lambda packet: -packet.height)[:MOST_ROWS], key=lambda packet: packet.opd)
        cell = "style='text-align:right;padding:0 16px 0 0'"
        rows = "".join(f"<tr><td {cell}>±{p.opd.to_value(u.um):.6g}</td><td {cell}>{p.height:.4f}</td></tr>" for p in highest)
        more = f"<div>the {MOST_ROWS} highest of {len(self.found)}</div>" if len(self.found) > MOST_ROWS else ""
        return f"<table><tr><th {cell}>path difference [µm]</th><th {cell}>contrast |γ|</th></tr>{rows}</table>{more}"
