"""Plots and read-outs: each shows a bench's results."""

from .false_packets import FalsePacketTable
from .packet import PacketPlot
from .readout import Readout
from .scan import ScanPlot
from .spectrum import SpectrumPlot

__all__ = ["FalsePacketTable", "PacketPlot", "Readout", "ScanPlot", "SpectrumPlot"]
