"""The complex degree of self-coherence of a spectrum.

gamma(tau) = int S(nu) exp(-2 pi i nu tau) dnu / int S(nu) dnu

(Goodman, Statistical Optics, sec. 5.1; Mandel & Wolf, sec. 4.3), with fields going as exp(-2 pi i nu t). |gamma| is the contrast
of the fringes of two equal arms, -arg(gamma) / 2 pi the number of fringes.
"""

from __future__ import annotations

import warnings
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.signal import zoom_fft
from scipy.special import spherical_jn

from ..errors import InputError, ResolutionWarning
from ..spectra import Spectrum
from ..units import FloatArray, as_delay_si

ComplexArray = NDArray[np.complex128]

_FEW = 24
"""Up to this many delays are summed directly: the chirp-z transform would cost more."""

_BLOCK = 1024
"""Delays per block of the direct sum: bounds its memory."""


def self_coherence(spectrum: Spectrum, delay: Any, *, weight: str | None = None) -> ComplexArray:
    """Complex degree of self-coherence.

    gamma(tau) = int S(nu) exp(-2 pi i nu tau) dnu / int S dnu

    Parameters
    ----------
    spectrum : Spectrum
    delay : Quantity [time, or path difference], any shape
    weight : str, optional
        ``"photon"`` or ``"power"``; by default as the spectrum is. ``"power"`` multiplies S by nu first, which gives the classical
        degree of coherence.

    Returns
    -------
    ndarray of complex, same shape as `delay`

    Raises
    ------
    UnitsError
        `delay` is a bare number, or neither a time nor a length.

    Warns
    -----
    ResolutionWarning
        A delay lies beyond half the inverse grid step, where structure finer than the grid would matter.

    Notes
    -----
    Equally spaced delays go through a chirp-z transform, others through a direct sum in blocks; the two agree to 1e-9. Within a
    cell the spectrum is linear, so the transform of each cell is closed (spherical Bessel functions j0 and j1 of pi times step
    times tau). Lines contribute their closed forms at any delay.

    References
    ----------
    Goodman, Statistical Optics, 2nd ed., sec. 5.1; Rabiner, Schafer & Rader 1969, doi:10.1109/TAU.1969.1162034.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import coherence, spectra
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    >>> gamma = coherence.self_coherence(light, [0, 4.5, 9] * u.um)
    >>> print(abs(gamma).round(4))
    [1.     0.6366 0.    ]
    """
    if weight == "power":
        spectrum = spectrum.power_weighted()
    elif weight == "photon" and spectrum.weight != "photon":
        raise InputError("this spectrum is already weighted by power; build it again for photon weights")
    elif weight not in (None, "photon"):
        raise InputError(f'weight must be "photon" or "power"; got {weight!r}')
    return self_coherence_si(spectrum, as_delay_si(delay))


def fringe_contrast(spectrum: Spectrum, delay: Any) -> FloatArray:
    """Contrast |gamma| of the fringes of two equal arms; arguments as for `self_coherence`."""
    return np.asarray(np.abs(self_coherence(spectrum, delay)))


def self_coherence_si(spectrum: Spectrum, tau: Any) -> ComplexArray:
    """Twin of `self_coherence`: delays in seconds, as the spectrum is weighted."""
    delays = np.asarray(tau, dtype=float)
    flat = delays.ravel()
    total: ComplexArray = np.zeros(flat.shape, dtype=complex)
    if spectrum.density.size and flat.size:
        total += _continuum(spectrum, flat)
    for line in spectrum.lines:
        total += line.strength * line.coherence_si(flat)
    return np.asarray(total / spectrum.total_rate).reshape(delays.shape)


