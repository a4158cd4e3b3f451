"""The optical train and the detector: what mirrors, windows and a detector's quantum efficiency leave of the light.

They pass every wavelength, or every wavelength of their table, so they bound no light; use them beside a filter that does. Any
`Tabulated` filter serves as well, and ends where its table ends.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, ClassVar

import numpy as np

from ..errors import InputError
from ..units import FloatArray, whole
from ._shape import FilterShape
from .tables import WavelengthTable

EVERYWHERE = (0.0, np.inf)
"""Support of a part that bounds no light."""


MOST = 1000
"""Most mirrors or windows in one train."""


class _Part(FilterShape):
    """Shared by the parts: a fraction, constant or tabulated, to the power of how often light meets it."""

    support_si = EVERYWHERE

    def _parts(self) -> tuple[float | WavelengthTable, int]:
        raise NotImplementedError

    def _check(self, name: str) -> None:
        value, count = self._parts()
        if not isinstance(value, WavelengthTable):
            number = isinstance(value, (int, float, np.integer, np.floating)) and not isinstance(value, bool)
            if not number or not 0 < value <= 1:
                raise InputError(f"{name} must be above 0 and at most 1, or a spectra.WavelengthTable; got {value!r}")
        whole(count, "count", low=0, high=MOST)

    @property
    def breakpoints_si(self) -> FloatArray:  # type: ignore[override]
        """Frequencies of the tabulated points [Hz]."""
        value, _ = self._parts()
        return value.breakpoints_si if isinstance(value, WavelengthTable) else np.empty(0)

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Fraction of photons left at `frequency` [Hz]; outside a table an error."""
        value, count = self._parts()
        once = value.at_si(frequency) if isinstance(value, WavelengthTable) else np.full_like(frequency, value, dtype=float)
        return np.asarray(once**count)


@dataclass(frozen=True, kw_only=True)
class Mirrors(_Part):
    """Mirrors one after the other: T = R^count, a fraction of photons and of power alike.

    Parameters
    ----------
    reflectivity : float or WavelengthTable
        Of one mirror, above 0 and at most 1, at its angle of incidence.
    count : int
        How many.

    Raises
    ------
    InputError
        A reflectivity that is no fraction, a count below zero; later, light outside a table.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(Mirrors(reflectivity=0.97, count=11).transmission(1.65 * u.um).round(4))
    0.7153
    """

    shape: ClassVar[str] = "mirrors"
    reflectivity: float | WavelengthTable
    count: int = 1

    def __post_init__(self) -> None:
        self._check("reflectivity")

    def _parts(self) -> tuple[float | WavelengthTable, int]:
        return self.reflectivity, self.count


@dataclass(frozen=True, kw_only=True)
class Windows(_Part):
    """Windows one after the other: T = t^count, a fraction of photons and of power alike; beams reflected to and fro are left out.

    Parameters
    ----------
    throughput : float or WavelengthTable
        Of one window with its two surfaces, above 0 and at most 1.
    count : int
        How many.

    Raises
    ------
    InputError
        A transmission that is no fraction, a count below zero; later, light outside a table.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(Windows(throughput=0.92, count=2).transmission(1.65 * u.um).round(4))
    0.8464
    """

    shape: ClassVar[str] = "windows"
    throughput: float | WavelengthTable
    count: int = 1

    def __post_init__(self) -> None:
        self._check("throughput")

    def _parts(self) -> tuple[float | WavelengthTable, int]:
        return self.throughput, self.count


@dataclass(frozen=True, kw_only=True)
class Detector(_Part):
    """A detector's quantum efficiency: the fraction of photons that are counted.

    Parameters
    ----------
    efficiency : float or WavelengthTable
        Counts per photon, above 0 and at most 1. A responsivity in ampere per watt is not that: divide it by the wavelength
        (times e / h c) first.

    Raises
    ------
    InputError
        An efficiency that is no fraction; later, light outside a table.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe.spectra import WavelengthTable
    >>> table = WavelengthTable(wavelength=[1.0, 1.6, 1.8] * u.um, values=[0.6, 0.8, 0.1])
    >>> print(Detector(efficiency=table).transmission(1.7 * u.um).round(4))
    0.45
    """

    shape: ClassVar[str] = "detector"
    efficiency: float | WavelengthTable

    def __post_init__(self) -> None:
        self._check("efficiency")

    def _parts(self) -> tuple[float | WavelengthTable, int]:
        return self.efficiency, 1


TRAIN_SHAPES: tuple[type[Any], ...] = (Mirrors, Windows, Detector)
"""The family of train parts: setup files and contract tests read it. They are filters that bound no light."""

__all__ = ["TRAIN_SHAPES", "Detector", "Mirrors", "Windows"]
