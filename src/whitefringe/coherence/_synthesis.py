"""A thermal field of a given spectrum: white noise weighted in frequency."""

from __future__ import annotations

import numpy as np
from scipy.fft import fft, next_fast_len

from ..errors import InputError
from ..spectra import Line, Spectrum
from ..units import FloatArray
from ._emission import BLOCK, ComplexArray, blocks

_NODES = 4001
"""Points of a line's cumulative profile."""

_FOLDS = 8
"""Sampling folds a line's wings into the band; so many folds are summed, the rest is spread evenly."""


def carrier_si(spectrum: Spectrum) -> float:
    """Frequency [Hz] about which the field is drawn: the middle of the spectrum's extent."""
    return 0.5 * sum(spectrum.extent_si)


def thermal(spectrum: Spectrum, count: int, interval: float, rng: np.random.Generator) -> ComplexArray:
    """Circular Gaussian field of unit mean intensity: the transform of independent normal amplitudes.

    Every frequency bin, 1 / (period of the transform) wide, has the power of the spectrum inside it.
    """
    half = next_fast_len((count + 1) // 2)
    field = np.empty(2 * half, dtype=complex)
    rng.standard_normal(out=field.view(float))
    nodes, share = cumulative(spectrum, 1 / interval)
    period = 2 * half * interval
    # even bins in the first half and odd ones in the second, each from zero up and then the negative frequencies
    up = (half + 1) // 2
    for odd in (0, 1):
        for first, last, turn in ((0, up, 0), (up, half, half)):
            for begin, end in blocks(last - first, BLOCK):
                lower = (2.0 * (np.arange(first + begin, first + end) - turn) + odd - 0.5) / period
                power = np.interp(lower + 1 / period, nodes, share) - np.interp(lower, nodes, share)
                field[odd * half + first + begin : odd * half + first + end] *= np.sqrt(0.5 * power)
    return _transform(field, half)[:count]


def _transform(field: ComplexArray, half: int) -> ComplexArray:
    """Transform in place, by its two halves: the work space of one transform of the whole would be twice as large."""
    for part in (field[:half], field[half:]):
        part[:] = fft(part, overwrite_x=True)
    turn = np.exp(-1j * np.pi * np.arange(min(BLOCK, half)) / half)
    for begin, end in blocks(half, BLOCK):
        even, odd = field[begin:end], field[half + begin : half + end]
        odd *= turn[: end - begin] * np.exp(-1j * np.pi * begin / half)
        odd[:], even[:] = even - odd, even + odd
    return field


def cumulative(spectrum: Spectrum, rate: float) -> tuple[FloatArray, FloatArray]:
    """Frequencies [Hz] about the carrier from -rate/2 to rate/2, and the share of the light below them.

    Raises
    ------
    InputError
        The spectrum is wider than the sampling rate [Hz].
    """
    low, high = spectrum.extent_si
    if high - low > rate * (1 + 1e-12):
        raise InputError(
            f"sample_interval must be at most {1e15 / (high - low):.4g} fs, one over the {(high - low) / 1e12:.4g} THz that this "
            f"spectrum extends over; got {1e15 / rate:.4g} fs"
        )
    centre = carrier_si(spectrum)
    shapes = [(line, *_line_below(line, rate)) for line in spectrum.lines if line.strength > 0]
    nodes = np.unique(np.concatenate([[-rate / 2, rate / 2], *_nodes(spectrum, centre, rate, [(s[0], s[1]) for s in shapes])]))
    total = _continuum_below(spectrum, nodes + (centre - spectrum.start_si))
    for line, offset, below in shapes:
        there = nodes + (centre - line.frequency_si)
        total += line.strength * (_periodic(there, rate, offset, below) - _periodic(there[:1], rate, offset, below))
    return nodes, total / total[-1]


def _nodes(spectrum: Spectrum, centre: float, rate: float, lines: list[tuple[Line, FloatArray]]) -> list[FloatArray]:
    found = [np.mod(line.frequency_si - centre + offset + rate / 2, rate) - rate / 2 for line, offset in lines]
    if spectrum.density.size:
        quarters = spectrum.start_si - centre + spectrum.step_si * np.arange(4 * spectrum.density.size + 1) / 4
        found.append(np.clip(quarters, -rate / 2, rate / 2))
    return found


def _continuum_below(spectrum: Spectrum, offset: FloatArray) -> FloatArray:
    """Integral of the piecewise linear continuum up to each offset [Hz] from its start."""
    density, slopes = spectrum.density, spectrum.slopes
    if not density.size:
        return np.zeros_like(offset)
    position = np.clip(offset / spectrum.step_si, 0, density.size)
    cell = np.minimum(position.astype(int), density.size - 1)
    inside = position - cell
    whole = np.concatenate([[0.0], np.cumsum(density)])
    return np.asarray(spectrum.step_si * (whole[cell] + density[cell] * inside + slopes[cell] * (inside**2 - inside) / 2))


def _line_below(line: Line, rate: float) -> tuple[FloatArray, FloatArray]:
    """Offsets [Hz] from a line's centre, from -rate/2 to rate/2, and the share of its folded profile below them."""
    width = line.fwhm_si
    if width == 0:
        tiny = 1e-12 * rate
        # twice on either side, so that a node off by rounding leaks nothing into the bins beyond
        return np.array([-rate / 2, -2 * tiny, -tiny, tiny, 2 * tiny, rate / 2]), np.array([0.0, 0.0, 0.0, 1.0, 1.0, 1.0])
    stretch = np.arcsinh(rate / (2 * width))
    offset = width * np.sinh(stretch * np.linspace(-1, 1, _NODES))
    offset[[0, -1]] = -rate / 2, rate / 2
    turns = rate * np.arange(-_FOLDS, _FOLDS + 1)[:, None]
    folded = np.sum(line.density_si(line.frequency_si + offset + turns), axis=0)
    below = np.concatenate([[0.0], np.cumsum(0.5 * (folded[1:] + folded[:-1]) * np.diff(offset))])
    return offset, below + (1 - below[-1]) * (offset / rate + 0.5)


def _periodic(offset: FloatArray, rate: float, known: FloatArray, below: FloatArray) -> FloatArray:
    """Cumulative share at any offset, growing by one per turn of `rate`."""
    turns = np.floor(offset / rate + 0.5)
    return np.asarray(turns + np.interp(offset - turns * rate, known, below))
