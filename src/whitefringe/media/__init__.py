"""What the two arms do to the light's phase: air, glass, and the arms that are made of them."""

from ._air import Air
from .air import BirchDowns1994, BirchDowns1994WaterScaled, Ciddor1996
from .arms import ArmPair, Segment
from .compensator import Compensation, compensator, with_plate
from .glasses import Glass, packaged_glasses, read_glasses
from .mathar import Mathar2007
from .medium import Medium, Vacuum
from .moist_air import enhancement_factor, saturation_vapour_pressure
from .offsets import BandOffset, band_offset
from .packets import DispersedPacket
from .thermal import ThermalCoefficients
from .two_models import TwoModelAir
from .uncertainty import AirUncertainty

AIR_MODELS: tuple[type[Air], ...] = (Ciddor1996, BirchDowns1994, BirchDowns1994WaterScaled, Mathar2007)
"""The family of air models."""

__all__ = [
    "AIR_MODELS",
    "Air",
    "AirUncertainty",
    "ArmPair",
    "BandOffset",
    "BirchDowns1994",
    "BirchDowns1994WaterScaled",
    "Ciddor1996",
    "Compensation",
    "DispersedPacket",
    "Glass",
    "Mathar2007",
    "Medium",
    "Segment",
    "ThermalCoefficients",
    "TwoModelAir",
    "Vacuum",
    "band_offset",
    "compensator",
    "enhancement_factor",
    "packaged_glasses",
    "read_glasses",
    "saturation_vapour_pressure",
    "with_plate",
]
