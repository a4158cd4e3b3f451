"""Angles in a setup file: '60 deg', or hours or degrees with minutes and seconds."""

from __future__ import annotations

import re
import warnings
from functools import partial
from typing import Annotated, Any

import astropy.units as u
from astropy.coordinates import Angle
from astropy.utils.exceptions import AstropyWarning
from pydantic import BeforeValidator

from .setup_entries import quantity_of

PARTED = re.compile(r"\s*[+-]?\d+(\.\d*)?\s*(?P<unit>[hd:])(?![a-z])")
"""How an angle in hours or degrees with minutes and seconds begins: 04h00m00s, +25d30m."""

ANGLES = 'for example "60 deg", "04h00m00s" or "+25d30m00s"'


def angle_of(value: Any, hours: bool = True) -> Any:
    """Text such as '60 deg', '04h00m00s' or '+25d30m00s' as an angle."""
    if isinstance(value, list):
        raise ValueError(f"must be one angle, {ANGLES}; got {value!r}")
    parted = PARTED.match(value) if isinstance(value, str) else None
    if parted is None:
        quantity = quantity_of(value, "60 deg")
        if isinstance(quantity, u.Quantity) and not quantity.unit.is_equivalent(u.deg):
            raise ValueError(f"must be an angle, {ANGLES}; got {value!r}")
        return quantity
    if parted["unit"] == ":":
        raise ValueError(f'colons leave open whether hours or degrees are meant; write "04h00m00s" or "+25d30m00s"; got {value!r}')
    if parted["unit"] == "h" and not hours:
        raise ValueError(f'is in hours, as only right ascensions and longitudes are; write degrees, as in "+25d30m00s"; got {value!r}')
    with warnings.catch_warnings():
        warnings.simplefilter("error", AstropyWarning)
        try:
            return u.Quantity(Angle(value)).to(u.deg)
        except (TypeError, ValueError, u.UnitsError, AstropyWarning):
            raise ValueError(f"must be an angle, {ANGLES}; got {value!r}") from None


AngleText = Annotated[Any, BeforeValidator(angle_of)]
DegreesText = Annotated[Any, BeforeValidator(partial(angle_of, hours=False))]
SigmaText = Annotated[Any, BeforeValidator(partial(quantity_of, example="1 mas"))]
