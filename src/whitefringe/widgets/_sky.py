"""What the widgets of the sky share: the bench's night, its hours as they are plotted and written, and a view that needs a night."""

from __future__ import annotations

from html import escape
from typing import Any

import astropy.units as u
import ipywidgets as widgets
import numpy as np
from astropy.time import Time

from ..errors import InputError
from ..sky import Observation
from ..units import FloatArray
from ._base import BenchView, NumberRow
from .bench import Bench

WIDE = "215px"
"""Width of the labels of the sky's controls, some of which say a direction too."""


def box_style() -> dict[str, Any]:
    """Return layout and style of a choice or a text entry."""
    return {"layout": {"width": "370px"}, "style": {"description_width": WIDE}}


def widened(row: NumberRow) -> NumberRow:
    """Return the row with room for a long label, as wide as the other controls all the same."""
    row.box.style.description_width = WIDE
    row.box.layout.width, row.slider.layout.width = "310px", "160px"
    return row


def back_button(words: str) -> widgets.Button:
    """Return a button that undoes what was moved; it stands under the numbers."""
    return widgets.Button(description=words, layout={"width": "auto", "margin": f"2px 2px 2px {WIDE}"})


def note_html(words: str) -> str:
    """Return words that stand under the numbers."""
    return f"<div style='max-width:480px;line-height:1.4;padding-left:{WIDE}'>{escape(words)}</div>"


def night_of(bench: Bench) -> Observation:
    """Return the bench's night, or say that it has none."""
    if bench.setup.observation is None:
        raise InputError("this setup has no array: give its setup file an [array], [[target]] and [night], or Setup an observation")
    return bench.setup.observation


class SkyView(BenchView):
    """A view of the bench's night; not shown while the bench has none.

    Subclasses write `show`; what is drawn again only where it has changed goes by `new`.
    """

    def __init__(self, bench: Bench, children: list[Any], css: str) -> None:
        self._last: dict[str, tuple[Any, ...]] = {}
        super().__init__(bench, children, css)

    def show(self, night: Observation) -> None:
        """Bring what is shown into step with the night."""
        raise NotImplementedError

    def refresh(self) -> None:
        """Show the night, where there is one."""
        night = self.bench.setup.observation
        self.layout.display = "none" if night is None else None
        if night is not None:
            self.show(night)

    def new(self, what: str, *now: Any) -> bool:
        """Tell whether any of these objects is another than when `what` was asked for last."""
        before = self._last.get(what, ())
        self._last[what] = now
        return len(before) != len(now) or not all(a is b or (isinstance(a, str) and a == b) for a, b in zip(before, now, strict=True))

    def summary(self) -> str:
        """Return the night in one line."""
        night = self.bench.setup.observation
        return f"{type(self).__name__}: {night_text(night) if night is not None else 'no array'}{problem_text(self.bench)}"


def problem_text(bench: Bench) -> str:
    """Return the end of a summary line that tells of the bench's problem."""
    return f", problem: {bench.problem}" if bench.problem else ""


def open_windows(night: Observation) -> list[tuple[float, float]]:
    """Hours at which the target that is looked at can be observed on its baseline: start and end of each window, the longest first."""
    hours, seen = hours_of(night), observable(night)
    if night.windows is not None:
        found = night.windows
        mine = (found["target"] == night.target) & (found["baseline"] == night.baseline) & np.asarray(found["observable"])
        ends = zip(hours_si(found["start"][mine], night), hours_si(found["end"][mine], night), strict=True)
        windows = [(float(start), float(end)) for start, end in ends]
    else:
        edges = np.flatnonzero(np.diff(np.concatenate([[False], seen, [False]]).astype(int)))
        above = np.asarray((night.rows["altitude"] - night.least_altitude).to_value(u.deg))
        windows = [(_crossing(hours, above, a - 1, a), _crossing(hours, above, b, b - 1)) for a, b in edges.reshape(-1, 2)]
    return sorted(windows, key=lambda ends: ends[0] - ends[1])


def _crossing(hours: FloatArray, above: FloatArray, outside: int, inside: int) -> float:
    """Hour at which the limit is passed between two rows, on a straight line; the night's end where there is no row outside."""
    if not 0 <= outside < hours.size:
        return float(hours[inside])
    return float(np.interp(0.0, [above[outside], above[inside]], [hours[outside], hours[inside]]))


def observable(night: Observation) -> Any:
    """Tell of each of the night's rows whether it can be observed; without delay lines, whether the target stands high enough."""
    if "observable" in night.rows.colnames:
        return np.asarray(night.rows["observable"], dtype=bool)
    altitude = np.asarray(night.rows["altitude"].to_value(u.deg))
    return ~(altitude < night.least_altitude.to_value(u.deg))


def middle_row(night: Observation) -> int:
    """Row in the middle of the longest window, or of the night where there is none."""
    hours, windows = hours_of(night), open_windows(night)
    middle = 0.5 * sum(windows[0]) if windows else 0.5 * (hours[0] + hours[-1])
    return int(np.argmin(np.abs(hours - middle)))


def hours_of(night: Observation) -> FloatArray:
    """Hours of the night's times since 0 h UTC of the day on which they begin; beyond midnight they go on above 24."""
    return hours_si(night.times, night)


def hours_si(times: Time, night: Observation) -> FloatArray:
    """The same of other times."""
    # differences of Julian dates know no leap second, but neither do they warn of dates far ahead
    midnight = _midnight(night.times)
    return np.asarray(24 * ((times.jd1 - midnight) + times.jd2), dtype=float)


def _midnight(times: Time) -> float:
    return float(np.floor(times.jd1[0] + times.jd2[0] + 0.5) - 0.5)


def clock(hours: float) -> str:
    """Write hours as the clock shows them, rounded to a minute.

    Examples
    --------
    >>> clock(25.999)
    '02:00'
    """
    minutes = round(hours * 60)
    return f"{minutes // 60 % 24:02d}:{minutes % 60:02d}"


def dates_text(night: Observation) -> str:
    """Say on which dates the hours are: ``UTC on 2026-12-01, from 00:00 on 2026-12-02``."""
    midnight, last = _midnight(night.times), float(hours_of(night)[-1])
    dates = [_date(midnight + day) for day in range(int(last // 24) + 1)]
    return f"UTC on {', from 00:00 on '.join(dates)}"


def _date(julian: float) -> str:
    # read as TAI: days of equal length, so that a date far ahead gives no warning about leap seconds
    return str(Time(julian, format="jd", scale="tai").strftime("%Y-%m-%d"))


def windows_text(night: Observation) -> str:
    """Say when the target that is looked at can be observed: ``20:04 to 04:56 UTC``."""
    return " and ".join(f"{clock(start)} to {clock(end)}" for start, end in sorted(open_windows(night))) + " UTC"


def night_text(night: Observation) -> str:
    """Say in one line, at fixed precision, what is looked at and when it can be observed."""
    seen = observable(night)
    opd = np.asarray(night.rows["opd"].to_value(u.m))[seen if np.any(seen) else slice(None)]
    when = f"observable {windows_text(night)}" if np.any(seen) else "not observable"
    low, high = (f"{round(float(end), 1) + 0.0:.1f}" for end in (opd.min(), opd.max()))
    return f"night {night.date}, {night.target} on {night.baseline}, {when}, path difference {low} to {high} m"
