"""What contrast a scan without fringes may hide."""

from __future__ import annotations

import numpy as np
from scipy.optimize import brentq

from ..units import FloatArray
from ._band import FEWEST_FRINGES, noise_floor, trials

SHARE = 1 / 12
"""The limit holds for a packet whose full width is this share of the scan, or more."""

ONE_SIDED_95 = 1.645
"""Standard normal quantile at 95 %."""

GAUSSIAN_AREA = float(np.sqrt(np.pi / (8 * np.log(2))))
"""int e^2 dx over w, for a Gaussian envelope e of full width w: 0.7527."""

GAUSSIAN_BINS = 4 * np.log(2) / np.pi
"""Full width of that envelope's amplitude spectrum, times w: 0.8825 (transform of a Gaussian)."""


def missed_contrast(relative: FloatArray) -> float:
    """Contrast that would have been found in 95 % of such scans: an upper limit for the packet that was not.

    A Gaussian packet of full width w and contrast A puts P = A^2 / (4 s^2) int e^2 dx of power over noise into the band, e its envelope
    and s the rms noise of a sample; a box of m bins then holds a sum T of mean m + P and variance m + 2 P, and is found when its
    Chernoff score T - m - m ln(T / m) passes the threshold of `find_band`.

    Parameters
    ----------
    relative : ndarray, shape (n,)
        Signal over its mean, less one.
    """
    power = np.abs(np.fft.rfft(relative)) ** 2
    variance = float(np.median(noise_floor(power)[FEWEST_FRINGES:])) / relative.size
    widths, threshold = trials(power.size)
    bins = min(max(2 ** int(np.ceil(np.log2(GAUSSIAN_BINS / SHARE))), 1), widths[-1])

    def shortfall(contrast: float) -> float:
        signal = contrast**2 / (4 * variance) * GAUSSIAN_AREA * SHARE * relative.size
        total = max(bins + signal - ONE_SIDED_95 * np.sqrt(bins + 2 * signal), bins)
        return float(total - bins - bins * np.log(total / bins) - threshold)

    if variance == 0 or shortfall(1.0) < 0:
        return 1.0
    return float(brentq(shortfall, 0.0, 1.0))
