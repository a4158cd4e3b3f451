"""The panel of the arms: air, glass and science band, the packet behind them, and how far apart the bands' zero points are."""

from __future__ import annotations

from html import escape

import ipywidgets as widgets

from ...setup import Setup
from .._base import BenchView
from .._style import BAD
from ..bench import Bench
from ..controls import AirControl, FilterControl, GlassControl
from ..plots import BandOffsetTable, DispersedPacketPlot


class ArmsPanel(BenchView):
    """Find where zero is: move air and glass of the arms, read contrast, place and offset of the science band.

    Parameters
    ----------
    bench : Bench or Setup
        A bench that other widgets share, or a setup to make one from.
    """

    def __init__(self, bench: Bench | Setup) -> None:
        bench = bench if isinstance(bench, Bench) else Bench(bench)
        self.status = widgets.HTML()
        self.status.add_class("wf-status")
        self.air = AirControl(bench)
        self.glass = GlassControl(bench)
        self.filter = FilterControl(bench) if bench.setup.filters else None
        self.packet = DispersedPacketPlot(bench)
        self.offset = BandOffsetTable(bench)
        # everything wraps on a narrow page; nothing shrinks below what it needs
        wrap = {"flex_flow": "row wrap"}
        controls = [self.air, self.glass]
        if self.filter is not None:
            self.filter.choice.layout.width = "330px"  # as wide as the glass's
            controls += [widgets.HTML("<b>science band</b>"), self.filter]
        shown = widgets.VBox([self.packet, self.offset], layout={"flex": "1 1 480px"})
        body = widgets.HBox([widgets.VBox(controls, layout={"flex": "0 0 490px"}), shown], layout=wrap)
        super().__init__(bench, [self.status, body], "wf-arms-panel")

    def refresh(self) -> None:
        """Show what went wrong, or the setup's name."""
        problem = self.bench.problem
        kept = "" if problem.startswith("note: ") else "; the last good state is shown"
        alert = f"<div role='alert' style='color:{BAD};line-height:1.4'>⚠ {escape(problem)}{kept}</div>" if problem else ""
        self.status.value = f"<b>{escape(self.bench.setup.name)}</b>{alert}"

    def as_code(self) -> str:
        """Return a script that computes what the panel shows."""
        return self.bench.as_code()
