"""What the array looks at: a star, a fixed direction, or its own lamp.

A target's uncertainty is that of its direction: as `Star` sees it, across right ascension (times cos dec) and declination.
"""

from __future__ import annotations

import warnings
from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import astropy.units as u
import erfa
import numpy as np
from astropy.coordinates import ICRS, SkyCoord, UnitSphericalRepresentation
from astropy.time import Time

from ..errors import InputError
from ..units import FloatArray, as_si, frozen_quantities
from ._places import check_epoch, held_place
from .stations import named

PARSEC = 1 * u.pc


@dataclass(frozen=True, kw_only=True)
class Star:
    """A star: its place at an epoch and, where known, its motion and distance.

    Parameters
    ----------
    name : str
    coordinates : SkyCoord
        One place, in any frame that astropy can turn into ICRS without knowing how the Earth is turned. Proper motion needs its epoch
        (``obstime``); a distance gives parallax.
    uncertainty : Quantity [angle]
        One sigma of the place: one number, or two (right ascension times cos dec, declination). Zero by default.
    proper_motion_uncertainty : Quantity [angle / time]
        The same of the proper motion; it grows with the time from the epoch. Zero by default.

    Raises
    ------
    InputError, UnitsError
        No name; not one SkyCoord with finite numbers, or one in a frame of the ground or of date (AltAz, CIRS, ...); a proper motion or
        its uncertainty without an epoch; a radial velocity without a proper motion; an uncertainty that is not an angle, is negative, or
        has another shape.

    Notes
    -----
    Motion is carried along a straight line in space to both ends of the times asked for (ERFA ``pmsafe``) and interpolated between them:
    even for 10 arcsec in a year, the error stays below 1e-12 rad over a year. Two stars are equal when all their numbers are.

    Examples
    --------
    >>> import astropy.units as u
    >>> Star.at(name="A", ra=60 * u.deg, dec=25 * u.deg, uncertainty=1 * u.mas).coordinates.to_string()
    '60 25'
    """

    name: str
    coordinates: SkyCoord
    uncertainty: u.Quantity = 0 * u.arcsec
    proper_motion_uncertainty: u.Quantity = 0 * u.arcsec / u.yr

    def __post_init__(self) -> None:
        named(self.name, "star")
        object.__setattr__(self, "coordinates", held_place(self.coordinates, self.name))
        _, growth = self._sigmas  # says now what is wrong with them
        for field in ("uncertainty", "proper_motion_uncertainty"):
            object.__setattr__(self, field, u.Quantity(getattr(self, field)))
        frozen_quantities(self)
        if self.coordinates.obstime is None and (self.moves or np.any(growth)):
            what = "proper motion" if self.moves else "proper_motion_uncertainty"
            raise InputError(
                f"star {self.name!r} has a {what} but no epoch; give obstime with its coordinates (epoch of Star.at), from which it counts"
            )

    def __eq__(self, other: object) -> bool:
        # SkyCoord refuses to compare a place that has an epoch with one that has none
        return isinstance(other, Star) and self._numbers == other._numbers

    __hash__ = None  # type: ignore[assignment]

    @cached_property
    def _numbers(self) -> tuple[Any, ...]:
        place = self.coordinates
        motion = place.data.differentials.get("s")
        speeds = () if motion is None else tuple(getattr(motion, name) for name in motion.components)
        epoch = None if place.obstime is None else (place.obstime.scale, place.obstime.jd1, place.obstime.jd2)
        sigmas = [tuple(sigma.ravel()) for sigma in self._sigmas]
        return (self.name, tuple(self._at_epoch.ravel()), speeds, epoch, *sigmas)

    @classmethod
    def at(
        cls,
        *,
        name: str,
        ra: Any,
        dec: Any,
        pm_ra_cosdec: Any = None,
        pm_dec: Any = None,
        parallax: Any = None,
        radial_velocity: Any = None,
        epoch: Time | None = None,
        uncertainty: Any = 0 * u.arcsec,
        proper_motion_uncertainty: Any = 0 * u.arcsec / u.yr,
    ) -> Star:
        """Return a star from the numbers of an ICRS catalogue.

        Raises
        ------
        InputError, UnitsError
            An angle without a unit, a declination beyond 90 deg, a parallax that is not positive, motion without an epoch, an epoch that
            is not a Time, or an array where one number is meant.
        """
        named(name, "star")
        right_ascension, declination = as_si(ra, u.rad, "ra", "deg"), as_si(dec, u.rad, "dec", "deg")
        if np.ndim(right_ascension) or np.ndim(declination):
            raise InputError(f"ra and dec of star {name!r} must be one number each")
        if abs(declination) > np.pi / 2:
            raise InputError(f"dec of star {name!r} must lie between -90 and 90 deg; got {dec}")
        known: dict[str, Any] = {}
        if epoch is not None:
            check_epoch(epoch, name)
            known["obstime"] = epoch
        if pm_ra_cosdec is not None or pm_dec is not None:
            still = 0 * u.mas / u.yr
            for field, value in (("pm_ra_cosdec", pm_ra_cosdec), ("pm_dec", pm_dec)):
                known[field] = _one(still if value is None else value, u.rad / u.s, field, name, "mas / yr") * u.rad / u.s
        if parallax is not None:
            angle = _one(parallax, u.arcsec, "parallax", name, "mas")
            if not angle > 0:
                raise InputError(f"parallax of star {name!r} must be above zero; got {parallax}; leave it out where it is not known")
            known["distance"] = PARSEC / angle
        if radial_velocity is not None:
            known["radial_velocity"] = _one(radial_velocity, u.m / u.s, "radial_velocity", name, "km / s") * u.m / u.s
        place = SkyCoord(ra=right_ascension * u.rad, dec=declination * u.rad, frame="icrs", **known)
        return cls(name=name, coordinates=place, uncertainty=uncertainty, proper_motion_uncertainty=proper_motion_uncertainty)

    @cached_property
    def moves(self) -> bool:
        """Whether the star has a proper motion."""
        return "s" in self.coordinates.data.differentials

    @cached_property
    def near(self) -> bool:
        """Whether its distance is known, so that it shows a parallax."""
        return not isinstance(self.coordinates.data, UnitSphericalRepresentation) and self.coordinates.distance.unit.is_equivalent(u.m)

    def positions_si(self, times: Time) -> FloatArray:
        """Return the barycentric direction (3, n) at `times`: unit vectors, times the distance in metres for a star with parallax."""
        if not self.moves:
            return np.broadcast_to(self._at_epoch, (3, times.size))
        days = (times.jd1 - times.jd1[0]) + (times.jd2 - times.jd2[0])
        first, last = int(np.argmin(days)), int(np.argmax(days))
        with warnings.catch_warnings():
            # without a parallax the motion is taken on a very distant sphere, as it should be
            warnings.filterwarnings("ignore", message=".*distance overridden", category=erfa.ErfaWarning)
            begin, end = (self._vector(self.coordinates.apply_space_motion(new_obstime=times[k])) for k in (first, last))
        span = days[last] - days[first]
        along = (days - days[first]) / span if span else np.zeros(times.size)
        moved = begin[:, None] + (end - begin)[:, None] * along
        return moved if self.near else moved / np.linalg.norm(moved, axis=0)

    @cached_property
    def _at_epoch(self) -> FloatArray:
        return self._vector(self.coordinates)[:, None]

    def _vector(self, place: SkyCoord) -> FloatArray:
        unit = UnitSphericalRepresentation(place.ra, place.dec).to_cartesian().xyz.value
        scale = place.distance.to_value(u.m) if self.near else 1.0
        return np.asarray(unit * scale, dtype=float)

    @cached_property
    def _sigmas(self) -> tuple[FloatArray, FloatArray]:
        name = f"of star {self.name!r}"
        place = _pair(self.uncertainty, u.rad, f"uncertainty {name}", "arcsec")
        motion = _pair(self.proper_motion_uncertainty, u.rad / u.s, f"proper_motion_uncertainty {name}", "mas / yr")
        return place[:, None], motion[:, None]

    def sigma_si(self, times: Time) -> FloatArray:
        """Return the one-sigma error (2, n) of the direction at `times` [rad]: across right ascension and declination."""
        sigma, growth = self._sigmas
        if not np.any(growth):
            return np.broadcast_to(sigma, (2, times.size))
        since = (times.tdb - self.coordinates.obstime.tdb).to_value(u.s)
        return np.asarray(np.hypot(sigma, growth * since))


