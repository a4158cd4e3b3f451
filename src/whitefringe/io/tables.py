"""Tables of numbers with units: CSV, ECSV, FITS, VOTable, and bare columns of numbers.

The format is told by the file's name and first line; units come from the header (ECSV, FITS, VOTable, or a CSV column name such as
``wavelength [nm]``). Nothing is guessed: a column without a unit has none, and an off-standard spelling that is understood is noted.
"""

from __future__ import annotations

import csv
import hashlib
import re
import warnings
from collections.abc import Collection
from pathlib import Path
from typing import TYPE_CHECKING, Any

import astropy.units as u
import numpy as np

from ..errors import FileContentError
from ._atomic import atomic
from ._spellings import settled
from ._votable import is_votable, read_votable

if TYPE_CHECKING:
    from astropy.table import Table

FITS_ENDINGS = (".fits", ".fit", ".fts", ".fits.gz")
_NAME_WITH_UNIT = re.compile(r"^\s*(?P<name>[^\[\(]*?)\s*[\[\(](?P<unit>[^\]\)]*)[\]\)]\s*$")


def read_table(path: str | Path, *, text: Collection[str] = ()) -> Table:
    """Read a table of numbers with the units that its header states.

    Parameters
    ----------
    path : path
        ``.fits`` (first binary table), VOTable (first table), ECSV (known by its first line), CSV with a header line, or columns of
        numbers without a header, separated by blanks or commas (columns are then named ``col0``, ``col1``, ...).
    text : names
        Columns that hold words; all others must hold numbers.

    Returns
    -------
    astropy.table.Table
        ``meta["path"]`` and ``meta["format"]`` say what was read, ``meta["unit_notes"]`` which off-standard unit was taken for which.

    Raises
    ------
    FileContentError
        The file is missing, empty, truncated, or has a row or entry that is not a number.
    """
    path = Path(path)
    if path.is_dir():
        raise FileContentError(f"{path}: this is a folder, not a file")
    if not path.is_file():
        raise FileContentError(f"{path}: no such file")
    if path.stat().st_size == 0:
        raise FileContentError(f"{path}: the file is empty")
    kind, reader = _reader_for(path)
    table = _all_numbers(reader(path), path, text)
    if len(table) == 0:
        raise FileContentError(f"{path}: the table has no rows")
    table.meta["unit_notes"] = tuple(table.meta["unit_notes"] if kind == "CSV" else _settle_units(table, path))
    table.meta["path"], table.meta["format"] = str(path), kind
    return table


def _reader_for(path: Path) -> tuple[str, Any]:
    if path.name.lower().endswith(FITS_ENDINGS):
        return "FITS table", _read_fits
    if is_votable(path):
        return "VOTable", _read_votable
    try:
        first = _first_line(path)
    except UnicodeDecodeError:
        raise FileContentError(f"{path}: not a text file, and its name does not end in .fits") from None
    if first.startswith("# %ECSV"):
        return "ECSV", _read_ecsv
    if _is_numeric(first):
        return "numbers without a header", _read_bare
    return "CSV", _read_csv


def _first_line(path: Path) -> str:
    with path.open(encoding="utf-8-sig") as lines:
        for line in lines:
            if line.startswith("# %ECSV") or (line.strip() and not line.lstrip().startswith("#")):
                return line.strip()
    raise FileContentError(f"{path}: the file holds no data, only blank or comment lines")


def _is_numeric(line: str) -> bool:
    fields = [field for field in re.split(r"[,\s]+", line) if field]
    try:
        [float(field) for field in fields]
    except ValueError:
        return False
    return bool(fields)


def _read_fits(path: Path) -> Table:
    from astropy.io.fits.verify import VerifyError
    from astropy.table import Table
    from astropy.utils.exceptions import AstropyWarning

    try:
        with path.open("rb") as stream, warnings.catch_warnings():
            warnings.simplefilter("error", AstropyWarning)
            warnings.filterwarnings("ignore", category=u.UnitsWarning)
            warnings.filterwarnings("ignore", message=".*reading in first available table", category=AstropyWarning)
            table = Table.read(stream, format="fits")
    except (OSError, ValueError, TypeError, IndexError, KeyError, VerifyError, AstropyWarning) as error:
        raise FileContentError(f"{path}: not a readable FITS table, or cut short ({_line(error)})") from None
    for name in table.colnames:
        _nan_where_masked(table, name)
    return table


def _nan_where_masked(table: Table, name: str) -> None:
    """FITS and VOTable have no other mark for a number that is not there than NaN; astropy masks it."""
    column = table[name]
    if column.dtype.kind == "f" and getattr(column, "mask", None) is not None:
        table[name] = column.filled(np.nan)


def _settle_units(table: Table, path: Path) -> list[str]:
    """Replace units that only their spelling makes unknown; leave out those that stay unknown; say both."""
    notes = []
    for name in table.colnames:
        written = table[name].unit
        unit, off_standard = settled(written)
        table[name].unit = unit
        if off_standard:
            notes.append(_unit_note(path, name, written, unit))
    return notes


def _unit_note(path: Path, name: str, written: Any, unit: Any) -> str:
    meaning = "is not known here and was left out" if unit is None else f"is no standard spelling; taken as {unit}"
    return f"{path}: column {name!r}: the unit {str(written)!r} {meaning}"


def _read_votable(path: Path) -> Table:
    table = read_votable(path)
    for name in table.colnames:
        _nan_where_masked(table, name)
    return table


