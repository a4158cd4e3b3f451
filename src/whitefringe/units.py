"""Units at the edge: public functions take Quantities, inner functions take floats in SI units.

Convert once, where a value enters: ``tau = as_delay_si(delay)``; a bare number for a dimensional argument is refused.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import fields
from typing import Any

import astropy.units as u
import numpy as np
from astropy.utils.masked import Masked
from numpy.typing import NDArray

from .errors import InputError, UnitsError

SPEED_OF_LIGHT = 299_792_458.0
"""Speed of light in vacuum [m/s], exact (SI, 2019)."""

STEP = u.def_unit("step", doc="One step of a stage whose length is not known.")
"""Unit of a stage position that has no known length."""

PPM = u.def_unit("ppm", 1e-6 * u.dimensionless_unscaled, doc="Parts per million.")
"""Parts per million, for a mole fraction."""

FloatArray = NDArray[np.float64]


def as_quantity(value: Any, name: str, accepted: str) -> u.Quantity:
    """Return `value` as a finite Quantity, or say what was expected.

    Raises
    ------
    UnitsError
        A bare number, or something that is not a number with a unit.
    InputError
        A value that is not finite.
    """
    if isinstance(value, str) or not _carries_unit(value):
        raise UnitsError(f"{name} must carry a unit ({accepted}); got {value!r} without one")
    if isinstance(value, Masked) and np.any(value.mask):
        raise InputError(f"{name} must be finite; {int(np.sum(value.mask))} of {value.size} values are masked")
    given = u.Quantity(value)
    if np.iscomplexobj(given.value):
        raise InputError(f"{name} must be real; got {value!r}")
    quantity = u.Quantity(given, dtype=float)
    finite = np.isfinite(quantity.value)
    if not np.all(finite):
        raise InputError(f"{name} must be finite; {int(np.sum(~finite))} of {finite.size} values are not")
    return quantity


def _carries_unit(value: Any) -> bool:
    if isinstance(value, u.Quantity):
        return True
    return isinstance(value, Sequence) and len(value) > 0 and all(isinstance(v, u.Quantity) for v in value)


def as_si(value: Any, unit: u.UnitBase, name: str, example: str | None = None) -> Any:
    """Convert a Quantity to a float or array in the SI unit `unit`.

    Parameters
    ----------
    value : Quantity, scalar or array
    unit : Unit
        SI unit of the result.
    name : str
        Name of the argument, for the message.
    example : str, optional
        Unit of the example in the message; `unit` by default.

    Returns
    -------
    float or ndarray [unit]

    Raises
    ------
    UnitsError
        No unit, or one that cannot be converted to `unit`.
    InputError
        Not finite.

    Examples
    --------
    >>> import astropy.units as u
    >>> as_si(250 * u.cm, u.m, "width")
    2.5
    """
    accepted = f"for example 1 {example or unit}"
    quantity = as_quantity(value, name, accepted)
    try:
        result = quantity.to_value(unit)
    except u.UnitConversionError:
        raise UnitsError(f"{name} must be convertible to {unit} ({accepted}); got {quantity.unit}") from None
    return float(result) if np.ndim(result) == 0 else np.asarray(result, dtype=float)


def as_delay_si(delay: Any, name: str = "delay") -> Any:
    """Convert a delay given as time or as path difference to seconds: tau = opd / c.

    Examples
    --------
    >>> import astropy.units as u
    >>> as_delay_si(299.792458 * u.um)
    1e-12
    """
    accepted = "a time or a path difference, for example 10 fs or 3 um"
    quantity = as_quantity(delay, name, accepted)
    if quantity.unit.is_equivalent(u.s):
        result = quantity.to_value(u.s)
    elif quantity.unit.is_equivalent(u.m):
        result = quantity.to_value(u.m) / SPEED_OF_LIGHT
    else:
        raise UnitsError(f"{name} must be {accepted}; got {quantity.unit}")
    return float(result) if np.ndim(result) == 0 else np.asarray(result, dtype=float)


def as_frequency_si(value: Any, name: str) -> Any:
    """Convert a vacuum wavelength, frequency, wavenumber or photon energy to hertz.

    Examples
    --------
    >>> import astropy.units as u
    >>> print(f"{as_frequency_si(1.65 * u.um, 'centre'):.6e}")
    1.816924e+14
    """
    accepted = "a vacuum wavelength or a frequency, for example 1.65 um or 182 THz"
    quantity = as_quantity(value, name, accepted)
    if np.any(quantity.value <= 0):
        raise InputError(f"{name} must be positive; got {quantity}")
    try:
        result = quantity.to_value(u.Hz, equivalencies=u.spectral())
    except u.UnitConversionError:
        raise UnitsError(f"{name} must be {accepted}; got {quantity.unit}") from None
    return float(result) if np.ndim(result) == 0 else np.asarray(result, dtype=float)


def one_frequency_si(value: Any, name: str) -> float:
    """Like `as_frequency_si` for one number."""
    result = as_frequency_si(value, name)
    if np.ndim(result) != 0:
        raise InputError(f"{name} must be one number; got an array of shape {np.shape(result)}")
    return float(result)


def is_length(quantity: u.Quantity) -> bool:
    """Tell whether a spectral Quantity is a wavelength (else it is a frequency, wavenumber or energy)."""
    return bool(quantity.unit.is_equivalent(u.m))


def positive_si(value: Any, unit: u.UnitBase, name: str, example: str | None = None) -> float:
    """Like `as_si` for one number that must be above zero."""
    result = as_si(value, unit, name, example)
    if np.ndim(result) != 0:
        raise InputError(f"{name} must be one number; got an array of shape {np.shape(result)}")
    if result <= 0:
        raise InputError(f"{name} must be above zero; got {value}")
    return float(result)


def as_temperature_si(value: Any, name: str = "temperature") -> Any:
    """Convert a temperature (not a difference of two) in kelvin or degrees Celsius to kelvin.

    Examples
    --------
    >>> import astropy.units as u
    >>> as_temperature_si(20 * u.deg_C)
    293.15
    """
    accepted = "a temperature, for example 288.15 K or 15 deg_C"
    quantity = as_quantity(value, name, accepted)
    try:
        result = quantity.to_value(u.K, equivalencies=u.temperature())
    except u.UnitConversionError:
        raise UnitsError(f"{name} must be {accepted}; got {quantity.unit}") from None
    if np.any(np.asarray(result) < 0):
        raise InputError(f"{name} is below absolute zero: {quantity}")
    return float(result) if np.ndim(result) == 0 else np.asarray(result, dtype=float)


def number(value: Any, name: str, *, low: float, high: float = np.inf, above: bool = False) -> float:
    """Return a number without a unit as a float: at least (or `above`) `low`, at most `high`."""
    try:
        found = float(u.Quantity(value).to_value(u.dimensionless_unscaled))
    except (TypeError, ValueError):
        raise InputError(f"{name} must be one number without a unit; got {value!r}") from None
    if not (low < found if above else low <= found) or not found <= high or not np.isfinite(found):
        least = f"above {low:g}" if above else f"at least {low:g}"
        raise InputError(f"{name} must be {least}{'' if np.isinf(high) else f' and at most {high:g}'}; got {value}")
    return found


def whole(value: Any, name: str, *, low: int, high: int) -> int:
    """Return a whole number between `low` and `high` as an int."""
    found = number(value, name, low=low, high=high)
    if found != round(found):
        raise InputError(f"{name} must be a whole number; got {value}")
    return round(found)


def frozen_quantities(item: Any) -> None:
    """Replace every Quantity in the fields of a frozen dataclass by a copy that cannot be written to: the caller's may change later."""
    for field in fields(item):
        value = getattr(item, field.name)
        if isinstance(value, u.Quantity):
            copy = value.copy()
            copy.setflags(write=False)
            object.__setattr__(item, field.name, copy)


def read_only(values: Any, dtype: type = float) -> NDArray[Any]:
    """Return a copy of `values` that cannot be written to."""
    array: NDArray[Any] = np.array(values, dtype=dtype)
    array.setflags(write=False)
    return array
