"""The fringe packet as a band-limited analytic signal, and what white noise does to any number drawn from it.

The signal is z(x) = sum over the band of c_k exp(2 pi i f_k x) with c_k = 2 DFT_k / n (Takeda, Ina & Kobayashi 1982). White noise
gives every c_k an independent complex error of variance s^2. A number q that depends on c through dq = Re(sum G_k dc_k) then has
variance (s^2 / 2) sum |G_k|^2: each estimate below comes with its G.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq
from scipy.signal import butter as butterworth
from scipy.signal import sosfiltfilt

from ..units import FloatArray
from ._band import Band

ComplexArray = NDArray[np.complex128]

DRIFT_PERIODS = 24.0
"""Changes of the mean level slower than this many fringes are followed as drift."""

PASSES = 2
"""How often the fringes are taken out before the mean is found again."""

END_TAPER = 2.5
"""Length of the shoulders at both ends of a scan, in response lengths of the band (one over its width)."""

SMOOTHING = 8
"""The amplitudes that weigh the packet's centre are means over this fraction of the band."""

SIGNIFICANT = 5.0
"""Smoothed power must exceed the noise by this many of its standard deviations to count."""

OVERSAMPLING = 4
"""The envelope is searched on a grid this much finer than the samples."""


@dataclass(frozen=True)
class Estimate:
    """A number, its gradient G with respect to the Fourier coefficients, and an error that is not noise (one sigma)."""

    value: float
    gradient: Any
    systematic: float = 0.0

    def scaled(self, factor: float) -> Estimate:
        """Return the estimate times a constant."""
        return Estimate(self.value * factor, self.gradient * factor, self.systematic * abs(factor))


@dataclass(frozen=True, kw_only=True, eq=False)
class Packet:
    """Fourier coefficients of the packet.

    `coefficients` at `frequency` [1/axis unit] for an axis that starts at `origin` and is `span` long; `noise` is s, the rms error
    of a coefficient; `mean_level` and `samples` are those of the scan; the window
    about the packet that was kept ends, with its shoulders, `half_window` from the packet's centre.
    """

    coefficients: ComplexArray
    frequency: FloatArray
    origin: float
    span: float
    noise: float
    mean_level: FloatArray
    samples: int
    half_window: float

    def sigma(self, gradient: Any) -> float:
        """Standard deviation that white noise gives a number with this gradient."""
        return float(self.noise * np.sqrt(0.5 * np.sum(np.abs(gradient) ** 2)))

    def uncertainty(self, estimate: Estimate) -> float:
        """One standard deviation of an estimate, noise and systematic part together."""
        return float(np.hypot(self.sigma(estimate.gradient), estimate.systematic))

    def wave(self, x: float) -> ComplexArray:
        """exp(2 pi i f_k (x - origin)): gradient of z(x)."""
        return np.asarray(np.exp(2j * np.pi * self.frequency * (x - self.origin)))

    def signal(self, x: float) -> complex:
        """z(x)."""
        return complex(np.sum(self.coefficients * self.wave(x)))

    @property
    def shoulder(self) -> float:
        """Length over which the scan's ends are faded [axis unit]: the packet's half-contrast points must lie inside."""
        return END_TAPER * self.span / self.frequency.size

    @cached_property
    def grid(self) -> tuple[FloatArray, ComplexArray]:
        """Fine axis and z on it."""
        count = OVERSAMPLING * self.samples
        spectrum = np.zeros(count, dtype=complex)
        first = round(float(self.frequency[0]) * self.span)
        spectrum[first : first + self.frequency.size] = self.coefficients
        return np.asarray(self.origin + np.arange(count) * (self.span / count), dtype=float), np.fft.ifft(spectrum) * count

    def envelope(self, x: float) -> Estimate:
        """|z(x)|, with the in-phase part of the noise as its error."""
        z = self.signal(x)
        return Estimate(abs(z), self.wave(x) * np.conj(z) / abs(z))

    def mean_frequency(self, x: float) -> Estimate:
        """Fringe frequency at x: d arg z / dx / 2 pi. At the packet's centre this is the mean frequency of the light."""
        z, wave = self.signal(x), self.wave(x)
        slope = np.sum(self.coefficients * wave * self.frequency) / z
        return Estimate(float(slope.real), (self.frequency - slope) * wave / z)

    def curvature(self, x: float, carrier: float) -> float:
        """Second derivative of |z| at a maximum."""
        z, wave = self.signal(x), self.wave(x)
        turn = -((2 * np.pi * (self.frequency - carrier)) ** 2)
        return float((np.sum(self.coefficients * wave * turn) * np.conj(z) / abs(z)).real)

    def slope(self, x: float) -> float:
        """Derivative of |z|."""
        z, wave = self.signal(x), self.wave(x)
        return float((np.sum(self.coefficients * wave * 2j * np.pi * self.frequency) * np.conj(z) / abs(z)).real)