def _read_ecsv(path: Path) -> Table:
    from astropy.table import Table

    lines = path.read_text(encoding="utf-8-sig").splitlines()
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", u.UnitsWarning)
            return Table.read(lines, format="ascii.ecsv")
    except Exception as error:  # the ECSV reader has no error class of its own
        raise FileContentError(f"{path}: not valid ECSV{_row_of_fault(lines)} ({_line(error)})") from None


def _row_of_fault(lines: list[str]) -> str:
    """Say which data row of an ECSV has another number of entries than the header, or one that is not a number."""
    body = [line for line in lines if line.strip() and not line.startswith("#")]
    separator = "," if any(line.startswith("# delimiter:") and "," in line for line in lines) else " "
    rows = list(csv.reader(body, delimiter=separator, skipinitialspace=True))
    for number, row in enumerate(rows[1:], start=1):
        if len(row) != len(rows[0]) or not all(_is_numeric(entry) for entry in row if entry):
            return f" in data row {number}"
    return ""


def _read_csv(path: Path) -> Table:
    from astropy.io import ascii as text_tables

    if ";" in _first_line(path):
        raise FileContentError(f"{path}: columns separated by semicolons; save the table with commas, and points in the numbers")
    try:
        table = text_tables.read(path, format="csv", comment=r"\s*#", encoding="utf-8-sig", fast_reader=False)
    except Exception as error:  # the reader raises several classes, some of them private
        found = re.search(r"at data line (\d+)", str(error))
        where = f" in data row {int(found[1]) + 1}" if found else ""
        raise FileContentError(f"{path}: not valid CSV{where} ({_line(error)})") from None
    notes = []
    for column in list(table.colnames):
        found = _NAME_WITH_UNIT.match(column)
        if found:
            name = found["name"] or column
            unit, off_standard = settled(found["unit"])
            if unit is None:
                raise FileContentError(f"{path}: column {column!r}: {found['unit']!r} is not a unit that is known here")
            if off_standard:
                notes.append(_unit_note(path, name, found["unit"], unit))
            table[column].unit = unit
            if name != column and name in table.colnames:
                raise FileContentError(f"{path}: column {name!r} stands in the header more than once")
            table.rename_column(column, name)
    table.meta["unit_notes"] = notes
    return table


def _read_bare(path: Path) -> Table:
    from astropy.table import Table

    separator = "," if "," in _first_line(path) else None
    try:
        rows = np.loadtxt(path, delimiter=separator, ndmin=2, encoding="utf-8-sig")
    except ValueError as error:
        # the reader counts rows from 0 in one message and from 1 in another
        what = re.sub(r" at row \d+(?=[,;. ])", "", _line(error))
        raise FileContentError(f"{path}:{_bare_row_of_fault(path, separator)} {what}") from None
    return Table(rows, names=[f"col{k}" for k in range(rows.shape[1])])


def _bare_row_of_fault(path: Path, separator: str | None) -> str:
    try:
        lines = (line.partition("#")[0].strip() for line in path.read_text(encoding="utf-8-sig").splitlines())
    except UnicodeDecodeError:
        return ""
    rows = [line.split(separator) for line in lines if line]
    for number, row in enumerate(rows, start=1):
        if len(row) != len(rows[0]) or not all(_is_numeric(entry) for entry in row):
            return f" data row {number}:"
    return ""


def _all_numbers(table: Table, path: Path, text: Collection[str]) -> Table:
    for name in table.colnames:
        column = table[name]
        if name not in text and column.dtype.kind in "OSU":
            bad = next((row for row, entry in enumerate(column) if not _is_numeric(str(entry))), None)
            if bad is None:
                raise FileContentError(f"{path}: column {name!r} does not hold one number per row, but text")
            raise FileContentError(f"{path}: column {name!r}, data row {bad + 1}: {str(column[bad])!r} is not a number")
        if getattr(column, "mask", None) is not None and np.any(column.mask):
            bad = int(np.flatnonzero(column.mask)[0])
            raise FileContentError(f"{path}: column {name!r}, data row {bad + 1}: the entry is missing")
    return table


def _line(error: BaseException) -> str:
    return " ".join(str(error).split())[:200]


def write_table(table: Table, path: str | Path, *, overwrite: bool = False) -> Path:
    """Write a table as FITS or ECSV, as its name ends, whole or not at all: first beside its place, then moved there.

    Raises
    ------
    FileContentError
        The name is a folder's, or has another ending than ``.ecsv`` and those of FITS; the file exists and `overwrite` is false; or there
        is no folder to write to.
    """
    path = Path(path)
    if path.is_dir():
        raise FileContentError(f"{path}: this is a folder; give the name of a file in it, such as {path / 'table.ecsv'}")
    if not path.name.lower().endswith((".ecsv", *FITS_ENDINGS)):
        raise FileContentError(f"{path}: the name must end in .ecsv, or for a FITS table in one of {', '.join(FITS_ENDINGS)}")
    if path.exists() and not overwrite:
        raise FileContentError(f"{path}: the file exists; say overwrite=True (--overwrite) to replace it")
    if not path.parent.is_dir():
        raise FileContentError(f"{path}: there is no folder {path.parent} to write to")
    kind = "fits" if path.name.lower().endswith(FITS_ENDINGS) else "ascii.ecsv"
    with atomic(path) as part:
        table.write(part, format=kind, overwrite=True)
    return path


def sha256_of(path: str | Path) -> str:
    """Return the SHA-256 checksum of a file, as hexadecimal text."""
    with Path(path).open("rb") as stream:
        return hashlib.file_digest(stream, "sha256").hexdigest()
