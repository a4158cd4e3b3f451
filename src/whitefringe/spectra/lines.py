"""Spectral lines with a closed-form degree of coherence.

Every profile is a Voigt profile: a Gaussian of full width `dG` convolved with a Lorentzian of full width `dL`, either of which
may be zero. Its degree of coherence about the line's own frequency is

    |gamma(tau)| = exp(-pi dL |tau|) exp(-(pi dG tau)^2 / (4 ln 2))

(Goodman, Statistical Optics, sec. 5.1; the product follows from the convolution theorem).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import astropy.units as u
import numpy as np
from scipy.optimize import brentq
from scipy.special import voigt_profile

from ..errors import InputError
from ..units import SPEED_OF_LIGHT, FloatArray, as_quantity, is_length, one_frequency_si, positive_si

FOUR_LN2 = 4.0 * np.log(2.0)

WIDTHS = "a width in wavelength or frequency, for example 10 nm or 5 THz"

LINE_PROFILES = ("monochromatic", "gaussian", "lorentzian", "voigt")
"""Names of the line profiles."""


@dataclass(frozen=True, kw_only=True)
class Line:
    """One spectral line.

    Parameters
    ----------
    wavelength : Quantity [vacuum wavelength or frequency]
        Centre of the line.
    fwhm : Quantity [wavelength or frequency], optional
        Full width at half maximum of a Gaussian or Lorentzian line.
    profile : str, optional
        One of `LINE_PROFILES`. By default ``"gaussian"`` when `fwhm` is given, ``"voigt"`` when the two partial widths are, else
        ``"monochromatic"``.
    strength : float
        Photon rate in the line, on the scale of the other lines and of the continuum's integral.
    gaussian_fwhm, lorentzian_fwhm : Quantity, optional
        The two partial widths of a Voigt line.

    Raises
    ------
    InputError
        An unknown profile, a width that the profile does not take or needs, a strength below zero.

    Examples
    --------
    >>> import astropy.units as u
    >>> line = Line(wavelength=633 * u.nm, fwhm=1 * u.GHz, profile="lorentzian")
    >>> print(f"{abs(line.coherence_si(0.1e-9)):.12f}")
    0.730402691049
    """

    wavelength: u.Quantity
    fwhm: u.Quantity | None = None
    profile: str = ""
    strength: float = 1.0
    gaussian_fwhm: u.Quantity | None = None
    lorentzian_fwhm: u.Quantity | None = None

    def __post_init__(self) -> None:
        partial = self.gaussian_fwhm is not None or self.lorentzian_fwhm is not None
        default = "voigt" if partial else "gaussian" if self.fwhm is not None else "monochromatic"
        object.__setattr__(self, "profile", self.profile or default)
        self._check(partial)
        if not np.isfinite(self.strength) or self.strength < 0:
            raise InputError(f"strength must be zero or more; got {self.strength}")
        _ = self.frequency_si, self.widths_si

    def _check(self, partial: bool) -> None:
        if self.profile not in LINE_PROFILES:
            raise InputError(f"profile must be one of {', '.join(LINE_PROFILES)}; got {self.profile!r}")
        if self.profile == "voigt":
            if self.fwhm is not None or self.gaussian_fwhm is None or self.lorentzian_fwhm is None:
                raise InputError("a voigt line takes gaussian_fwhm and lorentzian_fwhm, and no fwhm")
        elif partial:
            raise InputError(f"gaussian_fwhm and lorentzian_fwhm belong to a voigt line, not to a {self.profile} one")
        elif (self.fwhm is None) != (self.profile == "monochromatic"):
            need = "takes no fwhm" if self.profile == "monochromatic" else "needs fwhm"
            raise InputError(f"a {self.profile} line {need}")

    @cached_property
    def frequency_si(self) -> float:
        """Centre frequency [Hz]."""
        return one_frequency_si(self.wavelength, "wavelength")

    @cached_property
    def widths_si(self) -> tuple[float, float]:
        """Gaussian and Lorentzian full widths at half maximum [Hz]."""
        if self.profile == "gaussian":
            return self._width_si(self.fwhm, "fwhm"), 0.0
        if self.profile == "lorentzian":
            return 0.0, self._width_si(self.fwhm, "fwhm")
        if self.profile == "voigt":
            return (
                self._width_si(self.gaussian_fwhm, "gaussian_fwhm"),
                self._width_si(self.lorentzian_fwhm, "lorentzian_fwhm"),
            )
        return 0.0, 0.0

    def _width_si(self, width: Any, name: str) -> float:
        return width_si(self.frequency_si, width, name)

    @cached_property
    def fwhm_si(self) -> float:
        """Full width at half maximum [Hz] of the profile as it is, to 1e-12 of the width."""
        gauss, lorentz = self.widths_si
        if gauss == 0 or lorentz == 0:
            return gauss + lorentz
        half = 0.5 * float(self._profile_si(0.0))
        # the profile is even, so one crossing is enough; neither part alone is wider than the whole
        reach = gauss + lorentz
        crossing = brentq(lambda offset: float(self._profile_si(offset)) - half, 0.0, reach, xtol=1e-12 * reach)
        return 2.0 * float(crossing)

    def density_si(self, frequency: Any) -> FloatArray:
        """Normalised profile at `frequency` [Hz], in 1/Hz; not defined for a monochromatic line."""
        return self._profile_si(np.asarray(frequency, dtype=float) - self.frequency_si)

    def _profile_si(self, offset: Any) -> FloatArray:
        gauss, lorentz = self.widths_si
        if gauss == 0 and lorentz == 0:
            raise InputError("a monochromatic line has no finite spectral density")
        return np.asarray(voigt_profile(offset, gauss / np.sqrt(2 * FOUR_LN2), lorentz / 2))

    def coherence_si(self, delay: Any) -> Any:
        """Complex degree of coherence of the line alone at `delay` [s]; |gamma(0)| = 1."""
        tau = np.asarray(delay, dtype=float)
        gauss, lorentz = self.widths_si
        envelope = np.exp(-np.pi * lorentz * np.abs(tau) - (np.pi * gauss * tau) ** 2 / FOUR_LN2)
        return envelope * np.exp(-2j * np.pi * self.frequency_si * tau)


def width_si(centre_si: float, width: Any, name: str) -> float:
    """Convert a full width given in wavelength or frequency, about a centre in hertz, to hertz.

    A width in wavelength is converted exactly: ``c/(l0 - dl/2) - c/(l0 + dl/2)``.
    """
    if not is_length(as_quantity(width, name, WIDTHS)):
        return positive_si(width, u.Hz, name, "GHz")
    low, high = edges_of(SPEED_OF_LIGHT / centre_si, positive_si(width, u.m, name, "nm"), name)
    return SPEED_OF_LIGHT / low - SPEED_OF_LIGHT / high


def edges_of(centre: float, width: float, name: str) -> tuple[float, float]:
    """Return centre -+ width/2, both of which must be above zero."""
    if width >= 2 * centre:
        raise InputError(f"{name} must be less than twice the centre, or the band reaches zero; got {width / centre:.3g} of it")
    return centre - width / 2, centre + width / 2
