"""Measures of published photometric curves, which a general-purpose package ships, against numbers made from their points."""

from functools import cache
from importlib.util import find_spec
from pathlib import Path

import astropy.units as u
import numpy as np
import pytest

from whitefringe.spectra import Flat, detected, effective_wavelength, full_width_half_maximum, pivot_wavelength, read_filter
from whitefringe.units import SPEED_OF_LIGHT as C

from ..published import rows

# the package is looked up, not imported: only its tables are wanted
CURVES = Path(find_spec("speclite").submodule_search_locations[0]) / "data" / "filters"


@cache
def curve(name):
    return read_filter(CURVES / f"{name}.ecsv", medium="vacuum")


@cache
def light(name, per):
    return detected(Flat(per=per), curve(name))


@pytest.mark.parametrize("row", rows("photometric", "mean wavelength"))
def test_mean_wavelength(row):
    # photons evenly spread over wavelength make the response's own mean, int l R dl / int R dl
    assert effective_wavelength(light(row.inputs["curve"], "wavelength")).to_value(u.AA) == row.approx()


@pytest.mark.parametrize("row", rows("photometric", "pivot wavelength"))
def test_pivot_wavelength(row):
    assert pivot_wavelength(light(row.inputs["curve"], "wavelength")).to_value(u.AA) == row.approx()


@pytest.mark.parametrize("row", rows("photometric", "full width"))
def test_full_width(row):
    # light that is even over frequency has the response as its density
    assert full_width_half_maximum(light(row.inputs["curve"], "hertz"), "wavelength").to_value(u.AA) == row.approx()


@pytest.mark.parametrize("row", rows("photometric", "equivalent width"))
def test_integral_over_maximum(row):
    # photons even over wavelength: rate R (1e14 Hz / nu)^2 per hertz, whose integral is int R dl times 1e28 / c
    name = row.inputs["curve"]
    area = light(name, "wavelength").total_rate * C / 1e28
    assert area / np.max(curve(name).curve.transmission) * 1e10 == row.approx()


@pytest.mark.parametrize(("name", "mean"), [("bessell-R", 6585.92), ("bessell-V", 5512.10), ("twomass-H", 16476.25)])
def test_the_trapezoid_of_the_points_is_not_the_integral_of_the_lines(name, mean):
    # the same points: with them alone the trapezoid gives the listed means, of which Bessell R is 1.3e-3 off the lines' integral
    points = curve(name).curve
    x, y = points.wavelength_si * 1e10, points.transmission
    assert np.trapezoid(x * y, x) / np.trapezoid(y, x) == pytest.approx(mean, abs=6e-3)
