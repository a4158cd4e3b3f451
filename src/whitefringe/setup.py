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
reflectivity may be a file, ``{ file = "grey.csv" }``. ``[[tracking]]`` entries are the filters of a second band; the arms are described in
`setup_arms`, the array and its night in `setup_sky`.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from pathlib import Path
from typing import TYPE_CHECKING, Any, Literal, get_type_hints

import astropy.units as u
from pydantic import Field

from .coherence import COHERENCE_DEFINITIONS, DEFAULT_DEFINITION
from .errors import InputError, SetupError
from .io import read_toml
from .media import AirUncertainty, ArmPair
from .scans import ScanLayout, Tolerances
from .setup_arms import read_arms
from .setup_entries import Entry, KeyPath, QuantityText, UnitText, built, checked, member, read_beside, without_shape
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

if TYPE_CHECKING:
    from .sky import Observation

MOST_CHANNELS = 200
"""Channels that a setup may ask for."""


class _TableEntry(Entry):
    file: str
    wavelength_unit: UnitText = None
    transmission_unit: UnitText = None
    wavelength_column: str | int = 0
    transmission_column: str | int = 1
    repair: list[str] = Field(default_factory=list)
    medium: str | None = None


class _BeamEntry(Entry):
    """What may happen to any filter in the beam: the arguments of `spectra.in_beam`."""

    tilt: QuantityText = None
    effective_index: float | None = None
    f_number: float | None = None
    obstruction: float | None = None
    warmed_by: QuantityText = None
    drift: QuantityText = None
    leak: float | None = None
    leak_low: QuantityText = None
    leak_high: QuantityText = None


class _ValuesEntry(Entry):
    """A file of wavelengths and values, for an emissivity, a reflectivity or the like."""

    file: str
    wavelength_unit: UnitText = None
    value_unit: UnitText = None
    wavelength_column: str | int = 0
    value_column: str | int = 1
    medium: str | None = None


class _SourceTableEntry(_ValuesEntry):
    quantity: Literal["photons", "power"]
    per: Literal["wavelength", "hertz"]
    repair: list[str] = Field(default_factory=list)


class _SumEntry(Entry):
    sources: list[dict[str, Any]] = Field(min_length=1)
    weights: list[float] | None = None


class _PredictionEntry(Entry):
    contrast: float = Field(default=1.0, gt=0, le=1)
    coherence_length: str = DEFAULT_DEFINITION
    channels: int = Field(default=0, ge=0, le=MOST_CHANNELS)


