"""Coherence length of a measured packet, by each definition."""

from __future__ import annotations

import numpy as np
from scipy.optimize import brentq
from scipy.signal import fftconvolve

from ..errors import UndefinedWidthError
from ._packet import Estimate, Packet, crossings_of

DEFINITIONS_MEASURED = {
    "bandwidth": "1 over the full width at half maximum of the fringe spectrum",
    "power": "integral of (contrast / greatest contrast)^2",
    "half": "full width at half the greatest contrast",
    "e-fold": "half of the full width at 1/e of the greatest contrast",
    "first-null": "half of the distance of the first nulls on either side",
}
"""Name -> words; the names are those of `coherence.COHERENCE_DEFINITIONS`."""


NULL_DEPTH = 0.1
"""A minimum of the contrast counts as a null when it lies below this fraction of the height, as in `coherence`."""


LOBE = 8.0
"""A side lobe must stand this many standard deviations above the null before it."""


def coherence_measured(packet: Packet, centre: float, peak: float, height: Estimate, definition: str) -> Estimate:
    """Return the coherence length [axis unit] with its gradient.

    Raises
    ------
    UndefinedWidthError
        The packet does not show what the definition needs.
    """
    if definition == "power":
        return _power(packet, peak, height)
    if definition == "bandwidth":
        return _bandwidth(packet, centre)
    if definition == "first-null":
        return _first_null(packet, centre, height)
    level, share = (0.5, 1.0) if definition == "half" else (float(np.exp(-1)), 0.5)
    ends = crossings_of(packet, peak, height, level)
    if ends is None:
        raise UndefinedWidthError(f"the contrast does not fall to {level:.3g} of its peak within the scan; use another definition")
    return Estimate(share * (ends[1].value - ends[0].value), share * (ends[1].gradient - ends[0].gradient))


def _power(packet: Packet, peak: float, height: Estimate) -> Estimate:
    """Integral of |z|^2 over the kept window (Parseval), less the noise's own power in it.

    What lies beyond the window is bounded by the mean power just inside its shoulders, held over as much path again on both sides.
    """
    kept = min(1.0, 2 * packet.half_window / packet.span)
    noise = packet.noise**2 * packet.frequency.size * kept
    power = packet.span * float(np.sum(np.abs(packet.coefficients) ** 2) - noise)
    value = power / height.value**2
    axis, z = packet.grid
    distance = np.abs(axis - peak)
    rim = (distance < packet.half_window - packet.shoulder) & (distance > packet.half_window - 3 * packet.shoulder)
    outside = max(float(np.mean(np.abs(z[rim]) ** 2)) - packet.noise**2 * packet.frequency.size, 0.0) if np.any(rim) else 0.0
    tail = 2 * packet.half_window * outside / height.value**2
    gradient = 2 * packet.span * np.conj(packet.coefficients) / height.value**2 - 2 * value / height.value * height.gradient
    return Estimate(value, gradient, systematic=tail)


def _bandwidth(packet: Packet, centre: float) -> Estimate:
    """One over the full width at half maximum of the phase-corrected fringe spectrum, at the resolution of the scan.

    What the finite resolution does to the width is bounded by the change when only the inner half of the window is used, and by a
    quarter of the resolution (one over the window).
    """
    kept = min(1.0, 2 * packet.half_window / packet.span)
    whole, inner = _spectral_width(packet, centre, kept), _spectral_width(packet, centre, 0.5 * kept)
    value = 1 / whole.value
    coarse = 0.25 * value / (whole.value * kept * packet.span)
    return Estimate(value, -whole.gradient / whole.value**2, systematic=max(abs(1 / inner.value - value), coarse))


