"""`Setup`: one frozen description of the bench, shared by notebook, command line and widgets; read from a TOML file.

    name = "lamp bench"

    [source]
    shape = "thermal"
    temperature = "2900 K"

    [[filter]]
    shape = "table"
    file = "bench_filter.ecsv"

    [scan]
    signal = "detector"
    position = "stage"
    passes = 2

    [prediction]
    contrast = 0.85

    [tolerances]
    contrast = [0.9, 1.1]

A tolerance of ``"none"`` is not judged. Numbers with a unit are written as text, ``"2900 K"``. Files are looked for beside the setup file.
"""

from __future__ import annotations

from dataclasses import MISSING, dataclass, field, fields
from functools import cached_property
from pathlib import Path
from typing import Annotated, Any, get_type_hints

import astropy.units as u
from pydantic import BaseModel, BeforeValidator, ConfigDict, Field, ValidationError, create_model

from .coherence import COHERENCE_DEFINITIONS, DEFAULT_DEFINITION
from .errors import InputError, SetupError, WhitefringeError
from .io import read_toml
from .scans import ScanLayout, Tolerances
from .spectra import FILTER_SHAPES, SOURCE_SHAPES, Filter, Line, Lines, Source, Spectrum, Tabulated, detected, read_filter
from .units import as_si


def _quantity(value: Any) -> Any:
    if isinstance(value, u.Quantity) or value is None:
        return value
    if not isinstance(value, str):
        raise ValueError(f'must be text with a unit, for example "1.65 um"; got {value!r}')
    try:
        quantity = u.Quantity(value)
    except (TypeError, ValueError):
        raise ValueError(f'must be a number with a unit, for example "1.65 um"; got {value!r}') from None
    if quantity.unit == u.dimensionless_unscaled:
        raise ValueError(f'must carry a unit, for example "1.65 um"; got {value!r}')
    return quantity


def _unit(value: Any) -> Any:
    try:
        return u.Unit(value)
    except (TypeError, ValueError):
        raise ValueError(f"{value!r} is not a unit that is known here") from None


_Quantity = Annotated[Any, BeforeValidator(_quantity)]
_Unit = Annotated[Any, BeforeValidator(_unit)]
_Limits = Annotated[tuple[float, float] | None, BeforeValidator(lambda value: None if value == "none" else value)]


MOST_CHANNELS = 200
"""Channels that a setup may ask for."""


class _Entry(BaseModel):
    model_config = ConfigDict(extra="forbid", arbitrary_types_allowed=True, strict=False)


class _TableEntry(_Entry):
    file: str
    wavelength_unit: _Unit = None
    transmission_unit: _Unit = None
    wavelength_column: str | int = 0
    transmission_column: str | int = 1
    repair: list[str] = Field(default_factory=list)


class _PredictionEntry(_Entry):
    contrast: float = Field(default=1.0, gt=0, le=1)
    coherence_length: str = DEFAULT_DEFINITION
    channels: int = Field(default=0, ge=0, le=MOST_CHANNELS)


class _SetupEntry(_Entry):
    name: str = "bench"
    source: dict[str, Any]
    filter: list[dict[str, Any]] = Field(default_factory=list)
    scan: dict[str, Any] = Field(default_factory=dict)
    prediction: _PredictionEntry = Field(default_factory=_PredictionEntry)
    tolerances: dict[str, Any] = Field(default_factory=dict)


def _entry_for(cls: type[Any]) -> type[BaseModel]:
    """Return a pydantic model with the fields of a frozen dataclass, Quantities as text with a unit."""
    hints = get_type_hints(cls)
    entries: dict[str, Any] = {}
    for item in fields(cls):
        kind = hints[item.name]
        if kind is u.Quantity or u.Quantity in getattr(kind, "__args__", ()):
            kind = _Quantity
        elif kind == tuple[float, float] | None:
            kind = _Limits
        entries[item.name] = (kind, ... if item.default is MISSING else item.default)
    return create_model(cls.__name__, __base__=_Entry, **entries)


