"""What a detector records: the two-beam interferogram, its predicted numbers, and simulated scans with their truth."""

from .interferogram import two_beam_signal
from .prediction import PacketPrediction, describe_light, predict_packet
from .simulate import SimulatedScan, simulate_lamp_scan

__all__ = ["PacketPrediction", "SimulatedScan", "describe_light", "predict_packet", "simulate_lamp_scan", "two_beam_signal"]
