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

Any filter may also have ``tilt``, ``effective_index``, ``f_number``, ``obstruction``, ``warmed_by``, ``drift``, ``leak``, ``leak_low``,
``leak_high`` (see `spectra.in_beam`). A tolerance of ``"none"`` is not judged. Numbers with a unit are written as text, ``"2900 K"``.
Files are looked for beside the setup file. A source of ``shape = "sum"`` has its parts as ``[[source.sources]]``; an emissivity or a
reflectivity may be a file, ``{ file = "grey.csv" }``.
"""

from __future__ import annotations

from dataclasses import MISSING, dataclass, field, fields
from functools import cached_property
from pathlib import Path
from typing import Annotated, Any, Literal, get_type_hints

import astropy.units as u
from pydantic import BaseModel, BeforeValidator, ConfigDict, Field, ValidationError, create_model

from .coherence import COHERENCE_DEFINITIONS, DEFAULT_DEFINITION
from .errors import InputError, SetupError, WhitefringeError
from .io import read_toml
from .scans import ScanLayout, Tolerances
from .spectra import (
    FILTER_SHAPES,
    SOURCE_SHAPES,
    TRAIN_SHAPES,
    Filter,
    Line,
    Lines,
    Source,
    Spectrum,
    Tabulated,
    TabulatedSource,
    Together,
    WavelengthTable,
    detected,
    in_beam,
    read_filter,
)
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


def _quantities(value: Any) -> Any:
    return tuple(_quantity(item) for item in value) if isinstance(value, (list, tuple)) else _quantity(value)


def _number_or_table(value: Any) -> Any:
    if isinstance(value, WavelengthTable) or (isinstance(value, (int, float)) and not isinstance(value, bool)):
        return value
    raise ValueError(f'must be a number, or a table such as {{ file = "curve.csv" }}; got {value!r}')


def _unit(value: Any) -> Any:
    try:
        return u.Unit(value)
    except (TypeError, ValueError):
        raise ValueError(f"{value!r} is not a unit that is known here") from None


_Quantity = Annotated[Any, BeforeValidator(_quantity)]
_Quantities = Annotated[Any, BeforeValidator(_quantities)]
_NumberOrTable = Annotated[Any, BeforeValidator(_number_or_table)]
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
    medium: str | None = None


class _BeamEntry(_Entry):
    """What may happen to any filter in the beam: the arguments of `spectra.in_beam`."""

    tilt: _Quantity = None
    effective_index: float | None = None
    f_number: float | None = None
    obstruction: float | None = None
    warmed_by: _Quantity = None
    drift: _Quantity = None
    leak: float | None = None
    leak_low: _Quantity = None
    leak_high: _Quantity = None


class _ValuesEntry(_Entry):
    """A file of wavelengths and values, for an emissivity, a reflectivity or the like."""

    file: str
    wavelength_unit: _Unit = None
    value_unit: _Unit = None
    wavelength_column: str | int = 0
    value_column: str | int = 1
    medium: str | None = None


class _SourceTableEntry(_ValuesEntry):
    quantity: Literal["photons", "power"]
    per: Literal["wavelength", "hertz"]
    repair: list[str] = Field(default_factory=list)


class _SumEntry(_Entry):
    sources: list[dict[str, Any]] = Field(min_length=1)
    weights: list[float] | None = None


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
        members = getattr(kind, "__args__", ())
        if WavelengthTable in members:
            kind = _NumberOrTable
        elif tuple[u.Quantity, ...] in members:
            kind = _Quantities
        elif kind is u.Quantity or u.Quantity in members:
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

    def write(self, path: str | Path, *, overwrite: bool = False) -> tuple[Path, ...]:
        """Write a setup file that `read` reads again, filter curves as ECSV files beside it.

        A tabulated source and a sum of sources are refused; see `setup_writer.write_setup`.
        """
        from .setup_writer import write_setup

        return write_setup(self, path, overwrite=overwrite)


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


def _with_tables(cls: type[Any], raw: dict[str, Any], path: Path, key: str) -> dict[str, Any]:
    """Read the files that stand for tables, such as ``reflectivity = { file = "silver.csv" }``."""
    hints = get_type_hints(cls)
    found = dict(raw)
    for name, value in raw.items():
        if isinstance(value, dict) and WavelengthTable in getattr(hints.get(name), "__args__", ()):
            found[name] = _read(WavelengthTable.read, _ValuesEntry, value, path, f"{key}.{name}")
    return found


def _read(reader: Any, model: type[BaseModel], raw: dict[str, Any], path: Path, key: str) -> Any:
    """Check the entry of a file that lies beside the setup file, and read it."""
    entry = _checked(model, raw, path, key)
    options: dict[str, Any] = {name: getattr(entry, name) for name in model.model_fields if name != "file"}
    if "repair" in options:
        options["repair"] = tuple(options["repair"])
    with _KeyPath(path, f"{key}.file"):
        return reader(path.parent / entry.file, **options)


def _source(raw: dict[str, Any], path: Path, key: str = "source") -> Source:
    cls, rest = _member(SOURCE_SHAPES, raw, path, key), _without_shape(raw)
    if cls is Lines:
        return _lines(rest, path, key)
    if cls is TabulatedSource:
        return _read(TabulatedSource.read, _SourceTableEntry, rest, path, key)  # type: ignore[no-any-return]
    if cls is Together:
        entry = _checked(_SumEntry, rest, path, key)
        members = tuple(_source(item, path, f"{key}.sources[{k}]") for k, item in enumerate(entry.sources))
        with _KeyPath(path, key):
            return Together(sources=members, weights=None if entry.weights is None else tuple(entry.weights))
    return _built(cls, _with_tables(cls, rest, path, key), path, key)  # type: ignore[no-any-return]


def _lines(rest: dict[str, Any], path: Path, key: str) -> Lines:
    members = rest.pop("lines", [])
    if rest or not isinstance(members, list) or not members:
        raise SetupError(f"{path}: {key}: a lamp of lines has one or more [[{key}.lines]] entries and no other key")
    with _KeyPath(path, f"{key}.lines"):
        return Lines([_built(Line, item, path, f"{key}.lines[{k}]") for k, item in enumerate(members)])


def _filter(raw: dict[str, Any], path: Path, key: str) -> Filter:
    cls = _member((*FILTER_SHAPES, *TRAIN_SHAPES), raw, path, key)
    stated = {name: value for name, value in raw.items() if name in _BeamEntry.model_fields}
    rest = {name: value for name, value in _without_shape(raw).items() if name not in stated}
    if cls is Tabulated:
        band = _read(read_filter, _TableEntry, rest, path, key)
    else:
        band = _built(cls, _with_tables(cls, rest, path, key), path, key)
    beam = _checked(_BeamEntry, stated, path, key)
    with _KeyPath(path, key):
        return in_beam(band, **{name: getattr(beam, name) for name in stated})


def _definition(name: str, path: Path) -> str:
    names = [item.name for item in COHERENCE_DEFINITIONS]
    if name not in names:
        raise SetupError(f"{path}: prediction.coherence_length: must be one of {', '.join(names)}; got {name!r}")
    return name
