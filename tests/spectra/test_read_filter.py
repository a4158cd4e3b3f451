"""Filter curves from files: units by header or by word, columns by name or number, faults with file and row."""

import re

import astropy.units as u
import numpy as np
import pytest
from astropy.table import Table

from whitefringe.errors import CurveEndsWarning, FileContentError, InputError, UnitsError
from whitefringe.spectra import read_filter

NM = np.array([1500.0, 1520.0, 1560.0, 1600.0])
PERCENT = np.array([0.0, 40.0, 90.0, 0.0])

FORMS = {
    "units.csv": "wavelength [nm], transmission [%]\n1500,0\n1520,40\n1560,90\n1600,0\n",
    "round.csv": "wavelength (um),transmission (percent)\n1.5,0\n1.52,40\n1.56,90\n1.6,0\n",
    "fraction.csv": "wavelength [Angstrom],T\n15000,0\n15200,0.4\n15600,0.9\n16000,0\n",
    "frequency.csv": "frequency [THz],T\n199.86163866667,0\n197.232,0.4\n192.17465256410,0.9\n187.37028625,0\n",
    "falling.csv": "# made by hand\nwavelength [nm],T [1]\n1600,0\n1560,0.9\n1520,0.4\n1500,0\n",
}


@pytest.fixture
def put(tmp_path):
    def write(name, text):
        path = tmp_path / name
        path.write_text(text, encoding="utf-8")
        return path

    return write


def is_the_curve(shape, tolerance=1e-9):
    assert shape.curve.wavelength_si == pytest.approx(NM * 1e-9, rel=1e-6)
    assert shape.curve.transmission == pytest.approx(PERCENT / 100, abs=tolerance)


@pytest.mark.parametrize("name", FORMS)
def test_csv_with_units_in_the_header(put, name):
    path = put(name, FORMS[name])
    shape = read_filter(path)
    is_the_curve(shape)
    assert shape.origin == str(path)


@pytest.mark.parametrize("ending", ["ecsv", "fits"])
def test_ecsv_and_fits(tmp_path, ending):
    path = tmp_path / f"h.{ending}"
    Table({"wavelength": NM * u.nm, "transmission": PERCENT * u.percent}).write(path)
    is_the_curve(read_filter(path))


def test_units_that_the_header_lacks_are_stated(put):
    path = put("plain.csv", "wl,t\n1500,0\n1520,40\n1560,90\n1600,0\n")
    is_the_curve(read_filter(path, wavelength_unit=u.nm, transmission_unit=u.percent))
    with pytest.raises(
        UnitsError,
        match=r"plain\.csv: column 'wl' has no unit in the header; state it, .* wavelength_unit=u.nm",
    ):
        read_filter(path)
    with pytest.raises(UnitsError, match=r"plain\.csv: data row 3: transmission 90 is above 1; if the column is in percent"):
        read_filter(path, wavelength_unit=u.nm)


@pytest.mark.parametrize("separator", [" ", "\t", ",", " , "])
def test_bare_columns(put, separator):
    lines = (f"{x:g}{separator}{y:g}" for x, y in zip(NM, PERCENT, strict=True))
    path = put("h.dat", "# nm, percent\n" + "\n".join(lines) + "\n")
    is_the_curve(read_filter(path, wavelength_unit=u.nm, transmission_unit=u.percent))
    with pytest.raises(UnitsError, match=r"h\.dat: column 'col0' has no unit in the header"):
        read_filter(path)


def test_columns_by_name_and_number(put):
    path = put("three.csv", "row,T,wavelength [nm]\n1,0,1500\n2,0.4,1520\n3,0.9,1560\n4,0,1600\n")
    is_the_curve(read_filter(path, wavelength_column="wavelength", transmission_column="T"))
    is_the_curve(read_filter(path, wavelength_column=2, transmission_column=1))


@pytest.mark.parametrize("column", ["colour", 7, -1])
def test_a_wrong_column_lists_the_columns(put, column):
    path = put("units.csv", FORMS["units.csv"])
    with pytest.raises(FileContentError, match=rf"units\.csv: no column {column!r}; the columns are wavelength, transmission"):
        read_filter(path, transmission_column=column)


def test_a_stated_unit_must_not_contradict_the_header(put):
    path = put("units.csv", FORMS["units.csv"])
    message = r"units\.csv: column 'wavelength' is in nm by its header, but wavelength_unit=um was stated"
    with pytest.raises(UnitsError, match=message):
        read_filter(path, wavelength_unit=u.um)
    with pytest.raises(UnitsError, match=r"column 'transmission' is in % by its header, but transmission_unit=s was stated"):
        read_filter(path, transmission_unit=u.s)
    is_the_curve(read_filter(path, wavelength_unit=u.nm, transmission_unit=u.percent))


def test_a_column_of_the_wrong_kind(put):
    path = put("time.csv", "time [s],T\n1,0\n2,1\n3,0\n")
    with pytest.raises(UnitsError, match=r"time\.csv: wavelength must be a length or a frequency; got s"):
        read_filter(path)


