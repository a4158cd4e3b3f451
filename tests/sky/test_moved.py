"""A star or a station put elsewhere: what is known of it is kept, and it can be put back."""

from dataclasses import replace

import astropy.units as u
import numpy as np
import pytest
from astropy.coordinates import SkyCoord

from whitefringe import sky
from whitefringe.errors import InputError, UnitsError
from whitefringe.setup import Setup

BULLETIN = sky.EarthOrientation.fixed(ut1_utc=-0.092 * u.s, uncertainty=4 * u.ms)


@pytest.fixture(scope="module")
def larkmoor_night(larkmoor):
    return replace(Setup.read(larkmoor / "array.toml").observation, orientation=BULLETIN, step=1 * u.hour)


def test_tables_of_a_moved_star_and_station_are_those_of_a_new_night(larkmoor_night):
    moved = larkmoor_night.star_at(ra=70 * u.deg, dec=20 * u.deg).station_at(length=70 * u.m, azimuth=10 * u.deg).star_at(dec=22 * u.deg)
    direct = replace(larkmoor_night, targets=moved.targets, array=moved.array)
    for name in ("target", "baseline", "opd", "opd_uncertainty", "u", "v", "carriage_1", "reason"):
        assert np.all(moved.table[name] == direct.table[name]), name
    assert moved.table.meta == direct.table.meta
    assert np.all(moved.windows["reason"] == direct.windows["reason"])
    back = moved.star_back().stations_back()
    assert (back.targets, back.array) == (larkmoor_night.targets, larkmoor_night.array)
    assert np.array_equal(back.table["opd"], larkmoor_night.table["opd"])


def test_looking_at_something_else_keeps_the_tables(larkmoor_night):
    table = larkmoor_night.table
    other = larkmoor_night.choosing(target="Rush").looking_like(sky.Point())
    assert other.table is table
    assert other.chosen_object == sky.Point()
    assert larkmoor_night.choosing(target="Rush").chosen_object == sky.UniformDisc(diameter=0.6 * u.mas)


def test_what_is_no_star_is_not_moved(larkmoor_night):
    beacon = sky.FixedDirection(name="beacon", azimuth=120 * u.deg, altitude=40 * u.deg)
    other = replace(larkmoor_night, targets=[beacon], objects={}, target="")
    with pytest.raises(InputError, match="only a star can be moved; 'beacon' is a FixedDirection: choose a star as the target"):
        other.star_at(ra=1 * u.deg)
    assert other.star_back() is other


@pytest.mark.parametrize("dec", [-90.5, 95])
def test_there_is_no_place_beyond_the_pole(larkmoor_night, dec):
    with pytest.raises(InputError, match=r"dec of star .Ember. must lie between -90 and 90 deg; got .+ deg: give one in that range"):
        larkmoor_night.star_at(dec=dec * u.deg)


def test_a_moved_star_keeps_what_is_known_of_it(larkmoor_night):
    star = larkmoor_night.star_at(ra=100 * u.deg).chosen_target
    home = larkmoor_night.chosen_target
    for name in ("pm_ra_cosdec", "pm_dec", "distance"):
        assert getattr(star.coordinates, name) == getattr(home.coordinates, name)
    assert star.coordinates.obstime == home.coordinates.obstime
    assert (star.uncertainty, star.proper_motion_uncertainty) == (home.uncertainty, home.proper_motion_uncertainty)


@pytest.mark.parametrize(
    "place",
    [
        SkyCoord(10 * u.deg, 20 * u.deg, frame="galactic"),
        SkyCoord(10 * u.deg, 20 * u.deg, distance=3 * u.pc, frame="galactic"),
        SkyCoord(
            l=10 * u.deg,
            b=20 * u.deg,
            distance=3 * u.pc,
            pm_l_cosb=3 * u.mas / u.yr,
            pm_b=2 * u.mas / u.yr,
            radial_velocity=9 * u.km / u.s,
            obstime="J2016",
            frame="galactic",
        ),
    ],
)
def test_stars_of_any_frame_can_be_moved(larkmoor_night, place):
    star = sky.Star(name="Ember", coordinates=place)
    moved = replace(larkmoor_night, targets=[star], objects={}).star_at(dec=-5 * u.deg).chosen_target
    assert moved.coordinates.dec.deg == pytest.approx(-5, abs=1e-12)
    assert moved.coordinates.ra == star.coordinates.ra
    assert (moved.moves, moved.near) == (star.moves, star.near)


@pytest.mark.parametrize(
    ("changes", "error", "words"),
    [
        ({"ra": 3}, UnitsError, "ra"),
        ({"ra": [1, 2] * u.deg}, InputError, r"ra must be one angle; got an array of shape \(2,\)"),
    ],
)
def test_a_star_is_moved_to_one_place(larkmoor_night, changes, error, words):
    with pytest.raises(error, match=words):
        larkmoor_night.star_at(**changes)


def test_a_geocentric_station_is_moved_level_over_the_ground(larkmoor_night):
    location = larkmoor_night.array.location
    here = [location.x, location.y, location.z]
    first = sky.Station.geocentric(name="Kiln", **dict(zip("xyz", here, strict=True)))
    second = sky.Station(name="Weir", east=30 * u.m, north=40 * u.m, up=2 * u.m)
    array = sky.Array(location=location, stations=[second, first])
    other = replace(larkmoor_night, array=array, baseline="", delay_lines=())
    moved = other.station_at(length=70 * u.m, azimuth=0 * u.deg)
    assert moved.chosen_baseline.enu_si == pytest.approx([0, 70, -2], abs=1e-6)
    assert moved.stations_back().array is array
    assert other.stations_back() is other


@pytest.mark.parametrize(
    ("changes", "error", "words"),
    [
        ({"length": 0 * u.m}, InputError, "length must be"),
        ({"length": 200 * u.km}, InputError, "length must be at most 100 km, as far as the ground is flat enough; got 200.0 km"),
        ({"length": 10}, UnitsError, "length"),
        ({"azimuth": [1, 2] * u.deg}, InputError, r"azimuth must be one angle; got an array of shape \(2,\)"),
    ],
)
def test_a_station_is_moved_to_one_place_on_the_ground(larkmoor_night, changes, error, words):
    with pytest.raises(error, match=words):
        larkmoor_night.station_at(**changes)
