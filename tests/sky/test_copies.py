"""Nothing keeps a reference to the caller's numbers: changing them later changes no object of ours."""

from dataclasses import fields

import astropy.units as u
import numpy as np
import pytest
from astropy.coordinates import EarthLocation, SkyCoord

from whitefringe import sky


def line(stroke, speed, rest):
    return sky.DelayLine(station="Kiln", stroke=stroke, greatest_speed=speed, rest=rest, wavelength=None)


def night(altitude, sun, step):
    place = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg)
    stations = [sky.Station(name=name, east=e * u.m, north=0 * u.m, up=0 * u.m) for name, e in (("Kiln", 0), ("Weir", 80))]
    array = sky.Array(location=place, stations=stations)
    return sky.Observation(array=array, targets=sky.LampTarget(), date="2026-12-01", least_altitude=altitude, sun_below=sun, step=step)


MADE = {
    "station": (lambda e, n, z, s: sky.Station(name="Kiln", east=e, north=n, up=z, uncertainty=s), (u.m,) * 4),
    "geocentric": (lambda x, y, z, s: sky.Station.geocentric(name="Kiln", x=x, y=y, z=z, uncertainty=s), (u.m,) * 4),
    "direction": (lambda a, h, s: sky.FixedDirection(name="mast", azimuth=a, altitude=h, uncertainty=s), (u.deg,) * 3),
    "line": (line, (u.m, u.mm / u.s, u.cm)),
    "night": (lambda a, b, c: night(a, -b, c), (u.deg, u.deg, u.min)),
    "uniform": (lambda d: sky.UniformDisc(diameter=d), (u.mas,)),
    "darkened": (lambda d: sky.DarkenedDisc(diameter=d, darkening=0.3), (u.mas,)),
    "power law": (lambda d: sky.PowerLawDisc(diameter=d, exponent=0.3), (u.mas,)),
    "gaussian": (lambda d: sky.GaussianDisc(fwhm=d), (u.mas,)),
    "ring": (lambda d, w: sky.Ring(diameter=d, width=w / 2), (u.mas, u.mas)),
    "binary": (lambda s, p: sky.Binary(separation=s, position_angle=p, flux_ratio=0.5), (u.mas, u.deg)),
    "picture": (lambda p: sky.Picture(image=[[1, 2]], pixel=p), (u.mas,)),
}


@pytest.mark.parametrize("make", MADE)
def test_quantities_are_copied_and_sealed(make):
    build, units = MADE[make]
    given = [3.0 * unit for unit in units]
    item = build(*given)
    held = {field.name: getattr(item, field.name) for field in fields(item) if isinstance(getattr(item, field.name), u.Quantity)}
    before = {name: value.copy() for name, value in held.items()}
    for value in given:
        value *= 7
    for name, value in held.items():
        assert np.all(value == before[name])
        with pytest.raises(ValueError, match="read-only"):
            value *= 7


def test_a_star_keeps_a_copy():
    sigma, motion = [1, 2] * u.mas, [1, 2] * u.mas / u.yr
    place = SkyCoord(ra=60 * u.deg, dec=25 * u.deg, obstime="J2016.0")
    star = sky.Star(name="A", coordinates=place, uncertainty=sigma, proper_motion_uncertainty=motion)
    twin = sky.Star(name="A", coordinates=place, uncertainty=[1, 2] * u.mas, proper_motion_uncertainty=[1, 2] * u.mas / u.yr)
    assert star.coordinates is not place
    assert not np.shares_memory(star.coordinates.data.lon, place.data.lon)
    sigma[0], motion[0] = 5 * u.mas, 5 * u.mas / u.yr
    longitude = place.data.lon
    longitude *= 0.5
    assert star == twin
    assert star.coordinates.ra.deg == 60
    assert star.uncertainty[0] == 1 * u.mas


def test_a_list_of_uncertainties_is_held_as_numbers():
    sigmas = [1 * u.mas, 2 * u.mas]
    star = sky.Star.at(name="A", ra=1 * u.deg, dec=2 * u.deg, uncertainty=sigmas)
    sigmas[0] = 9 * u.mas
    assert star.uncertainty.to_value(u.mas).tolist() == [1, 2]


def test_an_array_keeps_its_place():
    place = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg)
    stations = [sky.Station(name=name, east=e * u.m, north=0 * u.m, up=0 * u.m) for name, e in (("Kiln", 0), ("Weir", 80))]
    array = sky.Array(location=place, stations=stations)
    assert not np.shares_memory(array.location, place)
    assert array.location == place
