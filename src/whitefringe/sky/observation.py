"""A night at the array: which targets, with which delay lines, within which limits; and the tables that follow."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import cached_property
from types import MappingProxyType
from typing import Any

import astropy.units as u
from astropy.table import QTable, vstack
from astropy.time import Time

from ..errors import InputError
from ..units import frozen_quantities
from ._moved import moved_star, moved_station
from ._object import SkyObject, check_object
from .delay_lines import DelayLine, as_lines, carriages, least_altitude_deg
from .delays import track
from .night import calendar_date, night_times, step_si, sun_limit_deg
from .orientation import EarthOrientation
from .stations import Array, Baseline
from .targets import as_targets
from .visibility import Point
from .windows import windows

LONGEST_STEP = 3600.0
"""Longest step [s] of a night's tables: `windows` joins rows that are no further apart, and the sky turns by 15 deg in it."""


def night_step_si(step: Any) -> float:
    """Return the step of a night's tables [s], or say what it must be."""
    longest = step_si(step)
    if longest > LONGEST_STEP * (1 + 1e-12):
        raise InputError(f"step must be at most {LONGEST_STEP / 3600:g} h, to follow the sky; got {step}; for example 5 min")
    return longest


NIGHT_CHECKS: Mapping[str, Callable[[Any], Any]] = MappingProxyType(
    {"date": calendar_date, "least_altitude": least_altitude_deg, "sun_below": sun_limit_deg, "step": night_step_si}
)
"""What says of each number of a night whether it can be used."""


