"""whitefringe: commission optical and infrared interferometers from predicted and recorded fringe packets.

Areas are loaded when first used, so that ``import whitefringe`` stays light:

>>> import whitefringe
>>> whitefringe.spectra.TopHat.__name__
'TopHat'
"""

from importlib import import_module
from types import ModuleType

__version__ = "0.1.0"

AREAS = ("coherence", "demo", "fringes", "io", "media", "results", "scans", "setup", "sky", "spectra", "units", "widgets")

__all__ = ["AREAS", "__version__"]


def __getattr__(name: str) -> ModuleType:
    if name in AREAS:
        return import_module(f"{__name__}.{name}")
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}; its areas are {', '.join(AREAS)}")


def __dir__() -> list[str]:
    return sorted([*globals(), *AREAS])
