"""A star's place: any frame without an observer, no network, an epoch in any scale."""

import socket

import astropy.units as u
import numpy as np
import pytest
from astropy.coordinates import CIRS, FK5, GCRS, LSR, TEME, TETE, AltAz, EarthLocation, GeocentricTrueEcliptic, HADec, SkyCoord
from astropy.time import Time
from astropy.utils import iers

from whitefringe.errors import InputError
from whitefringe.sky.delays import path_differences
from whitefringe.sky.orientation import EarthOrientation
from whitefringe.sky.stations import Array, Station
from whitefringe.sky.targets import Star

PLACE = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg, height=1000 * u.m)
NOW = Time("2026-12-01T20:00", scale="tt")
HORIZONTAL = {"az": 30 * u.deg, "alt": 50 * u.deg}
EQUATORIAL = {"ra": 60 * u.deg, "dec": 25 * u.deg}
STILL = {"pm_ra_cosdec": 0 * u.mas / u.yr, "pm_dec": 0 * u.mas / u.yr}


@pytest.fixture
def no_network(monkeypatch):
    """Every attempt to reach the network fails the test, though astropy is told to download."""

    def refuse(*arguments, **options):
        pytest.fail("the network was asked")

    for name in ("getaddrinfo", "create_connection"):
        monkeypatch.setattr(socket, name, refuse)
    monkeypatch.setattr(socket.socket, "connect", refuse)
    with iers.conf.set_temp("auto_download", True):
        yield


@pytest.mark.usefixtures("no_network")
@pytest.mark.parametrize(
    ("frame", "name"),
    [
        (AltAz(**HORIZONTAL), "altaz"),
        (AltAz(**HORIZONTAL, obstime=NOW, location=PLACE), "altaz"),
        (HADec(ha=1 * u.deg, dec=2 * u.deg, obstime=NOW, location=PLACE), "hadec"),
    ],
)
def test_a_place_over_the_ground_is_a_fixed_direction(frame, name):
    message = f"star 'A' are in the frame {name}, which needs the Earth orientation of its time: give its ICRS place.*FixedDirection"
    with pytest.raises(InputError, match=message):
        Star(name="A", coordinates=SkyCoord(frame))


@pytest.mark.usefixtures("no_network")
@pytest.mark.parametrize("kind", [CIRS, TETE, TEME])
def test_a_place_of_date_is_refused(kind):
    frame = kind(SkyCoord(**EQUATORIAL).spherical, obstime=NOW)
    with pytest.raises(InputError, match="which needs the Earth orientation of its time: give its ICRS place, or that in another frame"):
        Star(name="A", coordinates=SkyCoord(frame))


@pytest.mark.usefixtures("no_network")
@pytest.mark.parametrize(
    "frame",
    [
        FK5(**EQUATORIAL, equinox="J1975"),
        GCRS(**EQUATORIAL, obstime=NOW),
        GCRS(**EQUATORIAL, obstime=Time(2473459.5, format="jd", scale="ut1")),
        GeocentricTrueEcliptic(lon=1 * u.deg, lat=2 * u.deg, obstime=NOW),
    ],
)
def test_other_frames_need_no_network(frame):
    star = Star(name="A", coordinates=SkyCoord(frame))
    with EarthOrientation.packaged().applied(getattr(frame, "obstime", NOW)):
        assert star.coordinates.separation(SkyCoord(frame).icrs) < 1e-6 * u.mas


@pytest.mark.usefixtures("no_network")
@pytest.mark.parametrize("scale", ["ut1", "utc", "tcb", "tai"])
def test_an_epoch_may_have_any_scale(scale):
    """Also where it lies far from the night, for which no table of the night's Earth orientation serves."""
    stations = [Station(name=name, east=e * u.m, north=0 * u.m, up=0 * u.m) for name, e in (("Kiln", 0), ("Weir", 80))]
    motion = {"pm_ra_cosdec": 3000 * u.mas / u.yr, "proper_motion_uncertainty": 1 * u.mas / u.yr}
    ours, other = (Star.at(name="A", **EQUATORIAL, **motion, epoch=Time(2448000.5, format="jd", scale=name)) for name in (scale, "tdb"))
    one, two = (path_differences(Array(location=PLACE, stations=stations), star, NOW) for star in (ours, other))
    # a minute between the scales is 6 mas / 1e6
    assert one.opd.value == pytest.approx(two.opd.value, abs=1e-8)
    assert one.opd_uncertainty_target.value == pytest.approx(two.opd_uncertainty_target.value, rel=1e-5)


@pytest.mark.parametrize(
    ("epoch", "message"),
    [
        (2016.0, r'epoch of star .A. must be one astropy Time, for example Time\("J2016.0"\); got 2016.0'),
        (Time(["J2016", "J2017"]), "epoch of star 'A' must be one astropy Time"),
        (Time(2457000.5, format="jd", scale="local"), 'epoch of star .A.: times in the scale "local"'),
        (Time(1e12, format="jd", scale="tdb"), "epoch of star 'A': times must lie in the years 1000 to 3000"),
    ],
)
def test_epochs_that_cannot_be_used(epoch, message):
    with pytest.raises(InputError, match=message):
        Star.at(name="A", **EQUATORIAL, epoch=epoch)


@pytest.mark.parametrize(
    ("numbers", "message"),
    [
        ({"ra": np.nan * u.deg}, "ra of star 'A' must be finite; got nan deg"),
        ({"distance": np.nan * u.pc}, "distance of star 'A' must be finite"),
        ({"distance": np.inf * u.pc}, "distance of star 'A' must be finite; got inf pc"),
        ({"distance": 0 * u.pc}, "distance of star 'A' must be above zero; got 0.0 pc"),
        (STILL | {"pm_dec": np.nan * u.mas / u.yr, "obstime": NOW}, "pm_dec of star 'A' must be finite"),
        (
            {"radial_velocity": 20 * u.km / u.s, "obstime": NOW},
            r"star 'A' has a radial velocity but no proper motion, without which it has no effect: give pm_ra_cosdec and pm_dec",
        ),
        ({"radial_velocity": 20 * u.km / u.s}, "star 'A' has a radial velocity but no proper motion"),
    ],
)
def test_numbers_that_cannot_be_used(numbers, message):
    with pytest.raises(InputError, match=message):
        Star(name="A", coordinates=SkyCoord(**EQUATORIAL | numbers))


def test_several_places_are_no_star():
    with pytest.raises(InputError, match="coordinates of star 'A' must be one astropy SkyCoord; got 2 places"):
        Star(name="A", coordinates=SkyCoord([1, 2] * u.deg, [3, 4] * u.deg))


def test_a_frame_that_does_not_lead_to_icrs_is_refused():
    """The standard of rest of the galaxy's neighbourhood needs a distance."""
    with pytest.raises(InputError, match=r"coordinates of star 'A' cannot be turned into ICRS \(Position.*\); give them in ICRS"):
        Star(name="A", coordinates=SkyCoord(LSR(**EQUATORIAL)))
