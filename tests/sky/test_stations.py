"""Stations and baselines: names, order, and coordinates local or geocentric."""

import astropy.units as u
import numpy as np
import pytest
from astropy.coordinates import EarthLocation
from hypothesis import given
from hypothesis import strategies as st

from whitefringe.errors import InputError, UnitsError
from whitefringe.sky.stations import Array, Station, enu_from_itrs

PLACE = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg, height=1000 * u.m)


def station(name, east=0.0, north=0.0, up=0.0, uncertainty=0 * u.m):
    return Station(name=name, east=east * u.m, north=north * u.m, up=up * u.m, uncertainty=uncertainty)


def geodetic(latitude, height=1000.0):
    return EarthLocation.from_geodetic(lon=-15 * u.deg, lat=latitude * u.deg, height=height * u.m)


def larkmoor(**changes):
    stations = [station("Kiln"), station("Weir", 80, 60, 0.5), station("Tarn", -45, 120, -2)]
    return Array(**{"name": "Larkmoor", "location": PLACE, "stations": stations} | changes)


def test_baselines_are_all_pairs_in_the_stations_order():
    array = larkmoor()
    assert [baseline.name for baseline in array.baselines] == ["Kiln-Weir", "Kiln-Tarn", "Weir-Tarn"]
    assert array.baselines[2].vector.value == pytest.approx([-125, 60, -2.5])
    assert array.baselines[0].length.to_value(u.m) == pytest.approx(np.sqrt(80**2 + 60**2 + 0.25))


def test_a_baseline_is_the_second_station_less_the_first():
    array = larkmoor()
    assert array.baseline("Kiln", "Weir").vector.value == pytest.approx([80, 60, 0.5])
    assert array.baseline("Weir", "Kiln").vector.value == pytest.approx([-80, -60, -0.5])
    assert array.baseline("Weir", "Kiln").name == "Weir-Kiln"


def test_what_an_array_holds_cannot_be_changed():
    array = larkmoor()
    with pytest.raises(ValueError, match="read-only"):
        array.enu_si[0, 0] = 1
    with pytest.raises(AttributeError):
        array.name = "other"


def test_variances_of_both_stations_add_up():
    stations = [station("Kiln", uncertainty=[3, 0, 1] * u.mm), station("Weir", 80, uncertainty=4 * u.mm)]
    covariance = larkmoor(stations=stations).baselines[0].covariance_si
    assert covariance * 1e6 == pytest.approx(np.diag([25, 16, 17]))


@given(st.floats(-179, 179), st.floats(-89, 89), st.lists(st.floats(-500, 500), min_size=3, max_size=3))
def test_geocentric_stations_stand_where_local_ones_do(longitude, latitude, offset):
    place = EarthLocation.from_geodetic(lon=longitude * u.deg, lat=latitude * u.deg, height=1000 * u.m)
    centre = np.array([place.x.value, place.y.value, place.z.value])
    x, y, z = (centre + enu_from_itrs(place).T @ offset) * u.m
    other = Station.geocentric(name="Weir", x=x, y=y, z=z)
    assert other.enu_si(place) == pytest.approx(offset, abs=1e-8)


@pytest.mark.parametrize(("direction", "axis"), [((0, 1 / 3600, 0), 1), ((1 / 3600, 0, 0), 0), ((0, 0, 10), 2)])
def test_east_north_and_up_point_where_they_say(direction, axis):
    """Ten metres up, or an arc second east or north over the ellipsoid."""
    longitude, latitude, height = np.array([-15, 35, 1000]) + direction
    there = EarthLocation.from_geodetic(lon=longitude * u.deg, lat=latitude * u.deg, height=height * u.m)
    moved = Station.geocentric(name="Weir", x=there.x, y=there.y, z=there.z).enu_si(PLACE)
    assert np.argmax(np.abs(moved)) == axis
    assert moved[axis] > 9
    assert np.delete(moved, axis) == pytest.approx([0, 0], abs=1e-3)


