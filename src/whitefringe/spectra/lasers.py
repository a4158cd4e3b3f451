"""Lasers of one mode and of many: lines only, so that any delay costs nothing.

Nothing here says whether a beam is safe; `LASER_CAUTION` says who does.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..parameters import parameter
from ..units import SPEED_OF_LIGHT, FloatArray, number, one_frequency_si, positive_si, whole
from ._source import LineSource
from .lines import FOUR_LN2, Line, width_si

LASER_CAUTION = (
    "Laser: the class is on the maker's label (IEC 60825-1), the local laser safety officer decides, and infrared beams give no "
    "warning to the eye; nothing is classified here."
)
"""The one line that is shown wherever a laser is chosen."""

LASER_PROFILES = ("lorentzian", "gaussian", "voigt")
"""Line profiles of a single-mode laser."""

FAINTEST_MODE = 1e-6
"""Modes below this fraction of the gain's peak are left out."""

MOST_MODES = 2000
"""A laser of more modes is refused: it would be slow, and a continuum in all but name."""


@dataclass(frozen=True, kw_only=True)
class SingleModeLaser(LineSource):
    """A laser of one mode: one line, with photon rate 1.

    Parameters
    ----------
    wavelength : Quantity [vacuum wavelength or frequency]
    linewidth : Quantity [wavelength or frequency]
        Full width at half maximum; of a Voigt line, of its Lorentzian part.
    profile : str
        ``"lorentzian"`` (phase noise that is white in frequency, the default), ``"gaussian"`` (slow jitter of the frequency) or
        ``"voigt"`` (both).
    jitter : Quantity [wavelength or frequency], optional
        Full width at half maximum of a Voigt line's Gaussian part.

    Attributes
    ----------
    caution : str
        Who decides about the beam's safety, in one line.

    Raises
    ------
    InputError, UnitsError
        An unknown profile; a width that is not above zero, or that the profile does not take.

    Notes
    -----
    |gamma(tau)| = exp(-pi dnu |tau|) for a Lorentzian of full width dnu. One line is as good as monochromatic, so weighting by
    photons and by power give the same.

    References
    ----------
    Goodman, Statistical Optics, 2nd ed., sec. 5.1.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import coherence, spectra
    >>> laser = spectra.SingleModeLaser(wavelength=633 * u.nm, linewidth=1 * u.MHz)
    >>> print(coherence.fringe_contrast(spectra.detected(laser), 30 * u.m).round(4))
    0.7302
    """

    shape: ClassVar[str] = "single-mode-laser"
    caution: ClassVar[str] = LASER_CAUTION
    wavelength: u.Quantity = parameter("wavelength", u.um, low=0.4, high=2.5, step=0.001, start=0.633)
    linewidth: u.Quantity = parameter("line width (FWHM)", u.MHz, low=0.1, high=1000.0, step=0.1, start=1.0)
    profile: str = "lorentzian"
    jitter: u.Quantity | None = None

    def __post_init__(self) -> None:
        if self.profile not in LASER_PROFILES:
            raise InputError(f"profile must be one of {', '.join(LASER_PROFILES)}; got {self.profile!r}")
        if (self.profile == "voigt") != (self.jitter is not None):
            raise InputError('jitter, the Gaussian part of the width, goes with profile="voigt", and only with it')
        width_si(one_frequency_si(self.wavelength, "wavelength"), self.linewidth, "linewidth")
        if self.jitter is not None:
            width_si(one_frequency_si(self.wavelength, "wavelength"), self.jitter, "jitter")

    @cached_property
    def lines(self) -> tuple[Line, ...]:
        """The one line."""
        if self.profile == "voigt":
            return (Line(wavelength=self.wavelength, lorentzian_fwhm=self.linewidth, gaussian_fwhm=self.jitter),)
        return (Line(wavelength=self.wavelength, fwhm=self.linewidth, profile=self.profile),)


