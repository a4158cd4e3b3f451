"""Intensity correlation g2, with errors that need no model of the light."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from itertools import chain
from typing import Any

import astropy.units as u
import numpy as np
from scipy.fft import fft, ifft, irfft, next_fast_len, rfft

from ..errors import InputError
from ..units import FloatArray
from ._blocks import Signal, check_length, in_blocks, interval_si, whole_lags

GROUPS = 32
"""The record is cut into 32 to 63 parts for its errors, as far as its length goes."""

FEWEST_GROUPS = 8

FEWEST = 32
"""Samples per lag asked for, at least."""

_PEEK = 1 << 20
_SMALLEST, _LARGEST = 1 << 5, 1 << 15


@dataclass(frozen=True, kw_only=True, eq=False)
class IntensityCorrelation:
    """Intensity correlation g2, one value per lag.

    Parameters
    ----------
    lag : Quantity [time], shape (m,)
        From zero on.
    value, standard_error : ndarray, shape (m,)
        g2 and its standard error.
    siegert_excess, siegert_error : ndarray, shape (m,), or None
        g2 - 1 - |gamma|^2 of the same record, which is zero for thermal light (the Siegert relation), and its standard error; None for
        a real signal, which has no gamma.
    samples : int
    definition, method, citation : str
    """

    lag: u.Quantity = field(repr=False)
    value: FloatArray = field(repr=False)
    standard_error: FloatArray = field(repr=False)
    siegert_excess: FloatArray | None = field(default=None, repr=False)
    siegert_error: FloatArray | None = field(default=None, repr=False)
    samples: int
    definition: str
    method: str
    citation: str = "mandel-wolf"


@dataclass(frozen=True, kw_only=True)
class _Part:
    """Sums over part of a record: intensity, samples, and lag products of the intensity and the field with their numbers."""

    total: float
    samples: int
    pairs: FloatArray
    intensity: FloatArray
    field: Signal

    def __add__(self, other: _Part) -> _Part:
        return _Part(
            total=self.total + other.total,
            samples=self.samples + other.samples,
            pairs=self.pairs + other.pairs,
            intensity=self.intensity + other.intensity,
            field=self.field + other.field,
        )

    def without(self, other: _Part) -> _Part:
        return _Part(
            total=self.total - other.total,
            samples=self.samples - other.samples,
            pairs=self.pairs - other.pairs,
            intensity=self.intensity - other.intensity,
            field=self.field - other.field,
        )

    def g2(self) -> FloatArray:
        return np.asarray(self.intensity / self.pairs / (self.total / self.samples) ** 2)

    def excess(self) -> FloatArray:
        gamma = self.field / self.pairs / (self.total / self.samples)
        return np.asarray(self.g2() - 1 - np.abs(gamma) ** 2)


def intensity_correlation(x: Any, *, sample_interval: Any, lags: Any = None) -> IntensityCorrelation:
    """Intensity correlation, with the check that the light is thermal.

    g2(tau) = <I(t + tau) I(t)> / <I>^2;   g2 = 1 + |gamma|^2 for thermal light

    Parameters
    ----------
    x : array_like, memory-mapped array, or iterator of arrays, shape (n,)
        Complex: a field, I = |x|^2. Real: the recorded intensity itself, nowhere below zero on average.
    sample_interval : Quantity [time]
    lags : int or Quantity [time, or path difference], optional
        Greatest lag, in samples or as a delay; 100 samples by default, at most 1/32 of the record.

    Returns
    -------
    IntensityCorrelation

    Raises
    ------
    UnitsError
        `sample_interval` is not a time, `lags` neither a number of samples nor a delay.
    InputError
        Not one row of finite numbers, too short for its lags, or a mean intensity not above zero.

    Notes
    -----
    Standard errors and bias are those of a delete-one jackknife over 8 to 63 stretches of the record: they need no model of the light, but
    each stretch must be many coherence times long. White detector noise and shot noise add to g2 at lag zero only. Read once, in blocks;
    memory does not grow with the record.

    References
    ----------
    Mandel & Wolf, sec. 8.4 (Siegert relation) and 14.7; Miller 1974, doi:10.1093/biomet/61.1.1 (jackknife).

    Examples
    --------
    >>> import astropy.units as u
    >>> import numpy as np
    >>> from whitefringe import coherence
    >>> lamp = coherence.WaveTrains(rate=50 / u.ps, damping_time=20 * u.ps)
    >>> light = lamp.simulate(duration=1 * u.us, sample_interval=2 * u.ps, rng=np.random.default_rng(1))
    >>> found = coherence.intensity_correlation(light.field, sample_interval=2 * u.ps, lags=40 * u.ps)
    >>> print(f"{found.value[0]:.2f} +- {found.standard_error[0]:.2f}")
    2.00 +- 0.01
    """
    interval = interval_si(sample_interval)
    reach = whole_lags(lags, interval)
    size, blocks = _sized(x, reach)
    parts, is_field = _parts(blocks, size, reach)
    whole = sum(parts[1:], start=parts[0])
    check_length(whole.samples, reach, FEWEST)
    if not whole.total > 0:
        raise InputError(f"x must have a mean intensity above zero; got {whole.total / whole.samples:.4g}")
    value, error = _jackknife(parts, whole, _Part.g2)
    excess, excess_error = _jackknife(parts, whole, _Part.excess) if is_field else (None, None)
    return IntensityCorrelation(
        lag=np.arange(reach + 1) * u.Quantity(sample_interval),
        value=value,
        standard_error=error,
        siegert_excess=excess,
        siegert_error=excess_error,
        samples=whole.samples,
        definition="<I(t + tau) I(t)> / <I>^2",
        method=f"lag products averaged over overlapping Fourier blocks; bias and errors by a jackknife over {len(parts)} stretches",
    )


def _sized(x: Any, reach: int) -> tuple[int, Iterator[Signal]]:
    """Length of a block, at least the lags and short enough for 32 blocks, and the signal in small pieces."""
    pieces = in_blocks(x, "x", _LARGEST)
    begun, count = [], 0
    for piece in pieces:
        begun.append(piece)
        count += piece.size
        if count >= _PEEK:
            break
    if not count:
        raise InputError("x has no samples")
    check_length(min(count, FEWEST * reach) if count >= _PEEK else count, reach, FEWEST)
    wanted = 1 << max(int(np.log2(count / GROUPS)), 0)
    smallest = 1 << int(np.ceil(np.log2(max(reach, _SMALLEST))))
    return max(min(wanted, _LARGEST), smallest), chain(begun, pieces)


def _parts(pieces: Iterator[Signal], size: int, reach: int) -> tuple[list[_Part], bool]:
    """Sums per stretch; where there are too many, neighbours are joined."""
    parts: list[_Part] = []
    length = 1
    waiting: list[_Part] = []
    before: Signal | None = None
    is_field = False
    for block in chain(in_blocks(pieces, "x", size), [np.empty(0)]):
        if before is not None:
            waiting.append(_part(before, block, size, reach))
            is_field = bool(np.iscomplexobj(before))
        before = block
        if len(waiting) == length:
            parts.append(sum(waiting[1:], start=waiting[0]))
            waiting = []
        if len(parts) == 2 * GROUPS:
            parts = [parts[k] + parts[k + 1] for k in range(0, len(parts), 2)]
            length *= 2
    return _even(parts, waiting), is_field


def _even(parts: list[_Part], rest: list[_Part]) -> list[_Part]:
    """Stretches of about one length: what is left at the end goes to the last."""
    short = sum(rest[1:], start=rest[0]) if rest else None
    if short is None and len(parts) > FEWEST_GROUPS and 2 * parts[-1].samples < parts[0].samples:
        short = parts.pop()
    if short is not None:
        if parts and 2 * short.samples < parts[0].samples:
            parts[-1] = parts[-1] + short
        else:
            parts.append(short)
    return parts


def _part(block: Signal, following: Signal, size: int, reach: int) -> _Part:
    """Products of the samples of one block with those up to `reach` later, in it and in the next."""
    lags = np.arange(reach + 1)
    joined = np.concatenate([block, following[:reach]])
    pairs = np.minimum(block.size, joined.size - lags).clip(min=0).astype(float)
    if not np.iscomplexobj(block):
        return _Part(
            total=float(np.sum(block)), samples=block.size, pairs=pairs, intensity=_products(block, joined, size, reach), field=pairs
        )
    bright = np.abs(block) ** 2
    length = next_fast_len(size + reach)
    product = ifft(fft(joined, length) * np.conj(fft(block, length)))[: reach + 1].copy()
    return _Part(
        total=float(np.sum(bright)),
        samples=block.size,
        pairs=pairs,
        intensity=_products(bright, np.abs(joined) ** 2, size, reach),
        field=product,
    )


def _products(block: FloatArray, joined: FloatArray, size: int, reach: int) -> FloatArray:
    """Sums over t of joined(t + k) block(t), k = 0 ... reach."""
    length = next_fast_len(size + reach, real=True)
    return np.array(irfft(rfft(joined, length) * np.conj(rfft(block, length)), length)[: reach + 1])


def _jackknife(parts: list[_Part], whole: _Part, quantity: Callable[[_Part], FloatArray]) -> tuple[FloatArray, FloatArray]:
    """Value without bias of first order, and its standard error."""
    number = len(parts)
    left_out = np.array([quantity(whole.without(part)) for part in parts])
    middle = np.mean(left_out, axis=0)
    value = number * quantity(whole) - (number - 1) * middle
    return value, np.sqrt((number - 1) / number * np.sum((left_out - middle) ** 2, axis=0))
