"""The same scan from every kind of file, by column name or index; and files that are refused."""

import astropy.units as u
import numpy as np
import pytest
from astropy.table import Table

from whitefringe.errors import FileContentError, ScanLayoutError
from whitefringe.io import sha256_of
from whitefringe.scans import ScanLayout, read_scan, reduce_scan
from whitefringe.units import STEP

PATH = np.round(np.linspace(-60.0, 60.0, 601), 3)
BY_NAME = {"signal": "detector", "position": "stage"}
BY_INDEX = {"signal": 1, "position": 0}
FORMATS = {
    "blanks.txt": "numbers without a header",
    "commas.csv": "numbers without a header",
    "header.csv": "CSV",
    "table.ecsv": "ECSV",
    "table.fits": "FITS table",
}
BARE = ("blanks.txt", "commas.csv")


@pytest.fixture(scope="module")
def counts(lamp_counts):
    return lamp_counts(PATH)


@pytest.fixture(scope="module")
def files(tmp_path_factory, counts):
    folder = tmp_path_factory.mktemp("scans")
    rows = np.column_stack([PATH, counts])
    np.savetxt(folder / "blanks.txt", rows, fmt="%.3f %.0f", header="recorded on the bench")
    np.savetxt(folder / "commas.csv", rows, fmt="%.3f,%.0f")
    np.savetxt(folder / "header.csv", rows, fmt="%.3f,%.0f", header="stage [um],detector", comments="")
    table = Table({"stage": PATH * u.um, "detector": counts})
    table.write(folder / "table.ecsv")
    table.write(folder / "table.fits")
    return folder


def write(folder, text, name="scan.csv"):
    path = folder / name
    path.write_text(text, encoding="utf-8")
    return path


@pytest.mark.parametrize("name", FORMATS)
@pytest.mark.parametrize("columns", [BY_NAME, BY_INDEX])
def test_every_format_gives_the_same_scan(files, counts, name, columns):
    if columns is BY_NAME and name in BARE:
        columns = {"signal": "col1", "position": "col0"}
    scan = read_scan(files / name, ScanLayout(**columns))
    np.testing.assert_array_equal(scan.signal, counts)
    np.testing.assert_array_equal(scan.position.value, PATH)
    assert scan.position.unit == (STEP if name in BARE else u.um)
    assert scan.name == name


@pytest.mark.parametrize("name", FORMATS)
def test_every_format_gives_the_same_numbers(files, scan_of, counts, name):
    scale = {"opd_per_step": 1 * u.um} if name in BARE else {}
    result = reduce_scan(read_scan(files / name, ScanLayout(**BY_INDEX, **scale)))
    assert result.rows == reduce_scan(scan_of(PATH, counts)).rows


@pytest.mark.parametrize(("name", "words"), FORMATS.items())
def test_provenance(files, name, words):
    path = files / name
    scan = read_scan(path, ScanLayout(**BY_INDEX))
    assert scan.provenance == {"path": str(path), "format": words, "rows": "601", "sha256": sha256_of(path)}


def test_without_a_position_rows_are_steps(files):
    scan = read_scan(files / "header.csv", ScanLayout(signal="detector"))
    np.testing.assert_array_equal(scan.position.value, np.arange(601))
    assert scan.position.unit == STEP


def test_reference_and_time(tmp_path):
    path = write(tmp_path, "t [ms],a,b\n" + "\n".join(f"{k},{2 * k},{3 * k}" for k in range(5)))
    layout = ScanLayout(signal="a", reference="b", reference_wavelength=633 * u.nm, time="t")
    scan = read_scan(path, layout)
    np.testing.assert_array_equal(scan.signals["reference"], 3.0 * np.arange(5))
    assert scan.time.unit == u.ms
    bare = write(tmp_path, "\n".join(f"{k} {2 * k}" for k in range(5)), "bare.txt")
    assert read_scan(bare, ScanLayout(signal=1, time=0)).time.unit == u.s


def test_integer_columns_become_numbers(tmp_path):
    table = Table({"stage": np.arange(40, dtype=np.int16), "detector": np.arange(40, dtype=np.uint16)})
    table.write(tmp_path / "whole.fits")
    scan = read_scan(tmp_path / "whole.fits", ScanLayout(**BY_NAME))
    assert scan.signal.dtype == float
    assert scan.position.dtype == float


def test_file_names_of_any_alphabet(tmp_path, files):
    path = tmp_path / "été 干涉 [1].csv"
    path.write_bytes((files / "header.csv").read_bytes())
    assert read_scan(path, ScanLayout(**BY_NAME)).name == path.name


