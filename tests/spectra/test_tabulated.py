"""Faults of a tabulated curve: each is an error that names its place and its repair, and each repair is made and noted."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import InputError, UnitsError
from whitefringe.spectra import REPAIRS, Tabulated

FAULTS = {
    "sort": (
        [1500, 1520, 1510, 1530],
        [0.0, 0.9, 0.4, 0.0],
        "data row 3: the wavelengths are neither rising nor falling",
    ),
    "merge-duplicates": (
        [1500, 1510, 1510, 1520, 1530],
        [0.0, 0.3, 0.5, 0.9, 0.0],
        "data row 3: wavelength 1.51 um stands in the table more than once",
    ),
    "drop-non-finite": (
        [1500, 1505, 1510, 1520, np.nan, 1530],
        [0.0, np.nan, 0.4, 0.9, 0.9, 0.0],
        r"data row 2: not a finite number \(2 such rows\)",
    ),
    "clip-negative": (
        [1500, 1503, 1510, 1520, 1530],
        [-0.01, 0.0, 0.4, 0.9, -0.02],
        r"data row 5: transmission -0.02 at 1.53 um is below zero \(2 such rows\)",
    ),
}

NOTES = {
    "sort": "sort: 4 rows put in order",
    "merge-duplicates": "merge-duplicates: 1 rows averaged into others",
    "drop-non-finite": "drop-non-finite: 2 rows left out",
    "clip-negative": "clip-negative: 2 values set to zero, the lowest -0.02",
}

MENDED = {
    "sort": ([1500, 1510, 1520, 1530], [0.0, 0.4, 0.9, 0.0]),
    "merge-duplicates": ([1500, 1510, 1520, 1530], [0.0, 0.4, 0.9, 0.0]),
    "drop-non-finite": ([1500, 1510, 1520, 1530], [0.0, 0.4, 0.9, 0.0]),
    "clip-negative": ([1500, 1503, 1510, 1520, 1530], [0.0, 0.0, 0.4, 0.9, 0.0]),
}


def curve(wavelength, values, **given):
    return Tabulated(
        wavelength=np.asarray(wavelength, dtype=float) * u.nm,
        transmission_values=values,
        origin="h.csv",
        **given,
    )


@pytest.mark.parametrize("repair", REPAIRS)
def test_a_fault_names_the_file_its_place_and_the_repair(repair):
    wavelength, values, message = FAULTS[repair]
    with pytest.raises(InputError, match=rf'h\.csv: {message}; correct the table, or allow repair=\("{repair}",\)'):
        curve(wavelength, values)


@pytest.mark.parametrize("repair", REPAIRS)
def test_other_repairs_do_not_help(repair):
    wavelength, values, message = FAULTS[repair]
    with pytest.raises(InputError, match=message):
        curve(wavelength, values, repair=tuple(name for name in REPAIRS if name != repair))


@pytest.mark.parametrize("repair", REPAIRS)
def test_a_repair_that_is_allowed_is_made_and_noted(repair):
    wavelength, values, _ = FAULTS[repair]
    shape = curve(wavelength, values, repair=(repair,))
    assert shape.notes == (NOTES[repair],)
    mended_wavelength, mended_values = MENDED[repair]
    assert shape.curve.wavelength_si == pytest.approx(np.array(mended_wavelength) * 1e-9)
    assert shape.curve.transmission == pytest.approx(mended_values)


def test_all_repairs_together():
    wavelength = [1530, 1520, 1520, 1500, 1510, np.nan]
    shape = curve(wavelength, [-0.1, 0.8, 1.0, 0.0, 0.4, 0.3], repair=REPAIRS)
    assert shape.curve.wavelength_si == pytest.approx(np.array([1.50, 1.51, 1.52, 1.53]) * 1e-6)
    assert shape.curve.transmission == pytest.approx([0.0, 0.4, 0.9, 0.0])
    assert [note.split(":")[0] for note in shape.notes] == [
        "drop-non-finite",
        "sort",
        "merge-duplicates",
        "clip-negative",
    ]


def test_a_repair_that_is_not_needed_leaves_no_note():
    assert curve([1500, 1510, 1520], [0, 1, 0], repair=REPAIRS).notes == ()


def test_falling_wavelengths_are_no_fault():
    assert curve([1520, 1510, 1500], [0, 0.7, 0]).curve.transmission.tolist() == [0, 0.7, 0]


def test_the_row_where_the_order_turns_is_named_across_equal_rows():
    with pytest.raises(InputError, match="data row 5: the wavelengths are neither rising nor falling"):
        curve([1500, 1510, 1510, 1520, 1505], [0, 0.5, 0.5, 1, 0])


def test_rows_are_counted_as_in_the_file_after_a_repair():
    with pytest.raises(InputError, match="data row 5: the wavelengths are neither rising nor falling"):
        curve([np.nan, 1500, 1510, 1520, 1505], [0, 0, 0.5, 1, 0], repair=("drop-non-finite",))


def test_an_infinite_transmission_is_not_finite():
    with pytest.raises(InputError, match=r"data row 2: not a finite number \(1 such rows\)"):
        curve([1500, 1510, 1520, 1530], [0, np.inf, 1, 0])
    shape = curve([1500, 1510, 1520, 1530], [0, np.inf, 1, 0], repair=("drop-non-finite",))
    assert shape.curve.transmission.tolist() == [0, 1, 0]


def test_more_than_all_the_light_is_percent():
    with pytest.raises(UnitsError, match=r"h\.csv: data row 3: transmission 90 is above 1; .*transmission_unit=u.percent"):
        curve([1500, 1510, 1520, 1530], [0, 40, 90, 0])
    with pytest.raises(UnitsError, match=r"transmission 1\.06 is above 1"):
        curve([1500, 1510, 1520, 1530], [0, 0.4, 1.06, 0])


def test_a_little_more_than_all_the_light_is_calibration():
    assert curve([1500, 1510, 1520], [0, 1.049, 0]).curve.transmission.max() == 1.049


def test_percent_is_a_unit():
    values = [0, 40, 90, 0] * u.percent
    assert curve([1500, 1510, 1520, 1530], values).curve.transmission == pytest.approx([0, 0.4, 0.9, 0])


@pytest.mark.parametrize(
    ("wavelength", "values", "message"),
    [
        ([1500, 1510], [0, 1, 0], r"two columns of one length; got \(2,\) and \(3,\)"),
        ([[1500, 1510]], [[0, 1]], r"two columns of one length; got \(1, 2\) and \(1, 2\)"),
        (1500, 1.0, r"two columns of one length; got \(\) and \(\)"),
        ([1500], [1.0], "two points or more and some transmission above zero; got 1 points"),
        ([1500, 1510, 1520], [0, 0, 0], "some transmission above zero; got 3 points"),
        ([0, 1510, 1520], [0, 1, 0], "wavelengths must be above zero; got 0 m"),
        ([-1, 1510, 1520], [0, 1, 0], "wavelengths must be above zero; got -1e-09 m"),
    ],
)
def test_what_is_no_curve(wavelength, values, message):
    with pytest.raises(InputError, match=rf"h\.csv: .*{message}"):
        curve(wavelength, values)


def test_units_of_the_two_columns():
    with pytest.raises(UnitsError, match=r"table: wavelength must be a Quantity, for example \[1.5, 1.6\] \* u.um"):
        Tabulated(wavelength=[1.5, 1.6], transmission_values=[0, 1])
    with pytest.raises(UnitsError, match="table: wavelength must be a length or a frequency; got s"):
        Tabulated(wavelength=[1.5, 1.6] * u.s, transmission_values=[0, 1])
    with pytest.raises(UnitsError, match="table: transmission must be a fraction or percent; got s"):
        Tabulated(wavelength=[1.5, 1.6] * u.um, transmission_values=[0, 1] * u.s)


def test_an_unknown_repair_is_refused_with_the_list():
    with pytest.raises(InputError, match="repair: unknown name 'smooth'; the repairs are sort, merge-duplicates"):
        curve([1500, 1510, 1520], [0, 1, 0], repair=("smooth",))


def test_the_curve_is_a_copy_that_cannot_be_written():
    values = np.array([0.0, 1.0, 0.0])
    shape = curve([1500, 1510, 1520], values)
    values[1] = 0.5
    assert shape.curve.transmission[1] == 1.0
    with pytest.raises(ValueError, match="read-only"):
        shape.curve.transmission[1] = 0.5


def test_the_given_columns_are_kept_as_copies():
    wavelength, values = np.array([1500.0, 1510, 1520]) * u.nm, np.array([0.0, 1.0, 0.0])
    shape = Tabulated(wavelength=wavelength, transmission_values=values)
    wavelength[0], values[1] = 1 * u.nm, 0.5
    assert shape.wavelength[0] == 1500 * u.nm
    assert shape.transmission_values[1] == 1.0
