"""bqplot figures with labelled axes, made once; callbacks change traits only."""

from __future__ import annotations

from typing import Any

import bqplot
import ipywidgets as widgets
import numpy as np
from numpy.typing import NDArray

from .._style import AXIS, FIGURE_MARGIN

FloatArray = NDArray[np.float64]


def figure(marks: list[Any], x: Any, y: Any, x_label: str, y_label: str, height: int, y_ticks: list[float]) -> bqplot.Figure:
    """Return a figure of lines on two shared scales; ticks on the second where they are told."""
    common = {"tick_format": "~g", "grid_lines": "dashed", "label_color": AXIS}
    axes = [
        bqplot.Axis(scale=x, label=x_label, label_offset="32px", **common),
        bqplot.Axis(scale=y, label=y_label, label_offset="46px", side="left", tick_values=np.array(y_ticks), **common),
    ]
    return bqplot.Figure(
        marks=marks,
        axes=axes,
        scale_x=x,
        scale_y=y,
        fig_margin=FIGURE_MARGIN,
        animation_duration=0,
        layout={"height": f"{height}px", "min_width": "400px", "width": "auto"},
    )


def line(x: Any, y: Any, colour: str, *, width: float = 1.5, style: str = "solid") -> bqplot.Lines:
    """Return an empty line on two scales."""
    scales = {"x": x, "y": y}
    return bqplot.Lines(x=np.zeros(2), y=np.zeros(2), scales=scales, colors=[colour], stroke_width=width, line_style=style)


def legend(entries: list[tuple[bqplot.Lines, str]]) -> widgets.HTML:
    """Return a legend that stands above a figure, where it hides no data: each name behind a stroke as the line is drawn."""
    parts = []
    for mark, words in entries:
        border = f"{max(mark.stroke_width, 1.5):g}px {mark.line_style} {mark.colors[0]}"
        stroke = f"<span style='display:inline-block;width:26px;border-top:{border};vertical-align:middle;margin-right:6px'></span>"
        parts.append(f"<span style='margin-right:22px;white-space:nowrap'>{stroke}{words}</span>")
    return widgets.HTML(f"<div style='line-height:1.4;padding-left:{FIGURE_MARGIN['left']}px'>{''.join(parts)}</div>")


def span(scale: bqplot.LinearScale, low: float, high: float) -> None:
    """Set a scale's ends, a little beyond the data so that no tick label meets the other axis."""
    margin = 0.02 * (high - low)
    with scale.hold_sync():
        scale.min, scale.max = low - margin, high + margin


def round_ticks(low: float, high: float, most: int = 6) -> FloatArray:
    """Return at most `most` + 1 round numbers between two ends: for labels too long for bqplot's own choice.

    Examples
    --------
    >>> round_ticks(0.58914, 0.58977).round(6).tolist()
    [0.5892, 0.5894, 0.5896]
    """
    raw = (high - low) / most
    scale = 10.0 ** np.floor(np.log10(raw))
    step = scale * next(digit for digit in (1, 2, 5, 10) if digit * scale >= raw)
    return np.asarray(np.arange(np.ceil(low / step), np.floor(high / step) + 1) * step)


def draw(mark: bqplot.Lines, x: NDArray[np.float64], y: NDArray[np.float64]) -> None:
    """Give a line new points in one message; new arrays each time, since equal ones are not sent."""
    with mark.hold_sync():
        mark.x = np.array(x, dtype=float)
        mark.y = np.array(y, dtype=float)
