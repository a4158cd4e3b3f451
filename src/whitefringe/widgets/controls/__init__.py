"""Controls: each changes one part of a bench's setup."""

from .channels import ChannelControl
from .delay import DelayControl
from .shapes import FilterControl, SourceControl

__all__ = ["ChannelControl", "DelayControl", "FilterControl", "SourceControl"]
