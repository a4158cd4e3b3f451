"""Ready-made panels."""

from .bench import BenchPanel

__all__ = ["BenchPanel"]
