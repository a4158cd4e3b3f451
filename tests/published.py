"""Published numbers: the rows of `reference/*.ecsv`, for parametrised tests."""

from __future__ import annotations

from pathlib import Path
from typing import NamedTuple

import astropy.units as u
import pytest
from astropy.table import Table

FOLDER = Path(__file__).parent / "reference"

TAGS = ("seen", "memory", "derived", "common practice")


class Published(NamedTuple):
    """One printed number: `inputs` by name, and the relative `tolerance` that its digits allow."""

    inputs: dict[str, str]
    value: float
    unit: u.UnitBase
    tolerance: float
    source: str

    def quantity(self, name: str) -> u.Quantity:
        return u.Quantity(self.inputs[name])

    def approx(self, absolute: float = 1e-12) -> object:
        return pytest.approx(self.value, rel=self.tolerance, abs=absolute)


def rows(file: str, quantity: str, **only: tuple[str, ...]) -> list[object]:
    """Rows of one quantity, each as a parameter whose id says what it is; `only` narrows an input to some values."""
    table = Table.read(FOLDER / f"{file}.ecsv", format="ascii.ecsv")
    chosen = [row for row in table if row["quantity"] == quantity and _fits(inputs_of(str(row["inputs"])), only)]
    assert chosen, f"{file}.ecsv has no row of {quantity!r}"
    return [
        pytest.param(
            Published(
                inputs=inputs_of(str(row["inputs"])),
                value=float(row["value"]),
                unit=u.Unit(str(row["unit"])),
                tolerance=float(row["tolerance"]),
                source=str(row["source"]),
            ),
            id=f"{quantity}: {row['inputs']}",
        )
        for row in chosen
    ]


def _fits(inputs: dict[str, str], only: dict[str, tuple[str, ...]]) -> bool:
    return all(inputs[name] in values for name, values in only.items())


def inputs_of(text: str) -> dict[str, str]:
    """``"shape=gaussian; x=0.5"`` as a dictionary."""
    pairs = (item.split("=") for item in text.split(";"))
    return {name.strip(): value.strip() for name, value in pairs}
