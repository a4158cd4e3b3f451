"""Standard errors and bias of correlation estimates: Bartlett's formula, for real and for circular complex signals.

With rho_ab(d) the correlation of a(t + d) with b*(t), K = 1 for circular complex and 2 for real signals, n samples, g = |rho_xy(k)|,
and each sum over all d:

    P = sum rho_xx(d) rho_yy*(d)      A_ab = sum |rho_ab(d)|^2
    Q = sum rho_xy(k + d) rho_xy(k - d)
    M_x = sum rho_xx(k - d) rho_xy(d)      M_y = sum rho_xy(k - d) rho_yy(d)

    variance along gamma = K / n {(P + Re Q e^(-2 i phi)) / 2 - g Re[(M_x + M_y) e^(-i phi)] + g^2 (A_xx + A_yy + 2 A_xy) / 4}
    variance across it   = K / n (P - Re Q e^(-2 i phi)) / 2      (complex signals)
    bias of the ratio    = K / n {rho_xy (3 A_xx + 3 A_yy + 2 A_xy) / 8 - (M_x + M_y) / 2}
    more, where the mean was taken off: 1 / n sum {rho_xy(k) (rho_xx(d) + rho_yy(d)) / 2 - rho_xy(d)}

(Bartlett 1946; for real signals as in Box & Jenkins, Time Series Analysis, ch. 11; the complex form follows from the moments of circular
Gaussian variables.) It holds for any linear process, so also for few wave trains: their fourth cumulant cancels in the ratio.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.signal import fftconvolve

from ..units import FloatArray
from ._blocks import Signal

WINDOW = 6
"""Half the window of lags about the greatest correlation, in units of the sum of |rho|^2."""

CLEAR = 20.0
"""Outside the window a lag counts when |rho|^2 exceeds its noise this many times."""


@dataclass(frozen=True, kw_only=True)
class Spread:
    """Standard errors along and across gamma, and the bias, per lag.

    `extent` is P, in samples; `settled` tells whether the correlation dies away within the lags that are known.
    """

    along: FloatArray
    across: FloatArray
    bias: Signal
    extent: float
    settled: bool


@dataclass(frozen=True, kw_only=True)
class Cleaned:
    """A two-sided correlation without the lags that hold noise alone, its sum of squares, and whether it dies away."""

    rho: Signal
    extent: float
    settled: bool


def two_sided(forward: Signal, backward: Signal) -> Signal:
    """Correlation at lags -r ... r from <a(t + k) b*(t)> and <b(t + k) a*(t)>, k = 0 ... r."""
    return np.concatenate([np.conj(backward[:0:-1]), forward])


def cleaned(rho: Signal, count: int, noise: float | None = None) -> Cleaned:
    """Keep a window about the peak, and every lag that stands clear of the noise (`noise`: count times its variance)."""
    square = np.abs(rho) ** 2
    distance = np.abs(np.arange(rho.size) - int(np.argmax(square)))
    ring = np.bincount(distance, square)
    grown = np.cumsum(ring) / ring[0]
    closed = np.flatnonzero(np.arange(grown.size) >= WINDOW * grown)
    half = int(closed[0]) if closed.size else grown.size - 1
    level = (grown[half] if noise is None else noise) / count
    kept = np.where((distance <= half) | (square > CLEAR * level), rho, 0.0)
    return Cleaned(rho=kept, extent=float(np.sum(np.abs(kept) ** 2)), settled=bool(closed.size))


def spread(xx: Signal, yy: Signal, xy: Signal, lags: NDArray[np.int64], count: int, *, is_complex: bool, centred: bool) -> Spread:
    """Evaluate the formulas at `lags` from two-sided estimates at lags -r ... r; `centred`: the mean was taken off the signals."""
    a = cleaned(xx, count)
    b = a if yy is xx else cleaned(yy, count)
    shared = float(np.real(np.vdot(b.rho, a.rho)))
    both = a if xy is xx else cleaned(xy, count, shared)
    middle = xx.size // 2
    rho = _at(both.rho, lags, middle)
    size = np.abs(rho)
    back = np.conj(np.where(size > 0, rho / np.where(size > 0, size, 1.0), 1.0))
    mixed = _at(_convolved(a.rho, both.rho), lags, 2 * middle) + _at(_convolved(both.rho, b.rho), lags, 2 * middle)
    folded = np.real(_at(_convolved(both.rho, both.rho), 2 * lags, 2 * middle) * back**2)
    share = (1 if is_complex else 2) / (count - np.abs(lags))
    along = (shared + folded) / 2 - size * np.real(mixed * back) + size**2 * (a.extent + b.extent + 2 * both.extent) / 4
    bias = share * (rho * (3 * a.extent + 3 * b.extent + 2 * both.extent) / 8 - mixed / 2)
    if centred:
        bias = bias + (rho * np.real(np.sum(a.rho) + np.sum(b.rho)) / 2 - np.sum(both.rho)) / count
    return Spread(
        along=np.sqrt(share * np.maximum(along, 0.0)),
        across=np.sqrt(share * np.maximum(shared - folded, 0.0) / 2) if is_complex else np.zeros(lags.size),
        bias=bias,
        extent=shared,
        settled=a.settled and b.settled,
    )


def _convolved(a: Signal, b: Signal) -> Signal:
    return np.asarray(fftconvolve(a, b, mode="full"))


def _at(values: Signal, lags: NDArray[np.int64], middle: int) -> Signal:
    """Values at lags counted from the middle, zero outside."""
    index = lags + middle
    inside = (index >= 0) & (index < values.size)
    return np.where(inside, values[np.clip(index, 0, values.size - 1)], 0.0)
