"""Numbers that describe a spectrum. Each says how it is defined; all are weighted as the spectrum is (photons by default)."""

from __future__ import annotations

import astropy.units as u
import numpy as np

from ..errors import InputError, UndefinedWidthError
from ..results import Measured
from ..units import SPEED_OF_LIGHT
from .spectrum import Spectrum


def mean_frequency_si(spectrum: Spectrum) -> float:
    """Return int nu S dnu / int S dnu [Hz]."""
    step = spectrum.step_si
    # the slope inside a cell moves its centre of gravity by slope * step / 12
    first = float(np.sum(spectrum.density * spectrum.frequency_si) + np.sum(spectrum.slopes) * step / 12) * step
    lines = float(sum(line.strength * line.frequency_si for line in spectrum.lines))
    return ((first if spectrum.density.size else 0.0) + lines) / spectrum.total_rate


def mean_frequency(spectrum: Spectrum) -> Measured:
    """Mean frequency: int nu S(nu) dnu / int S(nu) dnu, lines included.

    References
    ----------
    Mandel & Wolf, sec. 4.3.3 (first moment of the spectrum).
    """
    return Measured(
        value=mean_frequency_si(spectrum) * u.Hz, definition=f"mean frequency, {spectrum.weight}-weighted", method="sum over cells"
    )


def mean_wavelength(spectrum: Spectrum) -> Measured:
    """Vacuum wavelength of the mean frequency, c / mean frequency: the fringe period at zero path difference.

    References
    ----------
    Goodman, Statistical Optics, 2nd ed., sec. 5.1: the phase of gamma turns at the mean frequency at zero delay.
    """
    value = (SPEED_OF_LIGHT / mean_frequency_si(spectrum) * u.m).to(u.um)
    return Measured(value=value, definition=f"c / mean frequency, {spectrum.weight}-weighted", method="sum over cells")


def _mean_of(spectrum: Spectrum, power: int) -> float:
    """Photon-weighted mean of nu^power: each cell by three Gauss-Legendre nodes of its linear piece, lines at their centres."""
    nodes, weights = np.polynomial.legendre.leggauss(3)
    total = sum(line.strength * line.frequency_si**power for line in spectrum.lines)
    if spectrum.density.size:
        for node, weight in zip(nodes, weights, strict=True):
            rate = spectrum.density + 0.5 * node * spectrum.slopes
            frequency = spectrum.frequency_si + 0.5 * node * spectrum.step_si
            total += 0.5 * weight * spectrum.step_si * float(np.sum(rate * frequency**power))
    return float(total) / spectrum.total_rate


def effective_wavelength(spectrum: Spectrum) -> Measured:
    """Effective wavelength: the mean vacuum wavelength of the counted photons, int lambda N dlambda / int N dlambda.

    With photon rate per wavelength N = lambda F R for a source of energy flux F and a photon response R this is
    int lambda^2 F R dlambda / int lambda F R dlambda.

    References
    ----------
    Tokunaga & Vacca, PASP 117, 421 (2005), appendix, doi:10.1086/429382.
    """
    value = SPEED_OF_LIGHT * _mean_of(spectrum, -1) * u.m
    words = f"effective wavelength: mean wavelength, {spectrum.weight}-weighted"
    return Measured(value=value.to(u.um), definition=words, method="sum over cells", citation="tokunaga-vacca")


def pivot_wavelength(spectrum: Spectrum) -> Measured:
    """Pivot wavelength: sqrt(<lambda> / <1 / lambda>) over the counted photons.

    For a source of the same photon rate at every wavelength (``Flat(per="wavelength")``) and a photon response R this is the filter's
    own sqrt(int lambda R dlambda / int (R / lambda) dlambda).

    References
    ----------
    Tokunaga & Vacca, PASP 117, 421 (2005), appendix, doi:10.1086/429382.
    """
    value = SPEED_OF_LIGHT * np.sqrt(_mean_of(spectrum, -1) / _mean_of(spectrum, 1)) * u.m
    words = f"pivot wavelength: root of mean wavelength over mean inverse wavelength, {spectrum.weight}-weighted"
    return Measured(value=value.to(u.um), definition=words, method="sum over cells", citation="tokunaga-vacca")


