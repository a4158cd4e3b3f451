"""The arms in a setup file.

    [air]
    model = "ciddor 1996"
    temperature = "12 deg_C"
    pressure = "850 hPa"
    humidity = "30 %"

    [air_uncertainty]            # one standard deviation, of what all air has in common
    temperature = "0.3 K"
    pressure = "0.5 hPa"
    humidity = "5 %"

    [[first_arm]]
    medium = "air"
    length = "42.5 m"

    [[second_arm]]
    medium = "fused silica"      # or "vacuum", "air"; "glasses" names a table of your own glasses beside the setup file
    length = "12 mm"

``model = "two air models"`` has ``short``, ``long``, ``meet`` and ``levelled`` as well; a segment may have its own ``temperature``,
``pressure``, ``humidity``, and ``length_uncertainty``, ``temperature_uncertainty``.
"""

from __future__ import annotations

from pathlib import Path
from typing import Any

import astropy.units as u

from .errors import SetupError
from .media import AIR_MODELS, Air, ArmPair, Glass, Medium, Segment, TwoModelAir, Vacuum
from .setup_entries import Entry, KeyPath, QuantityText, checked


class AirEntry(Entry):
    """The air, of one model or of two that meet."""

    model: str
    temperature: QuantityText = 15.0 * u.deg_C
    pressure: QuantityText = 101325.0 * u.Pa
    humidity: QuantityText = 0.0 * u.percent
    co2: float | None = None
    saturation: str = "iapws"
    extrapolate: bool = False
    short: str | None = None
    long: str | None = None
    meet: QuantityText = None
    levelled: bool | None = None


class SegmentEntry(Entry):
    """One segment of an arm."""

    medium: str
    length: QuantityText
    glasses: str | None = None
    temperature: QuantityText = None
    pressure: QuantityText = None
    humidity: QuantityText = None
    length_uncertainty: QuantityText = 0.0 * u.m
    temperature_uncertainty: QuantityText = 0.0 * u.K


def read_arms(raw: dict[str, Any], path: Path) -> ArmPair | None:
    """Build the arms from the entries ``air``, ``first_arm`` and ``second_arm``, or None where there are none."""
    air = _air(raw["air"], path) if raw.get("air") is not None else None
    arms = []
    for key in ("first_arm", "second_arm"):
        arms.append([_segment(item, air, path, f"{key}[{number}]") for number, item in enumerate(raw.get(key) or [])])
    if not arms[0] and not arms[1]:
        if air is not None:
            raise SetupError(f"{path}: air: there is air but no arm; add [[first_arm]] or [[second_arm]] entries, or leave the air out")
        return None
    return ArmPair(first=arms[0], second=arms[1])


def _air(raw: dict[str, Any], path: Path) -> Medium:
    entry = checked(AirEntry, raw, path, "air")
    both = {name: getattr(entry, name) for name in ("short", "long", "meet", "levelled")}
    given = [name for name, value in both.items() if value is not None]
    if entry.model != TwoModelAir.shape:
        if given:
            raise SetupError(f'{path}: air.{given[0]}: this key belongs to model = "{TwoModelAir.shape}"')
        return _one_model(entry, entry.model, path, "air.model")
    for name in ("short", "long"):
        if both[name] is None:
            raise SetupError(f"{path}: air.{name}: this key is missing")
    short, long = (_one_model(entry, both[name], path, f"air.{name}") for name in ("short", "long"))
    with KeyPath(path, "air"):
        return TwoModelAir(short=short, long=long, **{name: both[name] for name in ("meet", "levelled") if both[name] is not None})


def _one_model(entry: AirEntry, name: str, path: Path, key: str) -> Air:
    for cls in AIR_MODELS:
        if cls.shape == name:
            options = {key: getattr(entry, key) for key in ("temperature", "pressure", "humidity", "saturation", "extrapolate")}
            if entry.co2 is not None and "co2" in cls.__dataclass_fields__:
                options["co2"] = entry.co2
            with KeyPath(path, "air"):
                return cls(**options)
    names = ", ".join([*(cls.shape for cls in AIR_MODELS), *([TwoModelAir.shape] if key == "air.model" else [])])
    raise SetupError(f"{path}: {key}: must be one of {names}; got {name!r}")


def _segment(raw: dict[str, Any], air: Medium | None, path: Path, key: str) -> Segment:
    entry = checked(SegmentEntry, raw, path, key)
    medium = _medium(entry, air, path, key)
    with KeyPath(path, key):
        return Segment(medium=medium, **{name: getattr(entry, name) for name in Segment.__dataclass_fields__ if name != "medium"})


def _medium(entry: SegmentEntry, air: Medium | None, path: Path, key: str) -> Medium:
    if entry.medium == "vacuum":
        return Vacuum()
    if entry.medium == "air":
        if air is None:
            raise SetupError(f"{path}: {key}.medium: there is no [air] in this file to take it from")
        return air
    with KeyPath(path, f"{key}.medium"):
        return Glass.named(entry.medium, None if entry.glasses is None else path.parent / entry.glasses)


def write_arms(arms: ArmPair | None, path: Path, text: Any) -> dict[str, Any]:
    """Return the entries that `read_arms` reads again; `text` writes a Quantity."""
    if arms is None:
        return {}
    airs = list(dict.fromkeys(item.medium for _, item in arms.signed if item.medium.is_air))
    if len(airs) > 1:
        raise SetupError(
            f"{path}: arms: a setup file holds one [air]; write the others as temperature, pressure and humidity of their segments"
        )
    entries: dict[str, Any] = {"air": _air_entry(airs[0], text)} if airs else {}
    for key, segments in (("first_arm", arms.first), ("second_arm", arms.second)):
        entries[key] = [_segment_entry(item, path, text) for item in segments]
    return entries


def _air_entry(air: Any, text: Any) -> dict[str, Any]:
    if isinstance(air, TwoModelAir):
        entry = _air_entry(air.short, text) | {"model": air.shape, "short": air.short.shape, "long": air.long.shape}
        return entry | {"meet": text(air.meet), "levelled": air.levelled}
    entry = {"model": air.shape, **{name: text(getattr(air, name)) for name in ("temperature", "pressure", "humidity")}}
    entry |= {"saturation": air.saturation, "extrapolate": air.extrapolate}
    return entry | ({"co2": float(u.Quantity(air.co2).to_value(u.one))} if hasattr(air, "co2") else {})


def _segment_entry(item: Segment, path: Path, text: Any) -> dict[str, Any]:
    name = "air" if item.medium.is_air else item.medium.name
    if isinstance(item.medium, Glass) and not _is_packaged(item.medium):
        raise SetupError(
            f"{path}: arms: the glass {name!r} is not a packaged one, and its table is not written; name it by hand with the key glasses"
        )
    entry: dict[str, Any] = {"medium": name}
    for key in Segment.__dataclass_fields__:
        value = getattr(item, key)
        if isinstance(value, u.Quantity) and (value.value != 0 or key == "length"):
            entry[key] = text(value)
    return entry


def _is_packaged(glass: Glass) -> bool:
    try:
        packaged = Glass.named(glass.name)
    except ValueError:
        return False
    same = glass.strengths.tolist() == packaged.strengths.tolist() and glass.relative_to == packaged.relative_to
    return same and glass.now is None and not glass.extrapolate