FAULTY = {
    "sort": ("1500,0\n1560,0.9\n1520,0.4\n1600,0\n", "data row 3: the wavelengths are neither"),
    "merge-duplicates": (
        "1500,0\n1520,0.3\n1520,0.5\n1560,0.9\n1600,0\n",
        "data row 3: wavelength 1.52 um stands in the table more",
    ),
    "drop-non-finite": ("1500,0\n1520,0.4\n1540,nan\n1560,0.9\n1600,0\n", "data row 3: not a finite number"),
    "clip-negative": (
        "1500,-0.02\n1520,0.4\n1560,0.9\n1600,0\n",
        "data row 1: transmission -0.02 at 1.5 um is below zero",
    ),
}


@pytest.mark.parametrize("repair", FAULTY)
def test_faults_name_the_file_and_are_repaired_on_request(put, repair):
    text, message = FAULTY[repair]
    path = put("h.csv", "wavelength [nm],T\n" + text)
    with pytest.raises(InputError, match=rf'h\.csv: {message}.*allow repair=\("{repair}",\)'):
        read_filter(path)
    for allowed in (repair, (repair,)):
        shape = read_filter(path, repair=allowed, medium="vacuum")
        is_the_curve(shape)
        assert len(shape.notes) == 1
        assert shape.notes[0].startswith(f"{repair}: ")


def test_percent_that_exceeds_all_light_is_not_told_to_be_percent(put):
    path = put("h.csv", FORMS["units.csv"].replace("90", "106"))
    with pytest.raises(InputError, match=r"transmission 1\.06 is above 1") as caught:
        read_filter(path)
    assert "state it with transmission_unit=u.percent" not in str(caught.value)


def test_a_cut_curve_warns_with_the_file(put):
    path = put("cut.csv", "wavelength [nm],T\n1500,0\n1560,0.9\n1580,0.45\n")
    with pytest.warns(CurveEndsWarning, match=r"cut\.csv: at its long-wavelength end \(1\.58 um\) .* still at 50\.0%"):
        shape = read_filter(path, medium="vacuum")
    assert len(shape.notes) == 1


def test_fits_with_text_for_numbers_is_an_error_of_the_file(tmp_path):
    path = tmp_path / "text.fits"
    Table({"W": ["a", "b", "c"], "T": [0.0, 1.0, 0.0]}).write(path)
    with pytest.raises(FileContentError, match=r"text\.fits: column 'W'.* is not a number"):
        read_filter(path, wavelength_unit=u.nm)


def test_votable(tmp_path):
    path = tmp_path / "h.vot"
    Table({"Wavelength": NM * u.nm, "Transmission": PERCENT / 100}).write(path, format="votable")
    is_the_curve(read_filter(path))
    # as filter services write it
    path.write_text(re.sub(r"<TD>(1\d\d\d)</TD>", r"<TD>\g<1>0</TD>", path.read_text()).replace('unit="nm"', 'unit="AA"'))
    is_the_curve(read_filter(path, wavelength_column="Wavelength", transmission_column="Transmission"))


@pytest.mark.parametrize(("text", "scale"), [("angstroms", 10), ("AA", 10), ("microns", 1e-3), ("0.1nm", 10)])
def test_an_off_standard_unit_is_noted_with_file_and_column(put, text, scale):
    rows = "".join(f"{x * scale:.7g},{y / 100}\n" for x, y in zip(NM, PERCENT, strict=True))
    path = put("odd.csv", f"wl [{text}],T\n{rows}")
    shape = read_filter(path, medium="vacuum")
    is_the_curve(shape)
    (note,) = shape.notes
    assert note.startswith(f"{path}: column 'wl': the unit '{text}' is no standard spelling; taken as ")


@pytest.mark.parametrize("form", ["csv", "fits", "vot"])
def test_ampere_is_angstrom_for_a_wavelength(tmp_path, form):
    path = tmp_path / f"ampere.{form}"
    if form == "csv":
        path.write_text("wl [A],T\n" + "".join(f"{x * 10:.7g},{y / 100}\n" for x, y in zip(NM, PERCENT, strict=True)))
    else:
        table = Table({"wl": NM * 10 * u.A, "T": PERCENT / 100})
        table.write(path, format="votable" if form == "vot" else "fits")
    shape = read_filter(path, medium="vacuum")
    is_the_curve(shape)
    assert shape.notes == (f"{path}: column 'wl': the unit 'A' is the ampere by every standard; taken as Angstrom",)
    is_the_curve(read_filter(path, wavelength_unit=u.AA))
    with pytest.raises(UnitsError, match=r"column 'wl' is in Angstrom by its header, but wavelength_unit=nm was stated"):
        read_filter(path, wavelength_unit=u.nm)


def test_notes_of_other_columns_are_left_out(put):
    path = put("odd.csv", "wl [nm],T,slit [microns]\n1500,0,1\n1520,0.4,1\n1560,0.9,1\n1600,0,1\n")
    assert read_filter(path, medium="vacuum").notes == ()
