"""Where the telescopes stand: stations, the array they make, and its baselines.

Local coordinates are east, north, up about the array's location, along the normal of the WGS84 ellipsoid. A baseline vector is
station 2 minus station 1.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import combinations
from typing import Any

import astropy.units as u
import numpy as np
from astropy.coordinates import EarthLocation

from ..errors import InputError
from ..units import FloatArray, as_si, frozen_quantities, read_only

HEIGHTS = (-12e3, 10e3)
"""Heights [m] over the ellipsoid at which an array may stand: from the deepest sea to above the highest mountain."""

MOST_DISTANCE = 100e3
"""Longest way [m] from an array's location to a station."""


@dataclass(frozen=True, kw_only=True)
class Station:
    """A station in local coordinates.

    Parameters
    ----------
    name : str
    east, north, up : Quantity [m]
        From the array's location.
    uncertainty : Quantity [m]
        One sigma: one number for all three, or three (east, north, up). Zero by default.

    Raises
    ------
    UnitsError, InputError
        A coordinate is not a length, or not one number; the message names the station and the field.

    Examples
    --------
    >>> import astropy.units as u
    >>> Station(name="Kiln", east=0 * u.m, north=0 * u.m, up=0 * u.m, uncertainty=20 * u.um).name
    'Kiln'
    """

    name: str
    east: u.Quantity
    north: u.Quantity
    up: u.Quantity
    uncertainty: u.Quantity = 0 * u.m

    def __post_init__(self) -> None:
        named(self.name, "station")
        for field in ("east", "north", "up"):
            _coordinate(self, field)
        _keep(self)

    @staticmethod
    def geocentric(*, name: str, x: Any, y: Any, z: Any, uncertainty: Any = 0 * u.m) -> GeocentricStation:
        """Return a station in geocentric (ITRS) coordinates; `uncertainty` is one number or three (x, y, z)."""
        return GeocentricStation(name=name, x=x, y=y, z=z, uncertainty=uncertainty)

    def enu_si(self, location: EarthLocation) -> FloatArray:
        """Return east, north, up [m] about `location`."""
        return np.array([as_si(value, u.m, "coordinate") for value in (self.east, self.north, self.up)])

    def covariance_si(self, location: EarthLocation) -> FloatArray:
        """Return the covariance [m^2] of east, north, up."""
        return np.diag(_sigmas(self) ** 2)


@dataclass(frozen=True, kw_only=True)
class GeocentricStation:
    """A station in geocentric coordinates (ITRS), turned into local ones exactly: by rotating its difference from the location.

    Parameters
    ----------
    name : str
    x, y, z : Quantity [m]
    uncertainty : Quantity [m]
        One sigma: one number for all three, or three (x, y, z). Zero by default.

    Raises
    ------
    UnitsError, InputError
        A coordinate is not a length, or not one number; the message names the station and the field.
    """

    name: str
    x: u.Quantity
    y: u.Quantity
    z: u.Quantity
    uncertainty: u.Quantity = 0 * u.m

    def __post_init__(self) -> None:
        named(self.name, "station")
        for field in ("x", "y", "z"):
            _coordinate(self, field)
        _keep(self)

    def enu_si(self, location: EarthLocation) -> FloatArray:
        """Return east, north, up [m] about `location`."""
        here = np.array([as_si(value, u.m, "coordinate") for value in (self.x, self.y, self.z)])
        origin = np.array([location.x.to_value(u.m), location.y.to_value(u.m), location.z.to_value(u.m)])
        turned: FloatArray = enu_from_itrs(location) @ (here - origin)
        return turned

    def covariance_si(self, location: EarthLocation) -> FloatArray:
        """Return the covariance [m^2] of east, north, up."""
        turn = enu_from_itrs(location)
        turned: FloatArray = turn @ np.diag(_sigmas(self) ** 2) @ turn.T
        return turned


STATION_KINDS = (Station, GeocentricStation)


@dataclass(frozen=True, kw_only=True, eq=False)
class Baseline:
    """Two stations of an array, in order; `enu_si` is the second's position minus the first's, (3,) in m."""

    first: str
    second: str
    enu_si: FloatArray
    covariance_si: FloatArray

    @property
    def name(self) -> str:
        """First and second station, as in ``Kiln-Weir``."""
        return f"{self.first}-{self.second}"

    @property
    def vector(self) -> u.Quantity:
        """East, north, up [m]."""
        return self.enu_si * u.m

    @property
    def length(self) -> u.Quantity:
        """Length [m]."""
        return float(np.linalg.norm(self.enu_si)) * u.m


