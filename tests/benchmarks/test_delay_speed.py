"""A night's path differences of a whole programme against astropy's bare transformation of the same stars and times, in one run."""

from time import perf_counter

import astropy.units as u
import numpy as np
from astropy.coordinates import AltAz, EarthLocation, SkyCoord
from astropy.time import Time

from whitefringe.sky.delays import path_differences
from whitefringe.sky.stations import Array, Station
from whitefringe.sky.targets import Star

PLACE = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg, height=1000 * u.m)
RESULTS = ("opd", "opd_rate", "opd_acceleration", "u", "v", "opd_uncertainty", "altitude", "azimuth", "parallactic_angle")
PARTS = tuple(f"opd_uncertainty_{part}" for part in ("ut1", "target", "stations", "pole"))


def night():
    # a fresh Time for each call: astropy caches on it
    return Time("2026-03-01T20:00", scale="utc") + np.linspace(0, 10, 500) * u.h


def programme():
    generator = np.random.default_rng(1)
    stations = [
        Station(name=f"S{k}", east=x * u.m, north=y * u.m, up=z * u.m, uncertainty=10 * u.um)
        for k, (x, y, z) in enumerate(generator.normal(size=(6, 3)) * [60, 60, 1])
    ]
    places = generator.uniform([0, -30], [360, 80], size=(100, 2)) * u.deg
    stars = [Star.at(name=f"{k}", ra=ra, dec=dec, uncertainty=1 * u.mas) for k, (ra, dec) in enumerate(places)]
    return Array(location=PLACE, stations=stations), stars


def test_everything_within_one_and_a_half_bare_transformations(benchmark):
    array, stars = programme()
    sky = SkyCoord([star.coordinates for star in stars])[:, np.newaxis]

    def bare():
        return sky.transform_to(AltAz(obstime=night()[np.newaxis], location=PLACE)).alt

    def everything():
        result = path_differences(array, stars, night())
        return [getattr(result, name) for name in RESULTS + PARTS]

    times: dict[str, list[float]] = {"bare": [], "ours": []}
    assert everything()[0].shape == (100, 15, 500)
    bare()
    # turn and turn about, so that a busy machine slows both alike
    for _ in range(15):
        for name, call in (("bare", bare), ("ours", everything)):
            start = perf_counter()
            call()
            times[name].append(perf_counter() - start)
    ratio = np.median(times["ours"]) / np.median(times["bare"])
    benchmark.extra_info.update(ours_over_bare=round(ratio, 2))
    benchmark.pedantic(everything, rounds=3)
    assert ratio <= 1.5
