"""Coherence time and length, always with their definition.

Five definitions are in use, and they differ by factors; `COHERENCE_DEFINITIONS` lists them. ``bandwidth`` is the default and, like every
other, is printed with its number.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import astropy.units as u
import numpy as np
from scipy.optimize import minimize_scalar
from scipy.special import voigt_profile

from ..errors import InputError, UndefinedWidthError
from ..results import Measured
from ..spectra import Line, Spectrum
from ..spectra.lines import FOUR_LN2
from ..spectra.measures import half_maximum_edges_si
from ..units import SPEED_OF_LIGHT, FloatArray
from .degree import self_coherence_si

DEFAULT_DEFINITION = "bandwidth"

NULL_DEPTH = 0.1
"""A minimum of |gamma| counts as a null when it lies below this."""

FADED = 1e-6
"""Below this, what is left of |gamma| is rounding and holds no nulls."""


@dataclass(frozen=True, kw_only=True)
class CoherenceDefinition:
    """One meaning of "coherence time": its name, its words, its function of a spectrum [s] and its source."""

    name: str
    words: str
    time_si: Callable[[Spectrum], float]
    citation: str


def _bandwidth(spectrum: Spectrum) -> float:
    low, high = half_maximum_edges_si(spectrum)
    return 1.0 / (high - low)


def _power(spectrum: Spectrum) -> float:
    """Integral over all delays of |gamma|^2, by Parseval's theorem int S^2 dnu / (int S dnu)^2."""
    lines = [line for line in spectrum.lines if line.strength > 0]
    squares = spectrum.step_si * float(np.sum(spectrum.density**2) + np.sum(spectrum.slopes**2) / 12)
    for line in lines:
        squares += 2 * line.strength * _overlap_with_continuum(line, spectrum)
        squares += sum(line.strength * other.strength * _overlap(line, other) for other in lines)
    return squares / spectrum.total_rate**2


def _overlap(line: Line, other: Line) -> float:
    """Integral of the product of two normalised lines: a Voigt profile of the joint widths at their distance."""
    gauss = float(np.hypot(line.widths_si[0], other.widths_si[0]))
    lorentz = line.widths_si[1] + other.widths_si[1]
    if gauss == 0 and lorentz == 0:
        if line.frequency_si == other.frequency_si:
            raise UndefinedWidthError("a monochromatic line never loses coherence: its integral of |gamma|^2 has no end")
        return 0.0
    offset = line.frequency_si - other.frequency_si
    return float(voigt_profile(offset, gauss / np.sqrt(2 * FOUR_LN2), lorentz / 2))


def _overlap_with_continuum(line: Line, spectrum: Spectrum) -> float:
    """Integral of line times continuum: by cells where the line is wider than five of them, else the density at its centre."""
    if not spectrum.density.size:
        return 0.0
    if line.fwhm_si > 5 * spectrum.step_si:
        return float(np.sum(line.density_si(spectrum.frequency_si) * spectrum.density) * spectrum.step_si)
    return float(spectrum.density_si(np.asarray(line.frequency_si)))


def _contrast(spectrum: Spectrum, delay: float) -> float:
    return float(np.abs(self_coherence_si(spectrum, np.array([delay]))[0]))


def _scan(spectrum: Spectrum) -> FloatArray:
    """Delays [s] from zero out, fine enough for the fastest change of |gamma|, as far as it may stay high."""
    if not spectrum.density.size and all(line.fwhm_si == 0 for line in spectrum.lines) and len(spectrum.lines) == 1:
        raise UndefinedWidthError("a monochromatic line never loses coherence")
    widths = [line.fwhm_si for line in spectrum.lines if line.strength > 0]
    low, high = spectrum.extent_si
    fast = high - low + max(widths, default=0.0)
    slow = min([width for width in widths if width > 0], default=fast)
    first = np.linspace(0, 64 / fast, 1025)
    if not widths or slow >= fast / 4:
        return first
    return np.concatenate([first, np.linspace(64 / fast, max(4 / slow, 65 / fast), 8192)[1:]])


def _first_below(spectrum: Spectrum, level: float) -> float:
    """Smallest delay [s] at which |gamma| has fallen to `level`."""
    delays = _scan(spectrum)
    contrast = np.abs(self_coherence_si(spectrum, delays))
    below = np.flatnonzero(contrast <= level)
    if below.size == 0:
        raise UndefinedWidthError(
            f"the contrast does not fall to {level:.3g} within {delays[-1] * SPEED_OF_LIGHT:.3g} m of path difference: "
            'ask for definition="power"'
        )
    last = int(below[0])
    return _crossing(spectrum, level, float(delays[last - 1]), float(delays[last]))


