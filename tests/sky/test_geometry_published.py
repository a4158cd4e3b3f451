"""Hour angle, projected baseline, path difference and its rate against published formulas, ERFA, and a second package."""

import warnings
from contextlib import closing

import astropy.units as u
import erfa
import numpy as np
import pytest
from astropy.coordinates import EarthLocation
from astropy.time import Time

from whitefringe.sky._geometry import EARTH_ROTATION
from whitefringe.sky.delays import hour_angle_delays, path_differences
from whitefringe.sky.orientation import EarthOrientation
from whitefringe.sky.stations import Array, Station
from whitefringe.sky.targets import FixedDirection, Star

from ..published import rows

NANOMETRE = 1e-9


def larkmoor(row):
    place = EarthLocation.from_geodetic(lon=row.quantity("lon"), lat=row.quantity("lat"), height=row.quantity("height"))
    kiln = Station(name="Kiln", east=0 * u.m, north=0 * u.m, up=0 * u.m)
    weir = Station(name="Weir", east=row.quantity("east"), north=row.quantity("north"), up=row.quantity("up"))
    return Array(location=place, stations=[kiln, weir])


def observed(row, orientation=None):
    star = Star.at(name="A", ra=row.quantity("ra"), dec=row.quantity("dec"))
    return path_differences(larkmoor(row), star, Time(row.inputs["time"]), orientation or EarthOrientation.fixed())


@pytest.mark.parametrize("row", rows("geometry", "earth rotation rate"))
def test_earth_rotation_rate(row):
    assert row.approx() == EARTH_ROTATION


@pytest.mark.parametrize("row", rows("geometry", "earth rotation angle"))
def test_hour_angle_is_earth_rotation_plus_longitude_less_right_ascension(row):
    time = Time(row.inputs["time"])
    angle = np.degrees(erfa.era00(time.jd1, time.jd2))
    assert angle == row.approx()
    hour = angle + row.quantity("lon").value - row.quantity("ra").value
    [expected] = [p.values[0].value for p in rows("geometry", "hour angle", case=(row.inputs["case"],))]
    assert hour == pytest.approx(expected, abs=1e-11)


@pytest.mark.parametrize("name", ["u", "v", "w", "rate", "acceleration"])
@pytest.mark.parametrize("case", ["A", "B"])
def test_closed_form(name, case):
    [row] = [p.values[0] for p in rows("geometry", f"closed-form {name}", case=(case,))]
    baseline = [row.quantity(part) for part in ("east", "north", "up")]
    result = hour_angle_delays(*baseline, latitude=row.quantity("lat"), hour_angle=row.quantity("hour"), declination=row.quantity("dec"))
    value = getattr(result, name).to_value(row.unit)
    assert value == row.approx()
    if row.unit == u.m:
        assert value == pytest.approx(row.value, abs=NANOMETRE)


@pytest.mark.parametrize("row", rows("geometry", "closed-form azimuth") + rows("geometry", "closed-form altitude"))
def test_a_fixed_direction_has_the_closed_forms_path_difference(row):
    """The same case by way of azimuth and altitude: w, u, v and the parallactic angle, with nothing turning."""
    case = (row.inputs["case"],)
    [azimuth, altitude, w, across, north, angle] = [
        rows("geometry", f"closed-form {name}", case=case)[0].values[0].value
        for name in ("azimuth", "altitude", "w", "u", "v", "parallactic angle")
    ]
    target = FixedDirection(name="A", azimuth=azimuth * u.deg, altitude=altitude * u.deg)
    result = path_differences(larkmoor(row), target, Time(row.inputs["time"]), EarthOrientation.fixed())
    assert [float(x.value.item()) for x in (result.opd, result.u, result.v)] == pytest.approx([w, across, north], abs=2e-9)
    assert result.parallactic_angle.value.item() == pytest.approx(angle, abs=2e-8)
    assert result.opd_rate.value.item() == 0
    assert result.opd_uncertainty.value.item() == 0


@pytest.mark.parametrize("row", rows("geometry", "geocentric w"))
def test_geocentric_stations_give_the_same_path_difference(row):
    local = larkmoor(row)
    site = np.array([row.quantity(f"site_{axis}").value for axis in "xyz"])
    assert [local.location.x.value, local.location.y.value, local.location.z.value] == pytest.approx(site, abs=1e-5)
    there = site + [row.quantity(axis).value for axis in "xyz"]
    stations = [Station.geocentric(name=name, x=x * u.m, y=y * u.m, z=z * u.m) for name, (x, y, z) in (("Kiln", site), ("Weir", there))]
    vector = Array(location=local.location, stations=stations).baselines[0].vector
    angles = {"latitude": row.quantity("lat"), "declination": row.quantity("dec")}
    hour = rows("geometry", "hour angle", case=(row.inputs["case"],))[0].values[0].value * u.deg
    assert hour_angle_delays(*vector, hour_angle=hour, **angles).w.value == pytest.approx(row.value, abs=1e-8)


