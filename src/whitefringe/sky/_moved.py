"""A star or a station put elsewhere, to see what would be: everything else that is known of it is kept."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import astropy.units as u
import numpy as np
from astropy.coordinates import SkyCoord, SphericalCosLatDifferential, SphericalRepresentation

from ..errors import InputError
from ..units import FloatArray, as_si, positive_si
from .stations import Array, Baseline, Station, enu_from_itrs
from .targets import Star

MOST_LENGTH = 100e3
"""Longest baseline [m] to which a station is moved: beyond it the ground is not flat enough for east and north."""


def moved_star(star: Any, ra: Any = None, dec: Any = None) -> Star:
    """Return the star at another place (at its epoch), with its motion, distance and uncertainties."""
    if not isinstance(star, Star):
        raise InputError(f"only a star can be moved; {star.name!r} is a {type(star).__name__}: choose a star as the target")
    data = star.coordinates.data
    if not hasattr(data, "lon"):
        data = data.represent_as(SphericalRepresentation, SphericalCosLatDifferential if star.moves else None)
    longitude = data.lon if ra is None else _one(ra, "ra")
    latitude = data.lat if dec is None else _one(dec, "dec")
    if abs(latitude.to_value(u.deg)) > 90:
        raise InputError(f"dec of star {star.name!r} must lie between -90 and 90 deg; got {dec}: give one in that range")
    far = (data.distance,) if star.near else ()
    place = type(data)(longitude, latitude, *far, differentials=data.differentials)
    return replace(star, coordinates=SkyCoord(star.coordinates.frame.realize_frame(place), obstime=star.coordinates.obstime))


def moved_station(array: Array, baseline: Baseline, length: Any = None, azimuth: Any = None) -> Array:
    """Return the array with the second station of a baseline elsewhere about the first, as high as it was, with its uncertainty."""
    over_ground, direction = polar_si(baseline)
    if length is not None:
        over_ground = float(positive_si(length, u.m, "length"))
        if over_ground > MOST_LENGTH:
            raise InputError(f"length must be at most {MOST_LENGTH / 1000:g} km, as far as the ground is flat enough; got {length}")
    if azimuth is not None:
        direction = float(_one(azimuth, "azimuth").to_value(u.rad))
    east, north, _ = baseline.enu_si
    shift = np.array([over_ground * np.sin(direction) - east, over_ground * np.cos(direction) - north, 0.0])
    stations = [_shifted(item, array, shift) if item.name == baseline.second else item for item in array.stations]
    return replace(array, stations=stations)


def polar_si(baseline: Baseline) -> tuple[float, float]:
    """Length over ground [m], and azimuth [rad] of the second station seen from the first, from north through east."""
    east, north, _ = baseline.enu_si
    return float(np.hypot(east, north)), float(np.arctan2(east, north))


def _shifted(station: Any, array: Array, shift: FloatArray) -> Any:
    """Move a station by east, north, up [m], in the coordinates that it is given in."""
    if isinstance(station, Station):
        names, step = ("east", "north", "up"), shift
    else:
        names, step = ("x", "y", "z"), enu_from_itrs(array.location).T @ shift
    # adding to what is stated keeps its digits: the height does not change at all
    moved = {name: getattr(station, name) + by * u.m for name, by in zip(names, step, strict=True) if by != 0}
    return replace(station, **moved)


def _one(value: Any, name: str) -> u.Quantity:
    """Refuse what is not one angle; the unit is kept, and with it the digits."""
    angle = as_si(value, u.rad, name, "deg")
    if np.ndim(angle) != 0:
        raise InputError(f"{name} must be one angle; got an array of shape {np.shape(angle)}")
    return u.Quantity(value)
