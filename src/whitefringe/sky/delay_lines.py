"""Delay lines: where their carriages must stand, how fast they go, and what an array cannot do.

Nothing here moves anything; `CAUTION` says so wherever positions are shown.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import permutations
from typing import Any, Protocol

import astropy.units as u
import numpy as np
from astropy.table import QTable

from ..errors import InputError
from ..parameters import parameter
from ..results import Measured
from ..units import SPEED_OF_LIGHT, FloatArray, as_si, frozen_quantities, one_frequency_si, positive_si
from ._carriage_rows import LINE_NOTE, CarriageRows, column_si, need_columns

CAUTION = (
    "Planning only: whitefringe moves nothing and knows no interlock; travel limits, safe speeds and who may stand near a moving "
    "carriage are the site's own rules, to be settled with the local safety officer."
)
"""The sentence that is shown wherever carriage positions are."""

PASSES = (2, 4)
"""How many times light may travel the carriage's way: once there and back, or twice."""

GREATEST_INDEX = 4.0
"""A group index above this is no gas or window; it is refused as a mistake."""

TRACK_COLUMNS = ("target", "baseline", "time", "opd", "opd_uncertainty", "opd_rate", "altitude")
"""What `carriages` needs of a track."""


class GroupMedium(Protocol):
    """What fills a delay line: anything that knows its group index, such as the models of air in `whitefringe.media`."""

    def group_index(self, wavelength: Any, /) -> Any:
        """Return the group index at a vacuum wavelength [length]."""


