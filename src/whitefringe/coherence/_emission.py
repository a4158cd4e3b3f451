"""Random emission of wave trains on a sample grid: impulses, and the three envelopes they are turned into.

Everything runs in blocks, so that beside the field itself little memory is used.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray
from scipy.fft import fft, ifft
from scipy.interpolate import CubicSpline
from scipy.signal import lfilter

from ..units import FloatArray

ComplexArray = NDArray[np.complex128]

BLOCK = 1 << 16
"""Samples per block: its arrays stay in a processor's cache."""

SINGLE = 0.5
"""Up to this many trains per sample each is drawn by itself; above, some are merged (see `impulses`)."""

_TURN = 2 * np.pi * np.arange(4096) / 4096
_COS, _SIN = np.cos(_TURN), np.sin(_TURN)

_PAST = 4096
"""Steps per damping time for the trains emitted before the first sample."""

_GONE = 18
"""A damped train is left out this many damping times after its emission: its power is then 2e-16 of what it was."""

_FINE = 64
"""Samples per damping time on which a field of Gaussian trains is drawn at least."""

_ENDS = 6
"""A Gaussian train is cut off this many damping times from its peak, where its amplitude is 2e-16."""


def impulses(count: int, rate: float, rng: np.random.Generator) -> ComplexArray:
    """Sums of unit phasors exp(i phi) emitted in each of `count` samples, `rate` trains per sample on average.

    Emission times are uniform, their number is Poisson distributed, and the phases are uniform over 4096 equal steps, which no moment of
    order below 4096 can tell from a continuum. Above `SINGLE` trains per sample the sum is a circular Gaussian of mean square
    rate - sqrt(rate SINGLE), plus SINGLE trains per sample of mean square sqrt(rate / SINGLE): second and fourth cumulant, rate both, are
    those of single trains, and the time is bounded.
    """
    single = min(rate, SINGLE)
    number = int(rng.poisson(single * count))
    position = rng.integers(0, count, number, dtype=np.uint32)
    phase = rng.integers(0, _TURN.size, number, dtype=np.uint16)
    result = np.empty(count, dtype=complex)
    result.real = np.bincount(position, _COS[phase], count)
    result.imag = np.bincount(position, _SIN[phase], count)
    if rate > SINGLE:
        result *= (rate / SINGLE) ** 0.25
        noise = rng.standard_normal(2 * count)
        noise *= np.sqrt(0.5 * (rate - np.sqrt(rate * SINGLE)))
        result += noise.view(complex)
    return result


def blocks(count: int, size: int) -> Iterator[tuple[int, int]]:
    """First and last-plus-one index of every block."""
    for begin in range(0, count, size):
        yield begin, min(begin + size, count)


def damped(count: int, rate: float, damping: float, rng: np.random.Generator) -> ComplexArray:
    """Trains exp(-t/damping) from their emission on; `damping` in samples. One-pole recursion: E[m] = exp(-1/damping) E[m-1] + impulse."""
    keep = float(np.exp(-1 / damping))
    scale = np.sqrt(-np.expm1(-2 / damping) / rate)
    field = np.empty(count, dtype=complex)
    state = np.array([keep * _emitted_before(rate, damping, rng)])
    for begin, end in blocks(count, BLOCK):
        field[begin:end], state = lfilter([1.0], [1.0, -keep], impulses(end - begin, rate, rng), zi=state)
        field[begin:end] *= scale
    return field


def _emitted_before(rate: float, damping: float, rng: np.random.Generator) -> complex:
    """What trains emitted before the first sample add to the sample before it."""
    step = max(1, int(damping / _PAST))
    past = impulses(int(_GONE * damping / step) + 1, rate * step, rng)
    weight = np.exp(-step / damping * np.arange(past.size))
    grid = np.expm1(-2 * step / damping) / (step * np.expm1(-2 / damping))
    return complex(np.sqrt(grid) * (past @ weight))


def box(count: int, rate: float, length: float, rng: np.random.Generator) -> ComplexArray:
    """Trains of constant amplitude over `length` samples: a running sum.

    A share of the trains that is the fraction in `length` is one sample longer than the others, as for emission at any time in a sample.
    """
    short = int(length + 1e-9)
    longer = max(length - short, 0.0)
    field = np.empty(count, dtype=complex)
    late = complex(impulses(1, rate * longer, rng)[0]) if longer else 0j
    _, ends, late = _starts_and_ends(short, rate, longer, late, rng)
    total = complex(np.sum(ends)) + late
    for begin, end in blocks(count, max(BLOCK, short)):
        starts, fresh, late = _starts_and_ends(end - begin, rate, longer, late, rng)
        ends = np.concatenate([ends, fresh])
        starts -= ends[: end - begin]
        starts[0] += total
        np.cumsum(starts, out=field[begin:end])
        total = complex(field[end - 1])
        field[begin:end] /= np.sqrt(rate * length)
        ends = ends[end - begin :]
    return field


def _starts_and_ends(
    count: int, rate: float, longer: float, late: complex, rng: np.random.Generator
) -> tuple[ComplexArray, ComplexArray, complex]:
    """Phasors that start in each sample; those that end together, the longer trains one sample late; and the last of these."""
    ends = impulses(count, rate * (1 - longer), rng)
    if not longer:
        return ends.copy(), ends, 0j
    lasting = impulses(count, rate * longer, rng)
    starts = ends + lasting
    ends[0] += late
    ends[1:] += lasting[:-1]
    return starts, ends, complex(lasting[-1])


def gaussian(count: int, rate: float, damping: float, rng: np.random.Generator) -> ComplexArray:
    """Trains exp(-(t/damping)^2) about their emission; `damping` in samples.

    Long trains are drawn on a coarser grid of 64 samples or more per damping time, and a cubic spline (error 2e-9) fills it.
    """
    step = int(damping / _FINE)
    if step < 2:
        return _gaussian(count, rate, damping, rng)
    coarse = _gaussian(count // step + 9, rate * step, damping / step, rng)
    curve = CubicSpline(np.arange(-4, coarse.size - 4), coarse)
    field = np.empty(count, dtype=complex)
    for begin, end in blocks(count, BLOCK):
        field[begin:end] = curve(np.arange(begin, end) / step)
    return field


def _gaussian(count: int, rate: float, damping: float, rng: np.random.Generator) -> ComplexArray:
    """Convolution with the envelope by overlap-add of Fourier blocks."""
    half = int(np.ceil(_ENDS * damping))
    envelope: FloatArray = np.exp(-((np.arange(-half, half + 1) / damping) ** 2))
    envelope /= np.sqrt(rate * np.sum(envelope**2))
    size = BLOCK // 2
    hop = size - 2 * half
    kernel = fft(envelope, size)
    field = np.zeros(count, dtype=complex)
    for begin, end in blocks(count + 2 * half, hop):
        spectrum = fft(impulses(end - begin, rate, rng), size, overwrite_x=True)
        spectrum *= kernel
        piece = ifft(spectrum, overwrite_x=True)
        # impulse j of the block stands at sample begin + j - half, and its train starts `half` earlier
        first = begin - 2 * half
        low, high = max(first, 0), min(first + size, count)
        if low < high:
            field[low:high] += piece[low - first : high - first]
    return field
