"""VOTables: units, cut files, missing numbers, rows at fault; and unit spellings that no standard knows, in every format."""

import astropy.units as u
import numpy as np
import pytest
from astropy.io import fits
from astropy.table import Table

from whitefringe.errors import FileContentError
from whitefringe.io import read_table
from whitefringe.io._spellings import SPELLINGS, settled

X = np.array([15000.0, 15200.0, 15600.0, 16000.0])
Y = np.array([0.0, 0.4, 0.9, 0.0])


@pytest.fixture
def whole(tmp_path):
    path = tmp_path / "h.vot"
    Table({"Wavelength": X * u.nm, "Transmission": Y}).write(path, format="votable")
    return path


def changed(whole, old, new, name="changed.vot"):
    text = whole.read_text()
    assert old in text
    path = whole.parent / name
    path.write_text(text.replace(old, new))
    return path


def test_the_table_and_its_units(whole):
    table = read_table(whole)
    assert table.meta["format"] == "VOTable"
    assert table.meta["unit_notes"] == ()
    assert table.colnames == ["Wavelength", "Transmission"]
    assert table["Wavelength"].unit == u.nm
    assert table["Transmission"].unit is None
    assert np.asarray(table["Transmission"]).tolist() == Y.tolist()


@pytest.mark.parametrize("name", ["a.xml", "a.dat", "a.VOTABLE"])
def test_it_is_known_by_its_root_element_or_ending(whole, name):
    assert read_table(whole.rename(whole.parent / name)).meta["format"] == "VOTable"


@pytest.mark.parametrize("form", ["binary", "binary2"])
def test_binary_data(tmp_path, form):
    path = tmp_path / "b.vot"
    Table({"Wavelength": X * u.nm, "Transmission": Y}).write(path, format="votable", tabledata_format=form)
    assert np.asarray(read_table(path)["Wavelength"]).tolist() == X.tolist()


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("<TD>0.4</TD>", "", r"not a readable VOTable, data row 2 \(.*fewer columns"),
        ("<TD>0.9</TD>", "<TD>0.9</TD><TD>1</TD>", r"not a readable VOTable, data row 3 \(.*more columns"),
        ("</TABLE>", "", "not a readable VOTable"),
        ('datatype="double" name="Wavelength"', 'datatype="floot" name="Wavelength"', "Unknown datatype 'floot'"),
        ("VOTABLE version", "VOTABEL version", "not a readable VOTable"),
    ],
)
def test_faults(whole, old, new, message):
    with pytest.raises(FileContentError, match=rf"changed\.vot: .*{message}"):
        read_table(changed(whole, old, new))


def test_a_cut_file(whole):
    text = whole.read_text()
    for part in (0.1, 0.3, 0.6, 0.9):
        path = whole.parent / "cut.vot"
        path.write_text(text[: int(part * len(text))])
        with pytest.raises(FileContentError, match=r"cut\.vot: not a readable VOTable"):
            read_table(path)


def test_no_table(tmp_path):
    path = tmp_path / "none.xml"
    path.write_text('<VOTABLE version="1.4"><RESOURCE/></VOTABLE>')
    with pytest.raises(FileContentError, match=r"none\.xml: not a readable VOTable \(No table found"):
        read_table(path)


def test_text_and_missing_integers(tmp_path):
    path = tmp_path / "text.vot"
    Table({"W": ["blue", "red"]}).write(path, format="votable")
    with pytest.raises(FileContentError, match=r"text\.vot: column 'W', data row 1: .*blue.* is not a number"):
        read_table(path)


def test_a_number_that_is_none_is_not_a_number(whole):
    for text in ("<TD></TD>", "<TD>over</TD>", "<TD>NaN</TD>"):
        found = np.asarray(read_table(changed(whole, "<TD>0.4</TD>", text))["Transmission"])
        assert np.isnan(found).tolist() == [False, True, False, False]


SPELT = {
    "angstroms": u.AA,
    "ANGSTROMS": u.AA,
    "AA": u.AA,
    "micron": u.um,
    "microns": u.um,
    "Microns": u.um,
    "0.1nm": 0.1 * u.nm,
    "0.1 nm": 0.1 * u.nm,
    "NM": u.nm,
    "nanometers": u.nm,
}


@pytest.mark.parametrize("text", SPELT)
@pytest.mark.parametrize("form", ["csv", "ecsv", "fits", "vot"])
def test_off_standard_spellings_are_taken_with_a_note(tmp_path, whole, text, form):
    path = tmp_path / f"s.{form}"
    if form == "csv":
        path.write_text(f"Wavelength [{text}],T\n" + "".join(f"{x},{y}\n" for x, y in zip(X, Y, strict=True)))
    elif form == "ecsv":
        columns = f"# - {{name: Wavelength, unit: {text}, datatype: float64}}\n# - {{name: T, datatype: float64}}\n"
        head = f"# %ECSV 1.0\n# ---\n# datatype:\n{columns}"
        path.write_text(head + "Wavelength T\n" + "".join(f"{x} {y}\n" for x, y in zip(X, Y, strict=True)))
    elif form == "fits":
        columns = [fits.Column("Wavelength", "D", unit=text, array=X), fits.Column("T", "D", array=Y)]
        fits.HDUList([fits.PrimaryHDU(), fits.BinTableHDU.from_columns(columns)]).writeto(path)
    else:
        path = changed(whole, 'unit="nm"', f'unit="{text}"', "s.vot")
    table = read_table(path)
    assert table["Wavelength"].unit == SPELT[text]
    (note,) = table.meta["unit_notes"] or ("",)
    standard = (form, text) in {("ecsv", "AA")}
    assert standard == (note == "")
    if not standard:
        assert note.startswith(f"{path}: column 'Wavelength': the unit '")
        assert "is no standard spelling; taken as" in note


def test_an_unknown_unit_is_left_out_with_a_note(tmp_path):
    path = tmp_path / "odd.fits"
    columns = [fits.Column("W", "D", unit="furlongs per blink", array=X), fits.Column("T", "D", array=Y)]
    fits.HDUList([fits.PrimaryHDU(), fits.BinTableHDU.from_columns(columns)]).writeto(path)
    table = read_table(path)
    assert table["W"].unit is None
    assert "column 'W': the unit 'furlongs per blink' is not known here and was left out" in table.meta["unit_notes"][0]


def test_standard_spellings_leave_no_note():
    for text in ("Angstrom", "angstrom", "nm", "um", "m", "THz", "%", "percent", "1/cm", ""):
        unit, off_standard = settled(text)
        assert unit == u.Unit(text)
        assert not off_standard
    assert settled(None) == (None, False)
    assert all(key == key.casefold() for key in SPELLINGS)


def test_the_row_of_a_broken_ecsv_is_named(tmp_path):
    head = "# %ECSV 1.0\n# ---\n# datatype:\n# - {name: w, unit: nm, datatype: float64}\n# - {name: t, datatype: float64}\nw t\n"
    for row in ("1.1 x", "1.1", "1.1 2 3"):
        path = tmp_path / "r.ecsv"
        path.write_text(f"{head}1.0 2.0\n{row}\n1.2 2.0\n")
        with pytest.raises(FileContentError, match=r"r\.ecsv: not valid ECSV in data row 2 \("):
            read_table(path)


def test_the_row_of_a_ragged_csv_is_named(tmp_path):
    path = tmp_path / "r.csv"
    path.write_text("w,t\n1,2\n1,2,3\n")
    with pytest.raises(FileContentError, match=r"r\.csv: not valid CSV in data row 2 \("):
        read_table(path)
