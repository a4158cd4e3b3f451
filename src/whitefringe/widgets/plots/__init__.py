"""Plots and read-outs: each shows a bench's results."""

from .packet import PacketPlot
from .readout import Readout
from .scan import ScanPlot

__all__ = ["PacketPlot", "Readout", "ScanPlot"]
