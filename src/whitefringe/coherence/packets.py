"""How far from zero the contrast holds, and where else a packet stands."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..results import Measured
from ..spectra import Spectrum
from ..units import SPEED_OF_LIGHT, FloatArray, as_delay_si
from ._search import contrast_at, first_below, runs


@dataclass(frozen=True, kw_only=True)
class FalsePacket:
    """A secondary maximum of |gamma|: its path difference either way from zero, and its height (1 at zero)."""

    opd: u.Quantity
    height: float

    def __str__(self) -> str:
        return f"{self.opd:.6g}: contrast {self.height:.4f}"


def delay_for_contrast(spectrum: Spectrum, contrast: float) -> Measured:
    """How far from zero path difference the contrast stays above a level: the first fall of |gamma| to it.

    Parameters
    ----------
    spectrum : Spectrum
    contrast : float
        Between 0 and 1, both excluded.

    Returns
    -------
    Measured [um]
        Path difference, either way from zero.

    Raises
    ------
    InputError
        A level out of range.
    UndefinedWidthError
        The contrast does not fall so far.

    References
    ----------
    Goodman, Statistical Optics, 2nd ed., sec. 5.1: contrast of two equal arms is |gamma|.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import coherence, spectra
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    >>> print(coherence.delay_for_contrast(light, 0.8))
    3.24037 um (path difference at which |gamma| first falls to 0.8, photon-weighted)
    """
    if not 0 < contrast < 1:
        raise InputError(f"contrast must be between 0 and 1; got {contrast}")
    value = (first_below(spectrum, float(contrast)) * SPEED_OF_LIGHT * u.m).to(u.um)
    words = f"path difference at which |gamma| first falls to {contrast:g}, {spectrum.weight}-weighted"
    return Measured(value=value, definition=words, method="from the spectrum", citation="goodman")


def false_packets(spectrum: Spectrum, delay_range: Any, above: float = 0.05) -> tuple[FalsePacket, ...]:
    """Every secondary maximum of |gamma| up to a delay: revivals, beats of lines, side lobes, ghosts of ripple.

    Parameters
    ----------
    spectrum : Spectrum
    delay_range : Quantity [time or path difference]
        Search from zero to this; the other side is the mirror image.
    above : float
        Least height, between 0 and 1.

    Returns
    -------
    tuple of FalsePacket
        In the order of path difference.

    Raises
    ------
    InputError
        A range or height that cannot be, or, with lines, a range of more than 4 million steps of the spectrum's fastest beat.

    Notes
    -----
    |gamma| is sampled 16 times per period of the fastest beat that the spectrum's extent allows and each maximum is refined. Beyond the
    delay that the continuum's grid resolves (half of one over its step), only lines are searched; without lines the search ends there.

    References
    ----------
    Goodman, Statistical Optics, 2nd ed., sec. 5.1.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import coherence, spectra
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    >>> for packet in coherence.false_packets(light, delay_range=40 * u.um, above=0.1):
    ...     print(packet)
    12.8727 um: contrast 0.2172
    22.1312 um: contrast 0.1284
    """
    if not 0 < above < 1:
        raise InputError(f"above must be between 0 and 1; got {above}")
    reach = as_delay_si(delay_range, "delay_range")
    if np.ndim(reach) != 0 or reach <= 0:
        raise InputError(f"delay_range must be one positive delay; got {delay_range}")
    found: list[FalsePacket] = []
    for delays, contrast in runs(spectrum, float(reach)):
        inner = contrast[1:-1]
        # a sampled maximum lies at most 1 - cos(pi / 16) = 2 % below the true one
        tops = np.flatnonzero((inner > contrast[:-2]) & (inner >= contrast[2:]) & (inner > 0.97 * above)) + 1
        places, heights = _maxima(spectrum, delays[tops], float(delays[1] - delays[0]))
        keep = (heights >= above) & (places <= reach)
        found += [
            FalsePacket(opd=(place * SPEED_OF_LIGHT * u.m).to(u.um), height=float(height))
            for place, height in zip(places[keep], heights[keep], strict=True)
        ]
    return tuple(found)


def _maxima(spectrum: Spectrum, places: FloatArray, step: float) -> tuple[FloatArray, FloatArray]:
    """Refine sampled maxima, all at once: parabolas through three points that close in by a factor of eight a round."""
    for _ in range(4 if places.size else 0):
        before, here, after = (contrast_at(spectrum, places + shift) for shift in (-step, 0.0, step))
        bend = np.minimum(before - 2 * here + after, -1e-300)
        places = places + step * np.clip(0.5 * (before - after) / bend, -1.0, 1.0)
        step /= 8
    return places, contrast_at(spectrum, places) if places.size else places
