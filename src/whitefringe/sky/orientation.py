"""How far the Earth has turned: UT1-UTC and polar motion with their uncertainties, without any download.

`EarthOrientation` decides what is used, whatever astropy's own settings are: its table is handed to astropy's transformations, so that
they never ask the network, never warn and never refuse a date. What is only predicted or extrapolated says so in its status and in
its uncertainty.
"""

from __future__ import annotations

import warnings
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from threading import RLock
from typing import Any

import astropy.units as u
import erfa
import numpy as np
from astropy.coordinates import solar_system_ephemeris
from astropy.time import Time
from astropy.utils import iers

from ..errors import FileContentError, InputError
from ..io.earth_orientation import read_earth_orientation
from ..units import FloatArray, as_si
from ._orientation_table import BEFORE, BEYOND, GIVEN, MEASURED, PREDICTED, OrientationTable, Values, from_finals

STATUSES = (MEASURED, PREDICTED, BEYOND, BEFORE, GIVEN)
# astropy's Earth orientation, ephemeris and warnings are one for the whole process; two threads must not set them at once
_ASTROPY_STATE = RLock()

YEARS = (1000, 3000)
"""Years in which the precession of the Earth's axis is known well enough to be of use."""

J2000 = 51544.5
"""Modified Julian Date of 2000-01-01T12:00."""

EPHEMERIS_DAYS = 36525.0
"""The built-in ephemeris holds for this many days about J2000: the years 1900 to 2100."""

NO_LEAP_SECONDS = "no leap second is assumed after the last one announced"


@dataclass(frozen=True, kw_only=True, eq=False)
class Orientation:
    """Earth orientation at some times, from `EarthOrientation.at`; every array has one entry per time.

    Parameters
    ----------
    ut1_utc, ut1_utc_uncertainty : Quantity [s]
    x, y, x_uncertainty, y_uncertainty : Quantity [arcsec]
        The pole: x towards longitude 0, y towards 90 deg west.
    status : ndarray of str
        A word of `STATUSES` for each time.
    age : Quantity [d]
        Days since the last measured value; zero where measured, and where the values were given.
    source : str
        The table that was used.
    last_measured : str
        Date of its last measured value, or empty.
    beyond_ephemeris : int
        How many of the times lie outside the years 1900 to 2100, for which the Earth's motion about the sun is known well.
    """

    ut1_utc: u.Quantity
    ut1_utc_uncertainty: u.Quantity
    x: u.Quantity
    y: u.Quantity
    x_uncertainty: u.Quantity
    y_uncertainty: u.Quantity
    status: Any
    age: u.Quantity
    source: str
    last_measured: str
    beyond_ephemeris: int = 0

    @property
    def notes(self) -> tuple[str, ...]:
        """What a reader of the numbers must know, in sentences."""
        said = []
        counts = {status: int(np.sum(self.status == status)) for status in STATUSES}
        sigma = self.ut1_utc_uncertainty.to_value(u.s)
        if counts[PREDICTED]:
            said.append(f"{counts[PREDICTED]} of {self.status.size} times are predicted, last measured {self.last_measured}")
        if counts[BEYOND]:
            said.append(
                f"{counts[BEYOND]} of {self.status.size} times are beyond the table, up to {self.age.max().value:.0f} d after the last "
                f"measured value: UT1 is extrapolated to {sigma[self.status == BEYOND].max():.3g} s (one sigma); {NO_LEAP_SECONDS}"
            )
        if counts[BEFORE]:
            held = sigma[self.status == BEFORE].max()
            said.append(f"{counts[BEFORE]} of {self.status.size} times are before the table: UT1-UTC is held, to {held:.3g} s (one sigma)")
        if self.beyond_ephemeris:
            said.append(
                f"{self.beyond_ephemeris} of {self.status.size} times are outside the years 1900 to 2100 of the solar-system ephemeris: "
                "what its error does to aberration and parallax of stars is not in the uncertainties"
            )
        return tuple(said)


