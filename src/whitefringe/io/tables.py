"""Tables of numbers with units: CSV, ECSV, FITS, and bare columns of numbers.

The format is told by the file's name and first line; units come from the header (ECSV, FITS, or a CSV column name such as
``wavelength [nm]``). Nothing is guessed: a column without a unit has none.
"""

from __future__ import annotations

import hashlib
import re
import warnings
from pathlib import Path
from typing import TYPE_CHECKING, Any

import astropy.units as u
import numpy as np

from ..errors import FileContentError
from ._atomic import atomic

if TYPE_CHECKING:
    from astropy.table import Table

FITS_ENDINGS = (".fits", ".fit", ".fts", ".fits.gz")
_NAME_WITH_UNIT = re.compile(r"^\s*(?P<name>[^\[\(]*?)\s*[\[\(](?P<unit>[^\]\)]*)[\]\)]\s*$")


def read_table(path: str | Path) -> Table:
    """Read a table of numbers with the units that its header states.

    Parameters
    ----------
    path : path
        ``.fits`` (first binary table), ECSV (known by its first line), CSV with a header line, or columns of numbers
        without a header, separated by blanks or commas (columns are then named ``col0``, ``col1``, ...).

    Returns
    -------
    astropy.table.Table
        ``meta["path"]`` and ``meta["format"]`` say what was read.

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
    table = reader(path)
    if len(table) == 0:
        raise FileContentError(f"{path}: the table has no rows")
    table.meta["path"], table.meta["format"] = str(path), kind
    return table


def _reader_for(path: Path) -> tuple[str, Any]:
    if path.name.lower().endswith(FITS_ENDINGS):
        return "FITS table", _read_fits
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
        table[name].unit = _fits_unit(table[name].unit)
        _nan_where_masked(table, name)
    return _all_numbers(table, path)


def _nan_where_masked(table: Table, name: str) -> None:
    """FITS has no other mark for a number that is not there than NaN; astropy masks it."""
    column = table[name]
    if column.dtype.kind == "f" and getattr(column, "mask", None) is not None:
        table[name] = column.filled(np.nan)


def _fits_unit(unit: Any) -> Any:
    """Accept a unit's name in the plural or in capitals, which the FITS standard does not know but files hold ("angstroms")."""
    if unit is None or not isinstance(unit, u.UnrecognizedUnit):
        return unit
    for spelling in (unit.name.lower().rstrip("s"), unit.name.lower()):
        try:
            return u.Unit(spelling)
        except ValueError:
            continue
    return None


def _read_ecsv(path: Path) -> Table:
    from astropy.table import Table

    try:
        return _all_numbers(Table.read(path.read_text(encoding="utf-8-sig").splitlines(), format="ascii.ecsv"), path)
    except FileContentError:
        raise
    except Exception as error:  # the ECSV reader has no error class of its own
        raise FileContentError(f"{path}: not valid ECSV ({_line(error)})") from None


def _read_csv(path: Path) -> Table:
    from astropy.io import ascii as text_tables

    try:
        table = text_tables.read(path, format="csv", comment=r"\s*#", encoding="utf-8-sig", fast_reader=False)
    except Exception as error:  # the reader raises several classes, some of them private
        raise FileContentError(f"{path}: not valid CSV ({_line(error)})") from None
    for column in list(table.colnames):
        found = _NAME_WITH_UNIT.match(column)
        if found:
            table[column].unit = _unit(found["unit"], path, column)
            name = found["name"] or column
            if name != column and name in table.colnames:
                raise FileContentError(f"{path}: column {name!r} stands in the header more than once")
            table.rename_column(column, name)
    return _all_numbers(table, path)


def _read_bare(path: Path) -> Table:
    from astropy.table import Table

    separator = "," if "," in _first_line(path) else None
    try:
        rows = np.loadtxt(path, delimiter=separator, ndmin=2, encoding="utf-8-sig")
    except ValueError as error:
        raise FileContentError(f"{path}: {_line(error)}") from None
    return Table(rows, names=[f"col{k}" for k in range(rows.shape[1])])


def _unit(text: str, path: Path, column: str) -> u.UnitBase:
    try:
        return u.Unit(text)
    except ValueError:
        raise FileContentError(f"{path}: column {column!r}: {text!r} is not a unit that is known here") from None


def _all_numbers(table: Table, path: Path) -> Table:
    for name in table.colnames:
        column = table[name]
        if column.dtype.kind in "OSU":
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
    """Write a table as ECSV, whole or not at all: first beside its place, then moved there.

    Raises
    ------
    FileContentError
        The file exists and `overwrite` is false.
    """
    path = Path(path)
    if path.exists() and not overwrite:
        raise FileContentError(f"{path}: the file exists; say overwrite=True to replace it")
    if not path.parent.is_dir():
        raise FileContentError(f"{path}: there is no folder {path.parent} to write to")
    with atomic(path) as part:
        table.write(part, format="ascii.ecsv", overwrite=True)
    return path


def sha256_of(path: str | Path) -> str:
    """Return the SHA-256 checksum of a file, as hexadecimal text."""
    with Path(path).open("rb") as stream:
        return hashlib.file_digest(stream, "sha256").hexdigest()
