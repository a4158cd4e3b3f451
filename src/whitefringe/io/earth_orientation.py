"""The Earth orientation table finals2000A: packaged with the dependency astropy-iers-data, or a newer local file. No download."""

from __future__ import annotations

from importlib.metadata import version
from pathlib import Path
from typing import Any

from ..errors import FileContentError


def read_earth_orientation(path: str | Path | None = None) -> tuple[Any, str]:
    """Read a table of Earth orientation in the format finals2000A.

    Parameters
    ----------
    path : path, optional
        A local file; by default the one that comes with the installed package astropy-iers-data.

    Returns
    -------
    table : astropy.utils.iers.IERS_A
    source : str
        Where it came from, for records.

    Raises
    ------
    FileContentError
        There is no such file, or it has another format.

    Examples
    --------
    >>> table, source = read_earth_orientation()
    >>> table.colnames[3], source.split()[0]
    ('MJD', 'finals2000A')
    """
    from astropy.utils import iers

    if path is None:
        return iers.IERS_A.read(iers.IERS_A_FILE), f"finals2000A packaged with astropy-iers-data {version('astropy-iers-data')}"
    file = Path(path)
    if not file.is_file():
        raise FileContentError(f"{file}: no such file; give the path of a local copy of finals2000A.all")
    try:
        return iers.IERS_A.read(file), f"finals2000A from {file.name}"
    except Exception as error:  # the reader lets through whatever its many parts raise
        cause = str(error).strip().splitlines()[0] if str(error).strip() else type(error).__name__
        raise FileContentError(f"{file}: not a table in the format finals2000A ({cause}); give a local copy of finals2000A.all") from None