@dataclass(frozen=True, kw_only=True, eq=False)
class EarthOrientation:
    """Where UT1-UTC and the pole are taken from.

    Build one with `packaged` (the default everywhere), `read` (a newer local table) or `fixed` (given numbers).

    Notes
    -----
    Errors of measured and predicted values are the table's own, with 25 us and 0.4 mas in quadrature for what daily tables leave out
    (tides within a day, interpolation between days, celestial pole offsets). Dates beyond the table are extrapolated, with an error
    found in the history since 1973; it counts from the last measured value, so just after the table's end it is on the safe side. Dates
    before the table are held at its first value with 1 s (60 s before 1960). Both are flagged in the status, not refused.

    References
    ----------
    IERS Conventions (2010), Technical Note 36, ch. 5 and 8 (from memory); IERS Bulletin A and its file finals2000A.

    Examples
    --------
    >>> from astropy.time import Time
    >>> now = EarthOrientation.packaged().at(Time("2020-06-01"))
    >>> print(now.status[0], now.ut1_utc[0].round(3))
    measured -0.255 s
    """

    source: str
    table: OrientationTable | None = None
    given: tuple[float, float, float, float, float] | None = None

    @classmethod
    def packaged(cls) -> EarthOrientation:
        """Return the table that the installed package astropy-iers-data carries; it is read once."""
        return _packaged()

    @classmethod
    def read(cls, path: str | Path) -> EarthOrientation:
        """Read a local file in the format finals2000A, newer than the packaged one.

        Raises
        ------
        FileContentError
            No such file, another format, or a table that knows a leap second which the installed astropy-iers-data lacks.
        """
        finals, source = read_earth_orientation(path)
        table = from_finals(finals)
        jumps = np.flatnonzero(np.abs(np.diff(table.ut1_tai)) > 0.5)
        if jumps.size:
            date = _date(table.mjd[jumps[0] + 1])
            raise FileContentError(
                f"{path}: UT1-UTC jumps by a leap second on {date} that the installed package astropy-iers-data lacks; update that package"
            )
        return cls(source=source, table=table)

    @classmethod
    def fixed(
        cls,
        ut1_utc: Any = 0 * u.s,
        x: Any = 0 * u.arcsec,
        y: Any = 0 * u.arcsec,
        uncertainty: Any = 0 * u.s,
        pole_uncertainty: Any = 0 * u.arcsec,
    ) -> EarthOrientation:
        """Use given numbers at all times: UT1-UTC and the pole, with one-sigma uncertainties.

        Raises
        ------
        UnitsError, InputError
            A unit is missing or wrong, more than one number, or a negative uncertainty.
        """
        given = (
            one_si(ut1_utc, u.s, "ut1_utc"),
            one_si(uncertainty, u.s, "uncertainty", least=0),
            one_si(x, u.rad, "x", "arcsec"),
            one_si(y, u.rad, "y", "arcsec"),
            one_si(pole_uncertainty, u.rad, "pole_uncertainty", "arcsec", least=0),
        )
        return cls(source="given values", given=given)

    def values_si(self, mjd: FloatArray) -> Values:
        """Twin of `at`: Modified Julian Dates (UTC) in, seconds and radians out."""
        if self.table is not None:
            return self.table.at(mjd)
        ut1, sigma, x, y, pole = self.given or (0.0,) * 5
        full = np.ones_like(mjd)
        return Values(
            ut1_utc=ut1 * full,
            ut1_sigma=sigma * full,
            pole=np.stack([x * full, y * full]),
            pole_sigma=np.full((2, mjd.size), pole),
            status=np.full(mjd.shape, GIVEN),
        )

    def at(self, times: Time) -> Orientation:
        """Return UT1-UTC and the pole at `times` (one Time or a row of them).

        Raises
        ------
        InputError
            `times` is not an astropy Time, is empty, or has more than one dimension.
        """
        mjd = _mjd(as_utc(times, self))
        return self._told(mjd, self.values_si(mjd))

    def at_si(self, utc: Time) -> tuple[Orientation, Values]:
        """Twin of `at` for times from `applied`, together with the same values in seconds and radians."""
        mjd = _mjd(utc)
        values = self.values_si(mjd)
        return self._told(mjd, values), values

    def _told(self, mjd: FloatArray, values: Values) -> Orientation:
        last = self.table.last_measured if self.table is not None else np.inf
        return Orientation(
            ut1_utc=values.ut1_utc * u.s,
            ut1_utc_uncertainty=values.ut1_sigma * u.s,
            x=(values.pole[0] * u.rad).to(u.arcsec),
            y=(values.pole[1] * u.rad).to(u.arcsec),
            x_uncertainty=(values.pole_sigma[0] * u.rad).to(u.arcsec),
            y_uncertainty=(values.pole_sigma[1] * u.rad).to(u.arcsec),
            status=values.status,
            age=np.maximum(mjd - last, 0) * u.d,
            source=self.source,
            last_measured=_date(last) if self.table is not None else "",
            beyond_ephemeris=int(np.sum(np.abs(mjd - J2000) > EPHEMERIS_DAYS)),
        )

    def table_for(self, times: Time) -> Any:
        """Return a small table for astropy that covers `times`, extrapolated where need be: an `astropy.utils.iers.IERS`."""
        return self._astropy_table(_mjd(as_utc(times, self)))

    def _astropy_table(self, mjd: FloatArray) -> Any:
        days = np.unique(np.floor(mjd))
        # a midnight on either side of every time, and one more, so that a time on the last midnight is inside too
        midnights = np.unique(np.concatenate([days + step for step in (-1, 0, 1, 2)]))
        values = self.values_si(midnights)
        none = np.zeros(midnights.size) * u.arcsec
        return iers.IERS(
            {
                "MJD": midnights * u.d,
                "UT1_UTC": values.ut1_utc * u.s,
                "PM_x": (values.pole[0] * u.rad).to(u.arcsec),
                "PM_y": (values.pole[1] * u.rad).to(u.arcsec),
                "dX_2000A": none,
                "dY_2000A": none,
            }
        )

    @contextmanager
    def applied(self, times: Time) -> Iterator[Time]:
        """Give astropy exactly these values inside a ``with`` block; yields `times` as fresh UTC times without a cached UT1-UTC.

        Notes
        -----
        Inside the block astropy downloads nothing and uses its built-in ephemeris. A UT1-UTC that was set on the caller's `times` is
        not used: the Earth orientation decides. astropy's Earth orientation, ephemeris and warning filters are one for the whole process:
        other threads see them changed until the block ends.
        """
        with quiet():
            clean = as_utc(times, self)
            with iers.earth_orientation_table.set(self._astropy_table(_mjd(clean))), solar_system_ephemeris.set("builtin"):
                yield clean


