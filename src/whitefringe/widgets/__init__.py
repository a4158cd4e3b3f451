"""Jupyter widgets: controls and plots that share a `Bench`, and panels made of them."""

from .bench import Bench, BenchResults
from .controls import DelayControl, FilterControl, SourceControl
from .panels import BenchPanel
from .plots import PacketPlot, Readout, ScanPlot

__all__ = [
    "Bench",
    "BenchPanel",
    "BenchResults",
    "DelayControl",
    "FilterControl",
    "PacketPlot",
    "Readout",
    "ScanPlot",
    "SourceControl",
]
