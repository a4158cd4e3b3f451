"""Dark hours: the sun stands at the limit at both ends, at any place and date."""

import datetime as dt
import socket

import astropy.units as u
import numpy as np
import pytest
from astropy.coordinates import AltAz, EarthLocation, get_sun
from astropy.time import Time
from astropy.utils import iers
from hypothesis import given, settings
from hypothesis import strategies as st

from whitefringe.errors import InputError, UnitsError
from whitefringe.sky.night import night_times, sun_altitude_si


def site(latitude=40.0, longitude=0.0):
    return EarthLocation.from_geodetic(lon=longitude * u.deg, lat=latitude * u.deg)


def heights(location, times):
    """The sun's altitude [deg] by the general transformation of astropy, without refraction."""
    with iers.conf.set_temp("auto_download", False):
        return get_sun(times).transform_to(AltAz(obstime=times, location=location)).alt.to_value(u.deg)


@pytest.mark.parametrize("limit", [-0.5, -12, -18])
@pytest.mark.parametrize(("latitude", "longitude"), [(40, 0), (-33, 151), (0, -70), (52, -179.9), (-45, 179.9)])
@pytest.mark.parametrize("date", ["2005-01-20", "2024-09-22", "2025-04-01"])
def test_the_sun_stands_at_the_limit_at_both_ends(latitude, longitude, date, limit):
    place = site(latitude, longitude)
    times = night_times(place, date, limit * u.deg, 10 * u.min)
    seen = heights(place, times)
    assert seen[[0, -1]] == pytest.approx([limit] * 2, abs=0.01)
    assert np.all(seen[1:-1] < limit)
    # the evening at the site is the evening of that date by local mean time
    evening = times[0] + longitude / 360 * u.day
    assert evening.isot[:10] == date
    assert 12 < float(evening.isot[11:13]) < 24


@given(latitude=st.floats(-89, 89), longitude=st.floats(-180, 180), day=st.integers(0, 72_000), limit=st.floats(-20, -1))
@settings(max_examples=30, deadline=None)
def test_any_place_and_date(latitude, longitude, day, limit):
    date = dt.date(1901, 1, 1) + dt.timedelta(days=day)
    midnight = Time(date.isoformat(), scale="tai").jd + 1 - longitude / 360
    minutes = np.arange(-720, 721) / 1440
    lowest = np.degrees(sun_altitude_si(midnight, minutes, np.radians(longitude), np.radians(latitude))).min()
    if lowest > limit - 0.01:
        with pytest.raises(InputError, match="the sun sinks no lower than"):
            night_times(site(latitude, longitude), date, min(limit, lowest - 0.01) * u.deg)
        return
    times = night_times(site(latitude, longitude), date, limit * u.deg, 20 * u.min)
    days = times.jd1 - midnight + times.jd2
    seen = np.degrees(sun_altitude_si(midnight, days, np.radians(longitude), np.radians(latitude)))
    assert np.all(seen <= limit + 1e-3)
    length = times.jd[-1] - times.jd[0]
    assert 0 < length <= 1 + 1e-9
    if length < 1 - 1e-6:
        assert np.max(seen[[0, -1]]) == pytest.approx(limit, abs=1e-3)


def test_agrees_with_the_general_transformation():
    place = site(52, 7)
    times = Time(2455000.5, np.linspace(0, 5000, 300), format="jd", scale="utc")
    mine = np.degrees(sun_altitude_si(2455000.5, np.linspace(0, 5000, 300), np.radians(7), np.radians(52)))
    # the sun's parallax, 9 arcsec, and UT1 - UTC, up to 14 arcsec, are left out
    assert mine == pytest.approx(heights(place, times), abs=25 / 3600)


def test_an_equinox_on_the_equator():
    # the sun sets straight down at 15 deg in an hour: 12 h less twice 12 deg, to what it moves in declination and right ascension
    times = night_times(site(0, 0), "2026-03-20")
    assert (times[-1].jd - times[0].jd) * 24 == pytest.approx(12 - 2 * 12 / 15, abs=0.01)


def test_steps_are_equal_and_no_longer_than_asked():
    times = night_times(site(), "2026-03-20", step=7 * u.min)
    steps = np.diff(times.jd1) + np.diff(times.jd2)
    assert steps.max() * 1440 <= 7
    assert steps.max() * 1440 > 6.9
    assert np.ptp(steps) * 86400 < 1e-3
    assert (times.scale, times.format, times.ndim) == ("utc", "isot", 1)
    assert night_times(site(), "2026-03-20", step=2 * u.day).size == 2


def test_a_polar_night_is_the_whole_day_about_midnight():
    times = night_times(site(85, 90), "2026-12-21", step=1 * u.hour)
    assert times.size == 25
    assert times[0].jd == pytest.approx(Time("2026-12-21T06:00:00").jd, abs=1e-6)
    assert times[-1].jd == pytest.approx(Time("2026-12-22T06:00:00").jd, abs=1e-6)


def test_a_short_dip_is_found_and_a_missing_one_is_named():
    # at 54.4 deg north the midsummer sun sinks to -12.16 deg: 54.4 + 23.44 - 90
    dip = night_times(site(54.4), "2026-06-21", step=1 * u.min)
    assert 0 < (dip.jd[-1] - dip.jd[0]) * 24 < 1.5
    message = r"sinks no lower than -11\.5\d deg in the night of 2026-06-21 at latitude 55\.00 deg, but sun_below is -12 deg; raise"
    with pytest.raises(InputError, match=message):
        night_times(site(55), "2026-06-21")


def test_dates_far_ahead_and_no_network(monkeypatch):
    def refuse(*_args, **_kwargs):
        raise AssertionError("the network was tried")

    monkeypatch.setattr(socket, "socket", refuse)
    monkeypatch.setattr(iers.conf, "auto_download", True)
    times = night_times(site(-24, -70), dt.date(2075, 5, 1))
    assert times.size > 100
    assert night_times(site(-24, -70), "1900-05-01").size > 100


@pytest.mark.parametrize(
    ("settings_given", "error", "message"),
    [
        ({"location": "here"}, InputError, "location must be one astropy EarthLocation; got str"),
        ({"location": site(np.array([1.0, 2.0]))}, InputError, "location must be one astropy EarthLocation"),
        ({"date": "14 March"}, InputError, "date must be a calendar date such as \"2026-03-14\"; got '14 March'"),
        (
            {"date": dt.datetime(2026, 3, 14, 22)},
            InputError,
            r"date must be a calendar date .*; got datetime.datetime\(2026, 3, 14, 22, 0\)",
        ),
        ({"date": 20260314}, InputError, "date must be a calendar date .*; got 20260314"),
        ({"date": "1850-01-01"}, InputError, "date must be in the years 1900 to 2099, .*; got 1850-01-01"),
        ({"sun_below": -12}, UnitsError, "sun_below must carry a unit .*1 deg"),
        ({"sun_below": 3 * u.deg}, InputError, r"sun_below must be one angle from -90 to 0 deg, for example -12 deg; got 3\.0 deg"),
        ({"step": 5}, UnitsError, "step must carry a unit .*1 min"),
        ({"step": 0.1 * u.s}, InputError, r"step must be at least 1 s; got 0\.1 s"),
        ({"step": -1 * u.min}, InputError, "step must be above zero"),
    ],
)
def test_what_is_refused(settings_given, error, message):
    with pytest.raises(error, match=message):
        night_times(**{"location": site(), "date": "2026-03-20"} | settings_given)