def _continuum(spectrum: Spectrum, tau: FloatArray) -> ComplexArray:
    """Transform of the piecewise linear continuum: sum over cells of h exp(-2 pi i nu_k tau) [v_k j0(x) - i (g_k/2) j1(x)].

    v_k mean density, g_k its change across the cell, h cell width, x = pi h tau (plane-wave expansion of the kernel on a cell).
    """
    density, slopes, step = spectrum.density, spectrum.slopes, spectrum.step_si
    phase = step * tau
    _warn_if_unresolved(phase)
    centre = spectrum.start_si + 0.5 * density.size * step
    turn = np.exp(-2j * np.pi * phase)
    to_middle = np.exp(1j * np.pi * (density.size - 1) * phase)
    even = sum_of_turns(density, phase) * to_middle
    # the central differences of all inner cells follow from the same sum; only the ends need their own terms
    if spectrum.slopes_are_central:
        odd = 0.5 * (np.conj(turn) - turn) * even + _end_terms(density, slopes, turn, to_middle)
    else:
        odd = sum_of_turns(slopes, phase) * to_middle
    x = np.pi * phase
    cell = even * spherical_jn(0, np.abs(x)) - 0.5j * odd * np.sign(x) * spherical_jn(1, np.abs(x))
    return np.asarray(step * np.exp(-2j * np.pi * centre * tau) * cell)


def _end_terms(density: FloatArray, slopes: FloatArray, turn: ComplexArray, to_middle: ComplexArray) -> ComplexArray:
    """Slopes at the two ends less what central differences of the zero-padded density give there and one cell beyond."""
    first = slopes[0] - 0.5 * density[1] - 0.5 * density[0] * np.conj(turn)
    last = slopes[-1] + 0.5 * density[-2] + 0.5 * density[-1] * turn
    return np.asarray(first * to_middle + last * np.conj(to_middle))


def _warn_if_unresolved(phase: FloatArray) -> None:
    reach = float(np.max(np.abs(phase)))
    if reach > 0.5:
        warnings.warn(
            f"the longest delay is {reach / 0.5:.3g} times what this spectral grid resolves (half of one over its step); structure "
            "finer than the grid is not in the result: ask for more samples, or add lines as lines",
            ResolutionWarning,
            stacklevel=5,
        )


def sum_of_turns(values: FloatArray | ComplexArray, phase: FloatArray) -> ComplexArray:
    """Sum over k of values[k] exp(-2 pi i k phase), by the cheaper of two ways."""
    if phase.size > _FEW and _is_uniform(phase, values.size):
        return _chirp_sum(values, float(phase[0]), float(phase[-1]), phase.size)
    return _block_sum(values, phase)


def _is_uniform(phase: FloatArray, cells: int) -> bool:
    """Tell whether the delays are equally spaced to 1e-11 of a turn across the whole band."""
    ideal = np.linspace(phase[0], phase[-1], phase.size)
    return bool(np.max(np.abs(phase - ideal)) * cells < 1e-11) and phase[0] != phase[-1]


def _chirp_sum(values: FloatArray | ComplexArray, first: float, last: float, count: int) -> ComplexArray:
    """Chirp-z transform (scipy) at `count` equally spaced phases."""
    return np.asarray(zoom_fft(values, [first, last], m=count, fs=1.0, endpoint=True))


def _block_sum(values: FloatArray | ComplexArray, phase: FloatArray) -> ComplexArray:
    """Direct sum, with k = a * width + b so that only 2 sqrt(n) exponentials per delay are needed."""
    width = int(np.ceil(np.sqrt(values.size)))
    rows = -(-values.size // width)
    table = np.pad(values, (0, rows * width - values.size)).reshape(rows, width)
    result = np.empty(phase.size, dtype=complex)
    for begin in range(0, phase.size, _BLOCK):
        block = phase[begin : begin + _BLOCK]
        fine = np.exp(-2j * np.pi * np.arange(width)[:, None] * block)
        coarse = np.exp(-2j * np.pi * width * np.arange(rows)[:, None] * block)
        # for a few delays the threads of a matrix product cost more than they save
        inner = table @ fine if block.size > _FEW else np.einsum("ab,bt->at", table, fine)
        result[begin : begin + _BLOCK] = np.einsum("at,at->t", coarse, inner)
    return result
