"""Where |gamma| first falls to a level, and where its first null is."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from scipy.optimize import minimize_scalar

from ..errors import InputError, UndefinedWidthError
from ..spectra import Spectrum
from ..units import SPEED_OF_LIGHT, FloatArray
from .degree import self_coherence_si

NULL_DEPTH = 0.1
"""A minimum of |gamma| counts as a null when it lies below this."""

FADED = 1e-6
"""Below this, what is left of |gamma| is rounding and holds no nulls."""

PER_CYCLE = 16
"""Delays per period of the fastest beat that the spectrum's extent allows."""

TOUCH = 0.03
"""A sampled minimum this far above a level may reach it between two delays: 1 - cos(pi / PER_CYCLE) = 0.02."""

BEATS = 4
"""Periods of the slowest beat of two lines that are searched."""

MOST_DELAYS = 4_000_000
"""A search ends here at the latest."""


def contrast_at(spectrum: Spectrum, delays: FloatArray) -> FloatArray:
    """|gamma| at rising delays [s] from zero on; beyond what the grid of the continuum resolves, of the lines alone."""
    reach = grid_reach(spectrum)
    near = int(np.searchsorted(delays, reach, side="right"))
    result = np.empty(delays.size)
    result[:near] = np.abs(self_coherence_si(spectrum, delays[:near]))
    if near < delays.size:
        lines = sum(line.strength * line.coherence_si(delays[near:]) for line in spectrum.lines)
        result[near:] = np.abs(lines) / spectrum.total_rate
    return result


def grid_reach(spectrum: Spectrum) -> float:
    """Longest delay [s] that the grid of the continuum resolves; without a continuum, no limit."""
    return 0.5 * (1 - 1e-9) / spectrum.step_si if spectrum.density.size else float("inf")


def runs(spectrum: Spectrum, reach: float | None = None) -> Iterator[tuple[FloatArray, FloatArray]]:
    """Delays and |gamma| from zero outward in stretches that overlap by two points, to `reach` or as far as |gamma| may matter."""
    widths = [line.fwhm_si for line in spectrum.lines if line.strength > 0]
    low, high = spectrum.extent_si
    fast = high - low + max(widths, default=0.0)
    if fast == 0:
        raise UndefinedWidthError("a monochromatic line never loses coherence")
    step = 1 / (PER_CYCLE * fast)
    if not widths:
        reach = min(reach or np.inf, grid_reach(spectrum))
    if reach is None:
        reach = min(_far_enough(spectrum, widths, fast), MOST_DELAYS * step)
    elif reach > MOST_DELAYS * step:
        raise InputError(
            f"delay_range is too long for this light, whose fastest beat asks for steps of {step * SPEED_OF_LIGHT:.3g} m: "
            f"at most {MOST_DELAYS * step * SPEED_OF_LIGHT:.3g} m"
        )
    most = int(reach / step) + 1
    first, length = 0, 1025
    while first < most:
        delays = np.asarray(np.arange(first, min(first + length, most + 2)) * step, dtype=float)
        yield delays, contrast_at(spectrum, delays)
        first, length = first + length - 2, 16_384


def _far_enough(spectrum: Spectrum, widths: list[float], fast: float) -> float:
    """Delay [s] beyond which |gamma| holds nothing new: of the continuum's grid, of the lines' widths, of the slowest beat."""
    places = np.unique([line.frequency_si for line in spectrum.lines if line.strength > 0])
    slowest = [BEATS / float(np.min(np.diff(places)))] if places.size > 1 else []
    grid = [grid_reach(spectrum)] if spectrum.density.size else []
    return max([64 / fast, *grid, *slowest, *(4 / width for width in widths if width > 0)])


def first_below(spectrum: Spectrum, level: float) -> float:
    """Smallest delay [s] at which |gamma| has fallen to `level`.

    Raises
    ------
    UndefinedWidthError
        It does not, as far as the search goes.
    """
    last = 0.0
    for delays, contrast in runs(spectrum):
        below = np.flatnonzero(contrast <= level)
        end = int(below[0]) if below.size else delays.size - 1
        touching = _dip_below(spectrum, level, delays[: end + 1], contrast[: end + 1])
        if touching is not None:
            return _crossing(spectrum, level, *touching)
        if below.size:
            return _crossing(spectrum, level, float(delays[end - 1]), float(delays[end]))
        last = float(delays[-1])
    raise UndefinedWidthError(
        f'the contrast does not fall to {level:.3g} within {last * SPEED_OF_LIGHT:.3g} m of path difference: ask for definition="power"'
    )


def _dip_below(spectrum: Spectrum, level: float, delays: FloatArray, contrast: FloatArray) -> tuple[float, float] | None:
    """Bracket of a crossing into the first minimum that dips to the level between two delays, or None."""
    inner = contrast[1:-1]
    near = (inner < contrast[:-2]) & (inner <= contrast[2:]) & (inner < level + TOUCH)
    for dip in np.flatnonzero(near) + 1:
        lowest = _minimum(spectrum, float(delays[dip - 1]), float(delays[dip + 1]))
        if contrast_at(spectrum, np.array([lowest]))[0] <= level:
            return float(delays[dip - 1]), lowest
    return None


def _crossing(spectrum: Spectrum, level: float, low: float, high: float) -> float:
    """Delay in the bracket at which |gamma| falls through `level`: three rounds of 33 equally spaced delays, then a straight line."""
    before = after = level
    for _ in range(3):
        delays = np.linspace(low, high, 33)
        contrast = contrast_at(spectrum, delays)
        below = np.flatnonzero(contrast[1:] <= level)
        first = int(below[0]) if below.size else 31
        low, high = float(delays[first]), float(delays[first + 1])
        before, after = float(contrast[first]), float(contrast[first + 1])
    share = (before - level) / (before - after) if before != after else 0.0
    return low + (high - low) * min(max(share, 0.0), 1.0)


def first_null(spectrum: Spectrum) -> float:
    """Delay [s] of the first minimum of |gamma| below `NULL_DEPTH`.

    Raises
    ------
    UndefinedWidthError
        There is none before |gamma| fades.
    """
    for delays, contrast in runs(spectrum):
        inner = contrast[1:-1]
        for dip in np.flatnonzero((inner <= contrast[:-2]) & (inner < contrast[2:])) + 1:
            if np.max(contrast[dip:]) < FADED:
                break
            found = _minimum(spectrum, float(delays[dip - 1]), float(delays[dip + 1]))
            if contrast_at(spectrum, np.array([found]))[0] < NULL_DEPTH:
                return found
        if np.max(contrast) < FADED:
            break
    raise UndefinedWidthError(f"|gamma| of this light has no null: no minimum below {NULL_DEPTH} before it fades; use another definition")


def _minimum(spectrum: Spectrum, low: float, high: float) -> float:
    def contrast(delay: float) -> float:
        return float(contrast_at(spectrum, np.array([delay]))[0])

    return float(minimize_scalar(contrast, bounds=(low, high), method="bounded", options={"xatol": 1e-9 * high}).x)
