"""What light is let through: sources, filters, lines and the spectrum that the detector counts."""

from ._parameters import Parameter, parameters_of
from .filters import FILTER_SHAPES, REPAIRS, Filter, Gaussian, Tabulated, Tilted, TopHat, read_filter
from .lines import LINE_PROFILES, Line
from .measures import (
    equivalent_width,
    full_width_half_maximum,
    mean_frequency,
    mean_wavelength,
    resolving_power,
)
from .sources import SOURCE_SHAPES, Diode, Flat, Lines, Source, Thermal
from .spectrum import SAMPLES, Spectrum, detected

__all__ = [
    "FILTER_SHAPES",
    "LINE_PROFILES",
    "REPAIRS",
    "SAMPLES",
    "SOURCE_SHAPES",
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
    "equivalent_width",
    "full_width_half_maximum",
    "mean_frequency",
    "mean_wavelength",
    "parameters_of",
    "read_filter",
    "resolving_power",
]
