"""Plots and read-outs: each shows a bench's results."""

from .dispersed import DispersedPacketPlot
from .false_packets import FalsePacketTable
from .offset import BandOffsetTable
from .packet import PacketPlot
from .readout import Readout
from .scan import ScanPlot
from .spectrum import SpectrumPlot
from .track import DelayTrackPlot
from .uv import UvPlot
from .visibility import VisibilityPlot
from .windows import WindowsTable

__all__ = [
    "BandOffsetTable",
    "DelayTrackPlot",
    "DispersedPacketPlot",
    "FalsePacketTable",
    "PacketPlot",
    "Readout",
    "ScanPlot",
    "SpectrumPlot",
    "UvPlot",
    "VisibilityPlot",
    "WindowsTable",
]
