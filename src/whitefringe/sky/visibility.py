"""The object's own contrast: the complex visibility of stars, discs and rings; conventions as in `_object`.

Pictures are in `images`; doubles, sums and backgrounds in `composite`, with the tuple of all shapes.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import numpy as np
from astropy import units
from scipy.special import hyp0f1, j0, roots_legendre

from ..errors import InputError
from ..parameters import parameter
from ..spectra.lines import FOUR_LN2
from ..units import FloatArray, frozen_quantities, number
from ._object import Round, angle_si


def disc_term(order: float, x: FloatArray) -> FloatArray:
    """Gamma(order + 1) J_order(x) / (x/2)^order, which is 1 at x = 0.

    As the hypergeometric limit function 0F1(order + 1; -x^2/4), which has no division by zero and no loss of digits near it.
    """
    return np.asarray(hyp0f1(order + 1.0, -0.25 * np.square(x)))


class _Disc(Round):
    """A centred object with a diameter."""

    diameter: units.Quantity

    def __post_init__(self) -> None:
        frozen_quantities(self)
        _ = self.diameter_si

    @cached_property
    def diameter_si(self) -> float:
        """Diameter [rad]."""
        return angle_si(self.diameter, "diameter")

    def _radial_si(self, q: FloatArray) -> FloatArray:
        return self._profile(np.pi * self.diameter_si * q)

    def _profile(self, x: FloatArray) -> FloatArray:
        """Visibility at x = pi times diameter times spatial frequency."""
        raise NotImplementedError


@dataclass(frozen=True, kw_only=True)
class Point(Round):
    """A star too small to be resolved: V = 1.

    Examples
    --------
    >>> import astropy.units as u
    >>> Point().visibility(100 * u.m, 0 * u.m, 1.65 * u.um)
    array(1.+0.j)
    """

    shape: ClassVar[str] = "point"

    def _radial_si(self, q: FloatArray) -> FloatArray:
        return np.ones_like(np.asarray(q, dtype=float))


@dataclass(frozen=True, kw_only=True)
class UniformDisc(_Disc):
    """A disc of equal brightness: V = 2 J1(x)/x, x = pi diameter B / lambda.

    Parameters
    ----------
    diameter : Quantity [angle]
        Zero or more.

    Raises
    ------
    InputError, UnitsError

    Notes
    -----
    First null at diameter B / lambda = 1.21966989; V is negative from there to the next one.

    References
    ----------
    Born & Wolf, Principles of Optics, 7th ed., sec. 10.4.

    Examples
    --------
    >>> import astropy.units as u
    >>> disc = UniformDisc(diameter=2.5 * u.mas)
    >>> print(disc.visibility([0, 100, 200] * u.m, 0 * u.m, 1.65 * u.um).real.round(6))
    [ 1.        0.46668  -0.112762]
    """

    shape: ClassVar[str] = "uniform-disc"
    diameter: units.Quantity = parameter("diameter", units.mas, low=0.0, high=20.0, step=0.05, start=1.0)

    def _profile(self, x: FloatArray) -> FloatArray:
        return disc_term(1.0, x)


@dataclass(frozen=True, kw_only=True)
class DarkenedDisc(_Disc):
    """A disc with linear limb darkening: I(mu) = 1 - a (1 - mu).

    V = [(1-a)/2 + a/3]^-1 [(1-a) J1(x)/x + a sqrt(pi/2) J_3/2(x) / x^(3/2)], x = pi diameter B / lambda, a the darkening and mu the cosine
    of the angle between the surface's normal and the line of sight.

    Parameters
    ----------
    diameter : Quantity [angle]
        Of the limb, zero or more.
    darkening : float
        a, from 0 (uniform) to 1 (black limb); depends on the star and on the wavelength.

    Raises
    ------
    InputError, UnitsError

    Notes
    -----
    On short baselines it looks like a uniform disc smaller by sqrt[(1 - 7a/15) / (1 - a/3)].

    References
    ----------
    Hanbury Brown, Davis, Lake & Thompson 1974, doi:10.1093/mnras/167.3.475 (from memory).

    Examples
    --------
    >>> import astropy.units as u
    >>> star = DarkenedDisc(diameter=2.5 * u.mas, darkening=0.3)
    >>> print(star.visibility(200 * u.m, 0 * u.m, 1.65 * u.um).round(6))
    (-0.091423+0j)
    """

    shape: ClassVar[str] = "darkened-disc"
    diameter: units.Quantity = parameter("diameter", units.mas, low=0.0, high=20.0, step=0.05, start=1.0)
    darkening: float = parameter("limb darkening", units.dimensionless_unscaled, low=0.0, high=1.0, step=0.01, start=0.3)

    def __post_init__(self) -> None:
        super().__post_init__()
        object.__setattr__(self, "darkening", number(self.darkening, "darkening", low=0.0, high=1.0))

    def _profile(self, x: FloatArray) -> FloatArray:
        flat, black = (1.0 - self.darkening) / 2.0, self.darkening / 3.0
        return (flat * disc_term(1.0, x) + black * disc_term(1.5, x)) / (flat + black)


@dataclass(frozen=True, kw_only=True)
class PowerLawDisc(_Disc):
    """A disc with power-law limb darkening: I(mu) = mu^exponent.

    V = Gamma(nu + 1) J_nu(x) / (x/2)^nu, nu = exponent/2 + 1, x = pi diameter B / lambda.

    Parameters
    ----------
    diameter : Quantity [angle]
        Of the limb, zero or more.
    exponent : float
        From 0 (uniform) to 10; 1 is linear darkening of 1.

    Raises
    ------
    InputError, UnitsError

    References
    ----------
    Hestroffer, A&A 327, 199 (1997), bibcode:1997A&A...327..199H.

    Examples
    --------
    >>> import astropy.units as u
    >>> star = PowerLawDisc(diameter=2.5 * u.mas, exponent=0.3)
    >>> print(star.visibility(200 * u.m, 0 * u.m, 1.65 * u.um).round(6))
    (-0.082799+0j)
    """

    shape: ClassVar[str] = "power-law-disc"
    diameter: units.Quantity = parameter("diameter", units.mas, low=0.0, high=20.0, step=0.05, start=1.0)
    exponent: float = parameter("exponent", units.dimensionless_unscaled, low=0.0, high=2.0, step=0.01, start=0.3)

    def __post_init__(self) -> None:
        super().__post_init__()
        object.__setattr__(self, "exponent", number(self.exponent, "exponent", low=0.0, high=10.0))

    def _profile(self, x: FloatArray) -> FloatArray:
        return disc_term(0.5 * self.exponent + 1.0, x)


@dataclass(frozen=True, kw_only=True)
class GaussianDisc(Round):
    """A round Gaussian: V = exp(-(pi fwhm B / lambda)^2 / (4 ln 2)).

    Parameters
    ----------
    fwhm : Quantity [angle]
        Full width of the brightness at half its maximum, zero or more.

    Raises
    ------
    InputError, UnitsError

    References
    ----------
    Bracewell, The Fourier Transform and Its Applications: a Gaussian's transform is a Gaussian.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(GaussianDisc(fwhm=1 * u.mas).visibility(100 * u.m, 0 * u.m, 2.2 * u.um).round(6))
    (0.841247+0j)
    """

    shape: ClassVar[str] = "gaussian-disc"
    fwhm: units.Quantity = parameter("full width (FWHM)", units.mas, low=0.0, high=20.0, step=0.05, start=1.0)

    def __post_init__(self) -> None:
        frozen_quantities(self)
        _ = self.fwhm_si

    @cached_property
    def fwhm_si(self) -> float:
        """Full width at half maximum [rad]."""
        return angle_si(self.fwhm, "fwhm")

    def _radial_si(self, q: FloatArray) -> FloatArray:
        return np.asarray(np.exp(-np.square(np.pi * self.fwhm_si * q) / FOUR_LN2))


@dataclass(frozen=True, kw_only=True)
class Ring(_Disc):
    """A ring of equal brightness, seen face on.

    Thin: V = J0(x). Of radial width w: V = [a^2 2 J1(x_a)/x_a - b^2 2 J1(x_b)/x_b] / (a^2 - b^2), with outer diameter a = diameter + w,
    inner diameter b = diameter - w; x = pi times a diameter times B / lambda.

    Parameters
    ----------
    diameter : Quantity [angle]
        Of the ring's middle, zero or more.
    width : Quantity [angle], optional
        From the inner to the outer edge along a radius: 0 (the default) for a thin ring, at most `diameter`, at which it is a uniform
        disc of twice the diameter.

    Raises
    ------
    InputError, UnitsError

    References
    ----------
    Bracewell, The Fourier Transform and Its Applications, Hankel transforms; the wide ring is the difference of two discs.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(Ring(diameter=2.5 * u.mas).visibility(100 * u.m, 0 * u.m, 1.65 * u.um).round(6))
    (0.051384+0j)
    """

    shape: ClassVar[str] = "ring"
    diameter: units.Quantity = parameter("diameter", units.mas, low=0.0, high=20.0, step=0.05, start=2.0)
    width: units.Quantity = parameter("radial width", units.mas, low=0.0, high=20.0, step=0.05, start=0.0, default=0.0 * units.mas)

    def __post_init__(self) -> None:
        super().__post_init__()
        if self.width_si > self.diameter_si:
            raise InputError(
                f"width must be at most the ring's diameter, {self.diameter}; got {self.width}: a filled ring is a UniformDisc"
            )

    @cached_property
    def width_si(self) -> float:
        """Radial width [rad]."""
        return angle_si(self.width, "width")

    def _profile(self, x: FloatArray) -> FloatArray:
        ratio = self.width_si / self.diameter_si if self.width_si else 0.0
        thin = _mean_over_rings(x, ratio)
        # the difference of two discs loses digits where the ring's width is hardly resolved, the mean over rings where it is well resolved
        resolved = ratio * np.abs(x) > 8.0
        if not np.any(resolved):
            return thin
        outer, inner = 1.0 + ratio, 1.0 - ratio
        wide = (outer**2 * disc_term(1.0, outer * x) - inner**2 * disc_term(1.0, inner * x)) / (4.0 * ratio)
        return np.where(resolved, wide, thin)


def _mean_over_rings(x: FloatArray, ratio: float) -> FloatArray:
    """Mean of J0 over thin rings of diameters 1 - ratio to 1 + ratio, weighted by their length: 24-point Gauss-Legendre."""
    nodes, weights = roots_legendre(24) if ratio else (np.zeros(1), np.full(1, 2.0))
    total = np.zeros_like(np.asarray(x, dtype=float))
    for node, weight in zip(nodes, weights, strict=True):
        total = total + 0.5 * weight * (1.0 + ratio * node) * j0((1.0 + ratio * node) * x)
    return total


__all__ = ["DarkenedDisc", "GaussianDisc", "Point", "PowerLawDisc", "Ring", "UniformDisc"]