def _crossing(spectrum: Spectrum, level: float, low: float, high: float) -> float:
    """Delay in the bracket at which |gamma| falls through `level`: three rounds of 33 equally spaced delays, then a straight line."""
    for _ in range(3):
        delays = np.linspace(low, high, 33)
        contrast = np.abs(self_coherence_si(spectrum, delays))
        first = int(np.flatnonzero(contrast[1:] <= level)[0]) if np.any(contrast[1:] <= level) else 31
        low, high = float(delays[first]), float(delays[first + 1])
        before, after = float(contrast[first]), float(contrast[first + 1])
    if before == after:
        return low
    return low + (high - low) * min(max((before - level) / (before - after), 0.0), 1.0)


def _half(spectrum: Spectrum) -> float:
    return 2.0 * _first_below(spectrum, 0.5)


def _e_fold(spectrum: Spectrum) -> float:
    return _first_below(spectrum, float(np.exp(-1.0)))


def _first_null(spectrum: Spectrum) -> float:
    delays = _scan(spectrum)
    contrast = np.abs(self_coherence_si(spectrum, delays))
    inner = contrast[1:-1]
    dips = np.flatnonzero((inner <= contrast[:-2]) & (inner < contrast[2:])) + 1
    for dip in dips:
        if np.max(contrast[dip:]) < FADED:
            break
        low, high = delays[dip - 1], delays[dip + 1]
        found = minimize_scalar(
            lambda delay: _contrast(spectrum, delay), bounds=(low, high), method="bounded", options={"xatol": 1e-9 * high}
        )
        if found.fun < NULL_DEPTH:
            return float(found.x)
    raise UndefinedWidthError(f"|gamma| of this light has no null: no minimum below {NULL_DEPTH} before it fades; use another definition")


COHERENCE_DEFINITIONS: tuple[CoherenceDefinition, ...] = (
    CoherenceDefinition(
        name="bandwidth", words="1 over the full width at half maximum in frequency", time_si=_bandwidth, citation="born-wolf"
    ),
    CoherenceDefinition(name="power", words="integral of |gamma|^2 over all delays", time_si=_power, citation="mandel-wolf"),
    CoherenceDefinition(name="half", words="full width of |gamma| at one half", time_si=_half, citation="goodman"),
    CoherenceDefinition(name="e-fold", words="delay from zero at which |gamma| first falls to 1/e", time_si=_e_fold, citation="goodman"),
    CoherenceDefinition(
        name="first-null",
        words=f"delay from zero of the first minimum of |gamma| below {NULL_DEPTH}",
        time_si=_first_null,
        citation="goodman",
    ),
)
"""The family of definitions, the default first."""


def _definition(name: str) -> CoherenceDefinition:
    for item in COHERENCE_DEFINITIONS:
        if item.name == name:
            return item
    names = ", ".join(item.name for item in COHERENCE_DEFINITIONS)
    raise InputError(f"definition must be one of {names}; got {name!r}")


def coherence_time(spectrum: Spectrum, definition: str = DEFAULT_DEFINITION) -> Measured:
    """Coherence time by a named definition.

    Parameters
    ----------
    spectrum : Spectrum
    definition : str
        Name of one of `COHERENCE_DEFINITIONS`: ``bandwidth`` 1/dnu; ``power`` int |gamma|^2 dtau; ``half`` full width of |gamma|
        at one half; ``e-fold`` and ``first-null`` measured from zero delay.

    Returns
    -------
    Measured [fs]
        With the definition in words.

    Raises
    ------
    InputError
        Unknown definition.
    UndefinedWidthError
        The definition has no meaning for this light.

    References
    ----------
    Goodman, Statistical Optics, sec. 5.1; Mandel & Wolf sec. 4.3; Born & Wolf sec. 7.5.8.
    """
    item = _definition(definition)
    value = (item.time_si(spectrum) * u.s).to(u.fs)
    words = f"{item.name}: {item.words}, {spectrum.weight}-weighted"
    return Measured(value=value, definition=words, method="from the spectrum", citation=item.citation)


def coherence_length(spectrum: Spectrum, definition: str = DEFAULT_DEFINITION) -> Measured:
    """Coherence length: the speed of light times `coherence_time`, by the same definitions.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import coherence, spectra
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    >>> print(coherence.coherence_length(light))
    9 um (bandwidth: 1 over the full width at half maximum in frequency, times c, photon-weighted)
    """
    item = _definition(definition)
    value = (item.time_si(spectrum) * SPEED_OF_LIGHT * u.m).to(u.um)
    words = f"{item.name}: {item.words}, times c, {spectrum.weight}-weighted"
    return Measured(value=value, definition=words, method="from the spectrum", citation=item.citation)


def packet_width(spectrum: Spectrum) -> Measured:
    """Full width of the fringe packet at half contrast, in path difference: the ``half`` coherence length."""
    return replace(coherence_length(spectrum, "half"), definition="full width of the packet at half its greatest contrast")
