"""Pictures for files: spectrum and packet of a setup's light (matplotlib, of the lab extra)."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np

from .coherence import self_coherence_si
from .errors import InputError
from .setup import Setup
from .spectra import Spectrum
from .units import SPEED_OF_LIGHT

ENDINGS = (".png", ".svg", ".pdf")


def draw_light(setup: Setup, path: str | Path, half_range_um: float) -> Path:
    """Draw spectrum and packet side by side and save them.

    Parameters
    ----------
    setup : Setup
    path : path
        Ends in .png, .svg or .pdf.
    half_range_um : float
        Path difference shown, either way from zero [um].

    Raises
    ------
    InputError
        matplotlib is not installed, or the ending is another.
    """
    path = Path(path)
    if path.suffix.lower() not in ENDINGS:
        raise InputError(f"{path}: a picture's name must end in {', '.join(ENDINGS)}")
    try:
        from matplotlib.figure import Figure
    except ImportError:
        raise InputError("pictures need matplotlib: install whitefringe with its lab extra") from None
    figure = Figure(figsize=(11, 4), layout="constrained")
    left, right = figure.subplots(1, 2)
    _draw_spectrum(left, setup.light)
    opd = np.linspace(-half_range_um, half_range_um, 4001)
    gamma = self_coherence_si(setup.light, opd * 1e-6 / SPEED_OF_LIGHT)
    right.plot(opd, gamma.real, color="#56B4E9", linewidth=0.8, label="fringes, real part of γ")
    right.plot(opd, np.abs(gamma), color="#009E73", linewidth=2, label="contrast |γ|")
    right.set(xlabel="path difference [µm]", ylabel="degree of coherence γ", ylim=(-1.05, 1.05))
    right.legend(loc="lower right")
    figure.suptitle(setup.name)
    figure.savefig(path, dpi=150)
    return path


def _draw_spectrum(axes: Any, light: Spectrum) -> None:
    if light.density.size:
        wavelength = SPEED_OF_LIGHT / light.frequency_si * 1e6
        axes.plot(wavelength, light.density / np.max(light.density), color="#009E73", label="continuum")
    strongest = max((item.strength for item in light.lines), default=1.0)
    for item in light.lines:
        place = SPEED_OF_LIGHT / item.frequency_si * 1e6
        axes.plot([place, place], [0, item.strength / strongest], color="#D55E00")
    axes.set(xlabel="vacuum wavelength [µm]", ylabel="photon rate per hertz, relative", ylim=(0, 1.1))
