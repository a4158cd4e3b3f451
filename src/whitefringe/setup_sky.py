"""The array and its night in a setup file.

[array]
name = "Larkmoor"
longitude = "-15 deg"
latitude = "35 deg"
height = "1000 m"

[[array.station]]
name = "Kiln"
east = "0 m"                 # or x, y, z: geocentric
north = "0 m"
up = "0 m"
uncertainty = "20 um"
line = { stroke = "25 m", greatest_speed = "25 mm / s", passes = 4 }

[[target]]
name = "Alpha"
ra = "60 deg"                # or "04h00m00s"; or azimuth, altitude; or lamp = true
dec = "25 deg"               # or "+25d00m00s"
object = { shape = "uniform-disc", diameter = "1.2 mas" }

[night]
date = "2026-12-01"          # on whose evening the night begins, at the site
least_altitude = "30 deg"
"""

from __future__ import annotations

from pathlib import Path
from typing import Any, get_type_hints

import astropy.units as u
from astropy.coordinates import EarthLocation
from astropy.time import Time
from pydantic import Field

from .errors import SetupError
from .setup_angles import AngleText, DegreesText, SigmaText
from .setup_entries import Entry, KeyPath, QuantityText, built, checked, member, without_shape
from .sky import (
    OBJECT_SHAPES,
    Array,
    DelayLine,
    FixedDirection,
    LampTarget,
    Observation,
    Picture,
    SkyObject,
    Star,
    Station,
)
from .sky.observation import NIGHT_CHECKS
from .sky.orientation import quiet
from .sky.stations import HEIGHTS


class LineEntry(Entry):
    """A station's delay line."""

    stroke: QuantityText
    greatest_speed: QuantityText
    passes: int = 2
    offset: QuantityText = 0.0 * u.m
    rest: QuantityText = 0.0 * u.m
    medium: str = "vacuum"
    wavelength: QuantityText = None


class StationEntry(Entry):
    """A station, by east, north, up or by x, y, z."""

    name: str
    east: QuantityText = None
    north: QuantityText = None
    up: QuantityText = None
    x: QuantityText = None
    y: QuantityText = None
    z: QuantityText = None
    uncertainty: QuantityText = 0.0 * u.m
    line: dict[str, Any] | None = None


class ArrayEntry(Entry):
    """The array's place and stations."""

    longitude: AngleText
    latitude: DegreesText
    height: QuantityText = 0.0 * u.m
    name: str = ""
    station: list[dict[str, Any]] = Field(min_length=2)


class TargetEntry(Entry):
    """A star, a fixed direction or the lamp."""

    name: str
    ra: AngleText = None
    dec: DegreesText = None
    pm_ra_cosdec: QuantityText = None
    pm_dec: QuantityText = None
    parallax: QuantityText = None
    radial_velocity: QuantityText = None
    epoch: str | None = None
    proper_motion_uncertainty: QuantityText = None
    azimuth: DegreesText = None
    altitude: DegreesText = None
    lamp: bool = False
    uncertainty: SigmaText = None
    object: dict[str, Any] | None = None


class NightEntry(Entry):
    """The night and its limits."""

    date: str
    least_altitude: QuantityText = 30.0 * u.deg
    sun_below: QuantityText = -12.0 * u.deg
    step: QuantityText = 5.0 * u.min


PLACE = (("longitude", u.deg, -360, 360), ("latitude", u.deg, -90, 90), ("height", u.m, *HEIGHTS))
"""Name, unit and range of what says where the array is."""


