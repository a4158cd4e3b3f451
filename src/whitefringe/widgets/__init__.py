"""Jupyter widgets: controls and plots that share a `Bench`, and panels made of them."""

from .bench import Bench, BenchResults
from .controls import BeamControl, ChannelControl, DelayControl, FilterControl, SourceControl
from .panels import BenchPanel
from .plots import FalsePacketTable, PacketPlot, Readout, ScanPlot, SpectrumPlot

__all__ = [
    "BeamControl",
    "Bench",
    "BenchPanel",
    "BenchResults",
    "ChannelControl",
    "DelayControl",
    "FalsePacketTable",
    "FilterControl",
    "PacketPlot",
    "Readout",
    "ScanPlot",
    "SourceControl",
    "SpectrumPlot",
]
