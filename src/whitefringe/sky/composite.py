"""Objects made of objects: double stars, groups, a background; and the tuple of all object shapes."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property
from typing import Any, ClassVar

import numpy as np
from astropy import units

from ..errors import InputError
from ..parameters import parameter
from ..units import FloatArray, as_si, frozen_quantities, number, read_only
from ._object import ComplexArray, ObjectShape, SkyObject, angle_si, check_object
from .images import Picture
from .visibility import DarkenedDisc, GaussianDisc, Point, PowerLawDisc, Ring, UniformDisc


@dataclass(frozen=True, kw_only=True)
class Binary(ObjectShape):
    """Two objects, of which each may be of any shape.

    V = [V1 + r V2 exp(-2 pi i (u alpha + v delta) / lambda)] / (1 + r), alpha = separation sin(position angle), delta = separation
    cos(position angle), r the flux ratio.

    Parameters
    ----------
    first, second : object shapes, optional
        Points by default. The phase centre of the first is that of the whole.
    flux_ratio : float
        Flux of the second over that of the first in the detected band, zero or more.
    separation : Quantity [angle]
        From the first to the second, zero or more.
    position_angle : Quantity [angle]
        Of the second seen from the first, from north through east.

    Raises
    ------
    InputError, UnitsError

    Notes
    -----
    The phase is that about the first star, not about the photocentre. One flux ratio holds for all wavelengths.

    References
    ----------
    Hanbury Brown, Davis, Lake & Thompson 1974, doi:10.1093/mnras/167.3.475 (from memory); the formula is the shift theorem.

    Examples
    --------
    >>> import astropy.units as u
    >>> pair = Binary(flux_ratio=0.5, separation=10 * u.mas, position_angle=90 * u.deg)
    >>> print(f"{abs(pair.visibility(100 * u.m, 0 * u.m, 1.65 * u.um)) ** 2:.9f}")
    0.966981174
    """

    shape: ClassVar[str] = "binary"
    first: SkyObject = Point()
    second: SkyObject = Point()
    flux_ratio: float = parameter("flux, second over first", units.dimensionless_unscaled, low=0.0, high=1.0, step=0.01, start=0.5)
    separation: units.Quantity = parameter("separation", units.mas, low=0.0, high=100.0, step=0.1, start=5.0)
    position_angle: units.Quantity = parameter("position angle (north to east)", units.deg, low=0.0, high=360.0, step=1.0, start=45.0)

    def __post_init__(self) -> None:
        frozen_quantities(self)
        check_object(self.first, "first")
        check_object(self.second, "second")
        object.__setattr__(self, "flux_ratio", number(self.flux_ratio, "flux_ratio", low=0.0))
        _ = self.offset_si

    @cached_property
    def offset_si(self) -> tuple[float, float]:
        """Place of the second seen from the first: east and north [rad]."""
        angle = as_si(self.position_angle, units.rad, "position_angle", "deg")
        if np.ndim(angle) != 0:
            raise InputError(f"position_angle must be one angle; got an array of shape {np.shape(angle)}")
        separation = angle_si(self.separation, "separation")
        return separation * float(np.sin(angle)), separation * float(np.cos(angle))

    def visibility_si(self, u: Any, v: Any) -> ComplexArray:
        """Complex visibility at spatial frequencies towards east and north [cycles/rad]."""
        second = self.second.visibility_si(u, v) * _turned(u, v, *self.offset_si)
        return np.asarray((self.first.visibility_si(u, v) + self.flux_ratio * second) / (1.0 + self.flux_ratio))


@dataclass(frozen=True, kw_only=True)
class WithBackground(ObjectShape):
    """An object on a background that every baseline resolves: V = (1 - fraction) V of the object.

    Parameters
    ----------
    object : object shape, optional
        A point by default.
    fraction : float
        The background's part of all the detected light, from 0 to 1.

    Raises
    ------
    InputError, UnitsError

    Notes
    -----
    At zero baseline V is 1 - fraction, the limit of baselines that are short but long enough to resolve the background.

    References
    ----------
    Derived: the transform is linear, and that of a wide background vanishes on every baseline.

    Examples
    --------
    >>> import astropy.units as u
    >>> star = WithBackground(object=UniformDisc(diameter=2.5 * u.mas), fraction=0.2)
    >>> print(star.visibility(200 * u.m, 0 * u.m, 1.65 * u.um).round(6))
    (-0.09021+0j)
    """

    shape: ClassVar[str] = "with-background"
    object: SkyObject = Point()
    fraction: float = parameter("background's part of the light", units.dimensionless_unscaled, low=0.0, high=1.0, step=0.01, start=0.1)

    def __post_init__(self) -> None:
        check_object(self.object, "object")
        object.__setattr__(self, "fraction", number(self.fraction, "fraction", low=0.0, high=1.0))

    def visibility_si(self, u: Any, v: Any) -> ComplexArray:
        """Complex visibility at spatial frequencies towards east and north [cycles/rad]."""
        return np.asarray((1.0 - self.fraction) * self.object.visibility_si(u, v))


@dataclass(frozen=True, kw_only=True, eq=False)
class Group(ObjectShape):
    """Any number of objects, each with its flux and place: V = sum F_k V_k exp(-2 pi i (u alpha_k + v delta_k) / lambda) / sum F_k.

    Parameters
    ----------
    objects : iterable of object shapes
    fluxes : iterable of float, optional
        One per object, on any common scale; 1 by default.
    east, north : Quantity [angle], one value per object, optional
        Place of each object's phase centre, seen from that of the group; zero by default.

    Raises
    ------
    InputError, UnitsError

    References
    ----------
    Born & Wolf, Principles of Optics, 7th ed., sec. 10.4, and the shift theorem.

    Examples
    --------
    >>> import astropy.units as u
    >>> group = Group(objects=[Point(), GaussianDisc(fwhm=2 * u.mas)], fluxes=[2, 1], east=[0, 3] * u.mas)
    >>> print(abs(group.visibility(0 * u.m, 100 * u.m, 2.2 * u.um)).round(6))
    0.833612
    """

    shape: ClassVar[str] = "group"
    objects: tuple[SkyObject, ...]
    fluxes: tuple[float, ...] | None = None
    east: units.Quantity | None = None
    north: units.Quantity | None = None

    def __post_init__(self) -> None:
        members = tuple(self.objects) if isinstance(self.objects, Iterable) else ()
        if not members:
            raise InputError(
                "objects must be one or more objects such as sky.UniformDisc(diameter=1 * u.mas), in a list or tuple; got none"
            )
        for position, item in enumerate(members):
            check_object(item, f"objects: number {position + 1}")
        given = (1.0,) * len(members) if self.fluxes is None else self.fluxes
        fluxes = tuple(number(flux, "fluxes", low=0.0) for flux in np.atleast_1d(given))
        if len(fluxes) != len(members):
            raise InputError(f"fluxes must be one per object; got {len(fluxes)} for {len(members)} objects")
        if not any(fluxes):
            raise InputError("fluxes must not all be zero: there would be no light")
        object.__setattr__(self, "objects", members)
        object.__setattr__(self, "fluxes", fluxes)
        for name in ("east", "north"):
            object.__setattr__(self, name, _places(getattr(self, name), name, len(members)))

    @cached_property
    def _members(self) -> tuple[tuple[SkyObject, float, float, float], ...]:
        """Each object with its part of the light and its place, east and north [rad]."""
        fluxes = np.asarray(self.fluxes) / np.max(np.asarray(self.fluxes))
        places = [as_si(value, units.rad, name).tolist() for value, name in ((self.east, "east"), (self.north, "north"))]
        return tuple(zip(self.objects, (fluxes / np.sum(fluxes)).tolist(), *places, strict=True))

    def visibility_si(self, u: Any, v: Any) -> ComplexArray:
        """Complex visibility at spatial frequencies towards east and north [cycles/rad]."""
        parts = (part * item.visibility_si(u, v) * _turned(u, v, east, north) for item, part, east, north in self._members)
        return np.asarray(sum(parts))


def _places(value: Any, name: str, count: int) -> units.Quantity:
    """Return read-only angles, one per object."""
    given = np.zeros(count) * units.mas if value is None else value
    as_si(given, units.rad, name, "mas")
    places = units.Quantity(given)
    if places.shape != (count,):
        raise InputError(f"{name} must have one angle per object; got shape {places.shape} for {count} objects")
    return units.Quantity(read_only(places.value), places.unit, copy=False)


def _turned(u: Any, v: Any, east: float, north: float) -> ComplexArray:
    """Phase factor of a place east and north [rad] of the phase centre."""
    turns: FloatArray = np.asarray(u) * east + np.asarray(v) * north
    return np.asarray(np.exp(-2j * np.pi * turns))


OBJECT_SHAPES = (Point, UniformDisc, DarkenedDisc, PowerLawDisc, GaussianDisc, Ring, Binary, WithBackground, Group, Picture)
"""The family of object shapes."""

__all__ = ["OBJECT_SHAPES", "Binary", "Group", "WithBackground"]
