"""What the parts of a setup file share: text with units into Quantities, strict keys, and errors that carry file and key path."""

from __future__ import annotations

import re
from dataclasses import MISSING, fields
from functools import partial
from pathlib import Path
from typing import Annotated, Any, get_type_hints

import astropy.units as u
from pydantic import BaseModel, BeforeValidator, ConfigDict, ValidationError, ValidationInfo, create_model

from .errors import SetupError, WhitefringeError
from .spectra import WavelengthTable

SEXAGESIMAL = re.compile(r"\s*[+-]?\d+(\.\d*)?\s*[hd:°]\s*\d")
"""How an angle in hours or degrees, minutes and seconds begins, such as 04h00m00s."""

EXAMPLES = {
    "temperature": "288 K",
    "temperature_uncertainty": "0.5 K",
    "warmed_by": "5 K",
    "drift": "0.05 nm / K",
    "pressure": "850 hPa",
    "humidity": "30 %",
    "tilt": "5 deg",
    "length": "12 mm",
    "stroke": "25 m",
    "greatest_speed": "25 mm / s",
    "pm_ra_cosdec": "35 mas / yr",
    "pm_dec": "-110 mas / yr",
    "parallax": "40 mas",
    "radial_velocity": "20 km / s",
    "proper_motion_uncertainty": "0.02 mas / yr",
    "least_altitude": "30 deg",
    "sun_below": "-12 deg",
    "step": "5 min",
    "uncertainty": "20 um",
    "length_uncertainty": "20 um",
    **dict.fromkeys(("offset", "rest", "height", "east", "north", "up", "x", "y", "z"), "20 m"),
}
"""What a number of each name may look like, for messages; any other is a wavelength."""


def quantity_of(value: Any, example: str = "1.65 um") -> Any:
    """Text such as '1.65 um' as a Quantity; a list of such texts as a tuple."""
    if isinstance(value, u.Quantity) or value is None:
        return value
    if isinstance(value, list) and value and all(isinstance(item, str) for item in value):
        return tuple(quantity_of(item, example) for item in value)
    if not isinstance(value, str):
        raise ValueError(f'must be text with a unit, for example "{example}"; got {value!r}')
    if SEXAGESIMAL.match(value):
        # "04h00m00s" would be read as four seconds
        raise ValueError(f'must be a number with a unit, for example "{example}"; got {value!r}')
    try:
        quantity = u.Quantity(value)
    except (TypeError, ValueError):
        raise ValueError(f'must be a number with a unit, for example "{example}"; got {value!r}') from None
    if quantity.unit == u.dimensionless_unscaled:
        raise ValueError(f'must carry a unit, for example "{example}"; got {value!r}')
    if quantity.unit == u.C:
        raise ValueError(f'is in coulomb; write deg_C for degrees Celsius, for example "14 deg_C"; got {value!r}')
    return quantity


def quantities_of(value: Any, example: str = "1.65 um") -> Any:
    """A list of such texts, or one."""
    return tuple(quantity_of(item, example) for item in value) if isinstance(value, (list, tuple)) else quantity_of(value, example)


def number_or_table(value: Any) -> Any:
    """A number, or a table that was read already."""
    if isinstance(value, WavelengthTable) or (isinstance(value, (int, float)) and not isinstance(value, bool)):
        return value
    raise ValueError(f'must be a number, or a table such as {{ file = "curve.csv" }}; got {value!r}')


def unit_of(value: Any) -> Any:
    """A unit by its name."""
    try:
        return u.Unit(value)
    except (TypeError, ValueError):
        raise ValueError(f"{value!r} is not a unit that is known here") from None


def _by_name(value: Any, info: ValidationInfo) -> Any:
    return quantity_of(value, EXAMPLES.get(info.field_name or "", "1.65 um"))


QuantityText = Annotated[Any, BeforeValidator(_by_name)]
NumberOrTable = Annotated[Any, BeforeValidator(number_or_table)]
UnitText = Annotated[Any, BeforeValidator(unit_of)]
Limits = Annotated[tuple[float, float] | None, BeforeValidator(lambda value: None if value == "none" else value)]