def read_observation(raw: dict[str, Any], air: Any, path: Path) -> Observation | None:
    """Build the observation from the entries ``array``, ``target`` and ``night``; None without an array. `air` fills delay lines."""
    if raw.get("array") is None:
        for key in ("target", "night"):
            if raw.get(key):
                raise SetupError(f"{path}: {key}: this needs an [array] in the same file")
        return None
    entry = checked(ArrayEntry, raw["array"], path, "array")
    stations = [checked(StationEntry, item, path, f"array.station[{k}]") for k, item in enumerate(entry.station)]
    lines = [_line(item, air, path, f"array.station[{k}].line") for k, item in enumerate(stations) if item.line is not None]
    targets = [checked(TargetEntry, item, path, f"target[{k}]") for k, item in enumerate(raw.get("target") or [])]
    if not targets:
        raise SetupError(f"{path}: target: an array needs at least one [[target]]")
    night = checked(NightEntry, raw["night"] if raw.get("night") is not None else {}, path, "night")
    for key, check in NIGHT_CHECKS.items():
        with KeyPath(path, f"night.{key}"):
            check(getattr(night, key))
    objects = {item.name: read_object(item.object, path, f"target[{k}].object") for k, item in enumerate(targets) if item.object}
    with KeyPath(path, "array"):
        array = Array(
            location=_location(entry, path),
            stations=[_station(item, path, f"array.station[{k}]") for k, item in enumerate(stations)],
            name=entry.name,
        )
    with KeyPath(path, "target"):
        found = [_target(item, path, f"target[{k}]") for k, item in enumerate(targets)]
        limits = {key: getattr(night, key) for key in NightEntry.model_fields}
        return Observation(array=array, targets=found, objects=objects, delay_lines=lines, **limits)


def _location(entry: ArrayEntry, path: Path) -> EarthLocation:
    for name, unit, low, high in PLACE:
        value = getattr(entry, name)
        if not isinstance(value, u.Quantity) or not value.unit.is_equivalent(unit):
            raise SetupError(f"{path}: array.{name}: must be one number in a unit such as {unit}; got {value}")
        if not low <= value.to_value(unit) <= high:
            raise SetupError(f"{path}: array.{name}: must lie between {low:g} and {high:g} {unit}; got {value}")
    return EarthLocation.from_geodetic(lon=entry.longitude, lat=entry.latitude, height=entry.height)


def _station(entry: StationEntry, path: Path, key: str) -> Any:
    local, central = (("east", "north", "up"), ("x", "y", "z"))
    given = [name for name in (*local, *central) if getattr(entry, name) is not None]
    for names, make in ((local, Station), (central, Station.geocentric)):
        if tuple(given) == names:
            with KeyPath(path, key):
                return make(name=entry.name, uncertainty=entry.uncertainty, **{name: getattr(entry, name) for name in names})
    raise SetupError(f"{path}: {key}: a station has east, north and up, or x, y and z; got {', '.join(given) or 'none of them'}")


def _line(station: StationEntry, air: Any, path: Path, key: str) -> DelayLine:
    entry = checked(LineEntry, station.line, path, key)
    if entry.medium not in ("vacuum", "air"):
        raise SetupError(f'{path}: {key}.medium: must be "vacuum" or "air"; got {entry.medium!r}')
    if entry.medium == "air" and air is None:
        raise SetupError(f"{path}: {key}.medium: there is no [air] in this file, or no arm that it fills")
    options = {name: getattr(entry, name) for name in ("stroke", "greatest_speed", "passes", "offset", "rest", "wavelength")}
    with KeyPath(path, key):
        return DelayLine(station=station.name, medium=air if entry.medium == "air" else None, **options)


def _target(entry: TargetEntry, path: Path, key: str) -> Any:
    star = {name: getattr(entry, name) for name in ("ra", "dec", "pm_ra_cosdec", "pm_dec", "parallax", "radial_velocity")}
    star |= {"proper_motion_uncertainty": entry.proper_motion_uncertainty, "epoch": entry.epoch}
    direction = {"azimuth": entry.azimuth, "altitude": entry.altitude}
    known = {"uncertainty": entry.uncertainty} if entry.uncertainty is not None else {}
    stated = {name: value for name, value in (star | direction).items() if value is not None}
    with KeyPath(path, key):
        if entry.lamp and not stated and not known:
            return LampTarget(name=entry.name)
        if set(stated) == {"azimuth", "altitude"} and not entry.lamp:
            return FixedDirection(name=entry.name, **stated, **known)
        if {"ra", "dec"} <= set(stated) <= set(star) and not entry.lamp:
            if "epoch" in stated:
                stated["epoch"] = _epoch(entry.epoch, path, key)
            return Star.at(name=entry.name, **stated, **known)
    raise SetupError(
        f"{path}: {key}: a target has ra and dec (with what belongs to a star), or azimuth and altitude, or lamp = true; "
        f"got {', '.join([*stated, *known, *(['lamp'] if entry.lamp else [])]) or 'none of them'}"
    )


def _epoch(text: Any, path: Path, key: str) -> Time:
    try:
        with quiet():
            return Time(text)
    except ValueError:
        raise SetupError(f'{path}: {key}.epoch: must be a time such as "J2016.0" or "2016-01-01"; got {text!r}') from None