@dataclass(frozen=True, kw_only=True)
class Array:
    """Stations about one location.

    Parameters
    ----------
    location : EarthLocation
        One place, from which the stations' local coordinates count; 12 km below to 10 km above the ellipsoid.
    stations : sequence of Station or GeocentricStation
        At least two, with different names, at most 100 km from the location.
    name : str

    Raises
    ------
    InputError
        Fewer than two stations, a name twice, a wrong type, a place that is not on the Earth, or a station too far from it.

    Examples
    --------
    >>> import astropy.units as u
    >>> from astropy.coordinates import EarthLocation
    >>> place = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg, height=1000 * u.m)
    >>> kiln = Station(name="Kiln", east=0 * u.m, north=0 * u.m, up=0 * u.m)
    >>> weir = Station(name="Weir", east=80 * u.m, north=60 * u.m, up=0.5 * u.m)
    >>> larkmoor = Array(name="Larkmoor", location=place, stations=[kiln, weir])
    >>> [baseline.name for baseline in larkmoor.baselines]
    ['Kiln-Weir']
    >>> print(larkmoor.baseline("Weir", "Kiln").vector)
    [-80.  -60.   -0.5] m
    """

    location: EarthLocation
    stations: Sequence[Station | GeocentricStation]
    name: str = ""

    def __post_init__(self) -> None:
        check_place(self.location)
        frozen_quantities(self)
        given: Any = self.stations
        if not isinstance(given, Iterable) or isinstance(given, str):
            raise InputError(f"stations must be a sequence of two or more Station objects; got {given!r}")
        object.__setattr__(self, "stations", tuple(given))
        for station in self.stations:
            if not isinstance(station, STATION_KINDS):
                raise InputError(f"stations must be Station objects; got {type(station).__name__}")
        names = [station.name for station in self.stations]
        if len(names) < 2:
            raise InputError(f"an array needs at least two stations; got {len(names)}")
        twice = sorted({name for name in names if names.count(name) > 1})
        if twice:
            raise InputError(f"station names must differ; twice or more: {', '.join(twice)}")
        for name, distance in zip(names, np.linalg.norm(self.enu_si, axis=1), strict=True):
            if distance > MOST_DISTANCE:
                raise InputError(
                    f"station {name!r} stands {distance / 1000:.6g} km from the array's location, but at most "
                    f"{MOST_DISTANCE / 1000:g} km are allowed; give coordinates from the array's location"
                )

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the stations, in order."""
        return tuple(station.name for station in self.stations)

    @cached_property
    def enu_si(self) -> FloatArray:
        """East, north, up of the stations about the location, (n, 3) in m."""
        return read_only([station.enu_si(self.location) for station in self.stations])

    @cached_property
    def baselines(self) -> tuple[Baseline, ...]:
        """All pairs of stations, each in the stations' order."""
        return tuple(self.baseline(first, second) for first, second in combinations(self.names, 2))

    def baseline(self, first: str, second: str) -> Baseline:
        """Return the baseline from station `first` to station `second`, in that order.

        Raises
        ------
        InputError
            A name that the array does not have, or the same name twice.
        """
        if first == second:
            raise InputError(f"a baseline needs two different stations; got {first!r} twice")
        one, two = (self._index(name) for name in (first, second))
        covariance = sum(self.stations[k].covariance_si(self.location) for k in (one, two))
        return Baseline(
            first=first, second=second, enu_si=read_only(self.enu_si[two] - self.enu_si[one]), covariance_si=read_only(covariance)
        )

    def _index(self, name: str) -> int:
        if name not in self.names:
            raise InputError(f"no station {name!r} in this array; it has {', '.join(self.names)}")
        return self.names.index(name)


def enu_from_itrs(location: EarthLocation) -> FloatArray:
    """Return the rotation (3, 3) that turns a difference of ITRS positions into east, north, up (normal of the WGS84 ellipsoid)."""
    longitude, latitude = (float(angle.to_value(u.rad)) for angle in (location.geodetic.lon, location.geodetic.lat))
    cl, sl, cp, sp = np.cos(longitude), np.sin(longitude), np.cos(latitude), np.sin(latitude)
    return np.array([[-sl, cl, 0.0], [-sp * cl, -sp * sl, cp], [cp * cl, cp * sl, sp]])


def as_baselines(array: Array, baselines: Any) -> tuple[Baseline, ...]:
    """Return one baseline or several as a tuple; all of the array's where nothing is given."""
    if baselines is None:
        return array.baselines
    chosen = (baselines,) if isinstance(baselines, (Baseline, str)) or not isinstance(baselines, Iterable) else tuple(baselines)
    wrong = next((item for item in chosen if not isinstance(item, Baseline)), None)
    if wrong is not None or not chosen:
        got = "none" if wrong is None else repr(wrong)
        raise InputError(f'baselines must be one or more of the array\'s, for example array.baseline("Kiln", "Weir"); got {got}')
    return chosen


def check_place(location: Any) -> None:
    """Refuse what is not one place on the Earth."""
    if not isinstance(location, EarthLocation) or location.size != 1 or location.ndim:
        raise InputError(f"location must be one astropy EarthLocation; got {location!r}")
    if not np.all(np.isfinite([axis.to_value(u.m) for axis in (location.x, location.y, location.z)])):
        raise InputError(f"location must be finite; got {location}: give longitude, latitude and height as numbers")
    height = float(location.geodetic.height.to_value(u.m))
    if not HEIGHTS[0] <= height <= HEIGHTS[1]:
        raise InputError(
            f"height of the location must lie between {HEIGHTS[0]:g} and {HEIGHTS[1]:g} m over the ellipsoid; got {height:.6g} m"
        )


def named(name: Any, what: str) -> None:
    """Refuse a name that is not text, or blank."""
    if not isinstance(name, str) or not name.strip():
        raise InputError(f"a {what} needs a name; got {name!r}: give it as text that is not blank")


def _coordinate(station: Any, field: str) -> None:
    value = getattr(station, field)
    result = as_si(value, u.m, f"{field} of station {station.name!r}")
    if np.ndim(result) != 0:
        raise InputError(f"{field} of station {station.name!r} must be one number; got an array of shape {np.shape(result)}")


def _keep(station: Any) -> None:
    """Check the uncertainty, and hold all numbers as copies: the caller's may change later."""
    _sigmas(station)
    object.__setattr__(station, "uncertainty", u.Quantity(station.uncertainty))
    frozen_quantities(station)


def _sigmas(station: Any) -> FloatArray:
    name = f"uncertainty of station {station.name!r}"
    result = np.asarray(as_si(station.uncertainty, u.m, name))
    if result.shape not in ((), (3,)):
        raise InputError(f"{name} must be one number or three; got an array of shape {result.shape}")
    if np.any(result < 0):
        raise InputError(f"{name} must not be negative; got {station.uncertainty}")
    return np.broadcast_to(result, (3,)).astype(float)
