"""What a detector records: the two-beam interferogram, and simulated scans with their truth."""

from .interferogram import two_beam_signal
from .simulate import SimulatedScan, simulate_lamp_scan

__all__ = ["SimulatedScan", "simulate_lamp_scan", "two_beam_signal"]
