"""Directions in the sky as the array sees them, and the frames they are written in.

Two local frames are used, both right-handed and both fixed to the ground at the array's location: east, north, up; and the equatorial
one of Thompson, Moran & Swenson: X towards the meridian on the equator (H = 0, dec = 0), Y towards the east (H = -6 h), Z towards the pole.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import astropy.units as u
import numpy as np
from astropy.coordinates import AltAz, EarthLocation
from astropy.coordinates.erfa_astrom import ErfaAstrom, ErfaAstromInterpolator, erfa_astrom
from astropy.time import Time

from ..units import FloatArray
from .targets import FixedDirection, Star, stars_as_icrs

EARTH_ROTATION = 2 * np.pi * 1.00273781191135448 / 86400
"""Rate of the Earth rotation angle [rad per second of UT1] (IERS Conventions 2010, eq. 5.15)."""
NODES = 300.0
"""Spacing [s] of the nodes between which the motion of the Earth's centre and axis is interpolated."""


def equatorial_from_enu(latitude: float) -> FloatArray:
    """Return the rotation (3, 3) from east, north, up to X, Y, Z at the geodetic `latitude` [rad]."""
    sine, cosine = np.sin(latitude), np.cos(latitude)
    return np.array([[0.0, -sine, cosine], [1.0, 0.0, 0.0], [0.0, cosine, sine]])


@dataclass(frozen=True, kw_only=True, eq=False)
class Directions:
    """Observed directions of targets at times, without refraction.

    Parameters
    ----------
    unit : ndarray (target, 3, time)
        X, Y, Z of the unit vector towards the target; zero for a lamp, which has no direction.
    turning : ndarray (target, 1)
        1 for what turns with the sky, 0 for what stands still.
    latitude : float
        Geodetic latitude of the location [rad].
    """

    unit: FloatArray
    turning: FloatArray
    latitude: float

    @cached_property
    def cos_declination(self) -> FloatArray:
        """Cosine of the declination (target, time)."""
        return np.asarray(np.sqrt(self.unit[:, 0] ** 2 + self.unit[:, 1] ** 2))

    @cached_property
    def _hour(self) -> tuple[FloatArray, FloatArray]:
        rho = self.cos_declination
        safe = np.where(rho > 0, rho, 1.0)
        # straight at the pole the hour angle is taken as zero
        return -self.unit[:, 1] / safe, np.where(rho > 0, self.unit[:, 0] / safe, self._lit)

    @cached_property
    def _lit(self) -> FloatArray:
        return np.asarray(np.any(self.unit != 0, axis=1), dtype=float)

    @cached_property
    def east_on_sky(self) -> FloatArray:
        """Unit vector u on the sky towards the east (target, 3, time): (sin H, cos H, 0)."""
        sine, cosine = self._hour
        return np.stack([sine, cosine, np.zeros_like(sine)], axis=1)

    @cached_property
    def north_on_sky(self) -> FloatArray:
        """Unit vector v on the sky towards the north (target, 3, time): (-sin d cos H, sin d sin H, cos d)."""
        sine, cosine = self._hour
        sin_d = self.unit[:, 2]
        return np.stack([-sin_d * cosine, sin_d * sine, self.cos_declination], axis=1)

    @cached_property
    def hour_angle(self) -> FloatArray:
        """Hour angle [rad], west positive (target, time)."""
        return self._seen(np.arctan2(-self.unit[:, 1], self.unit[:, 0]))

    @cached_property
    def declination(self) -> FloatArray:
        """Observed declination [rad]."""
        return self._seen(np.arctan2(self.unit[:, 2], self.cos_declination))

    @cached_property
    def _enu(self) -> FloatArray:
        return np.asarray(np.matmul(equatorial_from_enu(self.latitude).T, self.unit))

    @cached_property
    def altitude(self) -> FloatArray:
        """Altitude [rad], without refraction."""
        east, north, up = self._enu[:, 0], self._enu[:, 1], self._enu[:, 2]
        return self._seen(np.arctan2(up, np.hypot(east, north)))

    @cached_property
    def azimuth(self) -> FloatArray:
        """Azimuth [rad], from north through east, 0 to 2 pi."""
        return self._seen(np.arctan2(self._enu[:, 0], self._enu[:, 1]) % (2 * np.pi))

    @cached_property
    def parallactic_angle(self) -> FloatArray:
        """Angle at the target from the pole to the zenith [rad], positive west of the meridian."""
        sine, cosine = self._hour
        toward = np.sin(self.latitude) * self.cos_declination - np.cos(self.latitude) * self.unit[:, 2] * cosine
        return self._seen(np.arctan2(np.cos(self.latitude) * sine, toward))

    def _seen(self, angle: FloatArray) -> FloatArray:
        return np.where(self._lit > 0, angle, np.nan)


def directions(location: EarthLocation, targets: Sequence[Any], utc: Time) -> Directions:
    """Return where the targets are seen from `location` at `utc`, with the Earth orientation that astropy has at the moment."""
    latitude = float(location.geodetic.lat.to_value(u.rad))
    enu = np.zeros((len(targets), 3, utc.size))
    for near in (False, True):
        chosen = [k for k, target in enumerate(targets) if isinstance(target, Star) and target.near is near]
        if chosen:
            icrs = stars_as_icrs([targets[k] for k in chosen], utc)
            # no pressure, so no refraction: between parallel layers of air it bends both arms' light alike, and the path difference
            # above the air, which the arms must make up, is that of the direction outside it
            with erfa_astrom.set(_astrometry(utc)):
                seen = icrs.transform_to(AltAz(obstime=utc[np.newaxis], location=location, pressure=0 * u.hPa))
            enu[chosen] = enu_from_horizontal(seen.data.lon.to_value(u.rad), seen.data.lat.to_value(u.rad))
    for k, target in enumerate(targets):
        if isinstance(target, FixedDirection):
            enu[k] = enu_from_horizontal(*(np.array([[angle]]) for angle in target.horizontal_si))[0]
    turning = np.array([[1.0 if isinstance(target, Star) else 0.0] for target in targets])
    unit = np.matmul(equatorial_from_enu(latitude), enu)
    unit.setflags(write=False)
    return Directions(unit=unit, turning=turning, latitude=latitude)


def _astrometry(utc: Time) -> ErfaAstrom:
    """Return how astropy gets the Earth's motion and axis: at each time, or interpolated where the times stand close together.

    Between nodes 300 s apart both run so straight that the interpolation adds less than 1e-12 rad; the rotation is always exact.
    """
    scaled = utc.mjd * (86400 / NODES)
    nodes = np.unique(np.concatenate([np.floor(scaled), np.ceil(scaled)]))
    return ErfaAstromInterpolator(NODES * u.s) if nodes.size < utc.size else ErfaAstrom()


def enu_from_horizontal(azimuth: FloatArray, altitude: FloatArray) -> FloatArray:
    """Return unit vectors (target, 3, time) in east, north, up from azimuth and altitude (target, time) [rad]."""
    level = np.cos(altitude)
    return np.stack([level * np.sin(azimuth), level * np.cos(azimuth), np.sin(altitude)], axis=1)
