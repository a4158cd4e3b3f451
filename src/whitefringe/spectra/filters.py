"""Filter shapes: what fraction of the photons at each frequency is let through.

A shape has ``transmission_si(frequency)`` in hertz, a ``support_si`` (outside which it passes nothing) and ``breakpoints_si``
(where its slope jumps), so that it can be integrated exactly. To add one, write the class and list it in `FILTER_SHAPES`.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from typing import Any, ClassVar, Protocol, runtime_checkable

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..units import SPEED_OF_LIGHT, FloatArray, as_frequency_si, as_quantity, as_si, is_length, one_frequency_si, positive_si
from ._curves import REPAIRS, Curve, prepare_curve, read_curve
from ._parameters import parameter
from .lines import FOUR_LN2, WIDTHS, edges_of, width_si

_REACH = 3.5
"""A Gaussian is followed to this many full widths from its centre, where 2e-15 of its peak is left."""


@runtime_checkable
class Filter(Protocol):
    """What every filter shape offers."""

    @property
    def support_si(self) -> tuple[float, float]:
        """Lowest and highest frequency [Hz] that pass."""
        ...

    @property
    def breakpoints_si(self) -> FloatArray:
        """Frequencies [Hz] where the slope jumps."""
        ...

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Fraction of photons let through at `frequency` [Hz]."""
        ...


class _Shape:
    """Shared by all shapes: the public twin of `transmission_si`."""

    breakpoints_si: FloatArray = np.empty(0)

    def transmission(self, at: Any) -> FloatArray:
        """Fraction of photons let through.

        Parameters
        ----------
        at : Quantity [vacuum wavelength or frequency], any shape

        Returns
        -------
        ndarray, same shape
        """
        frequency = np.asarray(as_frequency_si(at, "at"), dtype=float)
        low, high = self.support_si  # type: ignore[attr-defined]
        inside = (frequency >= low) & (frequency <= high)
        return np.where(inside, self.transmission_si(np.clip(frequency, low, high)), 0.0)  # type: ignore[attr-defined]


def _edges_si(centre: Any, width: Any, reach: float = 0.5) -> tuple[float, float]:
    """Frequencies [Hz] at centre -+ reach x width, on the axis (wavelength or frequency) of the width's unit."""
    centre_si = one_frequency_si(centre, "centre")
    if is_length(as_quantity(width, "width", WIDTHS)):
        low, high = edges_of(SPEED_OF_LIGHT / centre_si, 2 * reach * positive_si(width, u.m, "width", "nm"), "width")
        return SPEED_OF_LIGHT / high, SPEED_OF_LIGHT / low
    return edges_of(centre_si, 2 * reach * positive_si(width, u.Hz, "width", "THz"), "width")


@dataclass(frozen=True, kw_only=True)
class TopHat(_Shape):
    """Full transmission between two edges, none outside.

    Parameters
    ----------
    centre : Quantity [vacuum wavelength or frequency]
    width : Quantity [wavelength or frequency]
        Distance of the edges, which lie at centre -+ width/2 on the axis of the width's unit.

    Examples
    --------
    >>> import astropy.units as u
    >>> low, high = TopHat(centre=1.65 * u.um, width=0.3 * u.um).support_si
    >>> print(f"{high - low:.7e}")
    3.3310273e+13
    """

    shape: ClassVar[str] = "top-hat"
    centre: u.Quantity = parameter("centre", u.um, low=0.4, high=2.5, step=0.005, start=1.65)
    width: u.Quantity = parameter("width", u.nm, low=5.0, high=400.0, step=5.0, start=300.0)

    def __post_init__(self) -> None:
        _ = self.support_si

    @cached_property
    def support_si(self) -> tuple[float, float]:
        """Frequencies of the edges [Hz]."""
        return _edges_si(self.centre, self.width)

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """One, inside the support."""
        return np.ones_like(frequency)