@dataclass(frozen=True, kw_only=True)
class DelayLine:
    """The delay line of one station: a carriage that moves from 0 to `stroke`.

    It adds the path P = offset + passes n_g p, with p the carriage's position and n_g the group index of what fills the line.

    Parameters
    ----------
    station : str
        The station whose light goes through it.
    stroke : Quantity [length]
        Mechanical travel of the carriage.
    greatest_speed : Quantity [speed]
        Of the carriage, either way.
    passes : int
        How many times the light travels the carriage's way: 2 or 4.
    offset : Quantity [length]
        Constant path that this station's arm has beyond the others' with the carriage at 0; may be negative.
    rest : Quantity [length]
        Where the carriage stands while the other one of a baseline moves; it works from there to `stroke`.
    medium : GroupMedium, optional
        What fills the line; vacuum by default.
    wavelength : Quantity [vacuum wavelength or frequency], optional
        Needed with a `medium`; vacuum needs none, but what is given is checked.

    Raises
    ------
    InputError, UnitsError
        No name; a stroke or speed that is not above zero; passes other than 2 and 4; a rest outside the stroke; a medium without a
        group index from 1 to 4, or without a wavelength.

    Notes
    -----
    The packet stands where the group paths of the arms agree, so it is the group index that counts. The constant part of the
    arm belongs into `offset` as the group path that it is.

    Examples
    --------
    >>> import astropy.units as u
    >>> line = DelayLine(station="Weir", stroke=20 * u.m, greatest_speed=20 * u.mm / u.s)
    >>> print(line.path_per_metre, line.reach)
    2.0 40.0 m
    """

    station: str
    stroke: u.Quantity = parameter("stroke", u.m, low=0.5, high=200.0, step=0.5, start=20.0)
    greatest_speed: u.Quantity = parameter("greatest speed", u.mm / u.s, low=1.0, high=500.0, step=1.0, start=20.0)
    passes: int = 2
    offset: u.Quantity = parameter("path offset", u.m, low=-100.0, high=100.0, step=0.1, start=0.0, default=0 * u.m)
    rest: u.Quantity = parameter("rest position", u.m, low=0.0, high=0.5, step=0.1, start=0.0, default=0 * u.m)
    medium: GroupMedium | None = None
    wavelength: u.Quantity | None = None

    def __post_init__(self) -> None:
        if not isinstance(self.station, str) or not self.station.strip():
            raise InputError(f"station must be the name of a station, for example 'Weir'; got {self.station!r}")
        frozen_quantities(self)
        # an equality, so that 2.0 and numpy's 2 are 2; an array is in no tuple of numbers
        if isinstance(self.passes, bool) or not np.isscalar(self.passes) or self.passes not in PASSES:
            raise InputError(f"delay line of {self.station}: passes must be 2 or 4 (there and back, once or twice); got {self.passes!r}")
        object.__setattr__(self, "passes", int(self.passes))
        if self.wavelength is not None:
            one_frequency_si(self.wavelength, f"wavelength of the delay line of {self.station}")
        stroke, _, _, rest, _ = self._numbers_si
        if not 0 <= rest < stroke:
            raise InputError(
                f"delay line of {self.station}: rest must be from 0 to below the stroke of {stroke:g} m; got {self.rest}: "
                "a carriage works from its rest to the end of its stroke"
            )

    @cached_property
    def _numbers_si(self) -> tuple[float, float, float, float, float]:
        """Stroke [m], greatest speed [m/s], offset [m], rest [m], path per metre of carriage."""
        of = f"of the delay line of {self.station}"
        stroke = positive_si(self.stroke, u.m, f"stroke {of}")
        fastest = positive_si(self.greatest_speed, u.m / u.s, f"greatest_speed {of}", "mm / s")
        offset, rest = (as_si(getattr(self, name), u.m, f"{name} {of}") for name in ("offset", "rest"))
        for name, value in (("offset", offset), ("rest", rest)):
            if np.ndim(value) != 0:
                raise InputError(f"{name} {of} must be one number; got an array of shape {np.shape(value)}")
        return stroke, fastest, offset, rest, self.passes * self.group_index

    @cached_property
    def group_index(self) -> float:
        """Group index of what fills the line, 1 for vacuum."""
        if self.medium is None:
            return 1.0
        where, of = f"medium of the delay line of {self.station}", f"of the delay line of {self.station}"
        if not callable(getattr(self.medium, "group_index", None)):
            raise InputError(f"{where} must have group_index(wavelength), as the models of air in whitefringe.media; got {self.medium!r}")
        if self.wavelength is None:
            raise InputError(f"{where} needs a wavelength, for example wavelength=1.65 * u.um: its group index depends on it")
        found = self.medium.group_index(SPEED_OF_LIGHT / one_frequency_si(self.wavelength, f"wavelength {of}") * u.m)
        index = float(u.Quantity(found.value if isinstance(found, Measured) else found).to_value(u.dimensionless_unscaled))
        if not 1 <= index <= GREATEST_INDEX:
            raise InputError(f"{where} has a group index of {index:g} at {self.wavelength}; expected 1 to {GREATEST_INDEX:g}")
        return index

    @cached_property
    def flags(self) -> tuple[str, ...]:
        """What its medium extrapolates at the wavelength, in sentences."""
        said = getattr(self.medium, "flags", None)
        return tuple(f"{LINE_NOTE}{self.station}: {words}" for words in said(self.wavelength)) if callable(said) else ()

    @property
    def path_per_metre(self) -> float:
        """Path that a metre of carriage adds: passes times group index."""
        return self._numbers_si[-1]

    @property
    def reach(self) -> u.Quantity:
        """Greatest path that the carriage adds beyond its rest."""
        stroke, _, _, rest, path = self._numbers_si
        return path * (stroke - rest) * u.m


