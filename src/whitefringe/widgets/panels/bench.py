"""The bench panel: controls, predicted packet, recorded scan and numbers, on one bench."""

from __future__ import annotations

from html import escape

import ipywidgets as widgets

from ...scans import Scan
from ...setup import Setup
from .._base import BenchView
from .._style import BAD
from ..bench import Bench
from ..controls import BeamControl, DelayControl, FilterControl, SourceControl
from ..plots import PacketPlot, Readout, ScanPlot


class BenchPanel(BenchView):
    """Everything about one lamp bench: predict the packet, hold the recorded scan against it, read the verdict.

    Parameters
    ----------
    bench : Bench or Setup
        A bench that other widgets share, or a setup to make one from.
    scan : Scan, optional
        With a setup.
    """

    def __init__(self, bench: Bench | Setup, scan: Scan | None = None) -> None:
        bench = bench if isinstance(bench, Bench) else Bench(bench, scan)
        self.status = widgets.HTML()
        self.status.add_class("wf-status")
        self.source = SourceControl(bench)
        self.filter = FilterControl(bench) if bench.setup.filters else None
        self.beam = BeamControl(bench) if bench.setup.filters else None
        self.delay = DelayControl(bench)
        self.packet = PacketPlot(bench)
        self.scan = ScanPlot(bench)
        self.readout = Readout(bench)
        controls = [part for part in (self.source, self.filter, self.beam, self.delay) if part is not None]
        # everything wraps on a narrow page; nothing shrinks below what it needs
        wrap = {"flex_flow": "row wrap"}
        top = widgets.HBox([widgets.VBox(controls, layout={"flex": "0 0 490px"}), self.readout], layout=wrap)
        self.readout.layout.flex = "0 0 auto"
        for plot in (self.packet, self.scan):
            plot.layout.flex = "1 1 460px"
        plots = widgets.HBox([self.packet, self.scan], layout=wrap)
        super().__init__(bench, [self.status, top, plots], "wf-panel")

    def refresh(self) -> None:
        """Show what went wrong, or the bench's name."""
        problem = self.bench.problem
        name = f"<b>{escape(self.bench.setup.name)}</b>"
        kept = "" if problem.startswith("note: ") else "; the last good state is shown"
        alert = f"<div role='alert' style='color:{BAD}'>⚠ {escape(problem)}{kept}</div>"
        self.status.value = name + (alert if problem else "")

    def as_code(self) -> str:
        """Return a script that computes what the panel shows."""
        return self.bench.as_code()
