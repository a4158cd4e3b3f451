"""A night at the array: what is checked when it is made."""

import astropy.units as u
import numpy as np
import pytest
from astropy.coordinates import EarthLocation

from whitefringe import sky
from whitefringe.errors import InputError, UnitsError

PLACE = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg, height=1000 * u.m)
STATIONS = [sky.Station(name=name, east=e * u.m, north=0 * u.m, up=0 * u.m) for name, e in (("Kiln", 0), ("Weir", 80))]
ARRAY = sky.Array(location=PLACE, stations=STATIONS)
STAR = sky.Star.at(name="A", ra=60 * u.deg, dec=25 * u.deg)
LINES = [sky.DelayLine(station=name, stroke=60 * u.m, greatest_speed=50 * u.mm / u.s) for name in ("Kiln", "Weir")]


def night(**changes):
    return sky.Observation(**{"array": ARRAY, "targets": STAR, "date": "2026-12-01", "delay_lines": LINES} | changes)


def test_one_target_stands_for_itself():
    assert night().targets == (STAR,)
    assert night(targets=iter([STAR])).targets == (STAR,)


@pytest.mark.parametrize("step", [5, 59, 60])
def test_windows_of_a_coarse_step_have_a_duration(step):
    found = night(step=step * u.min).windows
    assert np.all(found["duration"] > 0 * u.s)
    whole = np.sum(found["duration"]).to_value(u.hour)
    assert whole == pytest.approx((night().times[-1] - night().times[0]).to_value(u.hour))


@pytest.mark.parametrize(
    ("change", "kind", "message"),
    [
        ({"step": 61 * u.min}, InputError, r"step must be at most 1 h, to follow the sky; got 61\.0 min; for example 5 min"),
        ({"step": 0 * u.min}, InputError, r"step must be above zero; got 0\.0 min"),
        ({"step": 5 * u.deg}, UnitsError, r"step must be convertible to s \(for example 1 min\); got deg"),
        ({"date": "tomorrow"}, InputError, "date must be a calendar date such as .*; got 'tomorrow'"),
        ({"date": "1850-01-01"}, InputError, "date must be in the years 1900 to 2099"),
        ({"sun_below": 5 * u.deg}, InputError, r"sun_below must be one angle from -90 to 0 deg, for example -12 deg; got 5\.0 deg"),
        ({"least_altitude": -5 * u.deg}, InputError, r"least_altitude must be one angle from 0 to 90 deg; got -5\.0 deg"),
        ({"least_altitude": 5}, UnitsError, "least_altitude must carry a unit"),
        ({"array": "Larkmoor"}, InputError, "array must be an Array; got str"),
        ({"targets": None}, InputError, "a target must be one of Star, FixedDirection, LampTarget; got NoneType"),
        ({"objects": None}, InputError, "objects must be a mapping of target names to objects; got None: leave it out for points"),
        ({"objects": {"A": 3}}, InputError, "the object of target 'A' must be an object such as sky.UniformDisc"),
        ({"delay_lines": None}, InputError, r"lines must be a sequence of sky\.DelayLine, one for each station; got None"),
    ],
)
def test_what_is_refused_when_it_is_made(change, kind, message):
    with pytest.raises(kind, match=message):
        night(**change)
