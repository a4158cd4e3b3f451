"""Sources of light: relative photon rate per hertz.

A source has ``rate_si(frequency)``, a ``support_si`` [Hz], ``breakpoints_si`` and ``lines``. To add one, write the class and list
it in `SOURCE_SHAPES`.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any, ClassVar

import astropy.units as u
import numpy as np
from astropy.constants import h, k_B

from ..errors import InputError
from ..parameters import parameter
from ..units import SPEED_OF_LIGHT, FloatArray, as_quantity, is_length, one_frequency_si, positive_si
from ._source import NOWHERE, LineSource, Source, SourceShape
from .filters import Gaussian
from .lamps import Lamp
from .lasers import MultimodeLaser, SingleModeLaser
from .lines import WIDTHS, Line
from .tables import TabulatedSource, WavelengthTable
from .together import Together


@dataclass(frozen=True, kw_only=True)
class Flat(SourceShape):
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

    breakpoints_si = NOWHERE
    lines = ()

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Relative photon rate per hertz."""
        if self.per == "hertz":
            return np.ones_like(frequency)
        return (1e14 / frequency) ** 2


@dataclass(frozen=True, kw_only=True)
class Thermal(SourceShape):
    """A hot body: photon rate per hertz proportional to epsilon(nu) nu^2 / (exp(h nu / k T) - 1) (Planck's law over h nu).

    Parameters
    ----------
    temperature : Quantity [K]
    emissivity : WavelengthTable, optional
        epsilon, 1 (a black body) by default. A constant one changes nothing, for rates are relative.

    Raises
    ------
    InputError, UnitsError
        No temperature above zero; an emissivity that is no table; later, light asked for outside the table.

    Notes
    -----
    The rate counts photons; Planck's law of the power per hertz is that times h nu (``Spectrum.power_weighted``).

    References
    ----------
    Planck's law; constants CODATA 2018 as in astropy.constants.

    Examples
    --------
    >>> import astropy.units as u
    >>> grey = WavelengthTable(wavelength=[1.0, 2.0] * u.um, values=[0.4, 0.3])
    >>> lamp = Thermal(temperature=2900 * u.K, emissivity=grey)
    >>> print((lamp.rate_si(2e14) / Thermal(temperature=2900 * u.K).rate_si(2e14)).round(4))
    0.3501
    """

    shape: ClassVar[str] = "thermal"
    temperature: u.Quantity = parameter("temperature", u.K, low=500.0, high=6500.0, step=50.0, start=2900.0)
    emissivity: WavelengthTable | None = None

    def __post_init__(self) -> None:
        if self.emissivity is not None and not isinstance(self.emissivity, WavelengthTable):
            raise InputError(f"emissivity must be a spectra.WavelengthTable; got {self.emissivity!r}")
        _ = self._scale

    @cached_property
    def _scale(self) -> float:
        """Scale k T / h [Hz] (Boltzmann constant times temperature over Planck constant)."""
        return positive_si(self.temperature, u.K, "temperature") * float(k_B.si.value) / float(h.si.value)

    @property
    def support_si(self) -> tuple[float, float]:
        """From 0 to 40 kT/h, beyond which 1e-14 of the photons are left."""
        return 0.0, 40.0 * self._scale

    @property
    def breakpoints_si(self) -> FloatArray:
        """Frequencies [Hz] of the emissivity's points."""
        return NOWHERE if self.emissivity is None else self.emissivity.breakpoints_si

    lines = ()

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Relative photon rate per hertz; of a black body x^2/(e^x - 1) with x = h nu / k T, near x at low frequency."""
        x = frequency / self._scale
        black = np.asarray(x**2 / np.expm1(x))
        return black if self.emissivity is None else black * self.emissivity.at_si(frequency)


@dataclass(frozen=True, kw_only=True)
class Diode(SourceShape):
    """A light-emitting or superluminescent diode: a Gaussian photon rate per hertz, with a ripple where its chip is a weak cavity.

    S(nu) = exp(-4 ln2 ((x - x0)/fwhm)^2) [1 + ripple cos(2 pi (x - x0)/period)], x the frequency, or the wavelength where the width
    (or the period) is a length.

    Parameters
    ----------
    centre : Quantity [vacuum wavelength or frequency]
    fwhm : Quantity [wavelength or frequency]
        Full width at half maximum; Gaussian on the axis of its unit.
    ripple : float
        Depth of the ripple, from 0 to 1: greatest minus least over their sum.
    ripple_period : Quantity [wavelength or frequency], optional
        Period on the axis of its unit; goes with a ripple. A chip of length L and index n has c / (2 n L).

    Raises
    ------
    InputError, UnitsError
        A width that is not above zero, a depth outside 0 to 1, a ripple without a period or the reverse.

    Notes
    -----
    The rate counts photons. A ripple of period P in frequency makes ghosts: copies of the packet at path differences of -+c/P
    with |gamma| = ripple/2, as long as the packet is short compared to c/P. One in wavelength makes them at about lambda^2/P, a
    little smeared.

    References
    ----------
    Derived: the transform of a product with a cosine is two shifted copies (Bracewell, The Fourier Transform and Its Applications).

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import coherence, spectra
    >>> diode = spectra.Diode(centre=1.55 * u.um, fwhm=5 * u.THz, ripple=0.1, ripple_period=0.15 * u.THz)
    >>> print(coherence.fringe_contrast(spectra.detected(diode), 1 / diode.ripple_period).round(3))
    0.05
    """

    shape: ClassVar[str] = "diode"
    centre: u.Quantity = parameter("centre", u.um, low=0.4, high=2.5, step=0.005, start=1.65)
    fwhm: u.Quantity = parameter("full width (FWHM)", u.nm, low=5.0, high=300.0, step=5.0, start=60.0)
    ripple: float = 0.0
    ripple_period: u.Quantity | None = None

    def __post_init__(self) -> None:
        _ = self._shape.support_si
        if not 0 <= self.ripple <= 1:
            raise InputError(f"ripple must be from 0 to 1; got {self.ripple}")
        if (self.ripple > 0) != (self.ripple_period is not None):
            raise InputError("ripple and ripple_period go together; give both, or neither")
        _ = self._ripple_si

    @cached_property
    def _shape(self) -> Gaussian:
        return Gaussian(centre=self.centre, fwhm=self.fwhm)

    @cached_property
    def _ripple_si(self) -> tuple[bool, float, float]:
        """Whether the ripple is periodic in wavelength; centre and period on its axis [m or Hz]."""
        centre = one_frequency_si(self.centre, "centre")
        if self.ripple_period is None:
            return False, centre, np.inf
        if is_length(as_quantity(self.ripple_period, "ripple_period", WIDTHS)):
            period = positive_si(self.ripple_period, u.m, "ripple_period", "nm")
            return True, SPEED_OF_LIGHT / centre, period
        return False, centre, positive_si(self.ripple_period, u.Hz, "ripple_period", "GHz")

    @property
    def support_si(self) -> tuple[float, float]:
        """Frequencies [Hz] beyond which less than 2e-15 of the peak is left."""
        return self._shape.support_si

    @property
    def finest_si(self) -> float:
        """Period of the ripple [Hz] at the centre, which a grid must resolve; infinite without one."""
        in_wavelength, centre, period = self._ripple_si
        return SPEED_OF_LIGHT * period / centre**2 if in_wavelength else period

    breakpoints_si = NOWHERE
    lines = ()

    def rate_si(self, frequency: FloatArray) -> FloatArray:
        """Relative photon rate per hertz."""
        bell = self._shape.transmission_si(frequency)
        if not self.ripple:
            return bell
        in_wavelength, centre, period = self._ripple_si
        x = SPEED_OF_LIGHT / frequency if in_wavelength else frequency
        return np.asarray(bell * (1 + self.ripple * np.cos(2 * np.pi * (x - centre) / period)))


@dataclass(frozen=True)
class Lines(LineSource):
    """A lamp or laser that emits lines only; their strengths are photon rates.

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


SOURCE_SHAPES: tuple[type[Any], ...] = (Flat, Thermal, Diode, Lines, SingleModeLaser, MultimodeLaser, Lamp, TabulatedSource, Together)
"""The family of sources: controls, setup files and contract tests read it."""

__all__ = ["SOURCE_SHAPES", "Diode", "Flat", "Lines", "Source", "Thermal"]
