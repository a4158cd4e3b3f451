"""Lag sums of long records in one pass: sum over t of x(t + k) y*(t), from overlapping Fourier blocks."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from scipy.fft import fft, ifft, irfft, rfft

from ..errors import InputError
from ._blocks import Signal, in_blocks, pairs

SMALLEST_BLOCK = 1 << 14


@dataclass(kw_only=True)
class _Channel:
    """One signal as it passes: its mean so far, and its ends, which the mean's part of a lag sum needs."""

    offset: complex | float = 0.0
    total: complex | float = 0.0
    head: Signal = field(default_factory=lambda: np.empty(0))
    tail: Signal = field(default_factory=lambda: np.empty(0))
    before: Signal | None = None

    def take(self, block: Signal, centred: bool, size: int) -> tuple[Signal, Signal | None]:
        """Transform of a block, zero-padded to twice its length, and of the one before."""
        if self.before is None and centred:
            self.offset = complex(np.mean(block)) if np.iscomplexobj(block) else float(np.mean(block))
        moved = block - self.offset if centred else block
        if self.before is None:
            self.head = moved
        self.tail = np.concatenate([self.tail, moved])[-size:]
        self.total += np.sum(moved)
        before = self.before
        self.before = fft(moved, 2 * size) if np.iscomplexobj(moved) else rfft(moved, 2 * size)
        return self.before, before

    def first(self, lags: int) -> Signal:
        """Sums of the first k samples, k = 0 ... lags."""
        return np.concatenate([[0.0], np.cumsum(self.head[:lags])])

    def last(self, lags: int) -> Signal:
        """Sums of the last k samples."""
        return np.concatenate([[0.0], np.cumsum(self.tail[::-1][:lags])])


@dataclass(frozen=True, kw_only=True)
class LagSums:
    """Mean lag products <a(t + k) b*(t)> for k = 0 ... reach, by pairs of channels: ``"xx"``, and ``"xy"``, ``"yx"``, ``"yy"`` for two."""

    count: int
    is_complex: bool
    centred: bool
    products: dict[str, Signal]


def lag_sums(x: Any, y: Any, lags: int, centred: bool | None) -> LagSums:
    """Read the signals once.

    Blocks hold at least four times the lags asked for. One transform per block and channel gives the products inside it and those with the
    next block: with P_b the transform of block b padded to twice its length, the transform of the lag sums is the sum over b of
    (P_b + (-1)^j P_(b+1)) P_b*.
    """
    size = max(SMALLEST_BLOCK, 1 << int(np.ceil(np.log2(4 * lags))))
    channels = {"x": _Channel()} if y is None else {"x": _Channel(), "y": _Channel()}
    names = [a + b for a in channels for b in channels]
    sums: dict[str, Signal] = {}
    count = 0
    is_complex = remove = False
    for blocks in _side_by_side(x, y, size):
        is_complex = bool(np.iscomplexobj(blocks["x"]))
        remove = not is_complex if centred is None else centred
        _add(sums, names, {name: channel.take(blocks[name], remove, size) for name, channel in channels.items()})
        count += blocks["x"].size
    if not count:
        raise InputError("x has no samples")
    products = _products(sums, channels, count, min(size - 1, count - 1), size, is_complex, remove)
    return LagSums(count=count, is_complex=is_complex, centred=remove, products=products)


def _side_by_side(x: Any, y: Any, size: int) -> Iterator[dict[str, Signal]]:
    if y is None:
        yield from ({"x": block} for block in in_blocks(x, "x", size))
        return
    for first, second in pairs(x, y, size):
        if np.iscomplexobj(first) != np.iscomplexobj(second):
            raise InputError("x and y must be both real or both complex")
        yield {"x": first, "y": second}


def _add(sums: dict[str, Signal], names: list[str], spectra: dict[str, tuple[Signal, Signal | None]]) -> None:
    turn = 1.0 - 2.0 * (np.arange(spectra["x"][0].size) % 2)
    for name in names:
        (now, before), (other, other_before) = spectra[name[0]], spectra[name[1]]
        term = now * np.conj(other)
        if before is None or other_before is None:
            sums[name] = term
            continue
        sums[name] += term
        across = now * np.conj(other_before)
        across *= turn
        sums[name] += across


def _products(
    sums: dict[str, Signal], channels: dict[str, _Channel], count: int, reach: int, size: int, is_complex: bool, remove: bool
) -> dict[str, Signal]:
    lags = np.arange(reach + 1)
    products = {}
    for name, spectrum in sums.items():
        raw = (ifft(spectrum) if is_complex else irfft(spectrum, 2 * size))[: reach + 1]
        if remove:
            a, b = channels[name[0]], channels[name[1]]
            mean_a, mean_b = a.total / count, np.conj(b.total / count)
            raw = raw - mean_b * (a.total - a.first(reach)) - mean_a * np.conj(b.total - b.last(reach)) + (count - lags) * mean_a * mean_b
        products[name] = raw / (count - lags)
    return products
