"""Benches with Larkmoor's setups, scan and night, and a count of living widgets."""

from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path
from typing import Any

import astropy.units as u
import ipywidgets
import numpy as np
import pytest

from whitefringe import sky
from whitefringe.scans import Scan, read_scan
from whitefringe.setup import Setup
from whitefringe.widgets import Bench, BenchPanel, NightPanel

BULLETIN = sky.EarthOrientation.fixed(ut1_utc=-0.092 * u.s, uncertainty=4 * u.ms)


def night(bench: Bench) -> sky.Observation:
    return bench.setup.observation


def finite(mark: Any) -> Any:
    return mark.y[np.isfinite(mark.y)]


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


@pytest.fixture(scope="session")
def array_setup(larkmoor: Path) -> Setup:
    setup = Setup.read(larkmoor / "array.toml")
    night = replace(setup.observation, orientation=BULLETIN, step=10 * u.min)
    _ = night.table, night.windows
    return replace(setup, observation=night)


@pytest.fixture
def night_bench(array_setup: Setup) -> Bench:
    return Bench(array_setup)


@pytest.fixture
def night_panel(night_bench: Bench) -> Iterator[NightPanel]:
    with NightPanel(night_bench) as made:
        yield made
