"""How far light stays correlated with itself: the degree of coherence, and the widths that are called coherence length."""

from .degree import fringe_contrast, self_coherence, self_coherence_si
from .packets import FalsePacket, delay_for_contrast, false_packets
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
    "CoherenceDefinition",
    "FalsePacket",
    "coherence_length",
    "coherence_time",
    "delay_for_contrast",
    "false_packets",
    "fringe_contrast",
    "packet_width",
    "self_coherence",
    "self_coherence_si",
]