@dataclass(frozen=True, kw_only=True)
class FixedDirection:
    """A direction that stands still over the ground, for example a beacon far away or a telescope parked.

    Parameters
    ----------
    name : str
    azimuth : Quantity [angle]
        From north through east.
    altitude : Quantity [angle]
    uncertainty : Quantity [angle]
        One sigma, across any direction. Zero by default.

    Raises
    ------
    InputError, UnitsError
        No name, not one angle each, an altitude beyond 90 deg, or a negative uncertainty.
    """

    name: str
    azimuth: u.Quantity
    altitude: u.Quantity
    uncertainty: u.Quantity = 0 * u.arcsec

    def __post_init__(self) -> None:
        named(self.name, "direction")
        frozen_quantities(self)
        for field in ("azimuth", "altitude", "uncertainty"):
            value = as_si(getattr(self, field), u.rad, f"{field} of direction {self.name!r}", "deg")
            if np.ndim(value):
                raise InputError(f"{field} of direction {self.name!r} must be one number; got an array of shape {np.shape(value)}")
        if abs(self.horizontal_si[1]) > np.pi / 2:
            raise InputError(f"altitude of direction {self.name!r} must lie between -90 and 90 deg; got {self.altitude}")
        _pair(self.uncertainty, u.rad, f"uncertainty of direction {self.name!r}")

    @property
    def horizontal_si(self) -> tuple[float, float]:
        """Azimuth and altitude [rad]."""
        return as_si(self.azimuth, u.rad, "azimuth"), as_si(self.altitude, u.rad, "altitude")

    def sigma_si(self, times: Time) -> FloatArray:
        """Return the one-sigma error (2, n) of the direction [rad]."""
        return np.full((2, times.size), as_si(self.uncertainty, u.rad, "uncertainty"))


