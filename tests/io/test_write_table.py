"""Writing a table: whole or not at all."""

import os
import stat

import astropy.units as u
import numpy as np
import pytest
from astropy.table import Table

from whitefringe.errors import FileContentError
from whitefringe.io import read_table, write_table

TABLE = Table({"x": [1.0, 2.0] * u.um, "n": [3, 4]}, meta={"note": "made in a test"})


class Interrupted(Table):
    """A table whose writing stops half way."""

    fault = OSError("no space left")

    def write(self, name, **options):
        with open(name, "w") as stream:
            stream.write("# %ECSV 1.0\nhalf a ta")
        raise self.fault


class Stopped(Interrupted):
    fault = KeyboardInterrupt()


def test_what_is_written_is_read_back(tmp_path):
    path = write_table(TABLE, tmp_path / "a.ecsv")
    assert path == tmp_path / "a.ecsv"
    table = read_table(path)
    assert table["x"].unit == u.um
    assert np.asarray(table["x"]).tolist() == [1.0, 2.0]
    assert table.meta["note"] == "made in a test"
    assert os.listdir(tmp_path) == ["a.ecsv"]


def test_a_path_may_be_text(tmp_path):
    assert write_table(TABLE, str(tmp_path / "a.ecsv")) == tmp_path / "a.ecsv"


def test_an_existing_file_is_kept(tmp_path):
    path = tmp_path / "a.ecsv"
    path.write_text("mine")
    with pytest.raises(FileContentError, match=r"a\.ecsv: the file exists; say overwrite=True \(--overwrite\) to replace it"):
        write_table(TABLE, path)
    assert path.read_text() == "mine"
    assert os.listdir(tmp_path) == ["a.ecsv"]


def test_overwriting_on_request(tmp_path):
    path = tmp_path / "a.ecsv"
    path.write_text("mine")
    write_table(TABLE, path, overwrite=True)
    assert len(read_table(path)) == 2


@pytest.mark.parametrize("kind", [Interrupted, Stopped])
def test_a_failing_write_leaves_the_old_file_and_nothing_else(tmp_path, kind):
    path = tmp_path / "a.ecsv"
    path.write_text("mine")
    with pytest.raises(type(kind.fault)):
        write_table(kind(TABLE), path, overwrite=True)
    assert path.read_text() == "mine"
    assert os.listdir(tmp_path) == ["a.ecsv"]


def test_a_failing_first_write_leaves_nothing(tmp_path):
    with pytest.raises(OSError, match="no space left"):
        write_table(Interrupted(TABLE), tmp_path / "a.ecsv")
    assert os.listdir(tmp_path) == []


def test_a_table_that_ecsv_cannot_hold(tmp_path):
    strange = Table({"a": np.array([object()], dtype=object)})
    with pytest.raises(TypeError, match="not JSON serializable"):
        write_table(strange, tmp_path / "a.ecsv")
    assert os.listdir(tmp_path) == []


def test_others_may_read_what_the_umask_allows(tmp_path):
    old = os.umask(0o027)
    try:
        path = write_table(TABLE, tmp_path / "a.ecsv")
    finally:
        os.umask(old)
    assert stat.S_IMODE(path.stat().st_mode) == 0o640


def test_a_missing_folder_is_named(tmp_path):
    with pytest.raises(FileContentError, match="nowhere"):
        write_table(TABLE, tmp_path / "nowhere" / "a.ecsv")


@pytest.mark.parametrize("name", ["gz.xyz", "table", "a.csv", "a.ecsv.gz", ".ecsv.txt"])
def test_other_endings_are_refused(tmp_path, name):
    with pytest.raises(FileContentError, match=r"must end in \.ecsv, or for a FITS table in one of \.fits, \.fit, \.fts, \.fits\.gz"):
        write_table(TABLE, tmp_path / name)
    assert os.listdir(tmp_path) == []


def test_a_folder_is_refused(tmp_path):
    with pytest.raises(FileContentError, match=r"this is a folder; give the name of a file in it, such as .*table\.ecsv"):
        write_table(TABLE, tmp_path)


def test_a_packed_fits_table(tmp_path):
    path = write_table(TABLE, tmp_path / "a.fits.gz")
    assert path.read_bytes()[:2] == b"\x1f\x8b"
    assert np.asarray(read_table(path)["x"]).tolist() == [1.0, 2.0]
