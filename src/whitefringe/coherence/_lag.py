"""The lag between two recorded channels, from the slope of their cross-phase."""

from __future__ import annotations

from typing import Any

import astropy.units as u
import numpy as np
from scipy.fft import fft, fftfreq, ifft, irfft, next_fast_len, rfft, rfftfreq
from scipy.optimize import minimize_scalar

from ..errors import InputError
from ..results import Measured
from ..units import FloatArray, as_delay_si
from ._blocks import Signal, in_blocks, interval_si

FEWEST = 64

CHANCE = 1e-3
"""Two channels without a common signal are taken to have one with this probability, or less."""


def lag_between(x: Any, y: Any, *, sample_interval: Any, longest: Any = None) -> Measured:
    """Lag of x behind y, positive where x repeats later what y has shown before.

    With the cross-spectrum G(f) = X(f) Y*(f), the lag D maximises Re sum G(f) exp(2 pi i f D); its variance is

    sum (2 pi f)^2 {S_x S_y - |G|^2} / 2 over [sum (2 pi f)^2 |G|]^2

    Parameters
    ----------
    x, y : array_like, shape (n,)
        Both real or both complex, of one length, recorded together. Means are taken off. Complex fields may have any phase between them:
        then f counts from the mean frequency of |G|, and the modulus of the sum is maximised.
    sample_interval : Quantity [time]
    longest : Quantity [time, or path difference], optional
        Greatest lag to search, half the record by default.

    Returns
    -------
    Measured [unit of sample_interval]
        Lag with its standard error.

    Raises
    ------
    UnitsError
        `sample_interval` is not a time.
    InputError
        Channels too short, of two lengths, one real and one complex, not finite, without change, or without a common signal.

    Notes
    -----
    Sums are over the one band of frequencies in which the common signal stands highest above the noise. S_x, S_y and G in the variance
    are means over neighbouring frequencies, and what noise adds to |G|^2 is taken off. This is the error within the main peak: two channels
    of narrow-band real light, whose correlation has many peaks of nearly one height, may be wrong by a period. Channels of opposite
    sign, as on the two sides of a beam splitter, need one of them turned. It is the generalised correlation of Knapp & Carter with weight
    one inside the band and zero outside.

    References
    ----------
    Knapp & Carter 1976, doi:10.1109/TASSP.1976.1162830.

    Examples
    --------
    >>> import astropy.units as u
    >>> import numpy as np
    >>> from whitefringe import coherence
    >>> rng = np.random.default_rng(2)
    >>> signal = rng.normal(size=5020)
    >>> x, y = signal[:5000] + rng.normal(size=5000), signal[20:] + rng.normal(size=5000)
    >>> print(coherence.lag_between(x, y, sample_interval=1 * u.ms))
    19.974 ± 0.013 ms (lag of x behind y)
    """
    interval = interval_si(sample_interval)
    first, second = _channel(x, "x"), _channel(y, "y")
    if first.size != second.size or np.iscomplexobj(first) != np.iscomplexobj(second):
        raise InputError(
            f"x and y must be both real or both complex, of one length; got {first.size} of {first.dtype} and "
            f"{second.size} of {second.dtype}"
        )
    most = first.size // 2
    if longest is not None:
        most = min(most, int(float(as_delay_si(longest, "longest")) / interval))
    coarse = _coarse(first, second, most)
    fine, error = _fine(*_aligned(first, second, coarse))
    unit = u.Quantity(sample_interval).unit
    return Measured(
        value=((coarse + fine) * interval * u.s).to(unit),
        uncertainty=(error * interval * u.s).to(unit),
        definition="lag of x behind y",
        method="greatest correlation over the coherent frequencies; error from the coherence",
        citation="knapp-carter",
    )


def _channel(values: Any, name: str) -> Signal:
    blocks = list(in_blocks(values, name, 1 << 20))
    signal = np.concatenate(blocks) if blocks else np.empty(0)
    if signal.size < FEWEST:
        raise InputError(f"{name} must have at least {FEWEST} samples; got {signal.size}")
    signal = signal - np.mean(signal)
    if not np.any(signal):
        raise InputError(f"{name} does not change: it has no lag")
    return np.asarray(signal)


def _coarse(x: Signal, y: Signal, most: int) -> int:
    """Lag of the greatest correlation in whole samples."""
    size = next_fast_len(x.size + most + 1, real=not np.iscomplexobj(x))
    if np.iscomplexobj(x):
        products = np.abs(ifft(fft(x, size) * np.conj(fft(y, size))))
    else:
        products = irfft(rfft(x, size) * np.conj(rfft(y, size)), size)
    both_sides = np.concatenate([products[size - most :], products[: most + 1]])
    return int(np.argmax(both_sides)) - most