def carriages(track: Any, lines: Sequence[DelayLine], least_altitude: u.Quantity = 30 * u.deg) -> QTable:
    """Find where the two carriages of every baseline must stand, row by row of a track.

    The lines must make up D = opd - (offset_2 - offset_1) - (k_2 rest_2 - k_1 rest_1), with k = passes n_g of each line. D > 0:
    carriage 1 rests and carriage 2 stands at rest_2 + D/k_2. D < 0: carriage 2 rests and carriage 1 stands at rest_1 - D/k_1.

    Parameters
    ----------
    track : QTable or Table
        A row per target, baseline and time, as `sky.track` gives it: target, baseline (``"Kiln-Weir"``), time, opd [length],
        opd_uncertainty [length], opd_rate [speed], altitude [angle; not a number for a lamp].
    lines : DelayLine or sequence of DelayLine
        One for each station in the track.
    least_altitude : Quantity [angle]
        Lowest altitude at which the telescopes observe, 0 to 90 deg.

    Returns
    -------
    QTable
        The track's columns and: station_1, station_2; carriage_1, carriage_2 [m]; speed_1, speed_2 [mm/s], positive towards the
        end of the stroke; moving, the station whose carriage works; carriage_uncertainty [m], of that one; line_difference [m], D;
        margin_altitude [deg], margin_stroke [m], margin_speed [mm/s], what is left up to each limit (negative: beyond it);
        observable; reason, empty or why not. What the media of the lines extrapolate is added to the track's ``meta`` as NOTE1, ...

    Raises
    ------
    InputError, UnitsError
        Missing columns or units; no row; a baseline without its delay lines; two lines of one station; an altitude outside 0 to
        90 deg.

    Notes
    -----
    opd is positive where station 2 is nearer the object: its light must be held back. One carriage moves and the other rests, so
    that the path in the lines is the shortest; the line that works has its own passes and medium, and an uncertainty of the path
    becomes one of the carriage divided by k. At D = 0 the carriages change roles. Each baseline is taken for itself: three stations
    at once need one more condition, which is not set here. The opd is geometric and in vacuum, as it is above the atmosphere; a
    line in air therefore moves by 1/n_g of what one in vacuum does.

    Examples
    --------
    >>> import astropy.units as u
    >>> from astropy.table import QTable
    >>> from astropy.time import Time
    >>> track = QTable({"target": ["Star A"], "baseline": ["Kiln-Weir"], "time": Time(["2026-03-14T21:00:00"]),
    ...     "opd": [-5.0] * u.m, "opd_uncertainty": [20] * u.um, "opd_rate": [4] * u.mm / u.s, "altitude": [50] * u.deg})
    >>> lines = [DelayLine(station=name, stroke=2 * u.m, greatest_speed=20 * u.mm / u.s) for name in ("Kiln", "Weir")]
    >>> row = carriages(track, lines)[0]
    >>> print(row["carriage_1"], row["speed_1"], row["reason"])
    2.5 m -2.0 mm / s out of stroke: Kiln needs 2.500 m, stroke 2 m
    """
    need_columns(track, TRACK_COLUMNS, "track", "sky.track gives them all")
    least, lines = least_altitude_deg(least_altitude), as_lines(lines)
    names, which = np.unique(np.asarray(track["baseline"]).astype(str), return_inverse=True)
    pairs = _pairs(names.tolist(), lines)
    numbers = np.array([[line._numbers_si for line in pair] for pair in pairs])[which]
    placed = place_si(column_si(track, "opd", u.m), column_si(track, "opd_rate", u.m / u.s), numbers)
    table = QTable(track)
    stations = np.array([[line.station for line in pair] for pair in pairs])[which]
    rows = np.arange(len(table))
    path = numbers[rows, placed.moving, 4]
    altitude = column_si(track, "altitude", u.deg, finite=False)
    for name, values, words in (
        ("station_1", stations[:, 0], "first station"),
        ("station_2", stations[:, 1], "second station"),
        ("carriage_1", placed.position[:, 0] * u.m, "carriage of the first station"),
        ("carriage_2", placed.position[:, 1] * u.m, "carriage of the second station"),
        ("carriage_uncertainty", column_si(track, "opd_uncertainty", u.m) / path * u.m, "one standard deviation, the carriage that moves"),
        ("speed_1", (placed.speed[:, 0] * u.m / u.s).to(u.mm / u.s), "speed of the first carriage"),
        ("speed_2", (placed.speed[:, 1] * u.m / u.s).to(u.mm / u.s), "speed of the second carriage"),
        ("moving", stations[rows, placed.moving], "station whose carriage moves"),
        ("line_difference", placed.difference * u.m, "path that the carriages make up, second minus first"),
        ("margin_altitude", (altitude - least) * u.deg, "altitude above the least"),
        ("margin_stroke", placed.margin_stroke * u.m, "stroke left beyond the carriage that moves"),
        ("margin_speed", (placed.margin_speed * u.m / u.s).to(u.mm / u.s), "speed left to the greatest"),
    ):
        table[name] = values
        table[name].info.description = words
    judged = CarriageRows.of(table)
    table["observable"] = judged.inside
    table["reason"] = [judged.reason(row, row + 1) for row in range(len(table))]
    _note(table.meta, dict.fromkeys(flag for pair in pairs for line in pair for flag in line.flags))
    return table