@pytest.mark.parametrize(
    ("layout", "message"),
    [
        ({"signal": "counts"}, "table.ecsv: the layout's signal column 'counts' is not there; the file has 2: stage, detector"),
        ({"signal": 2}, "the layout's signal column 2 is not there"),
        ({"signal": -1}, "the layout's signal column -1 is not there"),
        ({"signal": 1, "position": "x"}, "the layout's position column 'x' is not there"),
        ({"signal": 1, "time": 7}, "the layout's time column 7 is not there"),
        ({"signal": 1, "reference": 3, "reference_wavelength": 633 * u.nm}, "the layout's reference column 3 is not there"),
        (
            {**BY_NAME, "opd_per_step": 37 * u.pm},
            "position column is in um, so the layout must not give a length per step as well",
        ),
        ({**BY_NAME, "stage_per_step": 37 * u.pm, "passes": 2}, "must not give a length per step as well"),
    ],
)
def test_layouts_that_do_not_fit(files, layout, message):
    with pytest.raises(ScanLayoutError, match=message):
        read_scan(files / "table.ecsv", ScanLayout(**layout))


@pytest.mark.parametrize("unit", ["s", "V", "deg"])
def test_a_position_in_another_unit(tmp_path, unit):
    path = write(tmp_path, f"stage [{unit}],detector\n" + "\n".join(f"{k},{k}" for k in range(40)))
    with pytest.raises(ScanLayoutError, match=f"position column is in {unit}; it must be a length, or steps without a unit"):
        read_scan(path, ScanLayout(**BY_NAME))


def test_a_time_in_another_unit(tmp_path):
    path = write(tmp_path, "t [kg],detector\n" + "\n".join(f"{k},{k}" for k in range(40)))
    with pytest.raises(ScanLayoutError, match="time"):
        read_scan(path, ScanLayout(signal="detector", time="t"))


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", "the file is empty"),
        ("# only a comment\n", "the file holds no data"),
        ("stage,detector\n", "the table has no rows"),
        ("stage,detector\n1,2\n2,none\n", "column 'detector', data row 2: .*none.* is not a number"),
        ("stage,detector\n1,2\n2,\n", "column 'detector', data row 2: the entry is missing"),
        ("stage,detector\n1,2\n2,nan\n", r"column 'detector' \(signal\), data row 2: not a finite number \(1 such rows\)"),
        ("stage [furlongs],detector\n1,2\n", "'furlongs' is not a unit that is known here"),
        ("stage,detector\n1,2\n2\n", "not valid CSV|data row 2"),
    ],
)
def test_files_that_are_not_a_scan(tmp_path, text, message):
    path = write(tmp_path, text)
    with pytest.raises(FileContentError, match=message) as caught:
        read_scan(path, ScanLayout(**BY_NAME))
    assert str(path) in str(caught.value)


def test_a_missing_file(tmp_path):
    with pytest.raises(FileContentError, match=r"none.csv: no such file"):
        read_scan(tmp_path / "none.csv", ScanLayout())


def test_a_fits_column_with_gaps_or_vectors(tmp_path):
    good = np.arange(40.0)
    Table({"stage": good, "detector": np.where(good == 6, np.nan, good)}).write(tmp_path / "gap.fits")
    with pytest.raises(FileContentError, match=r"column 'detector' \(signal\), data row 7: not a finite number \(1 such rows\)"):
        read_scan(tmp_path / "gap.fits", ScanLayout(**BY_NAME))
    Table({"stage": good, "detector": np.ones((40, 3))}).write(tmp_path / "vector.fits")
    with pytest.raises(FileContentError, match=r"column 'detector' \(signal\) does not hold one number per row"):
        read_scan(tmp_path / "vector.fits", ScanLayout(**BY_NAME))
    Table({"stage": good, "detector": good.astype(str)}).write(tmp_path / "words.fits")
    with pytest.raises(FileContentError, match="does not hold one number per row"):
        read_scan(tmp_path / "words.fits", ScanLayout(**BY_NAME))


def test_a_masked_whole_number_column_names_its_row(tmp_path):
    from astropy.table import MaskedColumn

    detector = MaskedColumn(np.arange(40), mask=np.arange(40) == 6)
    Table({"stage": np.arange(40.0), "detector": detector}).write(tmp_path / "masked.fits")
    with pytest.raises(FileContentError, match=r"data row 7: the entry is missing"):
        read_scan(tmp_path / "masked.fits", ScanLayout(**BY_NAME))