def test_a_geocentric_uncertainty_is_turned_with_its_station():
    one = Station.geocentric(name="Weir", x=PLACE.x, y=PLACE.y, z=PLACE.z, uncertainty=[0, 0, 1] * u.mm)
    sine, cosine = np.sin(np.radians(35)), np.cos(np.radians(35))
    assert one.covariance_si(PLACE) * 1e6 == pytest.approx(np.outer([0, cosine, sine], [0, cosine, sine]))
    alike = Station.geocentric(name="Weir", x=PLACE.x, y=PLACE.y, z=PLACE.z, uncertainty=1 * u.mm)
    assert alike.covariance_si(PLACE) * 1e6 == pytest.approx(np.eye(3))


@pytest.mark.parametrize("field", ["east", "north", "up", "uncertainty"])
def test_a_length_in_degrees_names_station_and_field(field):
    lengths = {"east": 0 * u.m, "north": 0 * u.m, "up": 0 * u.m} | {field: 3 * u.deg}
    with pytest.raises(UnitsError, match=f"{field} of station 'Weir' must be convertible to m .*; got deg"):
        Station(name="Weir", **lengths)


@pytest.mark.parametrize(
    ("change", "kind", "message"),
    [
        ({"x": 3}, UnitsError, "x of station 'Weir' must carry a unit"),
        ({"y": [1, 2] * u.m}, InputError, r"y of station 'Weir' must be one number; got an array of shape \(2,\)"),
        ({"z": np.nan * u.m}, InputError, "z of station 'Weir' must be finite"),
        ({"uncertainty": [1, 2] * u.mm}, InputError, r"uncertainty of station 'Weir' must be one number or three; got .* \(2,\)"),
        ({"uncertainty": -1 * u.mm}, InputError, "uncertainty of station 'Weir' must not be negative; got -1.0 mm"),
        ({"name": " "}, InputError, "a station needs a name; got ' '"),
    ],
)
def test_stations_that_cannot_be_used(change, kind, message):
    with pytest.raises(kind, match=message):
        Station.geocentric(**{"name": "Weir", "x": 1 * u.m, "y": 2 * u.m, "z": 3 * u.m} | change)


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"stations": [station("Kiln"), station("Weir"), station("Kiln")]}, "station names must differ; twice or more: Kiln"),
        ({"stations": [station("Kiln")]}, "an array needs at least two stations; got 1"),
        ({"stations": ["Kiln", "Weir"]}, "stations must be Station objects; got str"),
        ({"stations": None}, "stations must be a sequence of two or more Station objects; got None"),
        ({"stations": "Kiln"}, "stations must be a sequence of two or more Station objects; got 'Kiln'"),
        (
            {"location": EarthLocation.from_geocentric(np.nan, 0, 0, unit=u.m)},
            r"location must be finite; got \(nan, .*: give longitude, latitude and height as numbers",
        ),
        ({"location": geodetic(35, 10_001)}, "height of the location must lie between -12000 and 10000 m over the ellipsoid; got 10001 m"),
        ({"location": geodetic(35, -12_001)}, "height of the location .*; got -12001 m"),
        ({"location": EarthLocation.from_geocentric(0, 0, 0, unit=u.m)}, r"height of the location .*; got -6\.35675e\+06 m"),
        (
            {"stations": [station("Kiln"), station("Weir", 101e3)]},
            "station 'Weir' stands 101 km from the array's location, but at most 100 km are allowed; give coordinates from the array's",
        ),
        (
            {"stations": [station("Kiln"), Station.geocentric(name="Weir", x=80 * u.m, y=60 * u.m, z=0 * u.m)]},
            "station 'Weir' stands 6372.* km from the array's location",
        ),
        ({"location": "Larkmoor"}, "location must be one astropy EarthLocation; got 'Larkmoor'"),
    ],
)
def test_arrays_that_cannot_be_used(change, message):
    with pytest.raises(InputError, match=message):
        larkmoor(**change)


def test_baselines_that_do_not_exist():
    with pytest.raises(InputError, match="no station 'Mill' in this array; it has Kiln, Weir, Tarn"):
        larkmoor().baseline("Kiln", "Mill")
    with pytest.raises(InputError, match="a baseline needs two different stations; got 'Kiln' twice"):
        larkmoor().baseline("Kiln", "Kiln")