def _note(meta: Any, flags: Iterable[str]) -> None:
    """Add notes that are not there yet, numbered on from those that are."""
    count = sum(key.startswith("NOTE") for key in meta)
    meta.update({f"NOTE{k}": flag for k, flag in enumerate((flag for flag in flags if flag not in meta.values()), count + 1)})


def least_altitude_deg(value: Any) -> float:
    """Return the least altitude [deg], or say what it must be."""
    least = as_si(value, u.deg, "least_altitude", "deg")
    if np.ndim(least) != 0 or not 0 <= least <= 90:
        raise InputError(f"least_altitude must be one angle from 0 to 90 deg; got {value}")
    return float(least)


def as_lines(lines: Any) -> tuple[DelayLine, ...]:
    """Return one delay line or several as a tuple."""
    several = isinstance(lines, Iterable) and not isinstance(lines, str)
    chosen = tuple(lines) if several else (lines,)
    for line in chosen:
        if not isinstance(line, DelayLine):
            raise InputError(f"lines must be a sequence of sky.DelayLine, one for each station; got {line!r}")
    return chosen


@dataclass(frozen=True, kw_only=True, eq=False)
class Placed:
    """Two carriages per row: positions [m], speeds [m/s], which one moves (0 or 1), and what is left up to its limits."""

    difference: FloatArray
    moving: Any
    position: FloatArray
    speed: FloatArray
    margin_stroke: FloatArray
    margin_speed: FloatArray


def place_si(opd: FloatArray, rate: FloatArray, numbers: FloatArray) -> Placed:
    """Place the carriages for path differences [m] and their rates [m/s]; the inner twin of `carriages`.

    `numbers` has shape (rows, 2, 5): stroke, greatest speed, offset, rest, path per metre of the two lines in every row.
    """
    stroke, fastest, offset, rest, path = np.moveaxis(numbers, -1, 0)
    difference = opd - (offset[:, 1] - offset[:, 0]) - (path[:, 1] * rest[:, 1] - path[:, 0] * rest[:, 0])
    # where nothing is to make up, the carriage counts that is about to leave
    second = (difference > 0) | ((difference == 0) & (rate >= 0))
    rows, moving = np.arange(opd.size), second.astype(int)
    sign = np.where(second, 1.0, -1.0)
    position, speed = rest.copy(), np.zeros_like(rest)
    position[rows, moving] += sign * difference / path[rows, moving]
    speed[rows, moving] = sign * rate / path[rows, moving]
    return Placed(
        difference=difference,
        moving=moving,
        position=position,
        speed=speed,
        margin_stroke=stroke[rows, moving] - position[rows, moving],
        margin_speed=fastest[rows, moving] - np.abs(speed[rows, moving]),
    )


def _pairs(baselines: Sequence[str], lines: Sequence[DelayLine]) -> list[tuple[DelayLine, DelayLine]]:
    """Return the two delay lines of every baseline."""
    stations = [line.station for line in lines]
    double = next((name for name in stations if stations.count(name) > 1), None)
    if double is not None:
        raise InputError(f"station {double!r} has more than one delay line; give one line for each station")
    # names are joined rather than split: a station's name may have a hyphen of its own
    known = {f"{first.station}-{second.station}": (first, second) for first, second in permutations(lines, 2)}
    missing = next((name for name in baselines if name not in known), None)
    if missing is not None:
        raise InputError(
            f"baseline {missing!r} lacks a delay line: lines are given for {', '.join(stations) or 'no station'}; add the missing"
        )
    return [known[name] for name in baselines]