@cache
def _packaged() -> EarthOrientation:
    finals, source = read_earth_orientation()
    return EarthOrientation(source=source, table=from_finals(finals))


@contextmanager
def quiet() -> Iterator[None]:
    """Keep astropy off the network, and drop its warnings of far dates: the status of the Earth orientation tells of them."""
    with _ASTROPY_STATE, warnings.catch_warnings(), iers.conf.set_temp("auto_download", False):
        warnings.filterwarnings("ignore", message=".*dubious year", category=erfa.ErfaWarning)
        warnings.filterwarnings("ignore", message='.*"epv00"', category=erfa.ErfaWarning)
        warnings.filterwarnings("ignore", message="leap-second file is expired", category=iers.IERSStaleWarning)
        yield


def as_utc(times: Any, orientation: EarthOrientation | None = None) -> Time:
    """Return one time or a row of times as a fresh one-dimensional UTC Time; UT1 is converted with `orientation`."""
    if not isinstance(times, Time):
        raise InputError(f'times must be an astropy Time, for example Time("2026-03-01T22:00"); got {type(times).__name__}')
    if times.size == 0 or times.ndim > 1:
        raise InputError(f"times must be one time or a row of times; got an array of shape {times.shape}")
    if times.scale == "local":
        raise InputError('times in the scale "local" have no relation to the Earth\'s rotation; give them in UTC')
    _check_range(times)
    with quiet():
        if times.scale == "ut1":
            used = orientation or EarthOrientation.packaged()
            fresh = Time(times.jd1, times.jd2, format="jd", scale="ut1")
            with iers.earth_orientation_table.set(used._astropy_table(np.atleast_1d(fresh.mjd))):
                utc = fresh.utc
        else:
            utc = times.utc
        return Time(np.atleast_1d(utc.jd1), np.atleast_1d(utc.jd2), format="jd", scale="utc")


def _check_range(times: Time) -> None:
    days = np.ma.filled(np.ma.asarray(times.jd1 + times.jd2), np.nan)
    if not np.all(np.isfinite(days)):
        raise InputError("times must be finite; some are masked or not a number")
    years = 2000 + (days - (J2000 + 2400000.5)) / 365.25
    if np.min(years) < YEARS[0] or np.max(years) > YEARS[1]:
        got = f"{np.min(days):.10g}" if np.size(days) == 1 else f"{np.min(days):.10g} to {np.max(days):.10g}"
        raise InputError(f"times must lie in the years {YEARS[0]} to {YEARS[1]}; got Julian dates {got}: check their format")


def one_si(value: Any, unit: u.UnitBase, name: str, example: str | None = None, least: float = -np.inf) -> float:
    """Like `as_si` for one number, not below `least`."""
    result = as_si(value, unit, name, example)
    if np.ndim(result) != 0:
        raise InputError(f"{name} must be one number; got an array of shape {np.shape(result)}")
    if result < least:
        raise InputError(f"{name} must not be below {least:g}; got {value}")
    return float(result)


def _mjd(utc: Time) -> FloatArray:
    return np.asarray((utc.jd1 - 2400000.5) + utc.jd2, dtype=float)


def _date(mjd: float) -> str:
    year, month, day, _ = erfa.jd2cal(2400000.5, mjd)
    return f"{int(year):04d}-{int(month):02d}-{int(day):02d}"
