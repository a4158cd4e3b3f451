"""Shared by all tests: the repository's places, and Larkmoor's bench."""

import os
from pathlib import Path

import pytest

# errors in widget callbacks are raised again here and in the kernels that nbval starts
# two cores: threads of small matrix products only wait for each other
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
os.environ["WHITEFRINGE_STRICT"] = "1"
os.environ.setdefault("MPLBACKEND", "agg")


@pytest.fixture(scope="session")
def repository() -> Path:
    return Path(__file__).resolve().parents[1]


@pytest.fixture(scope="session")
def larkmoor(repository: Path) -> Path:
    return repository / "notebooks" / "larkmoor"
