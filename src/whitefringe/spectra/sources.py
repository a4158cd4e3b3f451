"""Sources of light: relative photon rate per hertz.

A source has ``rate_si(frequency)``, a ``support_si`` [Hz], ``breakpoints_si`` and ``lines``. To add one, write the class and list
it in `SOURCE_SHAPES`.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any, ClassVar, Protocol, runtime_checkable

import astropy.units as u
import numpy as np
from astropy.constants import h, k_B

from ..errors import InputError
from ..units import FloatArray, positive_si
from ._parameters import parameter
from .filters import Gaussian
from .lines import Line

_NOWHERE = np.empty(0)


@runtime_checkable
class Source(Protocol):
    """What every source offers."""

    @property
    def support_si(self) -> tuple[float, float]:
        """Lowest and highest frequency [Hz] of the continuum; equal when there is none."""
        ...

    @property
    def breakpoints_si(self) -> FloatArray:
        """Frequencies [Hz] where the slope jumps."""
        ...

    @property
    def lines(self) -> tuple[Line, ...]:
        """Spectral lines on top of the continuum."""
        ...

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Relative photon rate per hertz at `frequency` [Hz]."""
        ...


@dataclass(frozen=True, kw_only=True)
class Flat:
    """The same photon rate everywhere: per hertz, or per unit of wavelength.

    Parameters
    ----------
    per : str
        ``"hertz"`` (default), or ``"wavelength"``: rate per hertz proportional to 1/nu^2, since d lambda = c dnu / nu^2.
    """

    shape: ClassVar[str] = "flat"
    per: str = "hertz"

    def __post_init__(self) -> None:
        if self.per not in ("hertz", "wavelength"):
            raise InputError(f'per must be "hertz" or "wavelength"; got {self.per!r}')

    @property
    def support_si(self) -> tuple[float, float]:
        """Unbounded."""
        return 0.0, np.inf

    breakpoints_si = _NOWHERE
    lines = ()

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Relative photon rate per hertz."""
        if self.per == "hertz":
            return np.ones_like(frequency)
        return (1e14 / frequency) ** 2


@dataclass(frozen=True, kw_only=True)
class Thermal:
    """A black body: photon rate per hertz proportional to nu^2 / (exp(h nu / k T) - 1) (Planck's law over h nu).

    Parameters
    ----------
    temperature : Quantity [K]
    """

    shape: ClassVar[str] = "thermal"
    temperature: u.Quantity = parameter("temperature", u.K, low=500.0, high=6500.0, step=50.0, start=2900.0)

    def __post_init__(self) -> None:
        _ = self._scale

    @cached_property
    def _scale(self) -> float:
        """Scale k T / h [Hz] (Boltzmann constant times temperature over Planck constant)."""
        return positive_si(self.temperature, u.K, "temperature") * float(k_B.si.value) / float(h.si.value)

    @property
    def support_si(self) -> tuple[float, float]:
        """From 0 to 40 kT/h, beyond which 1e-14 of the photons are left."""
        return 0.0, 40.0 * self._scale

    breakpoints_si = _NOWHERE
    lines = ()

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Relative photon rate per hertz; 1 at low frequency on the scale x^2/(e^x - 1) with x = h nu / k T."""
        x = frequency / self._scale
        return np.asarray(x**2 / np.expm1(x))


@dataclass(frozen=True, kw_only=True)
class Diode:
    """A light-emitting or superluminescent diode: a Gaussian photon rate per hertz.

    Parameters
    ----------
    centre : Quantity [vacuum wavelength or frequency]
    fwhm : Quantity [wavelength or frequency]
        Full width at half maximum; Gaussian on the axis of its unit.
    """

    shape: ClassVar[str] = "diode"
    centre: u.Quantity = parameter("centre", u.um, low=0.4, high=2.5, step=0.005, start=1.65)
    fwhm: u.Quantity = parameter("full width (FWHM)", u.nm, low=5.0, high=300.0, step=5.0, start=60.0)

    def __post_init__(self) -> None:
        _ = self._shape.support_si

    @cached_property
    def _shape(self) -> Gaussian:
        return Gaussian(centre=self.centre, fwhm=self.fwhm)

    @property
    def support_si(self) -> tuple[float, float]:
        """Frequencies [Hz] beyond which less than 2e-15 of the peak is left."""
        return self._shape.support_si

    breakpoints_si = _NOWHERE
    lines = ()

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Relative photon rate per hertz."""
        return self._shape.transmission_si(frequency)


@dataclass(frozen=True)
class Lines:
    """A lamp or laser that emits lines only.

    Parameters
    ----------
    lines : iterable of Line
    """

    shape: ClassVar[str] = "lines"
    lines: tuple[Line, ...] = field()

    def __init__(self, lines: Iterable[Line]) -> None:
        members = tuple(lines)
        if not members or not all(isinstance(line, Line) for line in members):
            raise InputError("lines must be one or more spectra.Line(wavelength=..., fwhm=..., strength=...)")
        if not sum(line.strength for line in members) > 0:
            raise InputError("at least one line needs a strength above zero")
        object.__setattr__(self, "lines", members)

    support_si = (0.0, 0.0)
    breakpoints_si = _NOWHERE

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Zero: there is no continuum."""
        return np.zeros_like(frequency)


SOURCE_SHAPES: tuple[type[Any], ...] = (Flat, Thermal, Diode, Lines)
"""The family of sources: controls, setup files and contract tests read it."""

__all__ = ["SOURCE_SHAPES", "Diode", "Flat", "Lines", "Source", "Thermal"]
