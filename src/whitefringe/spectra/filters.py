"""Filter shapes: what fraction of the photons at each frequency is let through.

A shape has ``transmission_si(frequency)`` in hertz, a ``support_si`` (outside which it passes nothing) and ``breakpoints_si``
(where its slope jumps), so that it can be integrated exactly. To add one, write the class and list it in `FILTER_SHAPES`.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from typing import Any, ClassVar

import astropy.units as u
import numpy as np

from ..parameters import parameter
from ..units import SPEED_OF_LIGHT, FloatArray
from ._curves import REPAIRS, Curve, prepare_curve, read_curve
from ._shape import Filter, FilterShape, Peak, band_edges_si
from .edges import LongPass, ShortPass
from .lines import FOUR_LN2
from .shapes import Lorentzian, MultiCavity, SuperGaussian, Trapezoid


@dataclass(frozen=True, kw_only=True)
class TopHat(FilterShape):
    """Full transmission between two edges, none outside.

    Parameters
    ----------
    centre : Quantity [vacuum wavelength or frequency]
    width : Quantity [wavelength or frequency]
        Distance of the edges, which lie at centre -+ width/2 on the axis of the width's unit.

    Notes
    -----
    A top-hat in wavelength and one in frequency of the same centre and nearly the same width are two different bands: equal steps in
    wavelength are unequal in frequency, so the band in wavelength reaches farther to the blue in hertz. 1.65 um and 0.3 um: 166.6 to
    199.9 THz, whose middle is at 1.636 um; 1.65 um and 33.31 THz: 165.0 to 198.3 THz.

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
        return band_edges_si(self.centre, self.width)

    def transmission_si(self, frequency: FloatArray) -> FloatArray:
        """One, inside the support."""
        return np.ones_like(frequency)


@dataclass(frozen=True, kw_only=True)
class Gaussian(Peak):
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

    @property
    def _reach(self) -> float:
        return 3.5

    def _profile(self, x: FloatArray) -> FloatArray:
        return np.asarray(np.exp(-FOUR_LN2 * x**2))


@dataclass(frozen=True, kw_only=True, eq=False)
class Tabulated(FilterShape):
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
    remarks : tuple of str
        What was taken for what when the curve was read.

    Attributes
    ----------
    notes : tuple of str
        What was repaired, what may be missing, and the remarks.

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
    remarks: tuple[str, ...] = ()
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
        """What was repaired, what may be missing, and the remarks, in words."""
        return (*self.curve.notes, *self.remarks)

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


def read_filter(
    path: Any,
    *,
    wavelength_unit: u.UnitBase | None = None,
    transmission_unit: u.UnitBase | None = None,
    wavelength_column: str | int = 0,
    transmission_column: str | int = 1,
    repair: tuple[str, ...] | str = (),
    medium: str | None = None,
) -> Tabulated:
    """Read a filter curve from a CSV, ECSV, FITS or VOTable file, or from bare columns of numbers.

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
    medium : str, optional
        ``"vacuum"`` or ``"air"``. By default what a key ``medium`` or ``AIRORVAC`` of the file's header says, else vacuum, with a note.
        Wavelengths in air are turned into vacuum ones for standard air (dry, 15 degrees C, 101325 Pa, 450 ppm CO2), 0.3 to 1.69 um.

    Returns
    -------
    Tabulated
        Its `notes` also say which off-standard spelling of a unit was taken for which; ``"A"``, the ampere, counts as angstrom for a
        wavelength.

    Raises
    ------
    FileContentError, InputError, UnitsError
        With file, row and column.

    References
    ----------
    Ciddor, Appl. Opt. 35, 1566 (1996), eq. 1, doi:10.1364/AO.35.001566.

    Warns
    -----
    CurveEndsWarning
        Light may be missing beyond the ends; the message says how much.
    """
    found = read_curve(path, wavelength_unit, transmission_unit, wavelength_column, transmission_column, medium)
    wavelength, values, remarks = found
    return Tabulated(wavelength=wavelength, transmission_values=values, repair=repair, origin=str(path), remarks=remarks)


FILTER_SHAPES: tuple[type[Any], ...] = (
    TopHat,
    Gaussian,
    SuperGaussian,
    Trapezoid,
    Lorentzian,
    MultiCavity,
    LongPass,
    ShortPass,
    Tabulated,
)
"""The family of filter shapes: controls, setup files and contract tests read it."""

__all__ = ["FILTER_SHAPES", "REPAIRS", "Filter", "Gaussian", "Tabulated", "TopHat", "read_filter"]
