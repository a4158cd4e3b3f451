"""Tables that are packaged with whitefringe, in its folder ``data``; ``INDEX.ecsv`` there lists them with their sources."""

from __future__ import annotations

from importlib.resources import files
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from astropy.table import Table


def read_packaged(name: str) -> Table:
    """Return the packaged table `name`, an ECSV file, with its text columns.

    Examples
    --------
    >>> "mercury" in read_packaged("INDEX.ecsv")["element"]
    True
    """
    from astropy.table import Table

    text = (files("whitefringe") / "data" / name).read_text(encoding="utf-8")
    return Table.read(text.splitlines(), format="ascii.ecsv")