def _spectral_width(packet: Packet, centre: float, share: float) -> Estimate:
    """Full width at half maximum of the spectrum of the part `share` of the scan about the packet."""
    z = packet.signal(centre)
    base = share * packet.wave(centre) * np.conj(z) / abs(z)
    spread = 1.0 / (share * packet.span)

    def response(f: float) -> np.ndarray:
        """Gradient of the spectrum at f."""
        return np.asarray(base * np.sinc((f - packet.frequency) / spread))

    def spectrum(f: float) -> float:
        return float(np.sum(packet.coefficients * response(f)).real)

    bins = packet.frequency.size
    fine = np.arange(-8 * (bins - 1), 8 * (bins - 1) + 1) / 8
    spaced = np.zeros(8 * (bins - 1) + 1, dtype=complex)
    spaced[::8] = base * packet.coefficients
    values = np.asarray(fftconvolve(spaced, np.sinc(share * fine), mode="valid" if bins == 1 else "same")).real
    grid = packet.frequency[0] + np.arange(spaced.size) / 8 / packet.span
    top = int(np.argmax(values))
    target = 0.5 * values[top]
    above = np.flatnonzero(values >= target)
    first, last = int(above[0]), int(above[-1])
    if first == 0 or last == grid.size - 1:
        raise UndefinedWidthError("the fringe spectrum does not fall to half within the fringes' band; use another definition")
    ends = []
    for low, high in ((grid[first - 1], grid[first]), (grid[last], grid[last + 1])):
        f = float(brentq(lambda f: spectrum(f) - target, low, high))
        slope = (spectrum(f + 0.01 * spread) - spectrum(f - 0.01 * spread)) / (0.02 * spread)
        ends.append(Estimate(f, (0.5 * response(grid[top]) - response(f)) / slope))
    return Estimate(ends[1].value - ends[0].value, ends[1].gradient - ends[0].gradient)


def _first_null(packet: Packet, centre: float, height: Estimate) -> Estimate:
    """Nearest minima of |z|^2 on either side that lie below a tenth of the height, with a side lobe beyond them.

    White noise adds the same to |z|^2 everywhere, so it does not move a minimum.
    """
    axis, z = packet.grid
    contrast = np.abs(z)
    start = int(np.searchsorted(axis, centre))
    noise = packet.sigma(height.gradient)
    inner = np.arange(1, axis.size - 1)
    dips = inner[(contrast[1:-1] < contrast[:-2]) & (contrast[1:-1] <= contrast[2:])]
    dips = dips[contrast[dips] < NULL_DEPTH * height.value - 2 * noise]
    ends = []
    for near, beyond in ((dips[dips < start][::-1], slice(None, None, -1)), (dips[dips >= start], slice(None))):
        lobe = 0.0
        if near.size:
            outer = contrast[: near[0]][beyond] if near[0] < start else contrast[near[0] :]
            lobe = float(np.max(outer[: max(abs(near[0] - start), 1)], initial=0.0))
        if near.size == 0 or lobe < contrast[near[0]] + LOBE * noise:
            raise UndefinedWidthError("the packet shows no null with a side lobe beyond it above the noise; use another definition")
        ends.append(_minimum(packet, float(axis[near[0]]), float(axis[1] - axis[0])))
    return Estimate(0.5 * (ends[1].value - ends[0].value), 0.5 * (ends[1].gradient - ends[0].gradient))


def _minimum(packet: Packet, x: float, fine: float) -> Estimate:
    """Refine a minimum of |z|^2 by Newton's method on half its derivative, Re(conj(z) z')."""
    offset = 2j * np.pi * (packet.frequency - float(np.mean(packet.frequency)))
    for _ in range(8):
        wave = packet.wave(x)
        z, first, second = (complex(np.sum(packet.coefficients * wave * offset**n)) for n in range(3))
        slope, bend = (np.conj(z) * first).real, abs(first) ** 2 + (np.conj(z) * second).real
        x -= float(np.clip(slope / bend, -fine, fine)) if bend > 0 else 0.0
    return Estimate(x, -(np.conj(first) + np.conj(z) * offset) * wave / bend)
