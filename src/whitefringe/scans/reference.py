"""Path difference from the fringes of a reference channel of known wavelength.

The phase of the reference's fringes is that of its analytic signal in a band about the fringe frequency (Takeda, Ina & Kobayashi
1982); one turn is one wavelength of path. The band must be wide enough to pass what the drive's periodic errors do to the rate.
"""

from __future__ import annotations

import numpy as np
from scipy.signal import hilbert

from ..errors import ReferenceLostError
from ..units import FloatArray, positive_si
from ._band import detrended, find_band
from .scan import Scan

HALF_BAND = 0.25
"""Half-width of the reference's band over its fringe frequency: 14 % side-bands of a drive error lie well inside."""

FADED = 0.05
"""The reference's fringes must keep this fraction of their median amplitude."""


def opd_from_reference(scan: Scan, kept: slice, position: FloatArray, notes: list[str]) -> FloatArray:
    """Return the path difference [m] at the kept rows, rising with the position, and zero where the position is.

    Where the stage's zero lies outside the scan, the path is counted from the first kept row, and a note says so.

    Raises
    ------
    ReferenceLostError
        No fringes in the reference channel, or fringes that fade.
    """
    import astropy.units as u

    counts = np.asarray(scan.signals["reference"])[kept]
    if np.ptp(counts) == 0:
        raise ReferenceLostError(f"{scan.name}: the reference channel is constant; is the column right, the lamp on?")
    rows = np.arange(counts.size, dtype=float)
    band = find_band(detrended(rows, counts), 1.0)
    if band is None:
        raise ReferenceLostError(f"{scan.name}: the reference channel shows no fringes above its noise")
    if band.carrier > 0.25:
        raise ReferenceLostError(f"{scan.name}: the reference has {1 / band.carrier:.2g} samples per fringe; at least 4 are needed")
    analytic = _band_passed(detrended(rows, counts), band.carrier)
    amplitude = np.abs(analytic)
    edge = int(np.ceil(2 / band.carrier))
    inner = amplitude[edge : amplitude.size - edge]
    weak = np.flatnonzero(inner < FADED * np.median(inner))
    if weak.size:
        row = kept.start + edge + int(weak[0]) + 1
        raise ReferenceLostError(
            f"{scan.name}: the reference fringes fade to {inner[weak[0]] / np.median(inner):.0%} of their usual amplitude at data row "
            f"{row} ({weak.size} such rows); the path cannot be followed there"
        )
    wavelength = positive_si(scan.layout.reference_wavelength, u.m, "reference_wavelength")
    opd = np.unwrap(np.angle(analytic)) / (2 * np.pi) * wavelength * np.sign(position[-1] - position[0])
    order = np.argsort(position)
    if position[order[0]] <= 0 <= position[order[-1]]:
        return np.asarray(opd - np.interp(0.0, position[order], opd[order]))
    notes.append("path difference is counted from the first row: the stage's zero lies outside the scan")
    return np.asarray(opd - opd[0])


def _band_passed(values: FloatArray, carrier: float) -> FloatArray:
    """Analytic signal in the band carrier (1 +- HALF_BAND), with cosine shoulders; rows are mirrored at both ends first."""
    padding = min(values.size - 1, int(20 / carrier))
    mirrored = np.pad(values, padding, mode="reflect", reflect_type="odd")
    frequency = np.abs(np.fft.fftfreq(mirrored.size))
    distance = np.abs(frequency - carrier) / (HALF_BAND * carrier)
    gain = np.where(distance < 0.8, 1.0, np.where(distance < 1.2, 0.5 * (1 + np.cos(np.pi * (distance - 0.8) / 0.4)), 0.0))
    real = np.fft.ifft(np.fft.fft(mirrored) * gain).real
    return np.asarray(hilbert(real)[padding : padding + values.size])
