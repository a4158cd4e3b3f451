"""Signals in blocks of one length, whatever pieces they arrive in, so that records of any length fit into memory."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import astropy.units as u
import numpy as np
from numpy.typing import NDArray

from ..errors import InputError
from ..units import as_delay_si, positive_si

Signal = NDArray[Any]

DEFAULT_LAGS = 100


def pieces(signal: Any, name: str) -> Iterator[Signal]:
    """Checked pieces of an array, a memory-mapped array or an iterator of arrays: one row, finite, float or complex as it came."""
    source = signal if isinstance(signal, Iterator) else iter([signal])
    position, complex_so_far = 0, None
    for item in source:
        values = np.asanyarray(item.value if isinstance(item, u.Quantity) else item)
        if values.ndim != 1 or values.dtype.kind not in "biufc":
            raise InputError(f"{name} must be one row of real or complex numbers; got shape {values.shape} of {values.dtype}")
        is_complex = values.dtype.kind == "c"
        if complex_so_far not in (None, is_complex):
            raise InputError(f"{name} must be real throughout or complex throughout; it changes at sample {position}")
        complex_so_far = is_complex
        yield values
        position += values.size


def in_blocks(signal: Any, name: str, size: int) -> Iterator[Signal]:
    """Blocks of `size` samples, double precision, the last one shorter; never an empty one."""
    waiting: list[Signal] = []
    held = done = 0
    for piece in pieces(signal, name):
        start = 0
        while start < piece.size:
            part = piece[start : start + size - held]
            waiting.append(part)
            held += part.size
            start += part.size
            if held == size:
                yield _joined(waiting, name, done)
                done, held, waiting = done + size, 0, []
    if held:
        yield _joined(waiting, name, done)


def _joined(parts: list[Signal], name: str, position: int) -> Signal:
    block = np.concatenate([np.asarray(part) for part in parts])
    block = block.astype(complex if block.dtype.kind == "c" else float, copy=False)
    finite = np.isfinite(block)
    if not np.all(finite):
        raise InputError(f"{name} must be finite; sample {position + int(np.argmin(finite))} is {block[np.argmin(finite)]}")
    return block


def pairs(x: Any, y: Any, size: int) -> Iterator[tuple[Signal, Signal]]:
    """Blocks of two signals of one length, side by side."""
    first, second = in_blocks(x, "x", size), in_blocks(y, "y", size)
    done = 0
    for a in first:
        b = next(second, np.empty(0))
        if a.size != b.size:
            break
        yield a, b
        done += a.size
    else:
        if next(second, None) is None:
            return
    raise InputError(f"x and y must have the same number of samples; one ends before the other, after sample {done} at the earliest")


def whole_lags(lags: Any, interval: float) -> int:
    """Greatest lag in samples, from a number of samples or a time."""
    if lags is None:
        return DEFAULT_LAGS
    if isinstance(lags, (int, np.integer)) and not isinstance(lags, bool):
        count = int(lags)
    else:
        reach = as_delay_si(lags, "lags")
        if np.ndim(reach) != 0:
            raise InputError(f"lags must be the greatest lag, one number; got an array of shape {np.shape(reach)}")
        count = int(reach / interval + 1e-6)
    if count < 1:
        raise InputError(f"lags must be at least one sample interval, {interval * u.s:.4g}; got {lags}")
    return count


def check_length(count: int, lags: int, fewest: int, name: str = "x") -> None:
    """Refuse a record too short for its lags."""
    if count < fewest * lags:
        raise InputError(f"{name} must have at least {fewest} samples per lag, {fewest * lags} for {lags} lags; got {count}")


def interval_si(sample_interval: Any) -> float:
    """Sample interval [s]."""
    return positive_si(sample_interval, u.s, "sample_interval", "ps")
