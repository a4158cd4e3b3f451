"""Targets: stars with their motion and parallax, fixed directions, and the lamp."""

import astropy.units as u
import numpy as np
import pytest
from astropy.coordinates import AltAz, EarthLocation, SkyCoord
from astropy.time import Time

from whitefringe.errors import InputError, UnitsError
from whitefringe.sky._geometry import directions
from whitefringe.sky.orientation import EarthOrientation
from whitefringe.sky.targets import FixedDirection, LampTarget, Star

PLACE = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg, height=1000 * u.m)
EPOCH = Time("J2016.0")
FAST = {
    "pm_ra_cosdec": -3000 * u.mas / u.yr,
    "pm_dec": 9500 * u.mas / u.yr,
    "parallax": 500 * u.mas,
    "radial_velocity": -110 * u.km / u.s,
    "epoch": EPOCH,
}


def star(**changes):
    return Star.at(**{"name": "A", "ra": 60 * u.deg, "dec": 25 * u.deg} | changes)


def angle(one, two):
    return np.linalg.norm(np.cross(one, two, axis=0), axis=0) / np.linalg.norm(one, axis=0) / np.linalg.norm(two, axis=0)


@pytest.mark.parametrize(
    "leave_out", [(), ("parallax", "radial_velocity"), ("radial_velocity",)], ids=["all", "no parallax", "no radial velocity"]
)
@pytest.mark.parametrize(("span", "tolerance"), [(0.5 * u.d, 1e-14), (30 * u.d, 1e-12), (365 * u.d, 1e-12)], ids=["night", "month", "year"])
def test_interpolated_motion_is_that_of_every_time(leave_out, span, tolerance):
    """The fastest of stars: 10 arcsec in a year."""
    moving = star(**{name: value for name, value in FAST.items() if name not in leave_out})
    times = Time("2026-03-01T20:00", scale="utc") + np.linspace(0, 1, 7) * span
    with EarthOrientation.packaged().applied(times) as utc:
        ours = moving.positions_si(utc)
        each = np.stack([moving.positions_si(time[np.newaxis])[:, 0] for time in utc], axis=1)
    assert angle(ours, each).max() < tolerance
    moved = angle(each[:, 0], each[:, -1])
    assert moved == pytest.approx(np.hypot(3, 9.5) / 206265 * span.to_value(u.yr), rel=1e-2)


def test_order_of_the_times_does_not_matter():
    moving = star(**FAST)
    times = Time("2026-03-01", scale="utc") + np.array([3.0, 0, 9, 5]) * u.d
    at = np.argsort(times.jd)
    assert moving.positions_si(times)[:, at] == pytest.approx(moving.positions_si(times[at]), rel=1e-14)


@pytest.mark.parametrize("known", [{}, FAST, {"parallax": 500 * u.mas}], ids=["still", "moving and near", "near"])
def test_directions_are_those_of_astropy(known):
    times = Time("2026-03-01T20:00") + np.linspace(0, 5, 4) * u.h
    one = star(**known)
    with EarthOrientation.packaged().applied(times) as utc:
        seen = directions(PLACE, [one, star(name="B")], utc)
        for k, time in enumerate(utc):
            place = one.coordinates.apply_space_motion(new_obstime=time) if one.moves else one.coordinates
            other = place.transform_to(AltAz(obstime=time, location=PLACE))
            assert seen.altitude[0, k] == pytest.approx(other.alt.to_value(u.rad), abs=1e-11)
            assert seen.azimuth[0, k] == pytest.approx(other.az.to_value(u.rad), abs=1e-11)


def test_parallax_moves_a_star():
    times = Time("2026-03-01T20:00")
    with EarthOrientation.packaged().applied(times) as utc:
        seen = directions(PLACE, [star(), star(parallax=500 * u.mas)], utc).unit[:, :, 0]
    assert 0.3 < angle(*seen) * 206265 < 0.51


def test_close_times_use_the_interpolated_motion_of_the_earth_and_lose_nothing():
    close = Time("2026-03-01T20:00") + np.linspace(0, 1, 200) * u.h
    with EarthOrientation.packaged().applied(close) as utc:
        together = directions(PLACE, [star()], utc).unit[0]
        each = np.stack([directions(PLACE, [star()], utc[k : k + 1]).unit[0, :, 0] for k in range(0, 200, 23)], axis=1)
    assert np.abs(together[:, ::23] - each).max() < 2e-12


def test_uncertainty_grows_with_the_time_from_the_epoch():
    one = star(**FAST | {"uncertainty": [3, 4] * u.mas, "proper_motion_uncertainty": [1, 0] * u.mas / u.yr})
    sigma = one.sigma_si(Time(["J2016.0", "J2020.0"])) * u.rad
    assert sigma.to_value(u.mas) == pytest.approx(np.array([[3, 5], [4, 4]]), rel=1e-4)


def test_a_star_of_any_frame_is_held_in_icrs():
    galactic = SkyCoord(l=10 * u.deg, b=20 * u.deg, frame="galactic")
    assert Star(name="A", coordinates=galactic).coordinates.ra.deg == pytest.approx(galactic.icrs.ra.deg)


def test_stars_are_equal_when_their_numbers_are():
    assert star(**FAST) == star(**FAST)
    assert star() == star()
    assert star() != star(**FAST)
    assert star() != star(uncertainty=1 * u.mas)
    assert star(**FAST) != star(**FAST | {"epoch": Time("J2015.5")})
    assert star(**FAST) != star(**FAST | {"radial_velocity": 0 * u.km / u.s})
    assert star() != "A"