class _SetupEntry(Entry):
    name: str = "bench"
    source: dict[str, Any]
    filter: list[dict[str, Any]] = Field(default_factory=list)
    tracking: list[dict[str, Any]] = Field(default_factory=list)
    air: dict[str, Any] | None = None
    air_uncertainty: dict[str, Any] | None = None
    first_arm: list[dict[str, Any]] = Field(default_factory=list)
    second_arm: list[dict[str, Any]] = Field(default_factory=list)
    array: dict[str, Any] | None = None
    target: list[dict[str, Any]] = Field(default_factory=list)
    night: dict[str, Any] | None = None
    scan: dict[str, Any] = Field(default_factory=dict)
    prediction: _PredictionEntry = Field(default_factory=_PredictionEntry)
    tolerances: dict[str, Any] = Field(default_factory=dict)


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
    tracking : tuple of Filter
        Filters of a second band, in which fringes are followed; of the same source.
    arms : ArmPair, optional
        What the two arms are made of, where it differs.
    air_uncertainty : AirUncertainty, optional
        How well the air that both arms share is known.
    observation : Observation, optional
        The array, its targets and the night.
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
    tracking: tuple[Filter, ...] = ()
    arms: ArmPair | None = None
    air_uncertainty: AirUncertainty | None = None
    observation: Observation | None = None
    name: str = "bench"
    origin: str = ""

    def __post_init__(self) -> None:
        if not isinstance(self.source, Source) or not all(isinstance(item, Filter) for item in _tuple(self.filters)):
            raise InputError("a setup needs a source such as spectra.Thermal and a tuple of filters such as (spectra.TopHat(...),)")
        if not isinstance(self.layout, ScanLayout) or not isinstance(self.tolerances, Tolerances):
            raise InputError("layout must be a scans.ScanLayout and tolerances a scans.Tolerances")
        if not all(isinstance(item, Filter) for item in _tuple(self.tracking)):
            raise InputError("tracking must be a tuple of filters such as (spectra.TopHat(...),)")
        if self.arms is not None and not isinstance(self.arms, ArmPair):
            raise InputError(f"arms must be a media.ArmPair; got {self.arms!r}")
        if self.air_uncertainty is not None and not isinstance(self.air_uncertainty, AirUncertainty):
            raise InputError(f"air_uncertainty must be a media.AirUncertainty; got {self.air_uncertainty!r}")
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

    @cached_property
    def tracking_light(self) -> Spectrum | None:
        """What a detector counts in the tracking band; None without one."""
        return detected(self.source, *self.tracking) if self.tracking else None

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
        entry = checked(_SetupEntry, raw, path, "")
        arms = read_arms({name: getattr(entry, name) for name in ("air", "first_arm", "second_arm")}, path)
        with KeyPath(path, ""):
            return cls(
                source=_source(entry.source, path),
                filters=tuple(_filter(item, path, f"filter[{k}]") for k, item in enumerate(entry.filter)),
                layout=built(ScanLayout, entry.scan, path, "scan"),
                tolerances=built(Tolerances, entry.tolerances, path, "tolerances"),
                expected_contrast=entry.prediction.contrast,
                channels=entry.prediction.channels,
                definition=_definition(entry.prediction.coherence_length, path),
                tracking=tuple(_filter(item, path, f"tracking[{k}]") for k, item in enumerate(entry.tracking)),
                arms=arms,
                air_uncertainty=None
                if entry.air_uncertainty is None
                else built(AirUncertainty, entry.air_uncertainty, path, "air_uncertainty"),
                observation=_observation(entry, arms, path),
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


def _with_tables(cls: type[Any], raw: dict[str, Any], path: Path, key: str) -> dict[str, Any]:
    """Read the files that stand for tables, such as ``reflectivity = { file = "silver.csv" }``."""
    hints = get_type_hints(cls)
    found = dict(raw)
    for name, value in raw.items():
        if isinstance(value, dict) and WavelengthTable in getattr(hints.get(name), "__args__", ()):
            found[name] = read_beside(WavelengthTable.read, _ValuesEntry, value, path, f"{key}.{name}")
    return found


def _source(raw: dict[str, Any], path: Path, key: str = "source") -> Source:
    cls, rest = member(SOURCE_SHAPES, raw, path, key), without_shape(raw)
    if cls is Lines:
        return _lines(rest, path, key)
    if cls is TabulatedSource:
        return read_beside(TabulatedSource.read, _SourceTableEntry, rest, path, key)  # type: ignore[no-any-return]
    if cls is Together:
        entry = checked(_SumEntry, rest, path, key)
        members = tuple(_source(item, path, f"{key}.sources[{k}]") for k, item in enumerate(entry.sources))
        with KeyPath(path, key):
            return Together(sources=members, weights=None if entry.weights is None else tuple(entry.weights))
    return built(cls, _with_tables(cls, rest, path, key), path, key)  # type: ignore[no-any-return]


def _lines(rest: dict[str, Any], path: Path, key: str) -> Lines:
    members = rest.pop("lines", [])
    if rest or not isinstance(members, list) or not members:
        raise SetupError(f"{path}: {key}: a lamp of lines has one or more [[{key}.lines]] entries and no other key")
    with KeyPath(path, f"{key}.lines"):
        return Lines([built(Line, item, path, f"{key}.lines[{k}]") for k, item in enumerate(members)])


def _filter(raw: dict[str, Any], path: Path, key: str) -> Filter:
    cls = member((*FILTER_SHAPES, *TRAIN_SHAPES), raw, path, key)
    stated = {name: value for name, value in raw.items() if name in _BeamEntry.model_fields}
    rest = {name: value for name, value in without_shape(raw).items() if name not in stated}
    if cls is Tabulated:
        band = read_beside(read_filter, _TableEntry, rest, path, key)
    else:
        band = built(cls, _with_tables(cls, rest, path, key), path, key)
    beam = checked(_BeamEntry, stated, path, key)
    with KeyPath(path, key):
        return in_beam(band, **{name: getattr(beam, name) for name in stated})


def _observation(entry: _SetupEntry, arms: ArmPair | None, path: Path) -> Observation | None:
    raw = {name: getattr(entry, name) for name in ("array", "target", "night")}
    if not any(raw.values()):
        return None
    from .setup_sky import read_observation  # loads astropy.coordinates, which a bench does not need

    return read_observation(raw, arms.air if arms is not None else None, path)


def _definition(name: str, path: Path) -> str:
    names = [item.name for item in COHERENCE_DEFINITIONS]
    if name not in names:
        raise SetupError(f"{path}: prediction.coherence_length: must be one of {', '.join(names)}; got {name!r}")
    return name
