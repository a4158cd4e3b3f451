"""Coherence time and length, always with their definition.

Five definitions are in use, and they differ by factors; `COHERENCE_DEFINITIONS` lists them. ``bandwidth`` is the default and, like every
other, is printed with its number.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import astropy.units as u
import numpy as np
from scipy.special import voigt_profile

from ..errors import InputError, UndefinedWidthError
from ..results import Measured
from ..spectra import Line, Spectrum
from ..spectra.lines import FOUR_LN2
from ..spectra.measures import half_maximum_edges_si
from ..units import SPEED_OF_LIGHT
from ._search import NULL_DEPTH, first_below, first_null

DEFAULT_DEFINITION = "bandwidth"


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


def _half(spectrum: Spectrum) -> float:
    return 2.0 * first_below(spectrum, 0.5)


def _e_fold(spectrum: Spectrum) -> float:
    return first_below(spectrum, float(np.exp(-1.0)))


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
        time_si=first_null,
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
    words = f"full width of the packet at half its greatest contrast, {spectrum.weight}-weighted"
    return replace(coherence_length(spectrum, "half"), definition=words)
