"""Wavelengths in standard air against tabulated refractivities and published pairs of wavelengths."""

import astropy.units as u
import numpy as np
import pytest
from astropy.table import Table

from whitefringe.errors import InputError
from whitefringe.spectra import read_filter
from whitefringe.standard_air import standard_air_refractivity, vacuum_from_air

from .published import rows


@pytest.mark.parametrize("row", rows("air", "standard air refractivity"))
def test_refractivity(row):
    wavelength = np.array(row.quantity("vacuum").to_value(u.m))
    assert float(standard_air_refractivity(wavelength)) * 1e8 == row.approx()


@pytest.mark.parametrize("row", rows("air", "vacuum wavelength"))
def test_published_pairs(row):
    found = vacuum_from_air(np.array([row.quantity("air").to_value(u.m)]), "lamp")
    assert found[0] * 1e9 == row.approx()


def test_there_and_back():
    vacuum = np.linspace(0.3, 1.69, 200) * 1e-6
    air = vacuum / (1 + standard_air_refractivity(vacuum))
    inside = slice(1, -1)
    assert vacuum_from_air(air[inside], "lamp") == pytest.approx(vacuum[inside], rel=1e-15)


@pytest.mark.parametrize("wavelength", [0.29, 1.7])
def test_outside_the_stated_range(wavelength):
    message = rf"h\.csv: data row 2: {wavelength} um in air .* holds from 0\.3 to 1\.69 um\. Its use beyond is widespread"
    with pytest.raises(InputError, match=message):
        vacuum_from_air(np.array([1.0, wavelength]) * 1e-6, "h.csv")


@pytest.fixture
def put(tmp_path):
    def write(text, name="h.csv"):
        path = tmp_path / name
        path.write_text(text, encoding="utf-8")
        return path

    return write


LINE = "wavelength [nm],T\n545,0\n546.0750,1\n547,0\n"


def test_a_table_in_air(put):
    shape = read_filter(put(LINE), medium="air")
    assert shape.curve.wavelength_si[1] * 1e9 == pytest.approx(546.2268, abs=5e-5)
    assert shape.notes == ()


def test_a_table_that_does_not_say_is_in_vacuum_with_a_note(put):
    shape = read_filter(put(LINE))
    assert shape.curve.wavelength_si[1] == pytest.approx(546.0750e-9, rel=1e-12)
    (note,) = shape.notes
    assert note.startswith(str(put(LINE)))
    assert 'nothing says whether the wavelengths are in vacuum or in air; taken as vacuum (say medium="vacuum" or "air")' in note
    assert read_filter(put(LINE), medium="vacuum").notes == ()


@pytest.mark.parametrize(("key", "word"), [("medium", "air"), ("AIRORVAC", "AIR"), ("airorvac", "air ")])
def test_a_header_that_says(tmp_path, key, word):
    path = tmp_path / "h.ecsv"
    Table({"w": [545, 546.0750, 547] * u.nm, "T": [0.0, 1.0, 0.0]}, meta={key: word}).write(path)
    shape = read_filter(path)
    assert shape.curve.wavelength_si[1] * 1e9 == pytest.approx(546.2268, abs=5e-5)
    assert shape.notes == ()
    with pytest.raises(InputError, match=r'h\.ecsv: the wavelengths are in air by the header, but medium="vacuum" was stated'):
        read_filter(path, medium="vacuum")


def test_a_frequency_has_no_medium(put):
    path = put("frequency [THz],T\n548,0\n549,1\n550,0\n")
    assert read_filter(path).notes == ()
    with pytest.raises(InputError, match=r"h\.csv: only wavelengths can be in air; this column is in THz: leave medium out"):
        read_filter(path, medium="air")


def test_an_unknown_medium(put):
    with pytest.raises(InputError, match='medium must be "vacuum" or "air"; got \'water\''):
        read_filter(put(LINE), medium="water")


def test_the_row_at_fault(put):
    path = put("wavelength [nm],T\n1600,0\n1650,1\n1689,0.2\n1750,0\n")
    with pytest.raises(InputError, match=r"h\.csv: data row 4: 1\.75 um in air"):
        read_filter(path, medium="air")
