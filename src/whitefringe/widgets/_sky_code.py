"""The night as a script: the calls that make its observation, and the numbers that the widgets show."""

from __future__ import annotations

from typing import Any

import astropy.units as u
import numpy as np

from ..sky import EarthOrientation, LampTarget, Observation, Point, Star

IMPORTS = (
    "from astropy.coordinates import EarthLocation",
    "from astropy.time import Time",
    "from whitefringe import media, sky",
)


def observation_code(night: Observation | None) -> list[str]:
    """Return the lines that make the night and look at what is looked at; none without a night. They need ``u`` and ``light``."""
    if night is None:
        return []
    place = night.array.location
    angles = ", ".join(f"{name}={_neat(getattr(place, name).to(unit))}" for name, unit in (("lon", u.deg), ("lat", u.deg), ("height", u.m)))
    where = f"EarthLocation.from_geodetic({angles})"
    objects = ", ".join(f"{name!r}: {_value(item)}" for name, item in night.objects.items())
    lines = [
        *IMPORTS,
        f"array = sky.Array(location={where}, name={night.array.name!r}, stations=[",
        *(f"    {_value(station)}," for station in night.array.stations),
        "])",
        "targets = [",
        *(f"    {_target(target)}," for target in night.targets),
        "]",
        f"objects = {{{objects}}}",
        "delay_lines = [",
        *(f"    {_value(line)}," for line in night.delay_lines),
        "]",
        f"night = sky.Observation(array=array, targets=targets, objects=objects, delay_lines=delay_lines, date={night.date!r},",
        f"    least_altitude={_value(night.least_altitude)}, sun_below={_value(night.sun_below)}, step={_value(night.step)},",
        f"    target={night.target!r}, baseline={night.baseline!r}{_orientation(night.orientation)})",
        "track = night.rows  # path difference, its uncertainty by cause, rate, u, v, carriages",
        'contrast = abs(sky.band_visibility(night.chosen_object, track["u_icrs"], track["v_icrs"], light))',
    ]
    return lines + (["windows = night.windows"] if night.delay_lines else [])


def _orientation(given: EarthOrientation | None) -> str:
    if given is None or given is EarthOrientation.packaged():
        return ""
    if given.given is None:
        name = given.source.removeprefix("finals2000A from ")
        return f", orientation=sky.EarthOrientation.read({name!r})"
    ut1, sigma, x, y, pole = (float(number) for number in given.given)
    angles = f"x={x!r} * u.rad, y={y!r} * u.rad, pole_uncertainty={pole!r} * u.rad"
    return f", orientation=sky.EarthOrientation.fixed(ut1_utc={ut1!r} * u.s, uncertainty={sigma!r} * u.s, {angles})"


def _target(target: Any) -> str:
    if isinstance(target, LampTarget) or not isinstance(target, Star):
        return _value(target)
    place = target.coordinates
    parts = [f"name={target.name!r}", f"ra={_neat(place.ra.to(u.deg))}", f"dec={_neat(place.dec.to(u.deg))}"]
    if target.moves:
        parts += [f"{name}={_neat(getattr(place, name).to(u.mas / u.yr))}" for name in ("pm_ra_cosdec", "pm_dec")]
        if hasattr(place.data.differentials["s"], "d_distance"):
            parts.append(f"radial_velocity={_neat(place.radial_velocity.to(u.km / u.s))}")
    if target.near:
        parts.append(f"parallax={_neat((1 * u.pc / place.distance).to(u.one) * 1000 * u.mas)}")
    if place.obstime is not None:
        parts.append(f"epoch=Time({float(place.obstime.jd1)!r}, {float(place.obstime.jd2)!r}, format='jd', scale={place.obstime.scale!r})")
    for name in ("uncertainty", "proper_motion_uncertainty"):
        if np.any(u.Quantity(getattr(target, name)).value != 0):
            parts.append(f"{name}={_value(getattr(target, name))}")
    return f"sky.Star.at({', '.join(parts)})"


def _neat(value: u.Quantity) -> str:
    """Without the last digits' noise of a number that was turned into another unit and back: 1e-13 of it is below a nanometre of path."""
    return f'u.Quantity("{float(value.value):.13g} {value.unit}")'


def _number(value: u.Quantity) -> str:
    return f'u.Quantity("{float(value.value):.15g} {value.unit}")'


def _value(value: Any) -> str:
    """Write a value as the expression that makes it; fields of frozen objects that stand at their default are left out."""
    if isinstance(value, u.Quantity):
        return f"u.Quantity({value.value.tolist()!r}, {str(value.unit)!r})" if value.ndim else _number(value)
    if isinstance(value, tuple):
        return f"({', '.join(_value(item) for item in value)},)"
    if isinstance(value, np.ndarray):
        return repr(value.tolist())
    fields = getattr(value, "__dataclass_fields__", None)
    if fields is None:
        return repr(value)
    area = type(value).__module__.split(".")[1]
    stated = [item for item in fields.values() if item.init and not _same(getattr(value, item.name), item.default)]
    return f"{area}.{type(value).__name__}({', '.join(f'{item.name}={_value(getattr(value, item.name))}' for item in stated)})"


def _same(value: Any, default: Any) -> bool:
    if isinstance(value, Point) and isinstance(default, Point):
        return True
    return type(value) is type(default) and bool(np.all(value == default))
