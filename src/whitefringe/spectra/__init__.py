"""What light is let through: sources, filters, lines and the spectrum that the detector counts."""

from ._parameters import Parameter, parameters_of
from .channels import CHANNEL_PROFILES, Channel, ChannelProfile, ChannelSet, split
from .filters import FILTER_SHAPES, REPAIRS, Filter, Gaussian, Tabulated, Tilted, TopHat, read_filter
from .lines import LINE_PROFILES, Line
from .measures import (
    effective_wavelength,
    equivalent_width,
    full_width_half_maximum,
    mean_frequency,
    mean_wavelength,
    pivot_wavelength,
    resolving_power,
    rms_width,
)
from .sources import SOURCE_SHAPES, Diode, Flat, Lines, Source, Thermal
from .spectrum import SAMPLES, Spectrum, detected

__all__ = [
    "CHANNEL_PROFILES",
    "FILTER_SHAPES",
    "LINE_PROFILES",
    "REPAIRS",
    "SAMPLES",
    "SOURCE_SHAPES",
    "Channel",
    "ChannelProfile",
    "ChannelSet",
    "Diode",
    "Filter",
    "Flat",
    "Gaussian",
    "Line",
    "Lines",
    "Parameter",
    "Source",
    "Spectrum",
    "Tabulated",
    "Thermal",
    "Tilted",
    "TopHat",
    "detected",
    "effective_wavelength",
    "equivalent_width",
    "full_width_half_maximum",
    "mean_frequency",
    "mean_wavelength",
    "parameters_of",
    "pivot_wavelength",
    "read_filter",
    "resolving_power",
    "rms_width",
    "split",
]
