"""The numbers, as a table: measured beside predicted, with the outcome."""

from __future__ import annotations

from dataclasses import replace
from html import escape

import astropy.units as u
import ipywidgets as widgets
import numpy as np

from ...results import Measured
from ...scans import Comparison
from ...units import SPEED_OF_LIGHT
from .._base import BenchView
from .._style import OPEN, OUTCOME_COLOURS, OUTCOME_MARKS
from ..bench import Bench

COLUMNS = ("quantity", "measured", "predicted", "ratio", "tolerance", "outcome")
HEAD = "<tr>" + "".join(f"<th style='text-align:left;padding:0 12px 0 0'>{name}</th>" for name in COLUMNS) + "</tr>"
STYLE = "style='border-collapse:collapse;margin:6px 0;font-variant-numeric:tabular-nums'"


class Readout(BenchView):
    """Contrast at the delay cursor, the packet's predicted numbers, and the comparison with the scan."""

    def __init__(self, bench: Bench) -> None:
        self.html = widgets.HTML()
        super().__init__(bench, [self.html], "wf-readout")

    def refresh(self) -> None:
        """Write the table again."""
        lines = self._cursor_line() + self._light_line() + self._comparison()
        self.html.value = f"<div style='line-height:1.5;max-width:720px'>{lines}</div>"

    def _cursor_line(self) -> str:
        delay, gamma = self.bench.setup.delay, self.bench.results.gamma
        opd = float(delay.to_value(u.um))
        lag = opd * 1e-6 / SPEED_OF_LIGHT * 1e15
        return (
            f"<div>delay <b>{opd:.3f} µm</b> ({lag:.3f} fs): |γ| <b>{abs(gamma):.4f}</b>, phase "
            f"{np.degrees(-np.angle(gamma)) + 0.0:.1f}°</div>"
        )

    def _light_line(self) -> str:
        results = self.bench.results
        length = "none for this light" if results.length is None else f"{_text(results.length)} ({results.length.definition})"
        return f"<div>mean wavelength {_text(results.wavelength)}; coherence length {escape(length)}</div>"

    def _comparison(self) -> str:
        reduction = self.bench.results.reduction
        if reduction is None:
            return ""
        rows = "".join(_row(item) for item in reduction.comparisons)
        measured = f"packet centre {_text(reduction.opd_centre)}; coherence length {_text(reduction.coherence_length)}"
        verdict = str(reduction.verdict)
        colour, mark = OUTCOME_COLOURS[verdict], OUTCOME_MARKS[verdict]
        return (
            f"<table {STYLE}>{HEAD}{rows}</table><div>measured {escape(measured)}</div>"
            f"<div class='wf-verdict'>verdict: <b style='color:{colour}'>{mark} {verdict}</b></div>"
        )


def _text(number: Measured | str) -> str:
    """Value, uncertainty and unit, with a micro sign; or the reason why there is none."""
    return number if isinstance(number, str) else number.text.replace(" um", " µm")


def _row(item: Comparison) -> str:
    outcome = "not judged" if item.outcome is None else str(item.outcome)
    colour, mark = OUTCOME_COLOURS.get(outcome, OPEN), OUTCOME_MARKS.get(outcome, "–")
    unit = item.predicted.unit
    bare = replace(item.predicted, value=item.predicted.value.value * u.one)
    measured = item.measured
    if measured is not None:
        sigma = None if measured.uncertainty is None else measured.uncertainty.to_value(unit)
        measured = Measured(value=measured.to_value(unit) * u.one, uncertainty=sigma)
    cells = (
        item.name if unit == u.one else f"{item.name} [{unit:unicode}]",
        "none" if measured is None else measured.text,
        bare.text,
        "none" if item.ratio is None else _text(item.ratio),
        "not set" if item.tolerance is None else f"{item.tolerance[0]:g}–{item.tolerance[1]:g}",
    )
    style = "style='padding:0 12px 0 0;white-space:nowrap'"
    shown = "".join(f"<td {style}>{escape(cell)}</td>" for cell in cells)
    reason = f": {escape(item.reason)}" if item.reason else ""
    return f"<tr>{shown}<td style='color:{colour};white-space:nowrap'>{mark} {outcome}{reason}</td></tr>"
