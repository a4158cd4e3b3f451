"""Which way is north: the pole of date, from which u, v and hour angle count, and the ICRS pole, from which catalogues count."""

from __future__ import annotations

from typing import Any

import erfa
import numpy as np
from astropy.time import Time

from ..units import FloatArray
from .orientation import quiet

NODE = 0.125
"""Days between the nodes at which the Earth's axis and motion are computed; in between they are taken to change evenly."""

AU_PER_DAY = 1 / 173.1446326846693
"""One astronomical unit per day over the speed of light."""


def earth_si(utc: Time) -> FloatArray:
    """Return the celestial intermediate pole in the ICRS and the Earth's velocity over c, (6, n).

    IAU 2006/2000A (IERS Conventions 2010, sec. 5.4.4) and ERFA's `epv00`.
    """
    with quiet():
        tt = utc.tt
    days = tt.jd1 - tt.jd1[0] + (tt.jd2 - tt.jd2[0])
    nodes = np.linspace(days.min(), days.max(), int(np.ceil(np.ptp(days) / NODE)) + 1)
    nodes = days if nodes.size >= days.size else nodes
    at = (np.full(nodes.size, tt.jd1[0]), tt.jd2[0] + nodes)
    with quiet():
        x, y, _ = erfa.xys06a(*at)
        velocity = erfa.epv00(*at)[1]["v"] * AU_PER_DAY
    rows = np.array([x, y, np.sqrt(1 - x**2 - y**2), *velocity.T])
    return rows if nodes is days else np.array([np.interp(days, nodes, row) for row in rows])


def north_angle_si(place: FloatArray, earth: FloatArray) -> FloatArray:
    """Position angle [rad], from ICRS north through east, of the way to the pole of date, at places (3, n) in the ICRS.

    Aberration moves a place along a great circle and keeps the directions about it to that circle: so ICRS north is carried along it.
    """
    pole, velocity = earth[:3], earth[3:]
    s: Any = place / np.linalg.norm(place, axis=0)
    seen = s + velocity
    seen = seen / np.linalg.norm(seen, axis=0)
    north = np.array([-s[0] * s[2], -s[1] * s[2], s[0] ** 2 + s[1] ** 2])
    carried = north - (s + seen) * np.sum(north * seen, axis=0) / (1 + np.sum(s * seen, axis=0))
    east = np.cross(carried, seen, axis=0)
    return np.asarray(np.arctan2(np.sum(pole * east, axis=0), np.sum(pole * carried, axis=0)))
