"""Controls: each changes one part of a bench's setup."""

from .beam import BeamControl
from .channels import ChannelControl
from .delay import DelayControl
from .shapes import FilterControl, SourceControl

__all__ = ["BeamControl", "ChannelControl", "DelayControl", "FilterControl", "SourceControl"]
