"""Jupyter widgets: controls and plots that share a `Bench`, and panels made of them."""

from .bench import Bench, BenchResults
from .controls import (
    AirControl,
    BaselineControl,
    BeamControl,
    ChannelControl,
    DelayControl,
    FilterControl,
    GlassControl,
    ObjectControl,
    SourceControl,
    TargetControl,
)
from .panels import ArmsPanel, BenchPanel, NightPanel
from .plots import (
    BandOffsetTable,
    DelayTrackPlot,
    DispersedPacketPlot,
    FalsePacketTable,
    PacketPlot,
    Readout,
    ScanPlot,
    SpectrumPlot,
    UvPlot,
    VisibilityPlot,
    WindowsTable,
)

__all__ = [
    "AirControl",
    "ArmsPanel",
    "BandOffsetTable",
    "BaselineControl",
    "BeamControl",
    "Bench",
    "BenchPanel",
    "BenchResults",
    "ChannelControl",
    "DelayControl",
    "DelayTrackPlot",
    "DispersedPacketPlot",
    "FalsePacketTable",
    "FilterControl",
    "GlassControl",
    "NightPanel",
    "ObjectControl",
    "PacketPlot",
    "Readout",
    "ScanPlot",
    "SourceControl",
    "SpectrumPlot",
    "TargetControl",
    "UvPlot",
    "VisibilityPlot",
    "WindowsTable",
]
