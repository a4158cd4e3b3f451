"""What a control must know of a shape's parameter: its label, unit and usual range.

Every member of a family (filter shapes, sources) describes its fields with `parameter(...)`; one generic control, the setup file
and the documentation read that description, so that a new member is written in one place.
"""

from __future__ import annotations

from dataclasses import MISSING, dataclass, field, fields
from typing import Any

import astropy.units as u


@dataclass(frozen=True, kw_only=True)
class Parameter:
    """Description of one field: `label`, display `unit`, slider range `low` to `high` by `step`, and `start`."""

    label: str
    unit: u.UnitBase
    low: float
    high: float
    step: float
    start: float


def parameter(label: str, unit: u.UnitBase, *, low: float, high: float, step: float, start: float, default: Any = MISSING) -> Any:
    """Return a dataclass field that carries its `Parameter` description, with a `default` where the field need not be given."""
    described = Parameter(label=label, unit=unit, low=low, high=high, step=step, start=start)
    return field(default=default, metadata={"parameter": described})


def parameters_of(shape: Any) -> dict[str, Parameter]:
    """Return the described fields of a shape (class or instance), by name, in order.

    Examples
    --------
    >>> from whitefringe.spectra import TopHat
    >>> list(parameters_of(TopHat))
    ['centre', 'width']
    """
    return {f.name: f.metadata["parameter"] for f in fields(shape) if "parameter" in f.metadata}
