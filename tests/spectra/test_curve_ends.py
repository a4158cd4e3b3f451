"""A curve that is cut off: the warning says at which end and how much light may be missing."""

import re
import warnings

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import CurveEndsWarning
from whitefringe.spectra import Tabulated


def notes_of(wavelength_nm, values):
    """The curve's notes, which are also its warnings."""
    with warnings.catch_warnings(record=True) as caught:
        warnings.simplefilter("always")
        shape = Tabulated(wavelength=np.asarray(wavelength_nm) * u.nm, transmission_values=values, origin="h.csv")
    assert [str(item.message) for item in caught] == list(shape.notes)
    assert all(item.category is CurveEndsWarning for item in caught)
    return shape.notes


def missing(note):
    return float(re.search(r"about (\S+) of the light", note)[1])


def triangle(low, high, points=2001):
    """Part of a triangle with its peak at 1550 nm and its feet at 1500 and 1600 nm."""
    x = np.linspace(low, high, points)
    return x, 1 - np.abs(x - 1550) / 50


def test_the_cut_foot_of_a_triangle():
    # cut 20 nm before its long foot, where 40 % is left: the foot's area is 0.4 x 20 / 2 = 4,
    # that of the table 50 - 4 = 46 nm
    (note,) = notes_of(*triangle(1500, 1580))
    assert "h.csv: at its long-wavelength end (1.58 um) the curve is still at 40.0% of its peak" in note
    assert missing(note) == pytest.approx(4 / 46, rel=0.05)


def test_both_feet_cut():
    # at 1510 nm 20 % is left, foot 0.2 x 10 / 2 = 1; at 1580 nm as above; table 50 - 1 - 4 = 45 nm
    short, long = notes_of(*triangle(1510, 1580))
    assert "at its short-wavelength end (1.51 um) the curve is still at 20.0% of its peak" in short
    assert missing(short) == pytest.approx(1 / 45, rel=0.05)
    assert missing(long) == pytest.approx(4 / 45, rel=0.05)


def test_falling_tables_name_the_same_ends():
    x, y = triangle(1500, 1580)
    assert notes_of(x[::-1], y[::-1]) == notes_of(x, y)


def test_an_end_that_does_not_fall_is_followed_for_the_width_of_the_table():
    # a step: 1 from 1550 to 1600 nm, at which it ends; 1 x 100 nm beyond against 50.5 nm inside
    (note,) = notes_of([1500, 1549, 1550, 1600], [0, 0, 1, 1])
    assert missing(note) == pytest.approx(100 / 50.5, rel=0.05)


def test_near_zero_is_one_percent_of_the_peak():
    assert notes_of([1500, 1550, 1600], [0.005, 0.5, 0.005]) == ()
    assert len(notes_of([1500, 1550, 1600], [0.0051, 0.5, 0.0051])) == 2


def test_it_is_a_warning_of_its_own():
    with pytest.warns(CurveEndsWarning, match="may be missing there"):
        Tabulated(wavelength=[1500, 1550] * u.nm, transmission_values=[0, 1])
