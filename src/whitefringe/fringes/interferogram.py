"""The signal of a two-beam interferometer against path difference."""

from __future__ import annotations

from typing import Any

import astropy.units as u
import numpy as np

from ..coherence import self_coherence_si
from ..errors import InputError
from ..spectra import Spectrum
from ..units import SPEED_OF_LIGHT, FloatArray, as_si


def two_beam_signal(light: Spectrum, opd: Any, *, opd_centre: Any = 0 * u.m, contrast: float = 1.0, phase: Any = 0 * u.rad) -> FloatArray:
    """Signal over its mean: 1 + C Re[gamma((x - x0) / c) exp(-i phi)] for two arms of equal dispersion.

    Parameters
    ----------
    light : Spectrum
    opd : Quantity [length], any shape
        Path difference x, second arm minus first.
    opd_centre : Quantity [length]
        Path difference x0 of the packet.
    contrast : float
        Contrast C at the packet's centre, 0 to 1: what the bench leaves of an ideal one.
    phase : Quantity [angle]
        Achromatic phase phi; pi for the complementary output of a beam splitter without loss.

    Returns
    -------
    ndarray, shape of `opd`

    References
    ----------
    Goodman, Statistical Optics, 2nd ed., sec. 5.1 (interferogram of a Michelson interferometer).

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import fringes, spectra
    >>> light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))
    >>> print(fringes.two_beam_signal(light, [0, 9] * u.um, contrast=0.8).round(6))
    [1.8 1. ]
    """
    if not 0 <= contrast <= 1:
        raise InputError(f"contrast must be from 0 to 1; got {contrast}")
    x, x0 = as_si(opd, u.m, "opd", "um"), as_si(opd_centre, u.m, "opd_centre", "um")
    turn = np.exp(-1j * as_si(phase, u.rad, "phase"))
    gamma = self_coherence_si(light, (np.asarray(x) - x0) / SPEED_OF_LIGHT)
    return np.asarray(1.0 + contrast * (gamma * turn).real)
