"""FITS tables: units, cut files, off-standard spellings, and numbers that are marked as missing."""

import gzip

import astropy.units as u
import numpy as np
import pytest
from astropy.io import fits
from astropy.table import Table

from whitefringe.errors import FileContentError
from whitefringe.io import read_table

BLOCK = 2880
"""Bytes of a FITS block (FITS Standard 4.0, sec. 3.1)."""


@pytest.fixture
def whole(tmp_path):
    """A FITS file of a table that fills several blocks."""
    path = tmp_path / "whole.fits"
    x = np.linspace(1500, 1600, 1000)
    Table({"wavelength": x * u.nm, "transmission": np.sin(x) ** 2}).write(path)
    return path


def of_columns(path, *columns):
    fits.HDUList([fits.PrimaryHDU(), fits.BinTableHDU.from_columns(columns)]).writeto(path)
    return path


def test_the_table_and_its_units(whole):
    table = read_table(whole)
    assert table["wavelength"].unit == u.nm
    assert table["transmission"].unit is None
    assert len(table) == 1000
    assert table.meta["format"] == "FITS table"


@pytest.mark.parametrize("name", ["a.fit", "a.FTS", "a.FITS"])
def test_other_endings(whole, name):
    assert len(read_table(whole.rename(whole.parent / name))) == 1000


def test_compressed(whole, tmp_path):
    path = tmp_path / "a.fits.gz"
    path.write_bytes(gzip.compress(whole.read_bytes()))
    assert len(read_table(path)) == 1000


@pytest.mark.parametrize("size", [1, 80, 1000, BLOCK, BLOCK + 400, 2 * BLOCK, 2 * BLOCK + 8000, 4 * BLOCK, 6 * BLOCK + 1])
def test_a_cut_file_is_never_read_as_a_whole_one(whole, tmp_path, size):
    path = tmp_path / "cut.fits"
    path.write_bytes(whole.read_bytes()[:size])
    with pytest.raises(FileContentError, match=r"cut\.fits: not a readable FITS table, or cut short"):
        read_table(path)


def test_a_cut_compressed_file(whole, tmp_path):
    path = tmp_path / "cut.fits.gz"
    data = gzip.compress(whole.read_bytes())
    path.write_bytes(data[: len(data) // 2])
    with pytest.raises(FileContentError, match="not a readable FITS table, or cut short"):
        read_table(path)


def test_no_table_at_all(tmp_path):
    fits.PrimaryHDU(np.ones((4, 4))).writeto(tmp_path / "image.fits")
    (tmp_path / "text.fits").write_text("wavelength,transmission\n1,2\n")
    for name in ("image.fits", "text.fits"):
        with pytest.raises(FileContentError, match=rf"{name}: not a readable FITS table"):
            read_table(tmp_path / name)


def test_the_first_of_several_tables_is_read(tmp_path):
    tables = [fits.table_to_hdu(Table({"a": [float(k)]})) for k in (1, 2)]
    fits.HDUList([fits.PrimaryHDU(), *tables]).writeto(tmp_path / "two.fits")
    assert read_table(tmp_path / "two.fits")["a"][0] == 1.0


def test_an_off_standard_unit_does_not_stop_the_reading(tmp_path):
    # TUNIT as in throughput tables of the Hubble Space Telescope
    path = of_columns(
        tmp_path / "hst.fits",
        fits.Column("WAVELENGTH", "D", unit="angstroms", array=[15000.0, 16000.0]),
        fits.Column("THROUGHPUT", "D", array=[0.0, 1.0]),
    )
    assert np.asarray(read_table(path)["WAVELENGTH"]).tolist() == [15000.0, 16000.0]


def test_an_integer_marked_as_missing_is_an_error(tmp_path):
    path = of_columns(tmp_path / "null.fits", fits.Column("T", "J", null=99, array=[0, 99, 50]))
    with pytest.raises(FileContentError, match=r"null\.fits: column 'T', data row 2: the entry is missing"):
        read_table(path)


def test_text_is_an_error(tmp_path):
    path = of_columns(tmp_path / "text.fits", fits.Column("W", "A5", array=["blue", "red"]))
    with pytest.raises(FileContentError, match=r"text\.fits: column 'W', data row 1: .*blue.* is not a number"):
        read_table(path)
