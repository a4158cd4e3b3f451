"""The numbers behind `EarthOrientation`: a daily table of UT1-TAI and of the pole, and what is assumed outside its dates.

Inside the table, values are interpolated linearly between midnights, as astropy does. UT1-TAI is used because it has no leap seconds.
Beyond the table, UT1-TAI goes on from its last value with the mean slope of the last measured year (a whole year, so that the seasons
cancel), and the pole stands at its mean over the last six and a half measured years (one beat of its yearly and Chandler circles).
The errors of both were found by forecasting IERS history from every month since 1973: see `sigma_ut1_extrapolated`.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

import astropy.units as u
import erfa
import numpy as np

from ..units import FloatArray, read_only

DAYS_OF_SLOPE = 365
DAYS_OF_POLE = 2380
MEASURED, PREDICTED, BEYOND, BEFORE, GIVEN = "measured", "predicted", "beyond the table", "before the table", "given"

ARCSEC = np.pi / 648000
SUBDAILY_UT1 = 25e-6
"""Root mean square [s] of the tidal terms within a day, which no daily table holds (IERS Conventions 2010, sec. 8.2; from memory), and
of what linear interpolation between days leaves of the monthly ones, some 8 us."""
SUBDAILY_POLE = 0.4e-3 * ARCSEC
"""The same for the pole [rad], with the celestial pole offsets (some 0.3 mas), which are not applied."""
POLE_OUTSIDE = 0.14 * ARCSEC
"""Error of the mean pole as a forecast [rad], in each component, found in IERS history."""
UTC_BEGINS = 36934.0
"""Modified Julian Date of 1960-01-01, when UTC begins."""


def sigma_ut1_extrapolated(days: Any) -> Any:
    """Return the error of UT1 forecast linearly `days` after the last measured value [s].

    sigma^2 = (0.0009 s (D / 1 d)^0.75)^2 + (0.072 s (D / 365.25 d)^1.5)^2: the first term has the form of Bulletin A's own growth, the
    second is a random walk of the length of day.

    Notes
    -----
    Fitted to forecasts from every 30th day of 1974 to 2026 in the IERS C04 series; |error| < sigma in 60 to 80 percent of them from a
    week to 34 years ahead, as ``tests/sky/test_orientation_history.py`` shows.
    """
    ahead = np.asarray(days, dtype=float)
    return np.hypot(0.0009 * ahead**0.75, 0.072 * (ahead / 365.25) ** 1.5)


def tai_minus_utc(mjd: FloatArray) -> FloatArray:
    """Return TAI-UTC [s] at Modified Julian Dates (UTC) from 1972 on; no leap second is assumed after the last one announced."""
    known = erfa.leap_seconds.get()
    dates = np.array([erfa.cal2jd(int(row["year"]), int(row["month"]), 1)[1] for row in known])
    steps: FloatArray = known["tai_utc"][np.clip(np.searchsorted(dates, np.floor(mjd), side="right") - 1, 0, None)]
    return steps


@dataclass(frozen=True, kw_only=True, eq=False)
class Values:
    """UT1-UTC [s] and the pole (x, y) [rad] with one-sigma errors, and the status, for each date."""

    ut1_utc: FloatArray
    ut1_sigma: FloatArray
    pole: FloatArray
    pole_sigma: FloatArray
    status: Any


@dataclass(frozen=True, kw_only=True, eq=False)
class OrientationTable:
    """Daily values: `mjd` (UTC), `ut1_tai` [s], `pole` [rad] as (2, n), their sigmas, and how many rows at the start are measured."""

    mjd: FloatArray
    ut1_tai: FloatArray
    ut1_sigma: FloatArray
    pole: FloatArray
    pole_sigma: FloatArray
    measured: int
    _slope: float = field(init=False, repr=False)
    _mean_pole: FloatArray = field(init=False, repr=False)

    def __post_init__(self) -> None:
        for name in ("mjd", "ut1_tai", "ut1_sigma", "pole", "pole_sigma"):
            object.__setattr__(self, name, read_only(getattr(self, name)))
        last = self.measured - 1
        first = max(last - DAYS_OF_SLOPE, 0)
        slope = (self.ut1_tai[last] - self.ut1_tai[first]) / max(self.mjd[last] - self.mjd[first], 1.0)
        object.__setattr__(self, "_slope", float(slope))
        object.__setattr__(self, "_mean_pole", read_only(self.pole[:, max(last - DAYS_OF_POLE, 0) : last + 1].mean(axis=1)))

    @property
    def last_measured(self) -> float:
        """Modified Julian Date of the last measured row."""
        return float(self.mjd[self.measured - 1])

    def status(self, mjd: FloatArray) -> Any:
        """Return for each date whether it is measured, predicted, or outside the table."""
        inside = np.where(mjd <= self.last_measured, MEASURED, PREDICTED)
        return np.where(mjd < self.mjd[0], BEFORE, np.where(mjd > self.mjd[-1], BEYOND, inside))

    def ut1_utc(self, mjd: FloatArray) -> FloatArray:
        """Return UT1-UTC [s]: interpolated, extrapolated, or held at the first value."""
        after = np.maximum(mjd - self.mjd[-1], 0)
        held = np.maximum(mjd, self.mjd[0])
        return np.asarray(np.interp(mjd, self.mjd, self.ut1_tai) + self._slope * after + tai_minus_utc(held))

    def pole_at(self, mjd: FloatArray) -> FloatArray:
        """Return the pole (x, y) [rad], (2, n)."""
        inside = np.stack([np.interp(mjd, self.mjd, component) for component in self.pole])
        return np.where(mjd > self.mjd[-1], self._mean_pole[:, None], inside)

    def at(self, mjd: FloatArray) -> Values:
        """Return everything at Modified Julian Dates (UTC)."""
        before, beyond = mjd < self.mjd[0], mjd > self.mjd[-1]
        ut1 = np.hypot(np.interp(mjd, self.mjd, self.ut1_sigma), SUBDAILY_UT1)
        ut1 = np.where(beyond, sigma_ut1_extrapolated(np.maximum(mjd - self.last_measured, 0)), ut1)
        # UTC was kept within about 0.9 s of UT1 from its beginning; atomic time before it was up to a minute away
        ut1 = np.where(before, np.where(mjd < UTC_BEGINS, 60.0, 1.0), ut1)
        pole = np.stack([np.hypot(np.interp(mjd, self.mjd, sigma), SUBDAILY_POLE) for sigma in self.pole_sigma])
        return Values(
            ut1_utc=self.ut1_utc(mjd),
            ut1_sigma=ut1,
            pole=self.pole_at(mjd),
            pole_sigma=np.where(before | beyond, POLE_OUTSIDE, pole),
            status=self.status(mjd),
        )


def from_finals(finals: Any) -> OrientationTable:
    """Take the columns out of a table that astropy has read: final values where there are some, else rapid or predicted ones."""
    mjd = finals["MJD"].to_value(u.d)
    measured = int(finals.meta["predictive_index"])
    ahead = np.maximum(mjd - mjd[measured - 1], 0)
    # Bulletin A's growth of its predictions' errors (from memory), where the table has none of its own
    ut1_growth, pole_growth = 0.00025 * ahead**0.75, 0.00068 * ARCSEC * ahead**0.80
    pole_sigma = [_filled(finals[f"e_PM_{axis}_A"].to_value(u.rad), pole_growth) for axis in "xy"]
    return OrientationTable(
        mjd=mjd,
        ut1_tai=finals["UT1_UTC"].to_value(u.s) - tai_minus_utc(mjd),
        ut1_sigma=_filled(finals["e_UT1_UTC_A"].to_value(u.s), ut1_growth),
        pole=np.stack([finals[f"PM_{axis}"].to_value(u.rad) for axis in "xy"]),
        pole_sigma=np.stack(pole_sigma),
        measured=measured,
    )


def _filled(values: Any, instead: FloatArray) -> FloatArray:
    plain: FloatArray = np.ma.filled(np.ma.asarray(values, dtype=float), np.nan)
    return np.where(np.isfinite(plain), plain, instead)
