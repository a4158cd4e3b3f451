"""The dark hours of a night at a site."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable
from typing import Any

import astropy.units as u
import erfa
import numpy as np
from astropy.coordinates import EarthLocation, get_sun
from astropy.time import Time
from scipy.optimize import brentq, minimize_scalar

from ..errors import InputError
from ..units import FloatArray, as_si, positive_si

SAMPLES = 145
"""Every ten minutes from noon to noon: the sun moves less than 2.6 deg between two."""

YEARS = (1900, 2099)
"""The sun's position is good to a few arcseconds in these years."""


def night_times(location: EarthLocation, date: Any, sun_below: u.Quantity = -12 * u.deg, step: u.Quantity = 5 * u.min) -> Time:
    """List times from evening to morning twilight of the night that begins on the evening of a date.

    The sun's altitude obeys sin h = sin phi sin delta + cos phi cos delta cos H, with the hour angle H = ERA + longitude - alpha.

    Parameters
    ----------
    location : EarthLocation
    date : str or datetime.date
        Calendar date of the evening at the site, for example ``"2026-03-14"``, by local mean solar time: noon is 12 h UTC less
        the longitude (east positive) at 15 deg to the hour, whatever the civil time zone.
    sun_below : Quantity [angle]
        The sun's centre must stand at most so high: -90 to 0 deg. -12 deg ends nautical, -18 deg astronomical twilight.
    step : Quantity [time]
        Longest step, at least 1 s.

    Returns
    -------
    Time, shape (n,), scale UTC
        Equally spaced; the first and the last are the twilights. In a polar night, where the sun stays below the limit, the 24
        hours about local mean midnight.

    Raises
    ------
    InputError, UnitsError
        The sun does not sink below the limit; a wrong location, date, limit or step.

    Notes
    -----
    Altitudes are geometric, of the sun's centre, without refraction, as twilights are defined. UT1 is taken as UTC and no table of
    the Earth's orientation is read: a second between them is 15 arcsec. The sun's parallax (9 arcsec) is left out.

    References
    ----------
    Petit & Luzum (eds), IERS Conventions (2010), sec. 5: Earth rotation angle and celestial intermediate pole (section from memory).

    Examples
    --------
    >>> import astropy.units as u
    >>> from astropy.coordinates import EarthLocation
    >>> site = EarthLocation.from_geodetic(lon=0 * u.deg, lat=40 * u.deg)
    >>> times = night_times(site, "2026-03-20", step=1 * u.hour)
    >>> print(times.size, times[0].strftime("%Y-%m-%d %H:%M"), times[-1].strftime("%Y-%m-%d %H:%M"))
    11 2026-03-20 19:10 2026-03-21 05:03
    """
    if not isinstance(location, EarthLocation) or not location.isscalar:
        raise InputError(f"location must be one astropy EarthLocation; got {type(location).__name__}")
    limit, longest, day = sun_limit_deg(sun_below), step_si(step), calendar_date(date)
    longitude, latitude = (float(angle.to_value(u.rad)) for angle in (location.lon, location.lat))
    # scale TAI has days of equal length, so that a date far ahead needs no leap seconds
    midnight = float(Time(day.isoformat(), scale="tai").jd) + 1 - longitude / (2 * np.pi)

    def altitude(days: Any) -> Any:
        return np.degrees(sun_altitude_si(midnight, np.asarray(days, dtype=float), longitude, latitude))

    start, end = _dark(altitude, limit, f"the night of {day.isoformat()} at latitude {np.degrees(latitude):.2f} deg")
    count = int(np.ceil((end - start) * 86400 / longest - 1e-9)) + 1
    times = Time(midnight, np.linspace(start, end, max(count, 2)), format="jd", scale="utc")
    times.format = "isot"
    return times


def _dark(altitude: Callable[[Any], Any], limit: float, night: str) -> tuple[float, float]:
    """Start and end of the time about midnight [days from it] in which `altitude` [deg] stays below `limit`."""
    days = np.linspace(-0.5, 0.5, SAMPLES)
    heights = altitude(days)
    deepest = int(np.argmin(heights))
    lowest = days[deepest]
    if heights[deepest] >= limit:
        # the sun may still dip below the limit between two samples
        bounds = days[max(deepest - 1, 0)], days[min(deepest + 1, SAMPLES - 1)]
        found = minimize_scalar(altitude, bounds=bounds, method="bounded", options={"xatol": 1e-6})
        lowest = float(found.x)
        if found.fun >= limit:
            raise InputError(
                f"the sun sinks no lower than {float(found.fun):.2f} deg in {night}, but sun_below is {limit:g} deg; "
                "raise sun_below or choose another date"
            )
    evening = np.flatnonzero((heights >= limit) & (days < lowest))
    morning = np.flatnonzero((heights >= limit) & (days > lowest))
    edges = []
    for bright, dark, default in ((evening[-1:], 1, -0.5), (morning[:1], -1, 0.5)):
        if bright.size:
            # the next sample is dark; if it lies beyond the lowest place, that place is
            inner = min(days[bright[0] + dark], lowest) if dark > 0 else max(days[bright[0] + dark], lowest)
            # a hundredth of a second is far inside what the sun's altitude is good for
            edges.append(float(brentq(lambda t: altitude(t) - limit, days[bright[0]], inner, xtol=1e-7)))
        else:
            edges.append(default)
    return edges[0], edges[1]


def sun_altitude_si(day: float, fraction: FloatArray, longitude: float, latitude: float) -> Any:
    """Altitude [rad] of the sun's centre at Julian dates ``day + fraction`` (UTC taken as UT1), without refraction and parallax."""
    # the minute or two between UTC and TDB moves the sun by 3 arcsec
    direction = get_sun(Time(day, fraction, format="jd", scale="tdb")).cartesian.get_xyz(xyz_axis=-1).value
    unit = direction / np.linalg.norm(direction, axis=-1, keepdims=True)
    x, y, z = np.moveaxis(np.einsum("...ij,...j->...i", erfa.c2i06a(day, fraction), unit), -1, 0)
    hour_angle = erfa.era00(day, fraction) + longitude - np.arctan2(y, x)
    return np.arcsin(np.sin(latitude) * z + np.cos(latitude) * np.hypot(x, y) * np.cos(hour_angle))


def sun_limit_deg(sun_below: Any) -> float:
    """Return the sun's limit [deg], or say what it must be."""
    limit = as_si(sun_below, u.deg, "sun_below", "deg")
    if np.ndim(limit) != 0 or not -90 <= limit <= 0:
        raise InputError(f"sun_below must be one angle from -90 to 0 deg, for example -12 deg; got {sun_below}")
    return float(limit)


def step_si(step: Any) -> float:
    """Return the step [s], or say what it must be."""
    longest = positive_si(step, u.s, "step", "min")
    if longest < 1:
        raise InputError(f"step must be at least 1 s; got {step}")
    return longest


def calendar_date(date: Any) -> dt.date:
    """Return the date of an evening, or say what it must be."""
    try:
        # a datetime is refused: its clock does not say which evening is meant
        day = date if isinstance(date, dt.date) and not isinstance(date, dt.datetime) else dt.date.fromisoformat(date)
    except (TypeError, ValueError):
        raise InputError(f'date must be a calendar date such as "2026-03-14"; got {date!r}') from None
    if not YEARS[0] <= day.year <= YEARS[1]:
        raise InputError(f"date must be in the years {YEARS[0]} to {YEARS[1]}, where the sun's position is known well; got {date}")
    return day
