"""Fourier-transform spectrum of a scan: line positions, and the beat of the two strongest lines."""

from __future__ import annotations

from dataclasses import dataclass, field

import astropy.units as u
import numpy as np
from scipy.signal import find_peaks
from scipy.signal.windows import hann

from ..errors import NoFringeError, ScanError
from ..results import Measured
from ..units import STEP, FloatArray, read_only
from ._band import FEWEST_FRINGES, detrended, find_band
from ._lines import separated_lines
from ._packet import mean_level
from .conditioning import EvenScan, even_scan
from .scan import Scan

ZERO_PADDING = 4
"""The amplitude spectrum is computed on a grid this much finer than one over the scan."""

FAINTEST_LINE = 0.2
"""Lines are listed down to this fraction of the strongest line's amplitude: below lie window and drive-error side-bands."""

FAINTEST = 5.0
"""A line must stand this many times above the rms noise of the amplitude."""

MEAN_SHARE = 1 / 6
"""The slow mean follows changes up to this fraction of the lowest frequency of the fringes' band."""

METHOD = "greatest of the Hann-windowed spectrum, lines separated; error from white noise alone"

HANN_FREQUENCY_LOSS = 2.343
"""Variance of a line's frequency with a Hann window over that without (sum w^2 n^2 sum n^2 / (sum w n^2)^2 about its middle)."""


@dataclass(frozen=True, kw_only=True)
class ScanLine:
    """A line in the spectrum of a scan: fringe frequency, its wavelength (where the path is known) and relative amplitude."""

    frequency: Measured
    wavelength: Measured | None
    amplitude: float


@dataclass(frozen=True, kw_only=True, eq=False)
class ScanSpectrum:
    """Amplitude spectrum of a scan.

    Attributes
    ----------
    frequency : Quantity [1/um or 1/step], shape (n,)
        Fringe frequency: wavenumber where the path is known.
    amplitude : ndarray, shape (n,)
        Relative amplitude: fringe amplitude of a line over the mean signal.
    lines : tuple of ScanLine
        Strongest first.
    beat_period : Measured or None
        One over the distance of the two strongest lines: the period of the contrast.
    resolution : Quantity
        Full width at half maximum of a sharp line (Hann window: 2.0 over the scan length).
    """

    frequency: u.Quantity = field(repr=False)
    amplitude: FloatArray = field(repr=False)
    lines: tuple[ScanLine, ...]
    beat_period: Measured | None
    resolution: u.Quantity
    notes: tuple[str, ...]


def spectrum_from_scan(scan: Scan) -> ScanSpectrum:
    """Compute the amplitude spectrum of a scan on its (rebuilt) path axis.

    Hann window; each line is placed where the windowed spectrum, less the other lines' share of it, is greatest.

    Parameters
    ----------
    scan : Scan

    Returns
    -------
    ScanSpectrum

    Raises
    ------
    NoFringeError
        No line stands above the noise.
    ScanError
        As for `reduce_scan`.

    Notes
    -----
    Uncertainties are those of a sinusoid in white noise (Kay 1993, ex. 3.14: var f = 12 / [(2 pi)^2 eta N (N^2 - 1)]) times 2.343 for
    the window. They do not hold errors of the path axis, which common practice finds to be far greater on a real stage.
    """
    even = even_scan(scan)
    if np.mean(even.signal) <= 0:
        raise ScanError(f"{scan.name}: the mean signal is not above the dark level: relative amplitudes have no meaning")
    values = _relative(even)
    window = hann(values.size, sym=False)
    count = ZERO_PADDING * values.size
    amplitude = 2.0 * np.abs(np.fft.rfft(values * window, count)) / float(np.sum(window))
    grid = 1.0 / (count * even.step)
    noise = float(np.median(amplitude[ZERO_PADDING * FEWEST_FRINGES :])) / np.sqrt(np.log(2.0))
    peaks = _peaks(amplitude, noise)
    if peaks.size == 0:
        limit = float(noise * (FAINTEST + 1.645 / np.sqrt(2.0)))
        raise NoFringeError(f"{scan.name}: no line above the noise; amplitude below {limit:.2g} (95 %)", upper_limit=limit)
    starts = peaks * grid * even.step
    found = separated_lines(values * window, window, starts)
    lines = tuple(_line(even, frequency / even.step, height, noise, values.size) for frequency, height in found)
    unit = u.um if even.path_known else STEP
    scale = 1e-6 if even.path_known else 1.0
    return ScanSpectrum(
        frequency=np.arange(amplitude.size) * grid * scale / unit,
        amplitude=read_only(amplitude),
        lines=lines,
        beat_period=_beat(lines, unit),
        resolution=2.0 / (values.size * even.step) * scale / unit,
        notes=even.notes,
    )


def _peaks(amplitude: FloatArray, noise: float) -> FloatArray:
    """Grid indices of the lines, strongest first."""
    low = ZERO_PADDING * FEWEST_FRINGES
    floor = max(FAINTEST_LINE * float(np.max(amplitude[low:])), FAINTEST * noise)
    found, _ = find_peaks(amplitude, height=floor, distance=2 * ZERO_PADDING, prominence=floor / 2)
    found = found[(found >= low) & (found < amplitude.size - 1)]
    return np.asarray(found[np.argsort(amplitude[found])[::-1]])


def _relative(even: EvenScan) -> FloatArray:
    """Signal over its slow mean, less one; over its overall mean where no fringes are found."""
    values = detrended(even.axis_si, even.signal)
    band = find_band(values, even.step)
    if band is None:
        return values / float(np.mean(even.signal))
    mean = mean_level(even.signal, 2.0 * band.first / even.signal.size * MEAN_SHARE)
    return even.signal / mean - 1.0


def _line(even: EvenScan, frequency: float, height: float, noise: float, samples: int) -> ScanLine:
    # noise is the rms of the windowed amplitude: 2 sigma sqrt(1.5 / N), so eta = A^2 / (2 sigma^2) = 3 (A / noise)^2 / N
    eta = 3.0 * (height / noise) ** 2 / samples
    sigma = np.sqrt(HANN_FREQUENCY_LOSS * 12.0 / (eta * samples * (samples**2 - 1.0))) / (2 * np.pi) / even.step
    unit, scale = (u.um, 1e-6) if even.path_known else (STEP, 1.0)
    where = Measured(
        value=frequency * scale / unit,
        uncertainty=sigma * scale / unit,
        definition="fringe frequency",
        method=METHOD,
        citation="kay",
    )
    wave = None
    if even.path_known:
        wave = Measured(
            value=1e9 / frequency * u.nm,
            uncertainty=1e9 * sigma / frequency**2 * u.nm,
            definition="wavelength on the scan's path scale",
            method=METHOD,
            citation="kay",
        )
    return ScanLine(frequency=where, wavelength=wave, amplitude=height)


def _beat(lines: tuple[ScanLine, ...], unit: u.UnitBase) -> Measured | None:
    if len(lines) < 2:
        return None
    first, second = lines[0].frequency, lines[1].frequency
    distance = abs(first.value - second.value)
    sigma = np.sqrt(sum(u.Quantity(line.uncertainty) ** 2 for line in (first, second)))
    return Measured(
        value=(1 / distance).to(unit),
        uncertainty=(sigma / distance**2).to(unit),
        definition="beat period of the contrast: 1 over the distance of the two strongest lines",
        method=METHOD,
        citation="kay",
    )
