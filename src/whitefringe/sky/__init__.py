"""Geometry and the object's own contrast: stations, targets, delays, delay lines, visibility."""

from ._closed_form import hour_angle_delays
from ._object import SkyObject
from .composite import OBJECT_SHAPES, Binary, Group, WithBackground
from .delay_lines import CAUTION, DelayLine, carriages
from .delays import PathDifferences, opd_text, path_differences, track
from .images import Picture
from .night import night_times
from .observables import band_visibility, closure_phase, field_of_view
from .observation import Observation
from .orientation import EarthOrientation
from .stations import Array, Baseline, GeocentricStation, Station
from .targets import TARGET_KINDS, FixedDirection, LampTarget, Star
from .visibility import DarkenedDisc, GaussianDisc, Point, PowerLawDisc, Ring, UniformDisc
from .windows import positions_text, windows, windows_text

__all__ = [
    "CAUTION",
    "OBJECT_SHAPES",
    "TARGET_KINDS",
    "Array",
    "Baseline",
    "Binary",
    "DarkenedDisc",
    "DelayLine",
    "EarthOrientation",
    "FixedDirection",
    "GaussianDisc",
    "GeocentricStation",
    "Group",
    "LampTarget",
    "Observation",
    "PathDifferences",
    "Picture",
    "Point",
    "PowerLawDisc",
    "Ring",
    "SkyObject",
    "Star",
    "Station",
    "UniformDisc",
    "WithBackground",
    "band_visibility",
    "carriages",
    "closure_phase",
    "field_of_view",
    "hour_angle_delays",
    "night_times",
    "opd_text",
    "path_differences",
    "positions_text",
    "track",
    "windows",
    "windows_text",
]
