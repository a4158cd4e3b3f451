"""Unit spellings met in files that no standard knows, and what they mean."""

from __future__ import annotations

from typing import Any

import astropy.units as u

SPELLINGS: dict[str, u.UnitBase] = {
    "aa": u.AA,
    "ang": u.AA,
    "angstroms": u.AA,
    "micron": u.um,
    "microns": u.um,
    "nanometers": u.nm,
    "nanometres": u.nm,
    "micrometers": u.um,
    "micrometres": u.um,
    "pct": u.percent,
}
"""Spelling in lower case -> unit. ``"A"`` is not here: it is the ampere in every standard, whatever a file means by it."""


def settled(written: Any) -> tuple[u.UnitBase | None, bool]:
    """Return the unit that a text or an unrecognised unit stands for (none when it cannot be told), and whether it was off-standard."""
    if written is None:
        return None, False
    text = str(written).strip()
    known = SPELLINGS.get(text.casefold())
    if known is not None:
        return known, True
    try:
        unit = u.Unit(text)  # also of what a reader took for a unit of the writer's own, as VOTables may have
    except (TypeError, ValueError):
        return _in_lower_case(text), True
    # unrecognised by the format, but not by astropy; or a length such as "0.1nm"
    return unit, isinstance(written, u.UnrecognizedUnit) or _has_a_factor(unit)


def _has_a_factor(unit: u.UnitBase) -> bool:
    return isinstance(unit, u.CompositeUnit) and unit.scale != 1.0


def _in_lower_case(text: str) -> u.UnitBase | None:
    for spelling in (text.lower().rstrip("s"), text.lower()):
        try:
            found: u.UnitBase = u.Unit(spelling)
        except ValueError:
            continue
        return found
    return None
