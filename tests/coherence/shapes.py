"""Light of the simple shapes that have closed forms, all of one full width at half maximum."""

from __future__ import annotations

import astropy.units as u
import numpy as np

from whitefringe.spectra import Flat, Gaussian, Line, Spectrum, TopHat, detected

CENTRE = 200e12
"""Mean frequency [Hz]."""

WIDTH = 30e12
"""Full width at half maximum [Hz]."""


def triangle(centre: float = CENTRE, width: float = WIDTH) -> Spectrum:
    return Spectrum.from_function(
        lambda frequency: 1 - np.abs(frequency - centre) / width,
        (centre - width, centre + width),
        breakpoints=[centre],
    )


CONTINUA = {
    "top-hat": detected(Flat(), TopHat(centre=CENTRE * u.Hz, width=WIDTH * u.Hz)),
    "gaussian": detected(Flat(), Gaussian(centre=CENTRE * u.Hz, fwhm=WIDTH * u.Hz)),
    "triangle": triangle(),
}

LINES = {name: Spectrum(lines=(Line(wavelength=CENTRE * u.Hz, fwhm=WIDTH * u.Hz, profile=name),)) for name in ("gaussian", "lorentzian")}

CLOSED_FORMS = {
    "top-hat": lambda x: np.sinc(x),
    "gaussian": lambda x: np.exp(-((np.pi * x) ** 2) / (4 * np.log(2))),
    "lorentzian": lambda x: np.exp(-np.pi * np.abs(x)),
    "triangle": lambda x: np.sinc(x) ** 2,
}
"""Degree of coherence about the mean frequency, x = width times delay (Goodman, Statistical Optics, sec. 5.1)."""


def cases() -> list[tuple[str, Spectrum]]:
    """Every shape as a continuum or a line, or both."""
    return [*CONTINUA.items(), *LINES.items()]


def with_name(name: str) -> list[Spectrum]:
    return [light for known, light in cases() if known == name]
