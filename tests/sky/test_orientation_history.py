"""Extrapolated Earth orientation against what came true: forecasts from every 60th day since 1974 in the IERS C04 series.

The forecasts overlap, and few of those 34 years ahead are independent: this shows that the errors are honest, not that they are exact.
"""

import astropy.units as u
import numpy as np
import pytest
from astropy.utils import iers

from whitefringe.sky._orientation_table import ARCSEC, DAYS_OF_POLE, DAYS_OF_SLOPE, OrientationTable, tai_minus_utc

AHEAD = np.array([7, 30, 90, 365, 730, 1826, 3652, 7305, 12418])


@pytest.fixture(scope="module")
def history():
    series = iers.IERS_B.read(iers.IERS_B_FILE)
    series = series[series["MJD"].value >= 41684]
    pole = np.stack([series[f"PM_{axis}"].to_value(u.rad) for axis in "xy"])
    return series["MJD"].value, series["UT1_UTC"].to_value(u.s), pole


@pytest.fixture(scope="module")
def forecasts(history):
    """Error over sigma, of UT1 (n, ahead) and of the pole (n, 2, ahead); nan where the future is not known yet."""
    days, ut1_utc, pole = history
    ut1_tai = ut1_utc - tai_minus_utc(days)
    ut1, poles = [], []
    for last in range(DAYS_OF_SLOPE, days.size - AHEAD[0], 60):
        past = slice(max(last - DAYS_OF_POLE, 0), last + 1)
        none = np.zeros(past.stop - past.start)
        table = OrientationTable(
            mjd=days[past],
            ut1_tai=ut1_tai[past],
            ut1_sigma=none,
            pole=pole[:, past],
            pole_sigma=np.stack([none, none]),
            measured=none.size,
        )
        known = np.minimum(last + AHEAD, days.size - 1)
        forecast = table.at(days[known])
        future = np.where(last + AHEAD < days.size, 1.0, np.nan)
        ut1.append((forecast.ut1_utc - ut1_utc[known]) / forecast.ut1_sigma * future)
        poles.append((forecast.pole - pole[:, known]) / forecast.pole_sigma * future)
    return np.array(ut1), np.array(poles)


def share_within(errors, times):
    known = errors[np.isfinite(errors)]
    return np.mean(np.abs(known) < times)


@pytest.mark.parametrize("k", range(AHEAD.size), ids=[f"{days} d" for days in AHEAD])
def test_one_sigma_of_ut1_holds_in_about_68_percent(forecasts, k):
    errors = forecasts[0][:, k]
    assert np.sum(np.isfinite(errors)) > 80
    assert 0.58 < share_within(errors, 1) < 0.82
    assert share_within(errors, 2.5) > 0.94


@pytest.mark.parametrize("k", range(1, AHEAD.size), ids=[f"{days} d" for days in AHEAD[1:]])
def test_one_sigma_of_the_pole_holds_in_about_68_percent(forecasts, k):
    errors = forecasts[1][:, :, k].ravel()
    assert 0.58 < share_within(errors, 1) < 0.85
    assert share_within(errors, 2.5) > 0.97


def test_extrapolation_goes_on_from_the_last_value():
    days = np.arange(60000.0, 63000)
    table = OrientationTable(
        mjd=days,
        ut1_tai=-37 + 1e-3 * (days - days[-1]),
        ut1_sigma=np.zeros(3000),
        pole=np.full((2, 3000), 0.1 * ARCSEC),
        pole_sigma=np.zeros((2, 3000)),
        measured=3000,
    )
    result = table.at(days[-1] + np.array([0.0, 1, 1000]))
    assert result.ut1_utc == pytest.approx([0, 1e-3, 1.0], abs=1e-9)
    assert result.pole / ARCSEC == pytest.approx(np.full((2, 3), 0.1))
