"""`Measured`: a number that leaves whitefringe, with its uncertainty, definition, method and source."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import astropy.units as u

from .references import CITATIONS


@dataclass(frozen=True, kw_only=True)
class Measured:
    """A value with its one-sigma uncertainty, what it means and how it was had.

    Parameters
    ----------
    value : Quantity
    uncertainty : Quantity or None
        One standard deviation, in the unit of `value`; None for a prediction that has none.
    definition : str
        What the number is.
    method : str
        How it was obtained.
    citation : str
        A key of `whitefringe.references.CITATIONS`, or empty.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(Measured(value=9.0837 * u.um, uncertainty=0.0123 * u.um, definition="bandwidth: c / dnu"))
    9.084 ± 0.012 um (bandwidth: c / dnu)
    """

    value: u.Quantity
    uncertainty: u.Quantity | None = None
    definition: str = ""
    method: str = ""
    citation: str = ""

    def __post_init__(self) -> None:
        object.__setattr__(self, "value", u.Quantity(self.value))
        if self.uncertainty is not None:
            object.__setattr__(self, "uncertainty", u.Quantity(self.uncertainty).to(self.value.unit))
        if self.citation and self.citation not in CITATIONS:
            raise KeyError(f"unknown citation key {self.citation!r}")

    @property
    def unit(self) -> Any:
        """Unit of value and uncertainty."""
        return self.value.unit

    def to(self, unit: u.UnitBase) -> u.Quantity:
        """Return the value in another unit."""
        return self.value.to(unit)

    def to_value(self, unit: u.UnitBase) -> float:
        """Return the bare value in a stated unit."""
        return float(self.value.to_value(unit))

    @property
    def text(self) -> str:
        """Value, uncertainty and unit: two digits of the uncertainty decide how many the value shows."""
        sigma = None if self.uncertainty is None else float(self.uncertainty.value)
        return number_text(float(self.value.value), sigma, self.value.unit)

    def __str__(self) -> str:
        return f"{self.text} ({self.definition})" if self.definition else self.text


def rows_text(rows: Sequence[tuple[str, Measured | str]]) -> str:
    """Lay out named numbers as lines of text, with fixed digits: stable for notebooks under test.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(rows_text([("width", Measured(value=9 * u.um, definition="at half")), ("null", "there is none")]))
    width  9 um  at half
    null   none  there is none
    """
    if not rows:
        return ""
    cells = [(name, v.text, v.definition) if isinstance(v, Measured) else (name, "none", v) for name, v in rows]
    first, second = (max(len(cell[k]) for cell in cells) for k in (0, 1))
    return "\n".join(f"{name:<{first}}  {value:<{second}}  {words}".rstrip() for name, value, words in cells)


def number_text(value: float, sigma: float | None, unit: u.UnitBase | None = None) -> str:
    """Format a number with its uncertainty.

    Examples
    --------
    >>> number_text(0.87654, 0.0123)
    '0.877 ± 0.012'
    >>> number_text(14640.2, 35.1, u.Unit("m"))
    '14640 ± 35 m'
    >>> number_text(1.5, None)
    '1.5'
    """
    suffix = "" if unit is None or unit == u.dimensionless_unscaled else f" {unit}"
    if sigma is None or sigma == 0:
        return f"{value:.6g}{suffix}"
    if not math.isfinite(sigma):
        return f"{value:.6g} ± {sigma}{suffix}"
    decimals = 1 - math.floor(math.log10(float(f"{sigma:.1e}")))
    if -6 < decimals <= 9:
        digits = max(decimals, 0)
        return f"{value:.{digits}f} ± {sigma:.{digits}f}{suffix}"
    return f"{value:.8g} ± {sigma:.2g}{suffix}"
