"""The invented bench: its files are what the code writes, and all say that they are invented."""

from pathlib import Path

import astropy.units as u
import numpy as np
import pytest
from astropy.table import Table

from whitefringe import demo, spectra
from whitefringe.errors import FileContentError
from whitefringe.scans import read_scan
from whitefringe.setup import Setup

LARKMOOR = Path(__file__).resolve().parents[1] / "notebooks" / "larkmoor"
NAMES = ("bench.toml", "bench_filter.ecsv", "bench_scan.ecsv", "bench_scan_tilted.ecsv", "array.toml")
TABLES = NAMES[1:4]


@pytest.fixture(scope="module")
def written(tmp_path_factory):
    folder = tmp_path_factory.mktemp("larkmoor")
    assert demo.write_bench(folder) == tuple(folder / name for name in NAMES)
    return folder


def test_nothing_else_is_written(written):
    assert sorted(path.name for path in written.iterdir()) == sorted(NAMES)


@pytest.mark.parametrize("name", ["bench.toml", "array.toml"])
def test_the_setups_in_the_repository_are_the_ones_written(written, name):
    assert (LARKMOOR / name).read_bytes() == (written / name).read_bytes()


@pytest.mark.parametrize("name", TABLES)
def test_the_tables_in_the_repository_are_the_ones_written(written, name):
    """Rows byte for byte; the header by what it says, since astropy may lay it out in another way one day."""

    def rows(path):
        return [line for line in path.read_bytes().splitlines() if not line.startswith(b"#")]

    assert rows(LARKMOOR / name) == rows(written / name)
    kept, made = (Table.read(folder / name, format="ascii.ecsv") for folder in (LARKMOOR, written))
    assert kept.meta == made.meta
    assert [column.unit for column in kept.itercols()] == [column.unit for column in made.itercols()]


@pytest.mark.parametrize("name", NAMES)
def test_every_file_says_that_it_is_invented(written, name):
    assert "invented" in (written / name).read_text(encoding="utf-8").split("\n\n")[0]


def test_objects_say_that_they_are_invented():
    assert "invented" in demo.bench_filter().origin
    assert demo.bench_scan(seed=4).provenance["origin"] == "invented; whitefringe.demo.bench_scan, seed 4"


def test_existing_files_are_kept(tmp_path):
    (tmp_path / "bench_scan.ecsv").write_text("mine", encoding="utf-8")
    with pytest.raises(FileContentError, match=r"bench_scan.ecsv: the file exists; say overwrite=True \(--overwrite\) to replace it"):
        demo.write_bench(tmp_path)
    assert [path.name for path in tmp_path.iterdir()] == ["bench_scan.ecsv"]
    assert (tmp_path / "bench_scan.ecsv").read_text(encoding="utf-8") == "mine"
    demo.write_bench(tmp_path, overwrite=True)
    assert (tmp_path / "bench_scan.ecsv").read_bytes() == (LARKMOOR / "bench_scan.ecsv").read_bytes()


def test_the_folder_must_be_there(tmp_path):
    with pytest.raises(FileContentError, match="no such folder; make it first"):
        demo.write_bench(tmp_path / "none")


def test_the_seed_decides(tmp_path):
    one, same, other = demo.bench_scan(seed=1), demo.bench_scan(seed=1), demo.bench_scan(seed=2)
    np.testing.assert_array_equal(one.signal, same.signal)
    np.testing.assert_array_equal(one.position, same.position)
    assert np.any(one.signal != other.signal)


def test_written_scans_read_back_as_simulated(written):
    layout = Setup.read(written / "bench.toml").layout
    scan, simulated = read_scan(written / "bench_scan.ecsv", layout), demo.bench_scan()
    assert scan.layout == simulated.layout
    np.testing.assert_allclose(scan.position.to_value(u.um), simulated.position.to_value(u.um), atol=5.001e-6)
    np.testing.assert_allclose(scan.signal, simulated.signal, atol=0.5001)


def test_written_curve_reads_back(written):
    curve = Setup.read(written / "bench.toml").filters[0]
    at = np.linspace(1.41, 1.89, 97) * u.um
    np.testing.assert_allclose(curve.transmission(at), demo.bench_filter().transmission(at), atol=1e-12)


def test_the_tilted_scan_has_shorter_waves(written):
    upright, tilted = (
        spectra.mean_wavelength(spectra.detected(demo.LAMP, item)).value
        for item in (
            demo.bench_filter(),
            spectra.Tilted(filter=demo.bench_filter(), angle=demo.TILT, effective_index=1.8),
        )
    )
    assert float(tilted / upright) == pytest.approx(0.988, abs=2e-3)