def read_object(raw: dict[str, Any], path: Path, key: str) -> SkyObject:
    """Build a member of `OBJECT_SHAPES`, nested ones too; a picture is not read from setup files."""
    cls = member(tuple(item for item in OBJECT_SHAPES if item is not Picture), raw, path, key)
    rest = without_shape(raw)
    hints = get_type_hints(cls)
    for name, value in rest.items():
        if isinstance(value, dict):
            rest[name] = read_object(value, path, f"{key}.{name}")
        elif isinstance(value, list) and all(isinstance(item, dict) for item in value) and name in hints:
            rest[name] = tuple(read_object(item, path, f"{key}.{name}[{k}]") for k, item in enumerate(value))
    return built(cls, rest, path, key)  # type: ignore[no-any-return]


def write_observation(observation: Observation | None, path: Path, text: Any, stated: Any) -> dict[str, Any]:
    """Return the entries that `read_observation` reads again; `text` writes a Quantity, `stated` the fields of a frozen object."""
    if observation is None:
        return {}
    place = observation.array.location
    lines = {line.station: line for line in observation.delay_lines}
    stations = []
    for station in observation.array.stations:
        entry = stated(station)
        if station.name in lines:
            line = lines[station.name]
            kept = {name: value for name, value in stated(line).items() if name not in ("station", "medium")}
            entry["line"] = kept | ({"medium": "air"} if line.medium is not None else {})
        stations.append(entry)
    array = {
        "name": observation.array.name,
        "longitude": text(_neat(place.lon.to(u.deg))),
        "latitude": text(_neat(place.lat.to(u.deg))),
        "height": text(_neat(place.height.to(u.m))),
        "station": stations,
    }
    targets = [_target_entry(item, observation, path, text, stated) for item in observation.targets]
    night = {"date": str(observation.date), **{name: text(getattr(observation, name)) for name in ("least_altitude", "sun_below", "step")}}
    return {"array": array, "target": targets, "night": night}


def _neat(value: u.Quantity) -> u.Quantity:
    """Return a number that was turned into another unit and back without the last digits that this left."""
    return u.Quantity(float(f"{float(value.value):.13g}"), value.unit)


def _target_entry(target: Any, observation: Observation, path: Path, text: Any, stated: Any) -> dict[str, Any]:
    if isinstance(target, LampTarget):
        entry: dict[str, Any] = {"name": target.name, "lamp": True}
    elif isinstance(target, Star):
        entry = _star_entry(target, text)
    else:
        entry = stated(target)
    if target.name in observation.objects:
        entry["object"] = _object_entry(observation.objects[target.name], path, stated)
    return entry


def _star_entry(star: Star, text: Any) -> dict[str, Any]:
    place = star.coordinates
    entry: dict[str, Any] = {"name": star.name, "ra": text(_neat(place.ra.to(u.deg))), "dec": text(_neat(place.dec.to(u.deg)))}
    if star.near:
        entry["parallax"] = text(_neat((1 * u.pc / place.distance).to(u.one).value * 1000 * u.mas))
    if star.moves:
        entry |= {name: text(_neat(getattr(place, name).to(u.mas / u.yr))) for name in ("pm_ra_cosdec", "pm_dec")}
    if place.obstime is not None:
        with quiet():
            entry["epoch"] = place.obstime.utc.isot
    for name in ("uncertainty", "proper_motion_uncertainty"):
        value = getattr(star, name)
        if bool((value.value != 0).any()):
            entry[name] = text(value) if value.ndim == 0 else [text(item) for item in value]
    return entry


def _object_entry(item: Any, path: Path, stated: Any) -> dict[str, Any]:
    if isinstance(item, Picture):
        raise SetupError(f"{path}: target: an object given as a picture is not written to setup files")
    entry: dict[str, Any] = {"shape": item.shape}
    for name in item.__dataclass_fields__:
        value = getattr(item, name)
        if hasattr(value, "visibility_si"):
            entry[name] = _object_entry(value, path, stated)
        elif isinstance(value, tuple) and value and all(hasattr(part, "visibility_si") for part in value):
            entry[name] = [_object_entry(part, path, stated) for part in value]
    return entry | {name: value for name, value in stated(item, tuple(entry)).items() if name not in entry}
