"""Further filter shapes: super-Gaussian, trapezoid, Lorentzian and multi-cavity band-pass.

Widths may be given in wavelength or in frequency; a shape is symmetric on the axis of its width's unit. A shape whose wings have no
end is cut off where its docstring says, and tells how much is left out.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import astropy.units as u
import numpy as np
from scipy.special import betainc, betaincinv

from ..errors import InputError
from ..parameters import parameter
from ..units import FloatArray, as_quantity, is_length, number, positive_si, whole
from ._shape import Peak
from .lines import WIDTHS

LEFT_OUT = 1e-6
"""A multi-cavity filter is followed until this part of it is left out, or to its `reach`."""


@dataclass(frozen=True, kw_only=True)
class SuperGaussian(Peak):
    """A flat-topped bell: T = exp(-ln2 (2 |x - centre| / fwhm)^(2 order)); order 1 is the Gaussian.

    Parameters
    ----------
    centre : Quantity [vacuum wavelength or frequency]
    fwhm : Quantity [wavelength or frequency]
        Full width at half maximum; the shape is symmetric on the axis of its unit.
    order : int
        1 to 20; the higher, the flatter the top and the steeper the flanks.

    Raises
    ------
    InputError, UnitsError

    Notes
    -----
    Followed to 2e-15 of the peak, or to a tenth of the centre wavelength.

    References
    ----------
    Siegman, Lasers (University Science Books 1986), super-Gaussian profiles (from memory).

    Examples
    --------
    >>> import astropy.units as u
    >>> band = SuperGaussian(centre=1.65 * u.um, fwhm=0.2 * u.um, order=3)
    >>> band.transmission([1.55, 1.6, 1.65, 1.75] * u.um).round(6).tolist()
    [0.5, 0.989228, 1.0, 0.5]
    """

    shape: ClassVar[str] = "super-gaussian"
    centre: u.Quantity = parameter("centre", u.um, low=0.4, high=2.5, step=0.005, start=1.65)
    fwhm: u.Quantity = parameter("full width (FWHM)", u.nm, low=5.0, high=300.0, step=5.0, start=250.0)
    order: int = parameter("order", u.dimensionless_unscaled, low=1, high=20, step=1, start=3)

    def __post_init__(self) -> None:
        super().__post_init__()
        object.__setattr__(self, "order", whole(self.order, "order", low=1, high=20))

    @property
    def _reach(self) -> float:
        return float(0.5 * 49.0 ** (0.5 / self.order))

    def _profile(self, x: FloatArray) -> FloatArray:
        return np.asarray(np.exp(-np.log(2.0) * (4.0 * x * x) ** self.order))


@dataclass(frozen=True, kw_only=True)
class Trapezoid(Peak):
    """A flat top with straight flanks: T = min(1, max(0, 1/2 + (fwhm/2 - |x - centre|) / edge)).

    Parameters
    ----------
    centre : Quantity [vacuum wavelength or frequency]
    fwhm : Quantity [wavelength or frequency]
        Distance of the half-way points.
    edge : Quantity [as `fwhm`]
        Width of one flank from 0 to 1, above zero and at most `fwhm`, at which the shape is a triangle.

    Raises
    ------
    InputError, UnitsError

    Notes
    -----
    In frequency it is a rectangle of width `fwhm` convolved with one of width `edge`, hence |gamma(tau)| =
    |sinc(fwhm tau) sinc(edge tau)| with sinc(x) = sin(pi x)/(pi x).

    References
    ----------
    Bracewell, The Fourier Transform and Its Applications, convolution theorem.

    Examples
    --------
    >>> import astropy.units as u
    >>> band = Trapezoid(centre=1.65 * u.um, fwhm=200 * u.nm, edge=40 * u.nm)
    >>> band.transmission([1.525, 1.54, 1.55, 1.56, 1.6] * u.um).round(6).tolist()
    [0.0, 0.25, 0.5, 0.75, 1.0]
    """

    shape: ClassVar[str] = "trapezoid"
    centre: u.Quantity = parameter("centre", u.um, low=0.4, high=2.5, step=0.005, start=1.65)
    fwhm: u.Quantity = parameter("full width (FWHM)", u.nm, low=5.0, high=300.0, step=5.0, start=250.0)
    edge: u.Quantity = parameter("width of a flank", u.nm, low=1.0, high=200.0, step=1.0, start=5.0)

    def __post_init__(self) -> None:
        super().__post_init__()
        if not self._flank <= 1:
            raise InputError(f"edge must be at most fwhm, {self.fwhm}; got {self.edge}")
        if self._ends[0] > -self._reach:
            raise InputError(f"fwhm and edge reach below a tenth of the centre wavelength; got {self.fwhm} and {self.edge}")

    @cached_property
    def _flank(self) -> float:
        """Width of a flank over `fwhm`."""
        in_wavelength, _, width = self._axis_si
        if is_length(as_quantity(self.edge, "edge", WIDTHS)) != in_wavelength:
            raise InputError(f"edge and fwhm must both be wavelengths or both be frequencies; got {self.edge} and {self.fwhm}")
        unit, example = (u.m, "nm") if in_wavelength else (u.Hz, "THz")
        return positive_si(self.edge, unit, "edge", example) / width

    @property
    def _reach(self) -> float:
        return 0.5 + 0.5 * self._flank

    @cached_property
    def breakpoints_si(self) -> FloatArray:  # type: ignore[override]
        """Frequencies of the two shoulders [Hz]."""
        shoulder = 0.5 - 0.5 * self._flank
        return np.sort(self._on_axis([-shoulder, shoulder]))

    def _profile(self, x: FloatArray) -> FloatArray:
        return np.clip(0.5 + (0.5 - np.abs(x)) / self._flank, 0.0, 1.0)


class _Cavities(Peak):
    """T = 1 / (1 + (2 x)^(2 m)) for m cavities, x = (axis - centre) / fwhm."""

    cavities: int
    reach: float

    def __post_init__(self) -> None:
        super().__post_init__()
        object.__setattr__(self, "reach", number(self.reach, "reach", low=1.0, high=1e5))

    @cached_property
    def _orders(self) -> tuple[float, float]:
        """Orders of the incomplete beta function that gives the tails: int_y^inf dt/(1 + t^2m) over the whole integral."""
        return 1.0 - 0.5 / self.cavities, 0.5 / self.cavities

    @property
    def _reach(self) -> float:
        s = betaincinv(*self._orders, LEFT_OUT)
        return min(self.reach, 0.5 * float(((1.0 - s) / s) ** self._orders[1]))

    @property
    def missing(self) -> float:
        """Part of the shape's integral over its axis (from minus to plus infinity) that lies beyond where it is followed."""
        tails = [0.5 * float(betainc(*self._orders, 1.0 / (1.0 + (2.0 * end) ** (2 * self.cavities)))) for end in self._ends]
        return sum(tails)

    def _profile(self, x: FloatArray) -> FloatArray:
        return np.asarray(1.0 / (1.0 + (4.0 * x * x) ** self.cavities))


