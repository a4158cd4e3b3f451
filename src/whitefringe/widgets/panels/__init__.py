"""Ready-made panels."""

from .arms import ArmsPanel
from .bench import BenchPanel
from .night import NightPanel

__all__ = ["ArmsPanel", "BenchPanel", "NightPanel"]
