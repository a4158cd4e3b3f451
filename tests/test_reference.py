"""Every published number says where it is from and how far it can be trusted."""

import astropy.units as u
import numpy as np
import pytest
from astropy.table import Table

from .published import FOLDER, TAGS, inputs_of

FILES = sorted(FOLDER.glob("*.ecsv"))


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.stem)
def test_rows_are_complete(path):
    table = Table.read(path, format="ascii.ecsv")
    assert not table.has_masked_values
    assert {"quantity", "inputs", "value", "source", "tag"} <= set(table.colnames)
    assert set(table["tag"]) <= set(TAGS)
    assert all(len(source) > 5 for source in table["source"])
    assert np.all(np.isfinite(table["value"]))


@pytest.mark.parametrize("name", ["air", "closed_forms", "geometry", "photometric", "sources", "thermal", "visibility"])
def test_units_and_inputs_can_be_read(name):
    for row in Table.read(FOLDER / f"{name}.ecsv", format="ascii.ecsv"):
        u.Unit(str(row["unit"]))
        assert inputs_of(str(row["inputs"]))
        assert 0 < row["tolerance"] < 0.1