def packet_in(axis: FloatArray, counts: FloatArray, band: Band) -> Packet:
    """Remove the drift of the mean, and keep the band's Fourier coefficients of counts / mean - 1.

    The mean is found twice, the second time with the fringes taken out: where fringes reach an end of the scan, they would bend it.
    """
    step = float(axis[1] - axis[0])
    bins = np.arange(band.first, band.last + 1)
    corner = 2.0 * band.carrier * step / DRIFT_PERIODS
    mean = mean_level(counts, corner)
    for _ in range(PASSES):
        spectrum = np.fft.rfft(counts / mean - 1.0)
        fringes = np.zeros_like(spectrum)
        fringes[bins] = spectrum[bins]
        mean = mean_level(counts - mean * np.fft.irfft(fringes, counts.size), corner)
    relative = counts / mean - 1.0
    reach = END_TAPER * step * counts.size / bins.size
    inside = np.minimum(axis - axis[0], axis[-1] - axis)
    first = _packet(axis, relative * _shoulders(inside, reach), bins, mean, band)
    peak, _ = peak_of(first, band.carrier)
    # the packet is Hermitian about its centre: a window that is symmetric about it leaves its group delay alone
    half = max(min(peak - axis[0], axis[-1] - peak), reach)
    return _packet(axis, relative * _shoulders(half - np.abs(axis - peak), reach), bins, mean, band, half)


def _packet(axis: FloatArray, relative: FloatArray, bins: Any, mean: FloatArray, band: Band, half: float = 0.0) -> Packet:
    step = float(axis[1] - axis[0])
    coefficients = 2.0 * np.fft.rfft(relative) / relative.size
    return Packet(
        coefficients=coefficients[bins],
        frequency=bins / (step * relative.size),
        origin=float(axis[0]),
        span=step * relative.size,
        # the band's noise power was found on raw counts
        noise=2.0 * float(np.sqrt(band.noise_power)) / relative.size / float(np.mean(mean)),
        mean_level=mean,
        samples=relative.size,
        half_window=half,
    )


def _shoulders(inside: FloatArray, reach: float) -> FloatArray:
    """One, falling to zero as a squared cosine where the distance `inside` from the nearer end is below `reach`.

    What is cut off at an end would ring through the whole band; this lets it fade. Noise is left as it is where the packet may lie.
    """
    return np.asarray(np.sin(0.5 * np.pi * np.clip(inside / reach, 0.0, 1.0)) ** 2)


def mean_level(counts: FloatArray, corner: float) -> FloatArray:
    """Zero-phase low-pass (Butterworth, order 4 twice) of counts; `corner` over the Nyquist frequency."""
    sections = butterworth(4, corner, output="sos")
    padding = min(counts.size - 1, int(6 / corner))
    return np.asarray(sosfiltfilt(sections, counts, padlen=padding))