@dataclass(frozen=True, kw_only=True, eq=False)
class Observation:
    """What is to be observed in one night, and what limits it.

    Parameters
    ----------
    array : Array
    targets : Star, FixedDirection, LampTarget, or a sequence of them
        Names must differ.
    date : str
        Calendar date at the site on whose evening the night begins, such as ``"2026-12-01"``.
    objects : mapping of str to SkyObject, optional
        What each target looks like, by its name; a point where nothing is said.
    delay_lines : DelayLine or sequence of DelayLine, optional
        One per station; without them nothing is said of carriages and windows.
    least_altitude : Quantity [angle]
        0 to 90 deg.
    sun_below : Quantity [angle]
        The night lasts while the sun's altitude is below this; -90 to 0 deg.
    step : Quantity [time]
        Longest step of the tables, 1 s to 1 h.
    orientation : EarthOrientation, optional
        The packaged table by default.
    target, baseline : str, optional
        Which of them are looked at; the first by default. See `choosing`.
    stated : Observation, optional
        What the setup states, where a star or a station was moved to see what would be. See `star_at`, `station_at`.

    Raises
    ------
    InputError, UnitsError
        Not an Array; no target, a target of the wrong kind or a name twice, an object for a target that is not there; a date, limit or
        step out of its range.
    """

    array: Array
    targets: Sequence[Any]
    date: str
    objects: Mapping[str, SkyObject] = field(default_factory=dict)
    delay_lines: Sequence[DelayLine] = ()
    least_altitude: u.Quantity = 30.0 * u.deg
    sun_below: u.Quantity = -12.0 * u.deg
    step: u.Quantity = 5.0 * u.min
    orientation: EarthOrientation | None = None
    target: str = ""
    baseline: str = ""
    stated: Observation | None = None

    def __post_init__(self) -> None:
        if not isinstance(self.array, Array):
            raise InputError(f"array must be an Array; got {type(self.array).__name__}")
        for field_name, check in NIGHT_CHECKS.items():
            check(getattr(self, field_name))
        frozen_quantities(self)
        object.__setattr__(self, "targets", as_targets(self.targets))
        object.__setattr__(self, "delay_lines", as_lines(self.delay_lines))
        if not isinstance(self.objects, Mapping):
            raise InputError(f"objects must be a mapping of target names to objects; got {self.objects!r}: leave it out for points")
        object.__setattr__(self, "objects", MappingProxyType(dict(self.objects)))
        for name, item in self.objects.items():
            check_object(item, f"the object of target {name!r}")
        names = [target.name for target in self.targets]
        twice = sorted({name for name in names if names.count(name) > 1})
        if twice:
            raise InputError(f"target names must differ; twice or more: {', '.join(twice)}")
        object.__setattr__(self, "target", self._one_of(self.target, names, "target"))
        object.__setattr__(self, "baseline", self._one_of(self.baseline, [item.name for item in self.array.baselines], "baseline"))
        unknown = [name for name in self.objects if name not in names]
        if unknown:
            raise InputError(f"there is no target {unknown[0]!r} for this object; the targets are {', '.join(names)}")

    @staticmethod
    def _one_of(name: str, names: list[str], what: str) -> str:
        if name and name not in names:
            raise InputError(f"there is no {what} {name!r}; there are {', '.join(names)}")
        return name or names[0]

    @cached_property
    def times(self) -> Time:
        """The night's times, UTC; see `night_times`."""
        return night_times(self.array.location, self.date, sun_below=self.sun_below, step=self.step)

    @cached_property
    def table(self) -> QTable:
        """Every target on every baseline through the night: `track`, and with delay lines also the `carriages`."""
        new = [target for target in self.targets if target.name not in self._known]
        if not self._known or not new:
            return self._computed(self.targets)
        fresh = self._computed(new)
        parts = [self._known.get(target.name, fresh[fresh["target"] == target.name]) for target in self.targets]
        return vstack(parts, metadata_conflicts="silent")

    def _computed(self, targets: Sequence[Any]) -> QTable:
        found = track(self.array, targets, self.times, self.orientation)
        return carriages(found, self.delay_lines, least_altitude=self.least_altitude) if self.delay_lines else found

    @cached_property
    def _known(self) -> dict[str, QTable]:
        """Rows of targets that were computed for a night of which only other targets differ."""
        return {}

    @cached_property
    def windows(self) -> QTable | None:
        """When each target can be observed on each baseline, and why not when not; None without delay lines."""
        return windows(self.table, gap=LONGEST_STEP * u.s) if self.delay_lines else None

    def choosing(self, *, target: str = "", baseline: str = "") -> Observation:
        """Return the same night with another target or baseline looked at; the tables, which do not depend on it, are kept."""
        return self._with_tables(replace(self, target=target or self.target, baseline=baseline or self.baseline))

    def looking_like(self, obj: SkyObject) -> Observation:
        """Return the same night with another object for the target that is looked at; the tables are kept."""
        return self._with_tables(replace(self, objects={**self.objects, self.target: obj}))

    def _with_tables(self, other: Observation) -> Observation:
        vars(other).update({name: value for name, value in vars(self).items() if name in ("times", "table", "windows")})
        return other

    def star_at(self, *, ra: u.Quantity | None = None, dec: u.Quantity | None = None) -> Observation:
        """Return the night with the star that is looked at elsewhere, to see what would be; its motion and uncertainties are kept.

        Parameters
        ----------
        ra, dec : Quantity [angle], optional
            As it is by default.

        Raises
        ------
        InputError, UnitsError
            The target that is looked at is no star; a declination beyond 90 deg.
        """
        star = moved_star(self.chosen_target, ra, dec)
        return self._with_target(star, self.stated or self)

    def star_back(self) -> Observation:
        """Return the night with the target that is looked at where the setup states it."""
        if self.stated is None:
            return self
        return self._with_target(next(item for item in self.stated.targets if item.name == self.target), self.stated)

    def _with_target(self, target: Any, stated: Observation) -> Observation:
        targets = tuple(target if item.name == self.target else item for item in self.targets)
        changed = replace(self, targets=targets, stated=stated)
        vars(changed)["times"] = self.times
        others = (item.name for item in targets if item.name != self.target)
        vars(changed)["_known"] = {name: self.table[self.table["target"] == name] for name in others}
        return changed

    def station_at(self, *, length: u.Quantity | None = None, azimuth: u.Quantity | None = None) -> Observation:
        """Return the night with the second station of the baseline elsewhere about the first, to see what would be; its height is kept.

        Parameters
        ----------
        length : Quantity [m], optional
            Of the baseline over ground, height differences aside; as it is by default.
        azimuth : Quantity [angle], optional
            Of the second station seen from the first, from north through east; as it is by default.

        Raises
        ------
        InputError, UnitsError
            A length that is not above zero.
        """
        return self._with_array(moved_station(self.array, self.chosen_baseline, length, azimuth), self.stated or self)

    def stations_back(self) -> Observation:
        """Return the night with all stations where the setup states them."""
        return self if self.stated is None else self._with_array(self.stated.array, self.stated)

    def _with_array(self, array: Array, stated: Observation) -> Observation:
        changed = replace(self, array=array, stated=stated)
        vars(changed)["times"] = self.times
        return changed

    @cached_property
    def rows(self) -> QTable:
        """The night's rows of the target and baseline that are looked at."""
        return self.table[(self.table["target"] == self.target) & (self.table["baseline"] == self.baseline)]

    @property
    def chosen_target(self) -> Any:
        """The target that is looked at."""
        return next(item for item in self.targets if item.name == self.target)

    @property
    def chosen_baseline(self) -> Baseline:
        """The baseline that is looked at."""
        return next(item for item in self.array.baselines if item.name == self.baseline)

    @property
    def chosen_object(self) -> SkyObject:
        """What the target that is looked at looks like."""
        return self.objects.get(self.target, Point())