class Entry(BaseModel):
    """Keys of one table in the file; others are refused."""

    model_config = ConfigDict(extra="forbid", arbitrary_types_allowed=True, strict=False)


def entry_for(cls: type[Any]) -> type[BaseModel]:
    """Return a pydantic model with the fields of a frozen dataclass, Quantities as text with a unit."""
    hints = get_type_hints(cls)
    entries: dict[str, Any] = {}
    for item in fields(cls):
        kind = hints[item.name]
        members = getattr(kind, "__args__", ())
        if WavelengthTable in members:
            kind = NumberOrTable
        elif tuple[u.Quantity, ...] in members:
            kind = Annotated[Any, BeforeValidator(partial(quantities_of, example=_example(item)))]
        elif kind is u.Quantity or u.Quantity in members:
            kind = Annotated[Any, BeforeValidator(partial(quantity_of, example=_example(item)))]
        elif kind == tuple[float, float] | None:
            kind = Limits
        entries[item.name] = (kind, ... if item.default is MISSING else item.default)
    return create_model(cls.__name__, __base__=Entry, **entries)


def _example(item: Any) -> str:
    """What the field of a frozen object may look like: where its control starts, if it has one."""
    described = item.metadata.get("parameter")
    return EXAMPLES.get(item.name, "1.65 um") if described is None else f"{described.start:g} {described.unit}"


class KeyPath:
    """Turn an error of ours into a `SetupError` that carries file and key path."""

    def __init__(self, path: Path, key: str) -> None:
        self.prefix = f"{path}: {key}: " if key else f"{path}: "

    def __enter__(self) -> None:
        return None

    def __exit__(self, kind: Any, error: BaseException | None, trace: Any) -> None:
        if isinstance(error, WhitefringeError) and not isinstance(error, SetupError):
            raise SetupError(f"{self.prefix}{error}") from None


def checked(model: type[BaseModel], raw: Any, path: Path, key: str) -> Any:
    """Return an entry as `model` describes it.

    Raises
    ------
    SetupError
        With file and key path.
    """
    try:
        return model.model_validate(raw)
    except ValidationError as error:
        first = error.errors()[0]
        where = key + "".join(f"[{part}]" if isinstance(part, int) else f".{part}" for part in first["loc"])
        names = ", ".join(model.model_fields)
        hints = {"extra_forbidden": f"unknown key; the keys here are {names}", "missing": "this key is missing"}
        message = hints.get(first["type"], first["msg"].removeprefix("Value error, "))
        raise SetupError(f"{path}: {where.removeprefix('.')}: {message}") from None


def built(cls: type[Any], raw: Any, path: Path, key: str) -> Any:
    """Return a frozen object of ours from its entry."""
    entry = checked(entry_for(cls), raw, path, key)
    with KeyPath(path, key):
        return cls(**{name: getattr(entry, name) for name in type(entry).model_fields})


def member(family: tuple[type[Any], ...], raw: dict[str, Any], path: Path, key: str) -> type[Any]:
    """Return the class of a family that the entry's ``shape`` names."""
    for cls in family:
        if cls.shape == raw.get("shape"):
            return cls
    names = ", ".join(cls.shape for cls in family)
    raise SetupError(f"{path}: {key}.shape: must be one of {names}; got {raw.get('shape')!r}")


def without_shape(raw: dict[str, Any]) -> dict[str, Any]:
    """Return the entry less its ``shape``."""
    return {name: value for name, value in raw.items() if name != "shape"}


def read_beside(reader: Any, model: type[BaseModel], raw: dict[str, Any], path: Path, key: str) -> Any:
    """Check the entry of a file that lies beside the setup file, and read it."""
    entry = checked(model, raw, path, key)
    options: dict[str, Any] = {name: getattr(entry, name) for name in model.model_fields if name != "file"}
    if "repair" in options:
        options["repair"] = tuple(options["repair"])
    with KeyPath(path, f"{key}.file"):
        return reader(path.parent / entry.file, **options)