def test_a_fixed_direction_stands_still():
    times = Time("2026-03-01T20:00") + np.linspace(0, 5, 4) * u.h
    with EarthOrientation.packaged().applied(times) as utc:
        seen = directions(PLACE, [FixedDirection(name="mast", azimuth=210 * u.deg, altitude=-3 * u.deg)], utc)
    assert np.degrees(seen.azimuth[0]) == pytest.approx(np.full(4, 210))
    assert np.degrees(seen.altitude[0]) == pytest.approx(np.full(4, -3))


def test_the_pole_itself_has_a_direction():
    latitude = PLACE.geodetic.lat
    with EarthOrientation.packaged().applied(Time("2026-03-01")) as utc:
        seen = directions(PLACE, [FixedDirection(name="pole", azimuth=0 * u.deg, altitude=latitude)], utc)
    assert np.degrees(seen.declination.item()) == pytest.approx(90)
    assert np.linalg.norm(seen.east_on_sky[0, :, 0]) == pytest.approx(1)
    assert np.linalg.norm(seen.north_on_sky[0, :, 0]) == pytest.approx(1)


def test_a_lamp_has_no_direction():
    with EarthOrientation.packaged().applied(Time("2026-03-01")) as utc:
        seen = directions(PLACE, [LampTarget()], utc)
    for name in ("altitude", "azimuth", "hour_angle", "declination", "parallactic_angle"):
        assert np.isnan(getattr(seen, name)).all()
    assert not np.any(seen.east_on_sky)
    assert not np.any(seen.north_on_sky)


@pytest.mark.parametrize(
    ("change", "kind", "message"),
    [
        ({"dec": 91 * u.deg}, InputError, r"dec of star 'A' must lie between -90 and 90 deg; got 91\.0 deg"),
        ({"dec": 25}, UnitsError, "dec must carry a unit"),
        ({"ra": 3 * u.m}, UnitsError, "ra must be convertible to rad .*; got m"),
        ({"ra": [1, 2] * u.deg}, InputError, "ra and dec of star 'A' must be one number each"),
        ({"pm_dec": 3 * u.mas / u.yr}, InputError, "star 'A' has a proper motion but no epoch; give obstime"),
        ({"pm_dec": 3 * u.mas, "epoch": EPOCH}, UnitsError, "pm_dec must be convertible to rad / s"),
        ({"parallax": 0 * u.mas}, InputError, r"parallax of star 'A' must be above zero; got 0\.0 mas; leave it out"),
        ({"parallax": [1, 2] * u.mas}, InputError, r"parallax of star 'A' must be one number; got an array of shape \(2,\)"),
        ({"pm_dec": [1, 2] * u.mas / u.yr, "epoch": EPOCH}, InputError, "pm_dec of star 'A' must be one number"),
        ({"radial_velocity": [1, 2] * u.km / u.s}, InputError, "radial_velocity of star 'A' must be one number"),
        ({"parallax": np.nan * u.mas}, InputError, "parallax must be finite"),
        (
            {"proper_motion_uncertainty": 1 * u.mas / u.yr},
            InputError,
            "star 'A' has a proper_motion_uncertainty but no epoch; give obstime with its coordinates",
        ),
        ({"name": None}, InputError, "a star needs a name; got None: give it as text that is not blank"),
        ({"name": 5}, InputError, "a star needs a name; got 5"),
        ({"parallax": 3 * u.pc}, UnitsError, "parallax must be convertible to arcsec"),
        ({"radial_velocity": 3 * u.km}, UnitsError, "radial_velocity must be convertible to m / s"),
        ({"uncertainty": 1 * u.m}, UnitsError, "uncertainty of star 'A' must be convertible to rad"),
        ({"uncertainty": -1 * u.mas}, InputError, r"uncertainty of star 'A' must not be negative; got -1\.0 mas"),
        ({"uncertainty": [1, 2, 3] * u.mas}, InputError, r"uncertainty of star 'A' must be one number or two; got .* \(3,\)"),
        ({"proper_motion_uncertainty": 1 * u.mas}, UnitsError, "proper_motion_uncertainty of star 'A' must be convertible"),
    ],
)
def test_stars_that_cannot_be_used(change, kind, message):
    with pytest.raises(kind, match=message):
        star(**change)


def test_coordinates_that_cannot_be_used():
    with pytest.raises(InputError, match="coordinates of star 'A' must be one astropy SkyCoord; got str"):
        Star(name="A", coordinates="04h00m +25d")


@pytest.mark.parametrize(
    ("change", "kind", "message"),
    [
        ({"altitude": 100 * u.deg}, InputError, r"altitude of direction 'mast' must lie between -90 and 90 deg; got 100\.0 deg"),
        ({"azimuth": 30}, UnitsError, "azimuth of direction 'mast' must carry a unit"),
        ({"azimuth": [30, 40] * u.deg}, InputError, r"azimuth of direction 'mast' must be one number; got .* \(2,\)"),
        ({"name": ""}, InputError, "a direction needs a name; got ''"),
        ({"uncertainty": -1 * u.mas}, InputError, "uncertainty of direction 'mast' must not be negative"),
    ],
)
def test_fixed_directions_that_cannot_be_used(change, kind, message):
    with pytest.raises(kind, match=message):
        FixedDirection(**{"name": "mast", "azimuth": 30 * u.deg, "altitude": 40 * u.deg} | change)


def test_lamps_and_stars_need_a_name():
    with pytest.raises(InputError, match="a lamp needs a name; got 5"):
        LampTarget(name=5)
    with pytest.raises(InputError, match="a star needs a name; got ''"):
        Star(name="", coordinates=SkyCoord(ra=1 * u.deg, dec=2 * u.deg))
