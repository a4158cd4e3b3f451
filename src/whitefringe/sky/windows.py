"""Observable windows: from when until when the delay lines, their speed and the altitude allow a target."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import astropy.units as u
import numpy as np
from astropy.table import QTable
from astropy.time import Time

from ..errors import InputError
from ..units import FloatArray, positive_si
from ._carriage_rows import LIMITS, LINE_NOTE, CarriageRows, need_columns, span_text
from .orientation import as_utc

THE_END = "the times end"
"""What ends a window that no limit ends."""

WINDOW_COLUMNS = (
    *("target", "baseline", "station_1", "station_2", "start", "end", "observable", "reason"),
    *("carriage_1_least", "carriage_1_greatest", "carriage_2_least", "carriage_2_greatest", "greatest_speed"),
)
"""What must stand in a table of windows."""


@dataclass(frozen=True, kw_only=True)
class _Edge:
    """A change between observable and not: when [days], where the carriages stand [m], how fast [mm/s], and which limit it is."""

    day: float
    positions: FloatArray
    speed: float
    cause: str


def windows(table: Any, gap: u.Quantity = 1 * u.hour) -> QTable:
    """Join the rows of a table of carriages to stretches that are observable, or not.

    An edge between two rows is where the first margin m to fail is zero on the straight line between them:
    t = t_0 + (t_1 - t_0) m_0 / (m_0 - m_1).

    Parameters
    ----------
    table : QTable
        As `carriages` gives it, in any order of its rows.
    gap : Quantity [time]
        Rows of one target and baseline that are further apart are not joined. It must be longer than the step between two rows: with a
        shorter one every row is a stretch of its own, of no duration.

    Returns
    -------
    QTable
        A row per stretch: target, baseline, station_1, station_2, start, end (UTC), duration [h], observable,
        carriage_1_least, carriage_1_greatest, carriage_2_least, carriage_2_greatest [m], greatest_speed [mm/s] of either carriage,
        reason: which limit ends the window, or all that keeps the stretch from being observed, with its least and greatest value.

    Raises
    ------
    InputError, UnitsError
        Not a table of carriages; no rows; times that are not a Time; a gap that is not above zero.

    Notes
    -----
    Edges are in error by the curvature of the margins over one step: of the second order in the step. A window or a break that
    falls between two rows is not seen. Where the carriages change roles between two rows, the limits of the second one count from
    the place where both rest.

    Examples
    --------
    >>> import astropy.units as u
    >>> from astropy.table import QTable
    >>> from astropy.time import Time
    >>> from whitefringe.sky.delay_lines import DelayLine, carriages
    >>> hours = [0, 1, 2] * u.hour
    >>> track = QTable({"target": ["Star A"] * 3, "baseline": ["Kiln-Weir"] * 3, "time": Time("2026-03-14T21:00:00") + hours,
    ...     "opd": [2, 4, 6] * u.m, "opd_uncertainty": [20] * 3 * u.um, "opd_rate": [0.6] * 3 * u.mm / u.s, "altitude": [50] * 3 * u.deg})
    >>> lines = [DelayLine(station=name, stroke=2.5 * u.m, greatest_speed=20 * u.mm / u.s) for name in ("Kiln", "Weir")]
    >>> plan = carriages(track, lines)
    >>> print(positions_text(plan))
    Star A  Kiln-Weir  2 of 3 times  Kiln 0.000 m, Weir 1.000 to 2.000 m  fastest 0.3 mm/s
    >>> print(windows_text(windows(plan)))
    Star A  Kiln-Weir  2026-03-14 21:00 to 22:30 UTC  Kiln 0.000 m, Weir 1.000 to 2.500 m  fastest 0.3 mm/s  then out of stroke: Weir
    """
    rows = CarriageRows.of(table)
    longest = positive_si(gap, u.day, "gap", "hour")
    if not isinstance(table["time"], Time):
        raise InputError("column time of the table of carriages must be an astropy Time; read a FITS table with astropy_native=True")
    times = as_utc(table["time"])
    # differences of Julian dates know no leap second, but neither do they warn of dates far ahead
    days = (times.jd1 - times.jd1[0]) + (times.jd2 - times.jd2[0])
    group = np.empty(days.size, dtype=int)
    for k, chosen in enumerate(_by_pair(table)):
        group[chosen] = k
    order = np.lexsort((days, group))
    rows, days, group = rows.taken(order), days[order], group[order]
    breaks = np.flatnonzero((np.diff(group) != 0) | (np.diff(days) > longest * (1 + 1e-9))) + 1
    found = []
    for run in np.split(np.arange(days.size), breaks):
        found += _stretches(rows, days, int(run[0]), int(run[-1]) + 1)
    first = [int(order[item["row"]]) for item in found]
    return _as_table(found, table, first, times)


def _stretches(rows: CarriageRows, days: FloatArray, start: int, stop: int) -> list[dict[str, Any]]:
    """Stretches of one run of rows, in order of time."""
    inside = rows.inside[start:stop]
    cuts = [start, *(np.flatnonzero(np.diff(inside)) + 1 + start).tolist(), stop]
    edges = [_edge(rows, days, cut) for cut in cuts[1:-1]]
    found = []
    for k, (low, high) in enumerate(pairwise(cuts)):
        before, after = edges[k - 1] if k else None, edges[k] if k < len(edges) else None
        ends = [edge for edge in (before, after) if edge is not None]
        positions = np.vstack([rows.positions[low:high], *(edge.positions for edge in ends)])
        observable = bool(rows.inside[low])
        found.append(
            {
                "row": low,
                "start": before.day if before else days[low],
                "end": after.day if after else days[high - 1],
                "observable": observable,
                "least": positions.min(axis=0),
                "greatest": positions.max(axis=0),
                "speed": max([float(rows.speed[low:high].max()), *(edge.speed for edge in ends)]),
                "reason": (after.cause if after else THE_END) if observable else rows.reason(low, high),
            }
        )
    return found


def _edge(rows: CarriageRows, days: FloatArray, cut: int) -> _Edge:
    """Find the edge between rows `cut` - 1 and `cut`, one of which is observable."""
    good, bad = (cut - 1, cut) if rows.inside[cut - 1] else (cut, cut - 1)
    swapped = rows.second[good] != rows.second[bad]
    gap = abs(rows.difference[good]) + abs(rows.difference[bad])
    swap = abs(rows.difference[good]) / gap if swapped and gap > 0 else 0.0
    line = rows.second[bad]
    best, which = np.inf, 0
    for kind in np.flatnonzero(rows.margins[bad] < 0):
        first, last, since = rows.margins[good, kind], rows.margins[bad, kind], 0.0
        if swapped and kind > 0:
            # the failing carriage sets out from its rest, where the good row has it; its speed there is nearly that of the bad row
            since = swap
            first = last + (rows.positions[bad, line] - rows.positions[good, line] if kind == 1 else 0.0)
        share = since + (1 - since) * (first / (first - last) if first > 0 else 0.0)
        if share < best:
            best, which = share, int(kind)
    cause = LIMITS[which] if which == 0 else f"{LIMITS[which]}: {rows.moving[bad]}"
    ends, rest = rows.positions[[good, bad]], rows.positions[[good, bad]].min(axis=0)
    places, path = ([0.0, swap, 1.0], np.array([ends[0], rest, ends[1]])) if 0 < swap < 1 else ([0.0, 1.0], ends)
    positions = np.array([np.interp(best, places, path[:, k]) for k in (0, 1)])
    if swapped:
        speed = rows.speed[good] if best <= swap else rows.speed[bad]
    else:
        speed = rows.speed[good] + best * (rows.speed[bad] - rows.speed[good])
    return _Edge(day=float(days[good] + best * (days[bad] - days[good])), positions=positions, speed=float(speed), cause=cause)


def _as_table(found: list[dict[str, Any]], table: Any, first: list[int], times: Time) -> QTable:
    """Lay out stretches as a table; `first` are rows of `table` that name their target and baseline."""
    result = QTable(meta=dict(table.meta))
    for name in ("target", "baseline", "station_1", "station_2"):
        result[name] = np.asarray(table[name])[first].astype(str)
    for name in ("start", "end"):
        values = Time(times.jd1[0], times.jd2[0] + np.array([item[name] for item in found]), format="jd", scale="utc")
        values.format = "isot"
        result[name] = values
    result["duration"] = np.array([(item["end"] - item["start"]) * 24 for item in found]) * u.hour
    result["observable"] = [item["observable"] for item in found]
    for k in (0, 1):
        for name in ("least", "greatest"):
            result[f"carriage_{k + 1}_{name}"] = np.array([item[name][k] for item in found]) * u.m
    result["greatest_speed"] = np.array([item["speed"] for item in found]) * u.mm / u.s
    result["reason"] = [item["reason"] for item in found]
    return result


def windows_text(table: Any) -> str:
    """Say in a line per window when a target can be observed, and why not where it never can.

    Parameters
    ----------
    table : QTable
        As `windows` gives it.

    Returns
    -------
    str
        Times rounded to the minute, UTC, with the date on which the window opens; positions to the millimetre. What the media of delay
        lines extrapolate follows as notes.

    Raises
    ------
    InputError
        Not a table of windows.

    Examples
    --------
    See `windows`.
    """
    need_columns(table, WINDOW_COLUMNS, "the table of windows", "sky.windows gives it")
    lines = []
    for chosen in _by_pair(table):
        part = table[chosen]
        open_ones = part[np.asarray(part["observable"])]
        if len(open_ones) == 0:
            lines.append((part[0], "not observable: " + "; ".join(dict.fromkeys(part["reason"].tolist()))))
        for row in open_ones:
            start, end = minute_text(row["start"]), minute_text(row["end"])
            hours = f"{start} to {end[-5:]} UTC"
            lines.append((row, f"{hours}  {_reach_text(row)}  then {row['reason']}"))
    return _laid_out(lines, table)


def positions_text(table: Any) -> str:
    """Say in a line per target and baseline where the carriages stand in the rows that can be observed.

    Parameters
    ----------
    table : QTable
        As `carriages` gives it.

    Returns
    -------
    str
        Least and greatest position to the millimetre, or why no row can be observed; then notes as in `windows_text`.

    Raises
    ------
    InputError
        Not a table of carriages.

    Examples
    --------
    See `windows`.
    """
    rows, lines = CarriageRows.of(table), []
    for chosen in _by_pair(table):
        inside = chosen[rows.inside[chosen]]
        count = f"{inside.size} of {chosen.size} times"
        if inside.size == 0:
            lines.append((table[int(chosen[0])], f"{count}  not observable: {rows.taken(chosen).reason(0, chosen.size)}"))
            continue
        row = {name: table[name][int(chosen[0])] for name in ("target", "baseline", "station_1", "station_2")}
        for k in (0, 1):
            row[f"carriage_{k + 1}_least"] = rows.positions[inside, k].min() * u.m
            row[f"carriage_{k + 1}_greatest"] = rows.positions[inside, k].max() * u.m
        row["greatest_speed"] = rows.speed[inside].max() * u.mm / u.s
        lines.append((row, f"{count}  {_reach_text(row)}"))
    return _laid_out(lines, table)


def _by_pair(table: Any) -> list[Any]:
    """Rows of every target and baseline, in the order in which these first appear."""
    rows: dict[tuple[str, str], list[int]] = {}
    for k, key in enumerate(zip(table["target"].tolist(), table["baseline"].tolist(), strict=True)):
        rows.setdefault(key, []).append(k)
    return [np.array(chosen) for chosen in rows.values()]


def _reach_text(row: Any) -> str:
    places = []
    for k in (1, 2):
        least, greatest = (float(row[f"carriage_{k}_{name}"].to_value(u.m)) for name in ("least", "greatest"))
        places.append(f"{row[f'station_{k}']} {span_text(least, greatest, 3)} m")
    return f"{', '.join(places)}  fastest {float(row['greatest_speed'].to_value(u.mm / u.s)):.1f} mm/s"


def minute_text(time: Time) -> str:
    """Date and time of day, UTC, to the minute."""
    # read as TAI: days of equal length, so that a date far ahead gives no warning about leap seconds
    half_up = Time(time.jd1, time.jd2 + 0.5 / 1440, format="jd", scale="tai")
    return str(half_up.strftime("%Y-%m-%d %H:%M"))


def _laid_out(lines: list[tuple[Any, str]], table: Any) -> str:
    widths = [max(len(str(row[name])) for row, _ in lines) for name in ("target", "baseline")]
    said = [f"{row['target']:<{widths[0]}}  {row['baseline']:<{widths[1]}}  {words}" for row, words in lines]
    notes = (str(words) for key, words in table.meta.items() if str(key).startswith("NOTE"))
    return "\n".join([*said, *(f"note: {words}" for words in notes if words.startswith(LINE_NOTE))])
