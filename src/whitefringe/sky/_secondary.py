"""Uncertainties of the projected baseline, of the rate and of the altitude.

An error of the target's place by e towards the east and n towards the north on the sky, and of UT1 by t, change hour angle and declination
by dH = omega t - e / cos d and dd = n; with q = w cos d - v sin d = X cos H - Y sin H,

    du = q dH,   dv = u sin d dH - w dd,   d(rate) = omega (u sin d dd - q cos d dH),
    d(altitude) = [z_e (e - cos d omega t) + z_n n] / cos a,

where z_e, z_n are the zenith's components towards the east and the north on the sky and a is the altitude (Thompson, Moran & Swenson, sec.
4.1, differentiated). An error of the pole counts like one of the place.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from ..units import FloatArray
from ._geometry import EARTH_ROTATION, Directions


class Secondary(NamedTuple):
    """One sigma of u and v [m], of the rate [m/s] (target, baseline, time), and of the altitude [rad] (target, time)."""

    u: FloatArray
    v: FloatArray
    rate: FloatArray
    altitude: FloatArray


def secondary_si(
    directions: Directions, uvw: tuple[FloatArray, ...], covariances: FloatArray, place: FloatArray, ut1: FloatArray, pole: FloatArray
) -> Secondary:
    """Return the uncertainties.

    Parameters
    ----------
    directions : Directions
    uvw : tuple of ndarray (target, baseline, time) [m]
    covariances : ndarray (baseline, 3, 3) [m^2]
        Of the baseline vector in X, Y, Z.
    place : ndarray (target, 2, time) [rad]
        Sigma of the place towards east and north on the sky.
    ut1 : ndarray (time,) [s]
    pole : ndarray (time,) [rad]
    """
    u, v, w = uvw
    east, north = directions.east_on_sky, directions.north_on_sky
    sin_d, cos_d = directions.unit[:, None, 2], directions.cos_declination[:, None, :]
    turns = directions.turning[:, :, None]
    towards_east = np.hypot(place[:, 0], pole * np.sqrt(1 - north[:, 2] ** 2))[:, None, :]
    towards_north = np.hypot(place[:, 1], pole)[:, None, :]
    late = turns * EARTH_ROTATION * ut1
    # a lamp has no direction, and straight at the pole no hour angle
    hour = np.hypot(late, np.divide(towards_east, cos_d, out=np.zeros(np.broadcast(towards_east, cos_d).shape), where=cos_d > 0))
    along = w * cos_d - v * sin_d
    stations_u = np.einsum("bij,tin,tjn->tbn", covariances, east, east)
    stations_v = np.einsum("bij,tin,tjn->tbn", covariances, north, north)
    omega = turns * EARTH_ROTATION
    # the rate's own hour-angle term is q cos d dH, in which the cosines of an error towards the east cancel
    turned = along * np.hypot(late * cos_d, towards_east)
    rate = omega * np.sqrt(turned**2 + (u * sin_d * towards_north) ** 2 + cos_d**2 * stations_u)
    return Secondary(
        u=np.sqrt((along * hour) ** 2 + stations_u),
        v=np.sqrt((u * sin_d * hour) ** 2 + (w * towards_north) ** 2 + stations_v),
        rate=rate,
        altitude=_altitude(directions, towards_east[:, 0], towards_north[:, 0], late[:, 0] * cos_d[:, 0]),
    )


def _altitude(directions: Directions, east: FloatArray, north: FloatArray, late: FloatArray) -> FloatArray:
    zenith = np.array([np.cos(directions.latitude), 0.0, np.sin(directions.latitude)])
    along_east, along_north = (np.einsum("i,tin->tn", zenith, way) for way in (directions.east_on_sky, directions.north_on_sky))
    with np.errstate(divide="ignore", invalid="ignore"):
        sigma = np.sqrt((along_east * np.hypot(east, late)) ** 2 + (along_north * north) ** 2) / np.cos(directions.altitude)
    return np.asarray(sigma)
