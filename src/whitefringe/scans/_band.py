"""Where in a scan's Fourier spectrum the fringes are, and how strong the noise is."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.polynomial import Legendre

from ..units import FloatArray

DRIFT_DEGREE = 8
"""Degree of the polynomial that stands for drift while the carrier is being found."""

FEWEST_FRINGES = 8
"""Fringes are looked for from this many periods per scan upward; slower changes are drift."""

FALSE_ALARM = 1e-4
"""Probability that noise alone passes for fringes, by the Chernoff bound over all trials (an upper limit for white noise)."""


@dataclass(frozen=True, kw_only=True)
class Band:
    """The fringes' band: first and last Fourier bin, carrier [cycles per axis unit], and noise power per bin."""

    first: int
    last: int
    carrier: float
    noise_power: float


SECOND_LINE = 0.02
"""Bins away from the packet belong to it from this fraction of its greatest power: lower is what an uneven drive spreads about."""


def detrended(axis: FloatArray, values: FloatArray) -> FloatArray:
    """Return `values` less a polynomial of degree `DRIFT_DEGREE` in the axis."""
    return np.asarray(values - Legendre.fit(axis, values, DRIFT_DEGREE)(axis))


def find_band(values: FloatArray, step: float) -> Band | None:
    """Find the band of the fringes in evenly sampled, detrended values; None where nothing stands above the noise.

    Boxes of 1, 2, 4, ... bins are slid over the power spectrum; the sum over m bins of white noise follows a gamma distribution of
    shape m, and the box with the smallest Chernoff bound exp(-(T - m - m ln(T/m))) wins.
    """
    power = np.abs(np.fft.rfft(values)) ** 2
    low = FEWEST_FRINGES
    local = noise_floor(power)
    best = _strongest_box(power / local, low)
    if best is None:
        return None
    floor = float(local[best[0] + best[1] // 2])
    first, last = _extent(power, *best, floor, low)
    inside = slice(first, last + 1)
    weight = np.maximum(power[inside] - floor, 0.0)
    carrier_bin = float(np.sum(weight * np.arange(first, last + 1)) / np.sum(weight))
    noise = _noise_near(power, first, last, carrier_bin, floor)
    return Band(first=first, last=last, carrier=carrier_bin / (values.size * step), noise_power=noise)


def noise_floor(power: FloatArray) -> FloatArray:
    """Noise power in each bin: the median within a factor 1.7 of its frequency, over ln 2, on a smooth curve.

    Following the spectrum keeps the slow wander of a lamp, whose power falls with frequency, from passing for fringes.
    """
    anchors = np.unique(np.geomspace(FEWEST_FRINGES, power.size - 1, 48).astype(int))
    medians = [float(np.median(power[int(k / 1.7) : min(int(1.7 * k) + 2, power.size)])) for k in anchors]
    least = float(np.max(power)) * 1e-24 or 1.0
    return np.asarray(np.exp(np.interp(np.arange(power.size), anchors, np.log(np.maximum(medians, least)))) / np.log(2.0))


def trials(bins: int) -> tuple[list[int], float]:
    """Widths of the boxes, and the score that the best of them must reach by chance once in 1 / FALSE_ALARM scans."""
    widths = [2**k for k in range(int(np.log2(max(bins // 4, 1))) + 1)]
    return widths, float(np.log(bins * len(widths) / FALSE_ALARM))


def _strongest_box(relative: FloatArray, low: int) -> tuple[int, int] | None:
    """First bin and width of the most significant box of power over noise, or None."""
    sums = np.concatenate([[0.0], np.cumsum(relative)])
    widths, best_score = trials(relative.size)
    best = None
    for width in widths:
        total = sums[low + width :] - sums[low:-width]
        excess = np.maximum(total / width, 1.0)
        score = width * (excess - 1.0 - np.log(excess))
        top = int(np.argmax(score))
        if score[top] > best_score:
            best, best_score = (low + top, width), float(score[top])
    return best


def _extent(power: FloatArray, start: int, width: int, floor: float, low: int) -> tuple[int, int]:
    """Bins that hold the packet: twice the 10-90 % energy width either side, and further lines within half the carrier."""
    centre = start + 0.5 * (width - 1)
    lower, upper = max(low, int(centre - 3 * width)), min(power.size - 1, int(np.ceil(centre + 3 * width)))
    energy = np.cumsum(np.maximum(power[lower : upper + 1] - floor, 0.0))
    share = (energy - energy[0]) / (energy[-1] - energy[0]) if energy[-1] > energy[0] else np.linspace(0, 1, energy.size)
    quantiles = lower + np.interp([0.1, 0.5, 0.9], share, np.arange(share.size))
    reach = 2.0 * (quantiles[2] - quantiles[0]) + 2.0
    near = np.arange(int(np.ceil(0.5 * centre)), min(int(1.5 * centre), power.size - 1) + 1)
    strong = near[power[near] > max(floor * (np.log(power.size) + 7.0), SECOND_LINE * float(np.max(power[near])))]
    first = min([int(quantiles[1] - reach), *strong])
    last = max([int(np.ceil(quantiles[1] + reach)), *strong])
    return max(first, low, int(0.25 * centre)), min(last, power.size - 2, int(1.75 * centre) + 1)


def _noise_near(power: FloatArray, first: int, last: int, carrier: float, floor: float) -> float:
    """Mean noise power per bin from 0.3 to 3 carriers outside the band, without the strongest bins there (lines, harmonics)."""
    bins = np.arange(max(int(0.3 * carrier), FEWEST_FRINGES), min(int(3 * carrier), int(0.9 * power.size)))
    bins = bins[(bins < first - 1) | (bins > last + 1)]
    if bins.size < 8:
        return floor
    # white noise exceeds 5 times its mean in 0.7 % of the bins; leaving those out lowers the mean by 4 %
    level = float(np.median(power[bins])) / np.log(2.0)
    kept = power[bins][power[bins] < 5 * level]
    tail = math.exp(-5.0)
    return float(np.mean(kept)) / (1 - 5 * tail / (1 - tail))
