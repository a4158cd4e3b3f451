"""The path difference from hour angle and declination, in closed form."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from astropy import units

from ..errors import InputError
from ..units import FloatArray, as_si
from ._geometry import EARTH_ROTATION, equatorial_from_enu
from .orientation import one_si


@dataclass(frozen=True, kw_only=True, eq=False)
class HourAngleDelays:
    """Projected baseline `u`, `v`, `w` [m], and how fast w changes: `rate` [m/s] and `acceleration` [m/s^2]."""

    u: units.Quantity
    v: units.Quantity
    w: units.Quantity
    rate: units.Quantity
    acceleration: units.Quantity


def hour_angle_delays(east: Any, north: Any, up: Any, *, latitude: Any, hour_angle: Any, declination: Any) -> HourAngleDelays:
    """Geometric path difference and projected baseline from hour angle and declination.

    X = -N sin(phi) + U cos(phi), Y = E, Z = N cos(phi) + U sin(phi);
    u = X sin H + Y cos H, v = -X sin d cos H + Y sin d sin H + Z cos d, w = X cos d cos H - Y cos d sin H + Z sin d;
    dw/dt = -omega u cos d, d2w/dt2 = -omega^2 cos d (X cos H - Y sin H).

    Parameters
    ----------
    east, north, up : Quantity [m]
        Baseline, station 2 minus station 1; they and the two angles broadcast.
    latitude : Quantity [angle]
        Geodetic.
    hour_angle, declination : Quantity [angle]
        Of the observed (or, to 0.1 mm in 100 m, the intermediate) place; hour angle positive in the west.

    Returns
    -------
    HourAngleDelays

    Raises
    ------
    UnitsError, InputError
        A unit is missing or wrong, or a declination or latitude lies beyond 90 deg.

    Notes
    -----
    w is positive where station 2 is nearer the object. omega is the rate of the Earth rotation angle per second of UT1.

    References
    ----------
    Thompson, Moran & Swenson, Interferometry and Synthesis in Radio Astronomy, 3rd ed. (2017), sec. 4.1, doi:10.1007/978-3-319-44431-4
    (from memory, derived anew).

    Examples
    --------
    >>> import astropy.units as u
    >>> angles = {"latitude": 35 * u.deg, "hour_angle": 25.830741895097194 * u.deg, "declination": 25 * u.deg}
    >>> print(hour_angle_delays(80 * u.m, 60 * u.m, 0.5 * u.m, **angles).w.round(6))
    -38.438496 m
    """
    phi, dec = one_si(latitude, units.rad, "latitude", "deg"), as_si(declination, units.rad, "declination", "deg")
    for name, angle, given in (("latitude", phi, latitude), ("declination", dec, declination)):
        if np.any(np.abs(angle) > np.pi / 2):
            raise InputError(f"{name} must lie between -90 and 90 deg; got {given}")
    E, N, U = (as_si(value, units.m, name) for value, name in ((east, "east"), (north, "north"), (up, "up")))
    result = hour_angle_delays_si(E, N, U, phi, as_si(hour_angle, units.rad, "hour_angle", "deg"), dec)
    dimensions = (units.m, units.m, units.m, units.m / units.s, units.m / units.s**2)
    names = ("u", "v", "w", "rate", "acceleration")
    return HourAngleDelays(**{name: value * unit for name, value, unit in zip(names, result, dimensions, strict=True)})


def hour_angle_delays_si(east: Any, north: Any, up: Any, latitude: float, hour_angle: Any, declination: Any) -> tuple[FloatArray, ...]:
    """Twin of `hour_angle_delays`: metres and radians in; u, v, w, rate, acceleration out, in m, m/s and m/s^2."""
    X, Y, Z = (row[0] * east + row[1] * north + row[2] * up for row in equatorial_from_enu(latitude))
    sin_h, cos_h, sin_d, cos_d = np.sin(hour_angle), np.cos(hour_angle), np.sin(declination), np.cos(declination)
    across, along = X * sin_h + Y * cos_h, X * cos_h - Y * sin_h
    return (
        across,
        Z * cos_d - along * sin_d,
        along * cos_d + Z * sin_d,
        -EARTH_ROTATION * across * cos_d,
        -(EARTH_ROTATION**2) * cos_d * along,
    )
