"""Uncertainties of u, v, rate and altitude against ten thousand draws through the closed form."""

import astropy.units as u
import numpy as np
import pytest
from astropy.coordinates import EarthLocation
from astropy.time import Time

from whitefringe.sky import Array, EarthOrientation, FixedDirection, LampTarget, Star, Station, path_differences, track
from whitefringe.sky._closed_form import hour_angle_delays_si
from whitefringe.sky._geometry import EARTH_ROTATION

PLACE = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg, height=1000 * u.m)
PHI = np.radians(35)
DRAWS = 10_000
ENU = np.array([80.0, 60.0, 0.5])
STATIONS = np.array([40e-6, 25e-6, 60e-6])
CAUSES = {"stations": 0, "ut1": 1, "east": 2, "north": 3, "all": None}


def larkmoor(uncertainty):
    kiln = Station(name="Kiln", east=0 * u.m, north=0 * u.m, up=0 * u.m, uncertainty=uncertainty)
    weir = Station(name="Weir", east=80 * u.m, north=60 * u.m, up=0.5 * u.m, uncertainty=uncertainty)
    return Array(location=PLACE, stations=[kiln, weir])


@pytest.mark.parametrize("cause", CAUSES)
def test_against_ten_thousand_draws(cause):
    """Each cause alone, and all together; the spread of every number is its uncertainty to 3 %."""
    on = np.array([CAUSES[cause] in (None, k) for k in range(4)], dtype=float)
    sigma_ut1, east, north = 2e-3 * on[1], 30 * on[2], 20 * on[3]
    star = Star.at(name="A", ra=60 * u.deg, dec=25 * u.deg, uncertainty=[east, north] * u.mas)
    orientation = EarthOrientation.fixed(uncertainty=sigma_ut1 * u.s)
    found = path_differences(larkmoor(STATIONS * on[0] * u.m), star, Time("2024-01-02T02:00"), orientation)
    rng = np.random.default_rng(5)
    dec = found.declination.to_value(u.rad)[0, 0]
    mas = np.pi / 180 / 3.6e6
    hours = found.hour_angle.to_value(u.rad)[0, 0] + rng.normal(size=DRAWS) * EARTH_ROTATION * sigma_ut1
    hours -= rng.normal(size=DRAWS) * east * mas / np.cos(dec)
    decs = dec + rng.normal(size=DRAWS) * north * mas
    moved = ENU[:, None] + (rng.normal(size=(2, 3, DRAWS)) * STATIONS[:, None] * on[0]).sum(axis=0)
    U, V, W, rate, _ = hour_angle_delays_si(*moved, PHI, hours, decs)
    altitude = np.arcsin(np.sin(PHI) * np.sin(decs) + np.cos(PHI) * np.cos(decs) * np.cos(hours))
    drawn = {"u": U, "v": V, "w": W, "opd_rate": rate}
    for name, values in drawn.items():
        assert getattr(found, f"{name}_uncertainty").value[0, 0, 0] == pytest.approx(np.std(values), rel=0.03, abs=1e-13), name
    assert found.altitude_uncertainty.to_value(u.rad)[0, 0] == pytest.approx(np.std(altitude), rel=0.03, abs=1e-14)


def test_an_error_of_the_pole_counts_like_one_of_the_place():
    time = Time("2024-01-02T02:00")
    star = Star.at(name="A", ra=60 * u.deg, dec=25 * u.deg)
    sure = path_differences(larkmoor(0 * u.m), star, time, EarthOrientation.fixed())
    unsure = path_differences(larkmoor(0 * u.m), star, time, EarthOrientation.fixed(pole_uncertainty=100 * u.mas))
    shifted = path_differences(larkmoor(0 * u.m), star, time, EarthOrientation.fixed(x=100 * u.mas))
    other = path_differences(larkmoor(0 * u.m), star, time, EarthOrientation.fixed(y=100 * u.mas))
    for name in ("u", "v"):
        expected = np.hypot(*((getattr(item, name) - getattr(sure, name)).value[0, 0, 0] for item in (shifted, other)))
        # the place's two errors are taken as independent, which those of a pole are not quite
        assert getattr(unsure, f"{name}_uncertainty").value[0, 0, 0] == pytest.approx(expected, rel=0.5)


def test_what_stands_still_has_no_rate_and_a_lamp_no_altitude():
    targets = [FixedDirection(name="beacon", azimuth=80 * u.deg, altitude=30 * u.deg, uncertainty=1 * u.arcsec), LampTarget()]
    found = path_differences(larkmoor(10 * u.um), targets, Time("2024-01-02T02:00"), EarthOrientation.fixed(uncertainty=1 * u.ms))
    assert np.all(found.opd_rate_uncertainty.value == 0)
    assert found.altitude_uncertainty.to_value(u.arcsec)[0, 0] == pytest.approx(1, rel=1e-6)
    assert np.isnan(found.altitude_uncertainty.value[1, 0])


def test_the_table_has_them_with_units():
    table = track(larkmoor(10 * u.um), Star.at(name="A", ra=60 * u.deg, dec=25 * u.deg), Time("2024-01-02"), EarthOrientation.fixed())
    for name, unit in (("opd_rate", u.m / u.s), ("u", u.m), ("v", u.m), ("w", u.m), ("altitude", u.deg)):
        assert table[f"{name}_uncertainty"].unit == unit
        assert table[f"{name}_uncertainty"][0] >= 0 * unit
    assert table["w_uncertainty"][0] == table["opd_uncertainty"][0]
