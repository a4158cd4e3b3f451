"""A bench with Larkmoor's setup and scan, and a count of living widgets."""

from collections.abc import Iterator
from pathlib import Path

import ipywidgets
import pytest

from whitefringe.scans import Scan, read_scan
from whitefringe.setup import Setup
from whitefringe.widgets import Bench, BenchPanel


def living_widgets() -> int:
    return len(ipywidgets.widgets.widget._instances)


@pytest.fixture(scope="session")
def setup(larkmoor: Path) -> Setup:
    return Setup.read(larkmoor / "bench.toml")


@pytest.fixture(scope="session")
def scan(larkmoor: Path, setup: Setup) -> Scan:
    return read_scan(larkmoor / "bench_scan.ecsv", setup.layout)


@pytest.fixture
def bench(setup: Setup, scan: Scan) -> Bench:
    return Bench(setup, scan)


@pytest.fixture
def panel(bench: Bench) -> Iterator[BenchPanel]:
    with BenchPanel(bench) as made:
        yield made
