"""What the parts of a setup file share: text with units into Quantities, strict keys, and errors that carry file and key path."""

from __future__ import annotations

from dataclasses import MISSING, fields
from pathlib import Path
from typing import Annotated, Any, get_type_hints

import astropy.units as u
from pydantic import BaseModel, BeforeValidator, ConfigDict, ValidationError, create_model

from .errors import SetupError, WhitefringeError
from .spectra import WavelengthTable


def quantity_of(value: Any) -> Any:
    """Text such as '1.65 um' as a Quantity; a list of such texts as a tuple."""
    if isinstance(value, u.Quantity) or value is None:
        return value
    if isinstance(value, list) and value and all(isinstance(item, str) for item in value):
        return tuple(quantity_of(item) for item in value)
    if not isinstance(value, str):
        raise ValueError(f'must be text with a unit, for example "1.65 um"; got {value!r}')
    try:
        quantity = u.Quantity(value)
    except (TypeError, ValueError):
        raise ValueError(f'must be a number with a unit, for example "1.65 um"; got {value!r}') from None
    if quantity.unit == u.dimensionless_unscaled:
        raise ValueError(f'must carry a unit, for example "1.65 um"; got {value!r}')
    if quantity.unit == u.C:
        raise ValueError(f'is in coulomb; write deg_C for degrees Celsius, for example "14 deg_C"; got {value!r}')
    return quantity


def quantities_of(value: Any) -> Any:
    """A list of such texts, or one."""
    return tuple(quantity_of(item) for item in value) if isinstance(value, (list, tuple)) else quantity_of(value)


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


QuantityText = Annotated[Any, BeforeValidator(quantity_of)]
QuantitiesText = Annotated[Any, BeforeValidator(quantities_of)]
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
            kind = QuantitiesText
        elif kind is u.Quantity or u.Quantity in members:
            kind = QuantityText
        elif kind == tuple[float, float] | None:
            kind = Limits
        entries[item.name] = (kind, ... if item.default is MISSING else item.default)
    return create_model(cls.__name__, __base__=Entry, **entries)


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