@dataclass(frozen=True, kw_only=True)
class Gaussian(_Shape):
    """A Gaussian band-pass: T = exp(-4 ln2 ((x - centre)/fwhm)^2), x on the axis of the width's unit.

    Parameters
    ----------
    centre : Quantity [vacuum wavelength or frequency]
    fwhm : Quantity [wavelength or frequency]
        Full width at half maximum.

    Notes
    -----
    Gaussian in wavelength when `fwhm` is a length, in frequency when it is a frequency. Followed to 3.5 full widths on either
    side (2e-15 of the peak), or to where the wavelength would reach a tenth of the centre's.
    """

    shape: ClassVar[str] = "gaussian"
    centre: u.Quantity = parameter("centre", u.um, low=0.4, high=2.5, step=0.005, start=1.65)
    fwhm: u.Quantity = parameter("full width (FWHM)", u.nm, low=5.0, high=300.0, step=5.0, start=250.0)

    def __post_init__(self) -> None:
        width_si(one_frequency_si(self.centre, "centre"), self.fwhm, "fwhm")

    @cached_property
    def _axis_si(self) -> tuple[bool, float, float]:
        """Whether the axis is wavelength; centre and width on it [m or Hz]."""
        centre = float(as_frequency_si(self.centre, "centre"))
        if is_length(u.Quantity(self.fwhm)):
            return True, SPEED_OF_LIGHT / centre, float(as_si(self.fwhm, u.m, "fwhm"))
        return False, centre, float(as_si(self.fwhm, u.Hz, "fwhm"))

    @cached_property
    def support_si(self) -> tuple[float, float]:
        """Frequencies [Hz] beyond which less than 2e-15 of the peak passes."""
        in_wavelength, centre, width = self._axis_si
        low, high = max(centre - _REACH * width, 0.1 * centre), centre + _REACH * width
        return (SPEED_OF_LIGHT / high, SPEED_OF_LIGHT / low) if in_wavelength else (low, high)

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Transmission at `frequency` [Hz]."""
        in_wavelength, centre, width = self._axis_si
        x = SPEED_OF_LIGHT / frequency if in_wavelength else frequency
        return np.asarray(np.exp(-FOUR_LN2 * ((x - centre) / width) ** 2))


@dataclass(frozen=True, kw_only=True, eq=False)
class Tabulated(_Shape):
    """A measured curve, joined by straight lines in wavelength.

    Parameters
    ----------
    wavelength : Quantity [length], shape (n,)
        Vacuum wavelengths, rising or falling.
    transmission_values : array_like or Quantity, shape (n,)
        Fractions, or a Quantity in percent.
    repair : tuple of str
        Which of `REPAIRS` may be made; what is not listed here is an error.
    origin : str
        Where the curve is from, for messages and records.

    Attributes
    ----------
    notes : tuple of str
        What was repaired, and what may be missing.

    Warns
    -----
    CurveEndsWarning
        The curve does not fall to near zero at its ends.
    """

    shape: ClassVar[str] = "table"
    wavelength: u.Quantity
    transmission_values: Any
    repair: tuple[str, ...] | str = ()
    origin: str = "table"
    curve: Curve = field(init=False, repr=False)

    def __post_init__(self) -> None:
        names = (self.repair,) if isinstance(self.repair, str) else tuple(self.repair)
        curve = prepare_curve(self.wavelength, self.transmission_values, names, self.origin)
        for name in ("wavelength", "transmission_values"):
            copied = u.Quantity(getattr(self, name), dtype=float, copy=True)
            copied.setflags(write=False)
            object.__setattr__(self, name, copied)
        object.__setattr__(self, "repair", names)
        object.__setattr__(self, "curve", curve)

    @property
    def notes(self) -> tuple[str, ...]:
        """What was repaired and what may be missing, in words."""
        return self.curve.notes

    @property
    def support_si(self) -> tuple[float, float]:
        """Frequencies of the table's two ends [Hz]."""
        points = self.curve.wavelength_si
        return SPEED_OF_LIGHT / float(points[-1]), SPEED_OF_LIGHT / float(points[0])

    @cached_property
    def breakpoints_si(self) -> FloatArray:  # type: ignore[override]
        """Frequencies of the tabulated points [Hz]."""
        return SPEED_OF_LIGHT / self.curve.wavelength_si[::-1]

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Transmission at `frequency` [Hz], linear in wavelength between the points."""
        return np.interp(SPEED_OF_LIGHT / frequency, self.curve.wavelength_si, self.curve.transmission)


@dataclass(frozen=True, kw_only=True, eq=False)
class Tilted(_Shape):
    """A filter turned in a collimated beam: its curve shifts to the blue.

    lambda(theta) = lambda0 sqrt(1 - (sin theta / n_eff)^2), applied to every wavelength of the curve
    (effective-index approximation, good for small angles and narrow bands).

    Parameters
    ----------
    filter : Filter
        The filter at normal incidence.
    angle : Quantity [angle]
        Angle of incidence in air or vacuum, 0 to below 90 degrees.
    effective_index : float
        Effective index of the coating, above 1; from the maker, or fitted. Common practice: 1.4 to 2.2.
    """

    shape: ClassVar[str] = "tilted"
    filter: Filter
    angle: u.Quantity
    effective_index: float = 1.8

    def __post_init__(self) -> None:
        angle = as_si(self.angle, u.rad, "angle", "deg")
        if not isinstance(self.filter, Filter) or isinstance(self.filter, type):
            raise InputError(f"filter must be a filter shape such as spectra.TopHat; got {self.filter!r}")
        if np.ndim(angle) != 0:
            raise InputError(f"angle must be one number; got an array of shape {np.shape(angle)}")
        if not 0 <= angle < np.pi / 2:
            raise InputError(f"angle must be from 0 to below 90 deg; got {self.angle}")
        if not self.effective_index > 1:
            raise InputError(f"effective_index must be above 1; got {self.effective_index}")

    @cached_property
    def factor(self) -> float:
        """Wavelengths of the tilted curve over those of the upright one, at most 1."""
        angle = float(as_si(self.angle, u.rad, "angle", "deg"))
        return float(np.sqrt(1.0 - (np.sin(angle) / self.effective_index) ** 2))

    @property
    def support_si(self) -> tuple[float, float]:
        """Lowest and highest frequency [Hz] that pass."""
        low, high = self.filter.support_si
        return low / self.factor, high / self.factor

    @property
    def breakpoints_si(self) -> FloatArray:  # type: ignore[override]
        """Frequencies [Hz] where the slope jumps."""
        return np.asarray(self.filter.breakpoints_si) / self.factor

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """Transmission at `frequency` [Hz]."""
        return self.filter.transmission_si(frequency * self.factor)


def read_filter(
    path: Any,
    *,
    wavelength_unit: u.UnitBase | None = None,
    transmission_unit: u.UnitBase | None = None,
    wavelength_column: str | int = 0,
    transmission_column: str | int = 1,
    repair: tuple[str, ...] | str = (),
) -> Tabulated:
    """Read a filter curve from a CSV, ECSV or FITS table, or from bare columns of numbers.

    Parameters
    ----------
    path : path
    wavelength_unit, transmission_unit : Unit, optional
        Stated here when the header has none; an error when header and call differ. A transmission without a unit is a
        fraction, and must then look like one (at most 1.05).
    wavelength_column, transmission_column : str or int
        Column by name or by index from 0. The first column may also be a frequency or wavenumber.
    repair : tuple of str
        Repairs that may be made, out of `REPAIRS`.

    Returns
    -------
    Tabulated

    Raises
    ------
    FileContentError, InputError
        With file, row and column.

    Warns
    -----
    CurveEndsWarning
        Light may be missing beyond the ends; the message says how much.
    """
    wavelength, values = read_curve(path, wavelength_unit, transmission_unit, wavelength_column, transmission_column)
    return Tabulated(wavelength=wavelength, transmission_values=values, repair=repair, origin=str(path))


FILTER_SHAPES: tuple[type[Any], ...] = (TopHat, Gaussian, Tabulated)
"""The family of filter shapes: controls, setup files and contract tests read it."""

__all__ = ["FILTER_SHAPES", "REPAIRS", "Filter", "Gaussian", "Tabulated", "Tilted", "TopHat", "read_filter"]
