"""Which north u and v count from: that of date, or the ICRS's."""

import astropy.units as u
import numpy as np
import pytest
from astropy.coordinates import EarthLocation
from astropy.time import Time

from whitefringe.sky import Array, Binary, EarthOrientation, FixedDirection, Star, Station, path_differences

PLACE = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg, height=1000 * u.m)
ARRAY = Array(
    location=PLACE,
    stations=[
        Station(name="Kiln", east=0 * u.m, north=0 * u.m, up=0 * u.m),
        Station(name="Weir", east=80 * u.m, north=60 * u.m, up=0.5 * u.m),
    ],
)
TIME = Time("2026-12-01T22:00")
FIXED = EarthOrientation.fixed()


def seen(ra, dec):
    return path_differences(ARRAY, Star.at(name="A", ra=ra, dec=dec), TIME, FIXED)


@pytest.mark.parametrize(("ra", "dec"), [(60.0, 25.0), (200.0, -20.0), (60.0, 85.0), (37.95, 89.264)])
def test_icrs_uv_is_the_gradient_of_the_path_difference_with_icrs_coordinates(ra, dec):
    """The whole transformation differenced: d(opd)/d(ra cos dec) = u, d(opd)/d(dec) = v; a star's own step is 0.1 arcsec."""
    step = 0.1 * u.arcsec
    found = seen(ra * u.deg, dec * u.deg)
    sides = step / np.cos(np.radians(dec))
    east = (seen(ra * u.deg + sides, dec * u.deg).opd - seen(ra * u.deg - sides, dec * u.deg).opd) / (2 * step.to_value(u.rad))
    north = (seen(ra * u.deg, dec * u.deg + step).opd - seen(ra * u.deg, dec * u.deg - step).opd) / (2 * step.to_value(u.rad))
    # aberration stretches the sky by up to 1e-4
    assert found.u_icrs.value[0, 0, 0] == pytest.approx(east.value[0, 0, 0], abs=0.02)
    assert found.v_icrs.value[0, 0, 0] == pytest.approx(north.value[0, 0, 0], abs=0.02)
    assert np.hypot(found.u_icrs, found.v_icrs).value[0, 0, 0] == pytest.approx(np.hypot(found.u, found.v).value[0, 0, 0], rel=1e-12)


def test_it_matters_for_a_pair_near_the_pole():
    pair = Binary(flux_ratio=0.8, separation=5 * u.mas, position_angle=30 * u.deg)
    found = seen(37.95 * u.deg, 89.264 * u.deg)
    assert abs(found.north_angle.value[0, 0]) > 5
    icrs, date = (
        abs(pair.visibility(*(item[0, 0, 0] for item in uv), 0.8 * u.um)) for uv in ((found.u_icrs, found.v_icrs), (found.u, found.v))
    )
    assert abs(icrs - date) > 0.1


def test_what_is_no_star_keeps_its_own_north():
    found = path_differences(ARRAY, FixedDirection(name="B", azimuth=80 * u.deg, altitude=30 * u.deg), TIME, FIXED)
    assert found.north_angle.value[0, 0] == 0
    assert found.u_icrs == found.u
