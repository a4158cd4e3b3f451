"""Reading tables: forms, units, and every fault with its file, row and column."""

import astropy.units as u
import numpy as np
import pytest
from astropy.table import Table

from whitefringe.errors import FileContentError
from whitefringe.io import read_table, sha256_of

CSV = "time [s],signal [V],flag\n0.1,1.5,0\n0.2,2.5,1\n0.3,3.5,0\n"


@pytest.fixture
def put(tmp_path):
    def write(name, content):
        path = tmp_path / name
        path.write_bytes(content if isinstance(content, bytes) else content.encode())
        return path

    return write


def is_the_table(table):
    assert table.colnames == ["time", "signal", "flag"]
    assert table["time"].unit == u.s
    assert table["signal"].unit == u.V
    assert table["flag"].unit is None
    assert np.asarray(table["signal"]).tolist() == [1.5, 2.5, 3.5]


@pytest.mark.parametrize(
    "text",
    [
        CSV,
        CSV.replace("\n", "\r\n"),
        "\ufeff" + CSV,
        "\ufeff# written on a bench\r\n" + CSV.replace("\n", "\r\n"),
        "# a comment, with a comma\n\n" + CSV.replace("0.2,", "  # another\n0.2,"),
        CSV.replace(",", " , "),
        CSV.replace("time [s]", '"time (s)"'),
        CSV.rstrip("\n"),
    ],
    ids=["plain", "crlf", "bom", "bom and crlf", "comments", "blanks", "quotes", "no last newline"],
)
def test_csv_with_units(put, text):
    path = put("scan.csv", text)
    table = read_table(path)
    is_the_table(table)
    assert table.meta["path"] == str(path)
    assert table.meta["format"] == "CSV"


def test_csv_units_may_be_percent_or_none(put):
    table = read_table(put("a.csv", "x [],T (%),n\n1,2,3\n"))
    assert table["x"].unit == u.dimensionless_unscaled
    assert table["T"].unit == u.percent
    assert table["n"].unit is None


@pytest.mark.parametrize("bom", ["", "\ufeff"])
@pytest.mark.parametrize("newline", ["\n", "\r\n"])
def test_ecsv(tmp_path, put, newline, bom):
    path = tmp_path / "made.ecsv"
    columns = {"time": [0.1, 0.2, 0.3] * u.s, "signal": [1.5, 2.5, 3.5] * u.V, "flag": [0, 1, 0]}
    Table(columns).write(path)
    table = read_table(put("scan.dat", bom + path.read_text().replace("\n", newline)))
    is_the_table(table)
    assert table.meta["format"] == "ECSV"


@pytest.mark.parametrize("separator", [" ", "   ", "\t", ",", ", "])
@pytest.mark.parametrize("before", ["", "# no header\n", "\ufeff", "\n\n"])
def test_bare_columns(put, separator, before):
    text = before + "\r\n".join(separator.join(row) for row in (("1", "2e-3"), ("-4", ".5"), ("nan", "6")))
    table = read_table(put("bare.txt", text))
    assert table.colnames == ["col0", "col1"]
    assert np.asarray(table["col1"]).tolist() == [0.002, 0.5, 6.0]
    assert table["col0"].unit is None
    assert table.meta["format"] == "numbers without a header"


FAULTY = {
    "empty": ("", "the file is empty"),
    "blank": ("\n  \n# only words\n", "the file holds no data, only blank or comment lines"),
    "header only": ("time [s],signal [V]\n", "the table has no rows"),
    "binary": (bytes(range(256)) * 8, r"not a text file, and its name does not end in \.fits"),
    "late binary": (CSV.encode() + b"\xff\xfe\x00", "not a text file"),
    "far binary": (CSV.encode() * 4000 + b"\xff\xfe\x00", "not valid CSV"),
    "utf-16": (CSV.encode("utf-16"), "not a text file"),
    "letter": ("dear sir\nthis is a letter\nbye, now\n", "not valid CSV"),
    "page": (
        "<html>\n<body>\n<p>404</p>\n</body>\n",
        "column '<html>', data row 1: .*<body>.* is not a number",
    ),
    "short row": (CSV.replace("0.2,2.5,1", "0.2,2.5"), "column 'flag', data row 2: the entry is missing"),
    "long row": (
        CSV.replace("0.2,2.5,1", "0.2,2.5,1,9"),
        "not valid CSV .*inconsistent with data columns .* at data line 1",
    ),
    "gap": (CSV.replace("0.2,2.5,1", "0.2,,1"), "column 'signal', data row 2: the entry is missing"),
    "word": (CSV.replace("2.5", "over"), "column 'signal', data row 2: .*over.* is not a number"),
    "no number": (CSV.replace("2.5", "N/A"), "column 'signal', data row 2: .*N/A.* is not a number"),
    "semicolons": (CSV.replace(",", ";"), "columns separated by semicolons"),
    "unit": (
        CSV.replace("[V]", "[counts per blink]"),
        "column 'signal .*': 'counts per blink' is not a unit that is known",
    ),
    "same name": ("x [nm],x [um]\n1,2\n", "column 'x'.* more than once"),
    "ragged numbers": ("1 2\n3 4\n5\n", "data row 3: the number of columns changed from 2 to 1"),
    "word in numbers": ("1 2\n3 x\n", "data row 2: could not convert string 'x' to float64, column 2"),
    "trailing comma": ("1,2\n3,\n", "data row 2: could not convert string '' to float64, column 2"),
}


@pytest.mark.parametrize("case", FAULTY)
def test_faults_name_the_file_and_the_place(put, case):
    content, message = FAULTY[case]
    with pytest.raises(FileContentError, match=rf"scan\.csv: {message}"):
        read_table(put("scan.csv", content))


def test_a_missing_file(tmp_path):
    with pytest.raises(FileContentError, match=r"nowhere\.csv: no such file"):
        read_table(tmp_path / "nowhere.csv")
    with pytest.raises(FileContentError, match="this is a folder, not a file"):
        read_table(tmp_path)


def test_a_cut_or_broken_ecsv(tmp_path, put):
    path = tmp_path / "made.ecsv"
    Table({"a": [1.0, 2.0] * u.s, "b": [3.0, 4.0]}).write(path)
    text = path.read_text()
    for broken in (text[:60], text[:-5], text.replace("a b\n", "a c\n"), text.replace("2.0 4.0", "2.0 x")):
        with pytest.raises(FileContentError, match=r"cut\.ecsv: not valid ECSV"):
            read_table(put("cut.ecsv", broken))


def test_a_missing_entry_in_ecsv(tmp_path):
    table = Table({"a": [1.0, 2.0], "b": [3.0, 4.0]}, masked=True)
    table["b"].mask[1] = True
    table.write(tmp_path / "gap.ecsv")
    with pytest.raises(FileContentError, match=r"gap\.ecsv: column 'b', data row 2: the entry is missing"):
        read_table(tmp_path / "gap.ecsv")


def test_checksum(put):
    # FIPS 180-4, test vector of the message "abc"
    expected = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    assert sha256_of(put("abc", "abc")) == expected


def test_semicolons_are_named(put):
    with pytest.raises(FileContentError, match="columns separated by semicolons; save the table with commas"):
        read_table(put("scan.csv", "time;signal\n0,1;1,5\n"))