def rms_width(spectrum: Spectrum) -> Measured:
    """Root-mean-square width in frequency: sqrt(<nu^2> - <nu>^2); the curvature of |gamma| at zero delay is -(2 pi rms)^2.

    References
    ----------
    Mandel & Wolf, sec. 4.3.3; the relation to |gamma| is the second derivative of the Fourier integral.

    Raises
    ------
    UndefinedWidthError
        A Lorentzian or Voigt line has no mean square width.
    """
    if any(line.widths_si[1] > 0 for line in spectrum.lines):
        raise UndefinedWidthError("a line with Lorentzian wings has no root-mean-square width; ask for the full width instead")
    mean = mean_frequency_si(spectrum)
    inside = spectrum.step_si * np.sum(spectrum.density * ((spectrum.frequency_si - mean) ** 2 + spectrum.step_si**2 / 12))
    inside += spectrum.step_si**2 / 6 * np.sum(spectrum.slopes * (spectrum.frequency_si - mean))
    lines = sum(line.strength * ((line.frequency_si - mean) ** 2 + line.widths_si[0] ** 2 / (8 * np.log(2))) for line in spectrum.lines)
    value = np.sqrt((float(inside) + lines) / spectrum.total_rate) * u.Hz
    words = f"root-mean-square width, {spectrum.weight}-weighted"
    return Measured(value=value.to(u.THz), definition=words, method="sum over cells", citation="mandel-wolf")


def half_maximum_edges_si(spectrum: Spectrum) -> tuple[float, float]:
    """Outermost frequencies [Hz] at which the density is half its maximum.

    Raises
    ------
    UndefinedWidthError
        Light of several lines, of a monochromatic line, or of lines on a continuum.
    """
    if spectrum.lines:
        return _edges_of_a_line(spectrum)
    density, step = spectrum.density, spectrum.step_si
    half = 0.5 * float(np.max(density))
    above = np.flatnonzero(density >= half)
    first, last = int(above[0]), int(above[-1])
    low, high = spectrum.start_si, spectrum.start_si + step * density.size
    if first > 0:
        before, after = density[first - 1], density[first]
        low = float(spectrum.frequency_si[first] - step * (after - half) / (after - before))
    if last < density.size - 1:
        before, after = density[last], density[last + 1]
        high = float(spectrum.frequency_si[last] + step * (before - half) / (before - after))
    return low, high


def _edges_of_a_line(spectrum: Spectrum) -> tuple[float, float]:
    if spectrum.density.size or len(spectrum.lines) > 1:
        raise UndefinedWidthError(
            "a full width at half maximum has no meaning for several lines, or lines on a continuum; ask for the coherence length "
            'with definition="power" or "half" instead'
        )
    line = spectrum.lines[0]
    if line.fwhm_si == 0:
        raise UndefinedWidthError("a monochromatic line has no width, and its coherence length has no end")
    return line.frequency_si - line.fwhm_si / 2, line.frequency_si + line.fwhm_si / 2


def full_width_half_maximum(spectrum: Spectrum, axis: str = "frequency") -> Measured:
    """Full width at half maximum, between the outermost half-maximum points.

    Parameters
    ----------
    spectrum : Spectrum
    axis : str
        ``"frequency"``, or ``"wavelength"``: the distance of the same two points in vacuum wavelength. The density itself stays
        one per hertz, so for a filter's own width in wavelength put it before ``Flat()``, not ``Flat(per="wavelength")``.

    References
    ----------
    Born & Wolf, 7th ed., sec. 7.5.8; the outermost points are common practice for curves with structure.
    """
    low, high = half_maximum_edges_si(spectrum)
    if axis == "wavelength":
        value = (SPEED_OF_LIGHT / low - SPEED_OF_LIGHT / high) * u.m
        return Measured(value=value.to(u.nm), definition="full width at half maximum, in wavelength", method="linear crossing")
    if axis != "frequency":
        raise InputError(f'axis must be "frequency" or "wavelength"; got {axis!r}')
    return Measured(value=((high - low) * u.Hz).to(u.THz), definition="full width at half maximum", method="linear crossing")


def equivalent_width(spectrum: Spectrum) -> Measured:
    """Equivalent width: int S dnu / max S, of the continuum.

    References
    ----------
    Tokunaga & Vacca, PASP 117, 421 (2005), appendix, there per wavelength; Bracewell, 3rd ed., ch. 8.
    """
    if not spectrum.density.size:
        raise UndefinedWidthError("light of lines only has no equivalent width: there is no continuum")
    value = spectrum.continuum_rate / float(np.max(spectrum.density)) * u.Hz
    return Measured(
        value=value.to(u.THz),
        definition="equivalent width: integral over maximum",
        method="sum over cells",
        citation="tokunaga-vacca",
    )


def resolving_power(spectrum: Spectrum) -> Measured:
    """Resolving power: mean frequency over full width at half maximum.

    References
    ----------
    Born & Wolf, 7th ed., sec. 7.6.3, with the width of the band in the place of the least difference.
    """
    low, high = half_maximum_edges_si(spectrum)
    value = mean_frequency_si(spectrum) / (high - low) * u.dimensionless_unscaled
    return Measured(value=value, definition="resolving power: mean frequency / full width at half maximum", method="ratio")
