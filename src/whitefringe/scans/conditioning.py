"""From a recorded scan to a fringe signal on an even path axis, with every fault that forbids it named."""

from __future__ import annotations

from dataclasses import dataclass

import astropy.units as u
import numpy as np
from scipy.interpolate import CubicSpline

from ..errors import ConstantSignalError, SaturatedError, ScanError, TooFewSamplesError
from ..units import STEP, FloatArray, read_only
from .reference import opd_from_reference
from .scan import Scan

FEWEST_SAMPLES = 32
"""A scan shorter than this is not reduced."""

RUN_UP = 0.75
"""Rows at either end where the stage moves at less than this fraction of its usual step are left out: it is starting or stopping."""


WIDEST_GAP = 2.5
"""A step longer than this many usual ones is a gap: a spline across it would invent fringes."""


@dataclass(frozen=True, kw_only=True, eq=False)
class EvenScan:
    """A scan on an even axis.

    `axis_si` path difference [m] or stage position [step], rising; `unit` of that axis; `signal` dark-subtracted counts; `notes`
    say what was done.
    """

    axis_si: FloatArray
    signal: FloatArray
    unit: u.UnitBase
    notes: tuple[str, ...]

    @property
    def step(self) -> float:
        """Distance of two samples on the axis."""
        return float(self.axis_si[1] - self.axis_si[0])

    @property
    def path_known(self) -> bool:
        """Whether the axis is a length."""
        return bool(self.unit == u.m)


def even_scan(scan: Scan) -> EvenScan:
    """Check a scan, find its path axis and put it on an even one.

    Raises
    ------
    TooFewSamplesError, SaturatedError, ConstantSignalError, ReferenceLostError, ScanError
        With what is wrong, where, and what to do.
    """
    _refuse_useless(scan)
    notes: list[str] = []
    kept = _moving_part(scan, notes)
    axis, unit = _path(scan, kept, notes)
    signal = np.asarray(scan.signal)[kept] - scan.layout.dark
    if axis[-1] < axis[0]:
        axis, signal = axis[::-1], signal[::-1]
    backwards = np.flatnonzero(np.diff(axis) <= 0)
    if backwards.size:
        row = kept.start + int(backwards[0]) + 2
        raise ScanError(
            f"{scan.name}: the path runs backwards or stands still at data row {row} ({backwards.size} such rows); record one "
            "sweep per scan, or leave the position out to count rows"
        )
    _refuse_gaps(scan, kept, axis)
    even, signal = _evenly(axis, signal, notes)
    return EvenScan(axis_si=read_only(even), signal=read_only(signal), unit=unit, notes=tuple(notes))


def _refuse_useless(scan: Scan) -> None:
    signal, layout = scan.signal, scan.layout
    if not all(np.all(np.isfinite(values)) for values in (*scan.signals.values(), scan.position.value)):
        raise ScanError(f"{scan.name}: not every sample and position is a finite number; leave such rows out first")
    if len(scan) < FEWEST_SAMPLES:
        raise TooFewSamplesError(f"{scan.name}: {len(scan)} samples are too few; a scan needs at least {FEWEST_SAMPLES}")
    if layout.saturation is not None and np.any(signal >= layout.saturation):
        over = np.flatnonzero(signal >= layout.saturation)
        raise SaturatedError(
            f"{scan.name}: {over.size} of {len(scan)} samples are at or above the saturation level {layout.saturation:g} (first at "
            f"data row {int(over[0]) + 1}): record again with less light or a shorter exposure"
        )
    if np.ptp(signal) == 0:
        raise ConstantSignalError(f"{scan.name}: the signal is {signal[0]:g} in every row: is the column right, the shutter open?")
    if layout.saturation is None and _looks_clipped(signal):
        raise SaturatedError(
            f"{scan.name}: the signal stays flat at its maximum {signal.max():g}, as that of a saturated detector does: record "
            "again with less light, or state a saturation level above it in the layout"
        )


def _looks_clipped(signal: FloatArray) -> bool:
    """Tell whether the very maximum occurs four times or more, and far more often than any other level of the upper half."""
    levels, counts = np.unique(signal, return_counts=True)
    upper = counts[:-1][levels[:-1] > 0.5 * (levels[0] + levels[-1])]
    return bool(counts[-1] >= 4 and counts[-1] > 3 * np.max(upper, initial=0))


def _moving_part(scan: Scan, notes: list[str]) -> slice:
    steps = np.abs(np.diff(scan.position.value))
    usual = float(np.median(steps))
    if usual == 0:
        raise ScanError(f"{scan.name}: the stage position does not change; is the position column right?")
    moving = np.flatnonzero(steps >= RUN_UP * usual)
    first, last = int(moving[0]), int(moving[-1]) + 2
    if first or last < len(scan):
        notes.append(f"{first + len(scan) - last} rows left out where the stage starts or stops")
    return slice(first, last)


def _refuse_gaps(scan: Scan, kept: slice, axis: FloatArray) -> None:
    steps = np.diff(axis)
    widest = int(np.argmax(steps))
    if steps[widest] > WIDEST_GAP * float(np.median(steps)):
        row = kept.start + widest + 1
        raise ScanError(
            f"{scan.name}: the path jumps by {steps[widest] / np.median(steps):.1f} times its usual step after data row {row}: rows are "
            "missing there; record the scan again, or cut it so that the packet lies on one side of the gap"
        )


def _path(scan: Scan, kept: slice, notes: list[str]) -> tuple[FloatArray, u.UnitBase]:
    layout, position = scan.layout, scan.position[kept]
    if layout.reference is not None:
        values = np.asarray(position.value, dtype=float)
        notes.append("path rebuilt from the phase of the reference channel")
        return opd_from_reference(scan, kept, values, notes), u.m
    if position.unit != STEP:
        return np.asarray(position.to_value(u.m)) * layout.passes * layout.index, u.m
    if layout.opd_per_step_si is not None:
        return np.asarray(position.value) * layout.opd_per_step_si, u.m
    notes.append("the length of a step is not known: results are in steps and fringe periods")
    return np.asarray(position.value, dtype=float), STEP


def _evenly(axis: FloatArray, signal: FloatArray, notes: list[str]) -> tuple[FloatArray, FloatArray]:
    steps = np.diff(axis)
    usual = float(np.median(steps))
    count = round(float(axis[-1] - axis[0]) / usual) + 1
    even = np.linspace(axis[0], axis[-1], count)
    if count == axis.size and np.max(np.abs(axis - even)) < 1e-3 * usual:
        return even, signal
    notes.append(f"resampled to even steps by cubic spline (steps vary by {np.std(steps) / np.mean(steps):.1%} rms)")
    return even, np.asarray(CubicSpline(axis, signal)(even))
