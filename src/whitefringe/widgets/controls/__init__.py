"""Controls: each changes one part of a bench's setup."""

from .delay import DelayControl
from .shapes import FilterControl, SourceControl

__all__ = ["DelayControl", "FilterControl", "SourceControl"]