@dataclass(frozen=True, kw_only=True)
class MultimodeLaser(LineSource):
    """A laser of several axial modes: its fringes come back at every multiple of twice the cavity length.

    Modes stand at nu_k = nu0 + k c / (2 n L) with photon rates exp(-4 ln2 ((nu_k - nu0)/G)^2), nu0 the centre of the gain, G its
    full width, L the cavity's length and n its index.

    Parameters
    ----------
    wavelength : Quantity [vacuum wavelength or frequency]
        Centre of the gain, where one mode is taken to stand; with an even number of modes, two stand beside it.
    cavity_length : Quantity [length]
        Distance of the cavity's mirrors.
    gain_fwhm : Quantity [wavelength or frequency]
        Full width at half maximum of the envelope of the modes' photon rates.
    modes : int, optional
        At most so many modes, those nearest to the centre; by default all above 1e-6 of the central one.
    linewidth : Quantity [wavelength or frequency], optional
        Full width at half maximum of every mode, a Lorentzian; monochromatic modes by default.
    index : float
        Group index of what fills the cavity, at least 1.

    Attributes
    ----------
    spacing : Quantity [frequency]
        Distance of the modes, c / (2 n L).
    caution : str
        Who decides about the beam's safety, in one line.

    Raises
    ------
    InputError, UnitsError
        A length or width that is not above zero, an index below 1, no mode, or more than 2000 modes.

    Notes
    -----
    At path differences of multiples m of 2 n L all modes are in step again: |gamma| = exp(-pi dnu 2 n L |m| / c) there, dnu the
    `linewidth`. A `linewidth` moves the maxima toward zero by 2 ln2 c dnu / (pi G^2), which is far less than their width unless it
    comes near the spacing. Weighting by power instead of photons changes |gamma| by the square of G/nu0 only. A real laser's modes
    need not follow the gain.

    References
    ----------
    Siegman, Lasers, ch. 11 (axial modes); the sum over modes is derived.

    Examples
    --------
    >>> import astropy.units as u
    >>> from whitefringe import coherence, spectra
    >>> laser = spectra.MultimodeLaser(wavelength=633 * u.nm, cavity_length=15 * u.cm, gain_fwhm=1.5 * u.GHz)
    >>> print(coherence.fringe_contrast(spectra.detected(laser), [0, 15, 30] * u.cm).round(3))
    [1.    0.269 1.   ]
    """

    shape: ClassVar[str] = "multimode-laser"
    caution: ClassVar[str] = LASER_CAUTION
    wavelength: u.Quantity = parameter("wavelength", u.um, low=0.4, high=2.5, step=0.001, start=0.633)
    cavity_length: u.Quantity = parameter("cavity length", u.cm, low=1.0, high=100.0, step=0.5, start=15.0)
    gain_fwhm: u.Quantity = parameter("gain width (FWHM)", u.GHz, low=0.1, high=10.0, step=0.1, start=1.5)
    modes: int | None = None
    linewidth: u.Quantity | None = None
    index: float = 1.0

    def __post_init__(self) -> None:
        number(self.index, "index", low=1)
        if self.modes is not None:
            whole(self.modes, "modes", low=1, high=MOST_MODES)
        frequency = one_frequency_si(self.wavelength, "wavelength")
        if self.linewidth is not None:
            width_si(frequency, self.linewidth, "linewidth")
        orders = self._orders()
        if orders.size > MOST_MODES:
            raise InputError(
                f"a cavity of {self.cavity_length} has more than {MOST_MODES} modes above {FAINTEST_MODE:g} of the central one in a gain "
                f"of {self.gain_fwhm}; limit them with modes=, or use spectra.Diode, which has no gaps"
            )
        if frequency + orders[0] * self._spacing_si <= 0:
            raise InputError("the modes reach zero frequency; gain_fwhm is too wide for this wavelength")

    @cached_property
    def _spacing_si(self) -> float:
        return SPEED_OF_LIGHT / (2 * self.index * positive_si(self.cavity_length, u.m, "cavity_length", "cm"))

    @property
    def spacing(self) -> u.Quantity:
        """Distance of the modes: c / (2 n L)."""
        return (self._spacing_si * u.Hz).to(u.MHz)

    @cached_property
    def _steps(self) -> float:
        """Full width of the gain over the distance of the modes."""
        return width_si(one_frequency_si(self.wavelength, "wavelength"), self.gain_fwhm, "gain_fwhm") / self._spacing_si

    def _orders(self) -> FloatArray:
        """Distances of the modes from the centre of the gain, in units of their spacing."""
        reach = self._steps * np.sqrt(-np.log(FAINTEST_MODE) / FOUR_LN2)
        natural = 2 * int(min(reach, MOST_MODES)) + 1
        count = natural if self.modes is None else int(self.modes)
        if count > natural:  # an odd number of modes stays odd, an even one even
            count = natural + (count - natural) % 2
        orders = np.arange(count) - (count - 1) / 2
        return np.asarray(orders[np.abs(orders) <= max(reach, 0.5)])

    @cached_property
    def lines(self) -> tuple[Line, ...]:
        """The modes, in order of frequency."""
        centre, orders = one_frequency_si(self.wavelength, "wavelength"), self._orders()
        nearest = np.min(np.abs(orders))  # at the centre, or half a spacing beside it: this mode has photon rate 1
        strengths = np.exp(-FOUR_LN2 * (orders**2 - nearest**2) / self._steps**2)
        # a width in wavelength is meant at the centre and is the same number of hertz in every mode
        width = None if self.linewidth is None else width_si(centre, self.linewidth, "linewidth") * u.Hz
        profile = "monochromatic" if width is None else "lorentzian"
        return tuple(
            Line(wavelength=(centre + order * self._spacing_si) * u.Hz, fwhm=width, profile=profile, strength=float(strength))
            for order, strength in zip(orders, strengths, strict=True)
        )


__all__ = ["LASER_CAUTION", "LASER_PROFILES", "MultimodeLaser", "SingleModeLaser"]
