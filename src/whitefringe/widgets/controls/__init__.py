"""Controls: each changes one part of a bench's setup."""

from .air import AirControl
from .baseline import BaselineControl
from .beam import BeamControl
from .channels import ChannelControl
from .delay import DelayControl
from .glass import GlassControl
from .object import ObjectControl
from .shapes import FilterControl, SourceControl
from .target import TargetControl

__all__ = [
    "AirControl",
    "BaselineControl",
    "BeamControl",
    "ChannelControl",
    "DelayControl",
    "FilterControl",
    "GlassControl",
    "ObjectControl",
    "SourceControl",
    "TargetControl",
]