def peak_of(packet: Packet, carrier: float) -> tuple[float, Estimate]:
    """Place and height of the greatest contrast, corrected for what noise adds to a greatest value.

    Noise in quadrature lengthens |z| by s_q^2 / 2a; picking the highest point adds s_slope^2 / (2 |curvature|).
    """
    axis, z = packet.grid
    x = float(axis[int(np.argmax(np.abs(z)))])
    fine = float(axis[1] - axis[0])
    for _ in range(6):
        move = -packet.slope(x) / packet.curvature(x, carrier)
        x += float(np.clip(move, -fine, fine))
    raw = packet.envelope(x)
    in_phase = packet.sigma(raw.gradient)
    slope_noise = packet.sigma(2 * np.pi * (packet.frequency - carrier) * raw.gradient)
    curvature = packet.curvature(x, carrier)
    excess = in_phase**2 / (2 * raw.value) + (slope_noise**2 / (2 * abs(curvature)) if curvature < 0 else 0.0)
    return x, Estimate(max(raw.value - excess, 0.0), raw.gradient)


def centre_of(packet: Packet, start: float, carrier: float) -> Estimate:
    """Packet centre: where the packet agrees best with a symmetric packet of its own amplitude spectrum.

    Maximum of |sum b_k c_k exp(2 pi i f_k x)| with b_k the smoothed amplitudes |c_k|: to first order the slope of a straight line
    through the phases of the c_k, weighted by their power. Where the smoothed power does not stand above the noise, b_k is zero:
    weights drawn from the noise itself would add to the error.
    """
    power = np.abs(packet.coefficients) ** 2
    width = max(1, power.size // SMOOTHING)
    smooth = np.convolve(power, np.ones(width) / width, mode="same") - packet.noise**2
    weight = np.where(smooth > SIGNIFICANT / np.sqrt(width) * packet.noise**2, np.sqrt(np.maximum(smooth, 0.0)), 0.0)
    weighted = weight * packet.coefficients
    mean = float(np.sum(weight * np.abs(packet.coefficients) * packet.frequency) / np.sum(weight * np.abs(packet.coefficients)))
    offset = 2 * np.pi * (packet.frequency - mean)
    x, limit = start, 0.25 / carrier
    for _ in range(20):
        wave = packet.wave(x)
        total = np.sum(weighted * wave)
        unit = np.conj(total) / abs(total)
        slope = float((np.sum(weighted * wave * 1j * offset) * unit).real)
        bend = float((np.sum(weighted * wave * -(offset**2)) * unit).real)
        move = -slope / bend if bend < 0 else 0.0
        x += float(np.clip(move, -limit, limit))
        if abs(move) < 1e-9 / carrier:
            break
    gradient = -(weight * packet.wave(x) * 1j * offset) * unit / bend
    return Estimate(x, gradient)


def crossings_of(packet: Packet, peak: float, height: Estimate, level: float) -> tuple[Estimate, Estimate] | None:
    """Nearest places left and right of the peak where |z| falls to `level` times the height; None when an end comes first."""
    axis, z = packet.grid
    contrast = np.abs(z)
    usable = axis <= packet.origin + packet.span * (1 - 1 / packet.samples)
    start = int(np.clip(np.searchsorted(axis, peak), 1, axis.size - 1))
    noise = packet.sigma(height.gradient)
    target = level * height.value + noise**2 / (2 * level * height.value)
    left = np.flatnonzero(contrast[:start] < target)
    right = np.flatnonzero((contrast < target) & usable & (np.arange(axis.size) >= start))
    if left.size == 0 or right.size == 0:
        return None
    brackets = (
        (axis[left[-1]], min(axis[left[-1] + 1], peak)),
        (max(axis[right[0] - 1], peak), axis[right[0]]),
    )
    ends = []
    for low, high in brackets:
        x = float(brentq(lambda x: packet.envelope(x).value - target, low, high, xtol=1e-12 * packet.span))
        here = packet.envelope(x)
        ends.append(Estimate(x, (level * height.gradient - here.gradient) / packet.slope(x)))
    return ends[0], ends[1]
