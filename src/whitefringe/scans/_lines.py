"""Positions of the lines in a windowed spectrum, freed from each other's leakage."""

from __future__ import annotations

import numpy as np

from ..units import FloatArray

ROUNDS = 12
"""Sweeps over the lines; each takes every other line out before it places one."""


def separated_lines(windowed: FloatArray, window: FloatArray, starts: FloatArray) -> list[tuple[float, float]]:
    """Place lines where |X(f) - sum of the others' a_j W(f - f_j)| is greatest, and give their amplitudes.

    X is the transform of the windowed signal, W that of the window; a line a cos(2 pi f n + phi) has the complex amplitude
    a exp(i phi) / 2 at +f.

    Parameters
    ----------
    windowed, window : ndarray, shape (n,)
    starts : ndarray, shape (k,)
        First guesses [cycles per sample].

    Returns
    -------
    list of (frequency [cycles per sample], amplitude), in the order of `starts`
    """
    n = np.asarray(np.arange(windowed.size) - 0.5 * (windowed.size - 1), dtype=float)
    frequencies = [float(f) for f in starts]
    amplitudes = [0j] * len(frequencies)
    total = float(np.sum(window))
    for _ in range(ROUNDS if len(frequencies) > 1 else 1):
        for k in range(len(frequencies)):
            rest = windowed.astype(complex)
            for j in range(len(frequencies)):
                if j != k and amplitudes[j]:
                    rest = rest - amplitudes[j] * window * np.exp(2j * np.pi * frequencies[j] * n)
            frequencies[k], value = _greatest(rest, n, frequencies[k])
            amplitudes[k] = value / total
    return [(f, 2 * abs(a)) for f, a in zip(frequencies, amplitudes, strict=True)]


def _greatest(values: np.ndarray, n: FloatArray, frequency: float) -> tuple[float, complex]:
    """Newton's method on |X(f)|^2; n is centred, so that the derivatives are small."""
    limit = 0.5 / n.size
    value = 0j
    for _ in range(4):
        turned = values * np.exp(-2j * np.pi * frequency * n)
        value, first, second = (complex(np.sum(turned * (-2j * np.pi * n) ** order)) for order in range(3))
        slope = (np.conj(value) * first).real
        bend = abs(first) ** 2 + (np.conj(value) * second).real
        frequency += float(np.clip(-slope / bend, -limit, limit)) if bend < 0 else 0.0
    return frequency, value
