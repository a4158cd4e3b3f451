"""A star's place as it is held: one ICRS place of the caller's SkyCoord, copied, checked, with its epoch in a scale of even days."""

from __future__ import annotations

from typing import Any

import numpy as np
from astropy.coordinates import CIRS, ITRS, TEME, TETE, AltAz, HADec, SkyCoord
from astropy.time import Time

from ..errors import InputError
from .orientation import EarthOrientation, as_utc

OF_THE_GROUND = (AltAz, HADec, ITRS, CIRS, TETE, TEME)
"""Frames that turn with the Earth or count from its pole of date: bringing a star to ICRS from there needs the Earth orientation."""

SPEEDS = {"d_lon_coslat": "pm_ra_cosdec", "d_lat": "pm_dec", "d_distance": "radial_velocity"}
"""Components of a motion, as a SkyCoord in ICRS calls them."""


def held_place(coordinates: Any, name: str) -> SkyCoord:
    """Return the place in ICRS, or say why it cannot be used."""
    if not isinstance(coordinates, SkyCoord) or not coordinates.isscalar:
        got = f"{coordinates.size} places" if isinstance(coordinates, SkyCoord) else type(coordinates).__name__
        raise InputError(f"coordinates of star {name!r} must be one astropy SkyCoord; got {got}")
    frame = coordinates.frame
    if isinstance(frame, OF_THE_GROUND):
        advice = "give its ICRS place, or that in another frame without an observer"
        if isinstance(frame, (AltAz, HADec)):
            advice += "; a direction that stands still over the ground is a FixedDirection"
        raise InputError(
            f"coordinates of star {name!r} are in the frame {frame.name}, which needs the Earth orientation of its time: {advice}"
        )
    place = coordinates.copy() if frame.name == "icrs" else _as_icrs(coordinates, name)
    _check_numbers(place, name)
    if place.obstime is None:
        return place
    epoch = _epoch(place.obstime, name)
    # building a SkyCoord anew costs last digits
    return place if epoch is place.obstime else SkyCoord(place.frame, obstime=epoch)


def _as_icrs(coordinates: SkyCoord, name: str) -> SkyCoord:
    epoch = coordinates.obstime
    if epoch is not None:
        check_epoch(epoch, name)
    try:
        # nothing is fetched: the packaged table and the built-in ephemeris serve frames that have a time
        with EarthOrientation.packaged().applied(Time("J2000") if epoch is None else epoch):
            return coordinates.icrs
    except (TypeError, ValueError, IndexError) as error:
        why = " ".join(str(error).split())
        raise InputError(f"coordinates of star {name!r} cannot be turned into ICRS ({why}); give them in ICRS") from None


def check_epoch(epoch: Any, name: str) -> None:
    """Refuse an epoch that is not one Time."""
    if not isinstance(epoch, Time) or epoch.size != 1 or epoch.ndim:
        raise InputError(f'epoch of star {name!r} must be one astropy Time, for example Time("J2016.0"); got {epoch!r}')


def _epoch(epoch: Time, name: str) -> Time:
    check_epoch(epoch, name)
    try:
        utc = as_utc(epoch)
    except InputError as error:
        raise InputError(f"epoch of star {name!r}: {error}") from None
    # other scales need no table; UT1 is brought to UTC with the packaged one, which covers all epochs and not just the night
    return utc[0] if epoch.scale == "ut1" else epoch


def _check_numbers(place: SkyCoord, name: str) -> None:
    numbers = {"ra": place.ra, "dec": place.dec, "distance": place.distance}
    motion = place.data.differentials.get("s")
    speeds = {} if motion is None else {SPEEDS.get(item, item): getattr(motion, item) for item in motion.components}
    for field, value in (numbers | speeds).items():
        if not np.all(np.isfinite(np.ma.filled(np.ma.asarray(value.value, dtype=float), np.nan))):
            raise InputError(f"{field} of star {name!r} must be finite; got {value}")
    if not place.distance.value > 0:
        raise InputError(f"distance of star {name!r} must be above zero; got {place.distance}; leave it out where it is not known")
    if motion is not None and set(speeds) == {"radial_velocity"}:
        raise InputError(
            f"star {name!r} has a radial velocity but no proper motion, without which it has no effect: give pm_ra_cosdec and pm_dec "
            "(0 mas / yr where they are zero) and an epoch, or leave the radial velocity out"
        )
