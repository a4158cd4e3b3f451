"""The night panel: target, baseline and object, delay tracks, projected baselines, visibility and windows, on one bench."""

from __future__ import annotations

from html import escape

import ipywidgets as widgets

from ...setup import Setup
from ...sky import Observation
from .._sky import SkyView, night_of, night_text
from .._style import BAD
from ..bench import Bench
from ..controls import BaselineControl, ObjectControl, TargetControl
from ..plots import DelayTrackPlot, UvPlot, VisibilityPlot, WindowsTable


class NightPanel(SkyView):
    """Everything about one night at the array: what can be observed when, where the packet is, and what contrast the object leaves.

    Parameters
    ----------
    bench : Bench or Setup
        A bench that other widgets share, or a setup to make one from.

    Raises
    ------
    InputError
        The setup has no array.
    """

    def __init__(self, bench: Bench | Setup) -> None:
        bench = bench if isinstance(bench, Bench) else Bench(bench)
        night_of(bench)
        self.status = widgets.HTML()
        self.status.add_class("wf-status")
        self.target, self.baseline, self.object = TargetControl(bench), BaselineControl(bench), ObjectControl(bench)
        self.windows = WindowsTable(bench)
        self.track, self.uv, self.visibility = DelayTrackPlot(bench), UvPlot(bench), VisibilityPlot(bench)
        # everything wraps on a narrow page; nothing shrinks below what it needs
        wrap = {"flex_flow": "row wrap"}
        controls = widgets.VBox([self.target, self.baseline, self.object], layout={"flex": "0 0 490px"})
        self.uv.layout.flex = self.track.layout.flex = self.visibility.layout.flex = "1 1 460px"
        top = widgets.HBox([controls, self.visibility], layout=wrap)
        plots = widgets.HBox([self.track, self.uv], layout=wrap)
        super().__init__(bench, [self.status, top, plots, self.windows], "wf-night-panel")

    def show(self, night: Observation) -> None:
        """Show the night in a line, and what went wrong."""
        problem = self.bench.problem
        kept = "" if problem.startswith("note: ") else "; the last good state is shown"
        alert = f"<div role='alert' style='color:{BAD}'>⚠ {escape(problem)}{kept}</div>" if problem else ""
        self.status.value = f"<b>{escape(self.bench.setup.name)}</b>: {escape(night_text(night))}{alert}"

    def as_code(self) -> str:
        """Return a script that computes what the panel shows."""
        return self.bench.as_code()
