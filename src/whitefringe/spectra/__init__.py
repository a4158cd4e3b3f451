"""What light is let through: sources, filters, lines and the spectrum that the detector counts."""

from ..parameters import Parameter, parameters_of
from ._shape import Filter
from .beam import BEAM_EFFECTS, bare_of, in_beam, with_bare
from .channels import CHANNEL_PROFILES, Channel, ChannelProfile, ChannelSet, split
from .cone import InCone
from .edges import LongPass, ShortPass
from .effects import Leaky, Tilted, Warmed
from .filters import FILTER_SHAPES, REPAIRS, Gaussian, Tabulated, TopHat, read_filter
from .lamps import LAMPS, Lamp
from .lasers import LASER_CAUTION, LASER_PROFILES, MultimodeLaser, SingleModeLaser
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
from .shapes import Lorentzian, MultiCavity, SuperGaussian, Trapezoid
from .sources import SOURCE_SHAPES, Diode, Flat, Lines, Source, Thermal
from .spectrum import SAMPLES, Spectrum, detected
from .tables import TabulatedSource, WavelengthTable
from .together import Together
from .train import TRAIN_SHAPES, Detector, Mirrors, Windows
from .widths import doppler_fwhm, natural_fwhm, pressure_fwhm

__all__ = [
    "BEAM_EFFECTS",
    "CHANNEL_PROFILES",
    "FILTER_SHAPES",
    "LAMPS",
    "LASER_CAUTION",
    "LASER_PROFILES",
    "LINE_PROFILES",
    "REPAIRS",
    "SAMPLES",
    "SOURCE_SHAPES",
    "TRAIN_SHAPES",
    "Channel",
    "ChannelProfile",
    "ChannelSet",
    "Detector",
    "Diode",
    "Filter",
    "Flat",
    "Gaussian",
    "InCone",
    "Lamp",
    "Leaky",
    "Line",
    "Lines",
    "LongPass",
    "Lorentzian",
    "Mirrors",
    "MultiCavity",
    "MultimodeLaser",
    "Parameter",
    "ShortPass",
    "SingleModeLaser",
    "Source",
    "Spectrum",
    "SuperGaussian",
    "Tabulated",
    "TabulatedSource",
    "Thermal",
    "Tilted",
    "Together",
    "TopHat",
    "Trapezoid",
    "Warmed",
    "WavelengthTable",
    "Windows",
    "bare_of",
    "detected",
    "doppler_fwhm",
    "effective_wavelength",
    "equivalent_width",
    "full_width_half_maximum",
    "in_beam",
    "mean_frequency",
    "mean_wavelength",
    "natural_fwhm",
    "parameters_of",
    "pivot_wavelength",
    "pressure_fwhm",
    "read_filter",
    "resolving_power",
    "rms_width",
    "split",
    "with_bare",
]
