"""VOTables (IVOA recommendation), by astropy's reader."""

from __future__ import annotations

import re
import warnings
from pathlib import Path
from typing import TYPE_CHECKING

from ..errors import FileContentError

if TYPE_CHECKING:
    from astropy.table import Table

VOTABLE_ENDINGS = (".vot", ".votable", ".vot.gz", ".votable.gz")


def is_votable(path: Path) -> bool:
    """Tell a VOTable by its ending, or by its root element near the start of the file."""
    if path.name.lower().endswith(VOTABLE_ENDINGS):
        return True
    with path.open("rb") as stream:
        return re.search(rb"<(\w+:)?VOTABLE[\s>]", stream.read(2000)) is not None


def read_votable(path: Path) -> Table:
    """Read the first table of a VOTable; units as written, numbers that cannot be read as not-a-number.

    Raises
    ------
    FileContentError
        With file, and data row where one is at fault.
    """
    from astropy.io import votable

    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # what real files break of the recommendation, other than their data
            parsed = votable.parse(str(path), verify="ignore", invalid="exception")
            return parsed.get_first_table().to_table(use_names_over_ids=True)
    except Exception as error:  # the XML parser, the reader's numbered warnings and numpy all raise their own
        text = " ".join(str(error).split())
        raise FileContentError(f"{path}: not a readable VOTable{_row(path, text)} ({text[:200]})") from None


def _row(path: Path, message: str) -> str:
    """Say in which data row the reader stopped: it gives line and column of the XML."""
    found = re.search(r"\b(\d+):\d+:", message)
    if not found or path.name.lower().endswith(".gz"):
        return ""
    before = path.read_bytes().splitlines()[: int(found[1])]
    rows = sum(len(re.findall(rb"<(?:\w+:)?TR[\s>]", line)) for line in before)
    return f", data row {rows}" if rows else ""