@pytest.mark.parametrize("name", ["u", "v", "w", "hour angle", "declination"])
@pytest.mark.parametrize("case", ["A", "B"])
def test_full_transformation(name, case):
    [row] = [p.values[0] for p in rows("geometry", f"observed {name}", case=(case,))]
    assert getattr(observed(row), name.replace(" ", "_")).value.item() == row.approx()


GIVEN = (0.1 * u.s, 0.2 * u.arcsec, 0.3 * u.arcsec)


@pytest.mark.parametrize("given", [(0 * u.s, 0 * u.arcsec, 0 * u.arcsec), GIVEN], ids=["zero", "given"])
@pytest.mark.parametrize("row", rows("geometry", "observed w"))
def test_bare_erfa_calls_give_the_same(row, given):
    time, site = Time(row.inputs["time"]), [row.quantity(name).to_value(u.rad) for name in ("lon", "lat")]
    ut1, x, y = given[0].value, *(angle.to_value(u.rad) for angle in given[1:])
    star = [row.quantity(name).to_value(u.rad) for name in ("ra", "dec")]
    context, _ = erfa.apco13(time.jd1, time.jd2, ut1, *site, row.quantity("height").value, x, y, 0, 0, 0, 0.5)
    azimuth, zenith, hour, declination, _ = erfa.atioq(*erfa.atciq(*star, 0, 0, 0, 0, context), context)
    up = [np.sin(zenith) * np.sin(azimuth), np.sin(zenith) * np.cos(azimuth), np.cos(zenith)]
    result = observed(row, EarthOrientation.fixed(*given))
    expected = np.dot(up, [row.quantity(name).value for name in ("east", "north", "up")])
    assert result.opd.value.item() == pytest.approx(expected, abs=1e-10)
    assert result.hour_angle.to_value(u.rad).item() == pytest.approx(hour, abs=1e-13)
    assert result.parallactic_angle.to_value(u.rad).item() == pytest.approx(erfa.hd2pa(hour, declination, site[1]), abs=1e-12)


def second_package(row, times, places, ut1_utc):
    """Altitude and azimuth [rad] of stars from another package for ephemerides, with the same UT1 and no polar motion."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        from skyfield.api import Loader, wgs84
        from skyfield.api import Star as OtherStar
        from skyfield_data import get_skyfield_data_path

        load = Loader(get_skyfield_data_path())
        scale = load.timescale(delta_t=32.184 + 37 - ut1_utc, builtin=True)
        with closing(load("de421.bsp")) as ephemeris:
            site = ephemeris["earth"] + wgs84.latlon(*(row.quantity(n).value for n in ("lat", "lon")), row.quantity("height").value)
            at = site.at(scale.tt_jd(times.tt.jd))
            angles = [at.observe(OtherStar(ra_hours=ra / 15, dec_degrees=dec)).apparent().altaz(pressure_mbar=0)[:2] for ra, dec in places]
    return np.array([[altitude.radians, azimuth.radians] for altitude, azimuth in angles])


@pytest.mark.parametrize("row", rows("geometry", "observed w"))
def test_a_second_package_agrees_to_a_fifth_of_a_micrometre(row):
    """Both hold the same models (IAU 2006/2000A, light deflection, aberration); they differ in ephemeris and in rounding of time."""
    times = Time(row.inputs["time"]) + np.linspace(0, 8, 9) * u.h
    generator = np.random.default_rng(5)
    centre = row.quantity("ra").value, row.quantity("dec").value
    places = [(centre[0] + generator.uniform(-60, 60), centre[1] + generator.uniform(-25, 25)) for _ in range(6)]
    stars = [Star.at(name=str(k), ra=ra * u.deg, dec=dec * u.deg) for k, (ra, dec) in enumerate(places)]
    array = larkmoor(row)
    ours = path_differences(array, stars, times, EarthOrientation.fixed(0.123 * u.s))
    altitude, azimuth = second_package(row, times, places, 0.123).transpose(1, 0, 2)
    east, north, up = array.baselines[0].enu_si
    theirs = np.cos(altitude) * (east * np.sin(azimuth) + north * np.cos(azimuth)) + up * np.sin(altitude)
    difference = np.abs(ours.opd.value[:, 0] - theirs).max()
    assert difference < 0.2e-6
