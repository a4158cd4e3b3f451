"""A `Setup` as a TOML file, with its tables as ECSV files beside it: what `Setup.read` reads again."""

from __future__ import annotations

from dataclasses import MISSING, fields
from pathlib import Path
from typing import TYPE_CHECKING, Any

import astropy.units as u
import numpy as np

from .errors import SetupError
from .io import toml_text, write_table, write_text
from .setup_arms import write_arms
from .spectra import BEAM_EFFECTS, InCone, Leaky, Lines, Tabulated, TabulatedSource, Tilted, Together, Warmed, WavelengthTable

if TYPE_CHECKING:
    from .setup import Setup

HEADING = "# Written by whitefringe. Numbers with a unit are text; files lie beside this one.\n"


def write_setup(setup: Setup, path: str | Path, *, overwrite: bool = False) -> tuple[Path, ...]:
    """Write a setup, and every table in it as ECSV with vacuum wavelengths.

    Parameters
    ----------
    setup : Setup
    path : path
        Of the TOML file; tables are named after it.
    overwrite : bool

    Returns
    -------
    tuple of Path
        The setup file first.

    Raises
    ------
    SetupError
        A file exists and `overwrite` is false, or something that a setup file cannot hold: a tabulated source, a sum, effects in the
        beam in an unusual order.
    """
    path = Path(path)
    tables: dict[Path, Any] = {}
    entries = {
        "name": setup.name,
        "source": _source(setup.source, path, tables),
        "filter": [_filter(item, path, k, tables) for k, item in enumerate(setup.filters)],
        "tracking": [_filter(item, path, k, tables, "tracking") for k, item in enumerate(setup.tracking)],
        **write_arms(setup.arms, path, _text),
        "air_uncertainty": None if setup.air_uncertainty is None else _stated(setup.air_uncertainty, path, tables, "air_uncertainty"),
        **_observation(setup, path),
        "scan": _stated(setup.layout, path, tables, "scan"),
        "prediction": {
            "contrast": setup.expected_contrast,
            "coherence_length": setup.definition,
            "channels": setup.channels,
        },
        "tolerances": {
            item.name: "none" if limits is None else list(limits)
            for item in fields(setup.tolerances)
            for limits in [getattr(setup.tolerances, item.name)]
        },
    }
    for file in (path, *tables):
        if file.exists() and not overwrite:
            raise SetupError(f"{file}: the file exists; say overwrite=True to replace it")
    for file, table in tables.items():
        write_table(table, file, overwrite=overwrite)
    text = HEADING + toml_text({name: value for name, value in entries.items() if value}) + "\n"
    return (write_text(text, path, overwrite=overwrite), *tables)


def _source(source: Any, path: Path, tables: dict[Path, Any]) -> dict[str, Any]:
    if isinstance(source, (TabulatedSource, Together)):
        raise SetupError(f"{path}: source: a {source.shape} is not written to setup files; write this entry by hand")
    if isinstance(source, Lines):
        return {"shape": source.shape, "lines": [_stated(line, path, tables, "line") for line in source.lines]}
    return {"shape": source.shape, **_stated(source, path, tables, "source")}


def _observation(setup: Setup, path: Path) -> dict[str, Any]:
    if setup.observation is None:
        return {}
    from .setup_sky import write_observation

    return write_observation(setup.observation, path, _text, lambda shape, without=(): _stated(shape, path, {}, "sky", without))


def _filter(band: Any, path: Path, index: int, tables: dict[Path, Any], what: str = "filter") -> dict[str, Any]:
    effects, bare = _effects_of(band, path, index)
    stem = f"{what}{index + 1}"
    if isinstance(bare, Tabulated):
        curve = bare.curve
        file = _beside(path, stem)
        tables[file] = _table(curve.wavelength_si, curve.transmission, "transmission", bare.origin)
        return {"shape": bare.shape, "file": file.name, "medium": "vacuum", **effects}
    return {"shape": bare.shape, **_stated(bare, path, tables, stem), **effects}


def _effects_of(band: Any, path: Path, index: int) -> tuple[dict[str, Any], Any]:
    """Keys for what happens to a filter in the beam, and the filter without it."""
    found: list[Any] = []
    while isinstance(band, BEAM_EFFECTS):
        found.append(band)
        band = band.filter
    kinds = [type(item) for item in reversed(found)]
    indices = {item.effective_index for item in found if isinstance(item, (Tilted, InCone))}
    if kinds != [kind for kind in BEAM_EFFECTS if kind in kinds] or len(indices) > 1:
        raise SetupError(f"{path}: filter[{index}]: its effects in the beam are in an order, or with indices, that no setup file can hold")
    entries: dict[str, Any] = {"effective_index": indices.pop()} if indices else {}
    for item in found:
        if isinstance(item, Tilted):
            entries["tilt"] = _text(item.angle)
        elif isinstance(item, InCone):
            entries |= {"f_number": item.f_number, "obstruction": item.obstruction}
        elif isinstance(item, Warmed):
            entries |= {"warmed_by": _text(item.by), "drift": _text(item.drift)}
        elif isinstance(item, Leaky):
            entries |= {"leak": item.leak, "leak_low": _text(item.low), "leak_high": _text(item.high)}
    return entries, band


def _stated(shape: Any, path: Path, tables: dict[Path, Any], stem: str, without: tuple[str, ...] = ()) -> dict[str, Any]:
    """Fields of a frozen object that differ from their defaults."""
    entries: dict[str, Any] = {}
    for item in fields(shape):
        value = getattr(shape, item.name)
        default = None if item.default is MISSING else item.default
        if item.name in without or not item.init or value is None or (type(value) is type(default) and bool(np.all(value == default))):
            continue
        entries[item.name] = _value(value, path, tables, f"{stem}_{item.name}")
    return entries


def _value(value: Any, path: Path, tables: dict[Path, Any], stem: str) -> Any:
    if isinstance(value, WavelengthTable):
        file = _beside(path, stem)
        tables[file] = _table(value.wavelength.to_value(u.m), value.values, "value", stem)
        return {"file": file.name}
    if isinstance(value, u.Quantity):
        return _text(value) if value.ndim == 0 else [_text(item) for item in value]
    if isinstance(value, tuple):
        return [_value(item, path, tables, stem) for item in value]
    return value.item() if isinstance(value, np.generic) else value


def _text(quantity: u.Quantity) -> str:
    return f"{float(quantity.value)!r} {quantity.unit}"


def _beside(path: Path, stem: str) -> Path:
    return path.with_name(f"{path.stem}_{stem}.ecsv")


def _table(wavelength_si: Any, values: Any, name: str, origin: str) -> Any:
    from astropy.table import Table

    meta = {"description": f"vacuum wavelengths; from {origin}"}
    return Table({"wavelength": np.asarray(wavelength_si) * 1e9 * u.nm, name: np.asarray(values, dtype=float)}, meta=meta)