@dataclass(frozen=True, kw_only=True)
class Lorentzian(_Cavities):
    """A Lorentzian band-pass, as one Fabry-Perot order has: T = 1 / (1 + (2 (x - centre) / fwhm)^2).

    Parameters
    ----------
    centre : Quantity [vacuum wavelength or frequency]
    fwhm : Quantity [wavelength or frequency]
        Full width at half maximum; the shape is symmetric on the axis of its unit.
    reach : float
        Full widths to which it is followed on either side.

    Attributes
    ----------
    missing : float
        What is left out: 1 - (2/pi) atan(2 reach), 0.64 % at the default reach of 50 (1e-4 would take a reach of 3183, wider than most
        bands). More where the wing would reach below a tenth of the centre wavelength.

    Raises
    ------
    InputError, UnitsError

    Notes
    -----
    In frequency |gamma(tau)| = exp(-pi fwhm |tau|), to at most twice `missing`. The cut rounds the cusp at zero delay over about
    1 / (2 reach fwhm): there |gamma| starts as a parabola. Light that is a line rather than a filter is better a `Line`, whose closed
    form has no cut.

    References
    ----------
    Goodman, Statistical Optics, 2nd ed., sec. 5.1.

    Examples
    --------
    >>> import astropy.units as u
    >>> band = Lorentzian(centre=633 * u.nm, fwhm=1 * u.nm)
    >>> print(band.transmission([632, 632.5, 633] * u.nm).round(6), f"{band.missing:.5f}")
    [0.2 0.5 1. ] 0.00637
    """

    shape: ClassVar[str] = "lorentzian"
    cavities: ClassVar[int] = 1  # type: ignore[misc]
    centre: u.Quantity = parameter("centre", u.um, low=0.4, high=2.5, step=0.005, start=1.65)
    fwhm: u.Quantity = parameter("full width (FWHM)", u.nm, low=1.0, high=300.0, step=1.0, start=20.0)
    reach: float = parameter("followed to (widths)", u.dimensionless_unscaled, low=10, high=500, step=10, start=50, default=50.0)


@dataclass(frozen=True, kw_only=True)
class MultiCavity(_Cavities):
    """An all-dielectric band-pass of several cavities: T = 1 / (1 + (2 (x - centre) / fwhm)^(2 cavities)).

    Parameters
    ----------
    centre : Quantity [vacuum wavelength or frequency]
    fwhm : Quantity [wavelength or frequency]
        Full width at half maximum; the shape is symmetric on the axis of its unit.
    cavities : int
        1 to 20; one is the Lorentzian.
    reach : float
        At most so many full widths are followed on either side; fewer where 1e-6 of the shape is left out already.

    Attributes
    ----------
    missing : float
        What is left out: 0.64 % for one cavity at the default reach, 1e-6 for two or more. More where the wing would reach below a tenth
        of the centre wavelength.

    Raises
    ------
    InputError, UnitsError

    Notes
    -----
    An approximation: real stacks ripple in the band and leak outside of it (`with_leak`). |gamma| is off from that of the endless shape
    by at most twice `missing`.

    References
    ----------
    Macleod, Thin-Film Optical Filters, 4th ed., band-pass filters; the formula is the maximally flat (Butterworth) response that makers'
    catalogues quote for multi-cavity filters (from memory).

    Examples
    --------
    >>> import astropy.units as u
    >>> band = MultiCavity(centre=1.65 * u.um, fwhm=20 * u.nm, cavities=3)
    >>> print(band.transmission([1630, 1640, 1645, 1650] * u.nm).round(6), f"{band.missing:.1e}")
    [0.015385 0.5      0.984615 1.      ] 1.0e-06
    """

    shape: ClassVar[str] = "multi-cavity"
    centre: u.Quantity = parameter("centre", u.um, low=0.4, high=2.5, step=0.005, start=1.65)
    fwhm: u.Quantity = parameter("full width (FWHM)", u.nm, low=1.0, high=300.0, step=1.0, start=20.0)
    cavities: int = parameter("cavities", u.dimensionless_unscaled, low=1, high=20, step=1, start=3)
    reach: float = parameter("followed to (widths)", u.dimensionless_unscaled, low=10, high=500, step=10, start=50, default=50.0)

    def __post_init__(self) -> None:
        object.__setattr__(self, "cavities", whole(self.cavities, "cavities", low=1, high=20))
        super().__post_init__()


__all__ = ["Lorentzian", "MultiCavity", "SuperGaussian", "Trapezoid"]
