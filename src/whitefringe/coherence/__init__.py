"""How far light stays correlated with itself: the degree of coherence, and the widths that are called coherence length."""

from .correlation import Correlation, IntensityCorrelation, correlate, intensity_correlation, lag_between
from .degree import fringe_contrast, self_coherence, self_coherence_si
from .packets import FalsePacket, delay_for_contrast, false_packets
from .wavetrains import ENVELOPES, Envelope, SimulatedField, WaveTrains
from .widths import (
    COHERENCE_DEFINITIONS,
    DEFAULT_DEFINITION,
    CoherenceDefinition,
    coherence_length,
    coherence_time,
    packet_width,
)

__all__ = [
    "COHERENCE_DEFINITIONS",
    "DEFAULT_DEFINITION",
    "ENVELOPES",
    "CoherenceDefinition",
    "Correlation",
    "Envelope",
    "FalsePacket",
    "IntensityCorrelation",
    "SimulatedField",
    "WaveTrains",
    "coherence_length",
    "coherence_time",
    "correlate",
    "delay_for_contrast",
    "false_packets",
    "fringe_contrast",
    "intensity_correlation",
    "lag_between",
    "packet_width",
    "self_coherence",
    "self_coherence_si",
]