def _aligned(x: Signal, y: Signal, lag: int) -> tuple[Signal, Signal]:
    if lag >= 0:
        return x[lag:], y[: y.size - lag]
    return x[:lag], y[-lag:]


def _fine(x: Signal, y: Signal) -> tuple[float, float]:
    """Rest of the lag and its standard error [samples]."""
    free = bool(np.iscomplexobj(x))
    angular, left, right = _spectra(x, y, free)
    width = int(np.clip(np.sqrt(angular.size) / 2, 8, 1024))
    cells = angular.size // width
    angular, left, right = angular[: cells * width], left[: cells * width], right[: cells * width]
    cross = left * np.conj(right)
    both = _means(np.abs(left) ** 2, width) * _means(np.abs(right) ** 2, width)
    turned = cross * np.exp(1j * angular * _peak(angular, cross, free))
    first, last = _band(_means(turned, width) / np.sqrt(np.where(both > 0, both, 1.0)), width, free, x.size)
    band = slice(first * width, last * width)
    angular, cross, both = angular[band], cross[band], both[first:last]
    if free:
        angular = angular - _middle(angular, turned[band])
    lag = _peak(angular, cross, free)
    turned = cross * np.exp(1j * angular * lag)
    if free:
        turned = turned * np.exp(-1j * np.angle(np.sum(turned)))
    noise = np.maximum(both - np.abs(_means(turned, width)) ** 2, 0.0) * width / (width - 1)
    squares = width * _means(angular**2, width)
    return lag, float(np.sqrt(np.sum(squares * noise / 2)) / np.sum(angular**2 * np.real(turned)))


def _spectra(x: Signal, y: Signal, free: bool) -> tuple[FloatArray, Signal, Signal]:
    """Angular frequencies [rad per sample], rising, and both transforms; for real signals above zero only."""
    forward, frequencies = (fft, fftfreq) if free else (rfft, rfftfreq)
    turns = frequencies(x.size)
    order = np.argsort(turns, kind="stable")
    order = order[(np.abs(turns[order]) < 0.5) & (free | (turns[order] > 0))]
    return 2 * np.pi * turns[order], forward(x)[order], forward(y)[order]


def _middle(angular: FloatArray, turned: Signal) -> float:
    """Mean frequency of the common signal."""
    weight = np.real(turned * np.exp(-1j * np.angle(np.sum(turned))))
    return float(np.sum(angular * weight) / np.sum(weight))


def _band(coherence: Signal, width: int, free: bool, samples: int) -> tuple[int, int]:
    """Band of cells over which the complex coherences of the aligned channels add up to most, over their noise.

    Without a common signal the sum over N frequencies, over sqrt(N / 2), is a standard normal, or for free phase a Rayleigh variable.
    """
    sums = np.concatenate([[0.0], np.cumsum(coherence if free else np.real(coherence))])
    best, first, last = 0.0, 0, 0
    for begin in range(coherence.size):
        reached = sums[begin + 1 :] - sums[begin]
        score = (np.abs(reached) if free else np.real(reached)) * np.sqrt(2 * width / np.arange(1, reached.size + 1))
        if np.max(score) > best:
            best, first, last = float(np.max(score)), begin, begin + 1 + int(np.argmax(score))
    least = float(np.sqrt(2 * np.log(samples * coherence.size**2 / CHANCE)))
    if best < least:
        raise InputError(f"x and y share no signal: their correlation is {best:.2g} times its noise, and {least:.2g} is needed")
    return first, last


def _means(values: Signal, width: int) -> Signal:
    return np.asarray(values.reshape(-1, width).mean(axis=1))


def _peak(angular: FloatArray, cross: Signal, free: bool) -> float:
    """Lag [samples], within one, at which the sum of the turned cross-spectrum is greatest."""

    def depth(lag: float) -> float:
        total = np.sum(cross * np.exp(1j * angular * lag))
        return -float(np.abs(total) if free else np.real(total))

    lag = float(minimize_scalar(depth, bounds=(-1.0, 1.0), method="bounded", options={"xatol": 1e-6}).x)
    for _ in range(2):  # Newton's step reaches what comparing heights cannot
        turned = cross * np.exp(1j * angular * lag)
        back = np.exp(-1j * np.angle(np.sum(turned))) if free else 1.0
        slope, bend = np.sum(angular * np.imag(turned * back)), np.sum(angular**2 * np.real(turned * back))
        if bend > 0:
            lag -= float(np.clip(slope / bend, -0.1, 0.1))
    return lag