@dataclass(frozen=True, kw_only=True)
class LampTarget:
    """The array's own lamp, whose light enters behind the telescopes: no sky, no altitude, and no geometric path difference."""

    name: str = "lamp"

    def __post_init__(self) -> None:
        named(self.name, "lamp")

    def sigma_si(self, times: Time) -> FloatArray:
        """Return zeros (2, n): the lamp has no direction."""
        return np.zeros((2, times.size))


TARGET_KINDS = (Star, FixedDirection, LampTarget)


def as_targets(targets: Any) -> tuple[Any, ...]:
    """Return one target or any number of them as a tuple; one SkyCoord is taken as a star named ``target``.

    Raises
    ------
    InputError
        No target, or something else.
    """
    if isinstance(targets, SkyCoord) and targets.isscalar:
        return (Star(name="target", coordinates=targets),)
    several = isinstance(targets, Iterable) and not isinstance(targets, (str, SkyCoord))
    chosen = tuple(targets) if several else (targets,)
    kinds = ", ".join(kind.__name__ for kind in TARGET_KINDS)
    if not chosen:
        raise InputError(f"no targets: targets must be one or more of {kinds}; give at least one")
    for target in chosen:
        if isinstance(target, SkyCoord):
            raise InputError(
                f"a target must be one of {kinds}; got a SkyCoord: give each place a name, as in "
                '[Star(name=f"target {k}", coordinates=place) for k, place in enumerate(places, 1)]'
            )
        if not isinstance(target, TARGET_KINDS):
            raise InputError(f"a target must be one of {kinds}; got {type(target).__name__}")
    return chosen


def stars_as_icrs(stars: list[Star], times: Time) -> ICRS:
    """Return the stars at the times as one ICRS frame (n_stars, n_times); all with distances, or all without.

    The frame is (n_stars, 1) where none of them moves.
    """
    at = times if any(star.moves for star in stars) else times[:1]
    vectors = np.stack([star.positions_si(at) for star in stars], axis=1)
    longitude, latitude = np.arctan2(vectors[1], vectors[0]), np.arctan2(vectors[2], np.hypot(vectors[0], vectors[1]))
    if not stars[0].near:
        return ICRS(UnitSphericalRepresentation(longitude * u.rad, latitude * u.rad, copy=False))
    return ICRS(ra=longitude * u.rad, dec=latitude * u.rad, distance=np.linalg.norm(vectors, axis=0) * u.m)


def _one(value: Any, unit: u.UnitBase, field: str, name: str, example: str) -> float:
    result = as_si(value, unit, field, example)
    if np.ndim(result):
        raise InputError(f"{field} of star {name!r} must be one number; got an array of shape {np.shape(result)}")
    return float(result)


def _pair(value: Any, unit: u.UnitBase, name: str, example: str | None = None) -> FloatArray:
    result = np.asarray(as_si(value, unit, name, example))
    if result.shape not in ((), (2,)):
        raise InputError(f"{name} must be one number or two; got an array of shape {result.shape}")
    if np.any(result < 0):
        raise InputError(f"{name} must not be negative; got {value}")
    return np.broadcast_to(result, (2,)).astype(float)