@dataclass(frozen=True, kw_only=True, eq=False)
class Setup:
    """The bench: what shines, what filters, how scans are recorded, what is expected and allowed.

    Parameters
    ----------
    source : Source
    filters : tuple of Filter
    layout : ScanLayout
    tolerances : Tolerances
    expected_contrast : float
        Contrast that the bench shows at zero path difference.
    definition : str
        Definition of the coherence length in tables.
    delay : Quantity [length]
        Where panels put their delay cursor.
    channels : int
        Spectral channels that the band is split into; 0 for none.
    name, origin : str
    """

    source: Source
    filters: tuple[Filter, ...] = ()
    layout: ScanLayout = field(default_factory=ScanLayout)
    tolerances: Tolerances = field(default_factory=Tolerances)
    expected_contrast: float = 1.0
    definition: str = DEFAULT_DEFINITION
    delay: u.Quantity = 0.0 * u.um
    channels: int = 0
    name: str = "bench"
    origin: str = ""

    def __post_init__(self) -> None:
        if not isinstance(self.source, Source) or not all(isinstance(item, Filter) for item in _tuple(self.filters)):
            raise InputError("a setup needs a source such as spectra.Thermal and a tuple of filters such as (spectra.TopHat(...),)")
        if not isinstance(self.layout, ScanLayout) or not isinstance(self.tolerances, Tolerances):
            raise InputError("layout must be a scans.ScanLayout and tolerances a scans.Tolerances")
        as_si(self.delay, u.m, "delay", "um")
        if isinstance(self.channels, bool) or not isinstance(self.channels, int) or not 0 <= self.channels <= MOST_CHANNELS:
            raise InputError(f"channels must be a whole number from 0 to {MOST_CHANNELS}; got {self.channels!r}")
        names = [item.name for item in COHERENCE_DEFINITIONS]
        if self.definition not in names:
            raise InputError(f"definition must be one of {', '.join(names)}; got {self.definition!r}")
        if not 0 < self.expected_contrast <= 1:
            raise InputError(f"expected_contrast must be above 0 and at most 1; got {self.expected_contrast}")

    @cached_property
    def light(self) -> Spectrum:
        """What the detector counts: source times filters."""
        return detected(self.source, *self.filters)

    @classmethod
    def read(cls, path: str | Path) -> Setup:
        """Read a setup file.

        Raises
        ------
        SetupError
            With file and key path, such as ``filter[0].width``.
        """
        path = Path(path)
        raw = read_toml(path)
        entry = _checked(_SetupEntry, raw, path, "")
        with _KeyPath(path, ""):
            return cls(
                source=_source(entry.source, path),
                filters=tuple(_filter(item, path, f"filter[{k}]") for k, item in enumerate(entry.filter)),
                layout=_built(ScanLayout, entry.scan, path, "scan"),
                tolerances=_built(Tolerances, entry.tolerances, path, "tolerances"),
                expected_contrast=entry.prediction.contrast,
                channels=entry.prediction.channels,
                definition=_definition(entry.prediction.coherence_length, path),
                name=entry.name,
                origin=str(path),
            )


def caution_of(setup: Setup) -> str:
    """Return the caution line of a source that can hurt, or nothing. Nothing is classified here."""
    return str(getattr(setup.source, "caution", ""))


def _tuple(value: Any) -> tuple[Any, ...]:
    return value if isinstance(value, tuple) else (value, None)


class _KeyPath:
    """Turn an error of ours into a `SetupError` that carries file and key path."""

    def __init__(self, path: Path, key: str) -> None:
        self.prefix = f"{path}: {key}: " if key else f"{path}: "

    def __enter__(self) -> None:
        return None

    def __exit__(self, kind: Any, error: BaseException | None, trace: Any) -> None:
        if isinstance(error, WhitefringeError) and not isinstance(error, SetupError):
            raise SetupError(f"{self.prefix}{error}") from None


def _checked(model: type[BaseModel], raw: Any, path: Path, key: str) -> Any:
    try:
        return model.model_validate(raw)
    except ValidationError as error:
        first = error.errors()[0]
        where = key + "".join(f"[{part}]" if isinstance(part, int) else f".{part}" for part in first["loc"])
        names = ", ".join(model.model_fields)
        hints = {"extra_forbidden": f"unknown key; the keys here are {names}", "missing": "this key is missing"}
        message = hints.get(first["type"], first["msg"].removeprefix("Value error, "))
        raise SetupError(f"{path}: {where.removeprefix('.')}: {message}") from None


def _built(cls: type[Any], raw: Any, path: Path, key: str) -> Any:
    entry = _checked(_entry_for(cls), raw, path, key)
    with _KeyPath(path, key):
        return cls(**{name: getattr(entry, name) for name in type(entry).model_fields})


def _member(family: tuple[type[Any], ...], raw: dict[str, Any], path: Path, key: str) -> type[Any]:
    for cls in family:
        if cls.shape == raw.get("shape"):
            return cls
    names = ", ".join(cls.shape for cls in family)
    raise SetupError(f"{path}: {key}.shape: must be one of {names}; got {raw.get('shape')!r}")


def _without_shape(raw: dict[str, Any]) -> dict[str, Any]:
    return {name: value for name, value in raw.items() if name != "shape"}


def _source(raw: dict[str, Any], path: Path) -> Source:
    cls, rest = _member(SOURCE_SHAPES, raw, path, "source"), _without_shape(raw)
    if cls is not Lines:
        return _built(cls, rest, path, "source")  # type: ignore[no-any-return]
    members = rest.pop("lines", [])
    if rest or not isinstance(members, list) or not members:
        raise SetupError(f"{path}: source: a lamp of lines has one or more [[source.lines]] entries and no other key")
    with _KeyPath(path, "source.lines"):
        return Lines([_built(Line, item, path, f"source.lines[{k}]") for k, item in enumerate(members)])


def _filter(raw: dict[str, Any], path: Path, key: str) -> Filter:
    cls, rest = _member(FILTER_SHAPES, raw, path, key), _without_shape(raw)
    if cls is not Tabulated:
        return _built(cls, rest, path, key)  # type: ignore[no-any-return]
    entry = _checked(_TableEntry, rest, path, key)
    options: dict[str, Any] = {name: getattr(entry, name) for name in _TableEntry.model_fields if name != "file"}
    options["repair"] = tuple(options["repair"])
    with _KeyPath(path, f"{key}.file"):
        return read_filter(path.parent / entry.file, **options)


def _definition(name: str, path: Path) -> str:
    names = [item.name for item in COHERENCE_DEFINITIONS]
    if name not in names:
        raise SetupError(f"{path}: prediction.coherence_length: must be one of {', '.join(names)}; got {name!r}")
    return name
