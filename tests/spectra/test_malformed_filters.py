"""Broken filter files of every format: an error of ours that names the file, and the row where a row is at fault; never anything else."""

import re
import warnings

import astropy.units as u
import numpy as np
import pytest
from astropy.table import Table

from whitefringe.errors import CurveEndsWarning, WhitefringeError
from whitefringe.spectra import Tabulated, read_filter

X = np.linspace(1500, 1600, 21)
Y = np.round(np.sin(np.pi * (X - 1500) / 100) ** 2, 6)
FORMATS = ("csv", "ecsv", "fits", "vot", "dat")


@pytest.fixture(scope="module")
def whole(tmp_path_factory):
    """One good file of each format, as bytes."""
    folder = tmp_path_factory.mktemp("whole")
    table = Table({"wavelength": X * u.nm, "transmission": Y})
    table.write(folder / "h.ecsv", format="ascii.ecsv")
    table.write(folder / "h.fits")
    table.write(folder / "h.vot", format="votable")
    rows = "".join(f"{x:g},{y:g}\n" for x, y in zip(X, Y, strict=True))
    (folder / "h.csv").write_text("wavelength [nm],transmission\n" + rows)
    (folder / "h.dat").write_text(rows.replace(",", " "))
    return {form: (folder / f"h.{form}").read_bytes() for form in FORMATS}


def outcome(path):
    """The error's text, or nothing where the file can still be read. Warnings of ours are no faults; all others are."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", CurveEndsWarning)
        try:
            shape = read_filter(path, wavelength_unit=u.nm if path.suffix == ".dat" else None)
        except WhitefringeError as error:
            return str(error)
    assert isinstance(shape, Tabulated)
    return ""


def rewritten(text, row, change):
    """A text table with one data row (from 1) changed; `row` counts from the first line that starts with a number."""
    lines = text.splitlines()
    first = next(k for k, line in enumerate(lines) if re.match(r"\d", line))
    lines[first + row - 1] = change(lines[first + row - 1])
    return "\n".join(line for line in lines if line is not None) + "\n"


def entry(line, which, value):
    parts = re.split(r"([ ,])", line)
    parts[2 * which] = value
    return "".join(parts)


ROW_FAULTS = {
    "word": lambda line: entry(line, 1, "over"),
    "nan": lambda line: entry(line, 1, "nan"),
    "infinite": lambda line: entry(line, 0, "inf"),
    "negative": lambda line: entry(line, 1, "-0.3"),
    "percent": lambda line: entry(line, 1, "55.0"),
    "out of order": lambda line: entry(line, 0, "1599.5"),
    "short row": lambda line: re.split("[ ,]", line)[0],
    "long row": lambda line: line + ("," if "," in line else " ") + "7",
    "two dots": lambda line: entry(line, 0, "15.1.1"),
}


@pytest.mark.parametrize("row", [3, 8, 14])
@pytest.mark.parametrize("fault", ROW_FAULTS)
@pytest.mark.parametrize("form", ["csv", "ecsv", "dat"])
def test_the_row_at_fault_is_named(tmp_path, whole, form, fault, row):
    path = tmp_path / f"broken.{form}"
    path.write_text(rewritten(whole[form].decode(), row, ROW_FAULTS[fault]))
    message = outcome(path)
    assert message.startswith(str(path))
    # a row that is out of order is found where the next one falls back
    named = (row, row + 1) if fault == "out of order" else (row,)
    assert any(re.search(rf"\brow {k}\b", message) for k in named), message


@pytest.mark.parametrize("row", [3, 8, 14])
@pytest.mark.parametrize(
    ("fault", "value"),
    [("nan", np.nan), ("negative", -0.3), ("percent", 55.0), ("infinite", np.inf)],
)
@pytest.mark.parametrize("form", ["fits", "vot"])
def test_the_row_at_fault_is_named_in_tables_of_numbers(tmp_path, form, fault, value, row):
    path, values = tmp_path / f"broken.{form}", Y.copy()
    values[row - 1] = value
    Table({"wavelength": X * u.nm, "transmission": values}).write(path, format="votable" if form == "vot" else "fits")
    message = outcome(path)
    assert message.startswith(str(path))
    assert f"data row {row}: " in message


@pytest.mark.parametrize("row", [3, 8, 14])
def test_the_row_at_fault_is_named_in_a_votable(tmp_path, whole, row):
    parts = whole["vot"].decode().split("<TR>")
    parts[row] = re.sub(r"<TD>[^<]*</TD>", "", parts[row], count=1)
    path = tmp_path / "broken.vot"
    path.write_text("<TR>".join(parts))
    message = outcome(path)
    assert message.startswith(str(path))
    assert f"data row {row} " in message


def mutated(data, rng):
    """A file with a few random bytes changed, a piece cut out, doubled or swapped, or its end cut off."""
    data, kind = bytearray(data), rng.integers(6)
    first, second = sorted(int(k) for k in rng.integers(0, len(data), 2))
    if kind == 0:
        for place in rng.integers(0, len(data), rng.integers(1, 30)):
            data[place] = rng.integers(256)
    elif kind == 1:
        data = data[:first]
    elif kind == 2:
        del data[first : first + int(rng.integers(1, 40))]
    elif kind == 3:
        data[first:first] = data[second : second + int(rng.integers(1, 200))]
    elif kind == 4:
        lines = bytes(data).split(b"\n")
        rng.shuffle(lines)
        data = bytearray(b"\n".join(lines))
    else:
        for place in rng.integers(0, len(data), rng.integers(1, 20)):
            data[place] = rng.choice(np.frombuffer(b",;<>\"'#-+eE. \t\n[]{}:0x\xff", dtype=np.uint8))
    return bytes(data)


def test_random_damage(tmp_path, whole):
    """Most of 500 damaged files cannot be read: each says so by its name and in no other way; the others are curves still."""
    rng = np.random.default_rng(20240607)
    refused = 0
    for number in range(500):
        form = FORMATS[number % len(FORMATS)]
        path = tmp_path / f"damaged{number}.{form}"
        path.write_bytes(mutated(whole[form], rng))
        message = outcome(path)
        assert not message or path.name in message
        refused += bool(message)
    assert refused >= 200
