"""Simulated lamp scans: photon and read-out noise on a drifting lamp, with the truth beside them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from types import MappingProxyType
from typing import Any

import astropy.units as u
import numpy as np

from ..errors import InputError
from ..spectra import Spectrum
from ..units import FloatArray, as_si, read_only
from .interferogram import two_beam_signal


@dataclass(frozen=True, kw_only=True, eq=False)
class SimulatedScan:
    """A simulated scan.

    `opd` Quantity [length], shape (n,): true path difference at each sample; `counts`, shape (n,): detector counts; `truth`: the
    numbers that went in.
    """

    opd: u.Quantity = field(repr=False)
    counts: FloatArray = field(repr=False)
    truth: Mapping[str, Any]


def simulate_lamp_scan(
    light: Spectrum,
    *,
    opd: Any,
    rng: np.random.Generator,
    photons_per_sample: float = 20_000.0,
    contrast: float = 1.0,
    opd_centre: Any = 0 * u.um,
    phase: Any = 0 * u.rad,
    drift: float = 0.0,
    read_noise: float = 0.0,
    dark: float = 0.0,
) -> SimulatedScan:
    """Simulate one scan of a lamp: stepped path, photon noise, Gaussian read-out noise, slow drift of the lamp.

    Parameters
    ----------
    light : Spectrum
    opd : Quantity [length], shape (n,)
    rng : numpy.random.Generator
    photons_per_sample : float
        Mean photons in a sample, away from the packet.
    contrast, opd_centre, phase
        As for `two_beam_signal`.
    drift : float
        Peak-to-peak change of the lamp over the scan, as a fraction: three quarters of a sine wave.
    read_noise, dark : float
        Rms read-out noise and constant dark level [counts]; one count is one photon.

    Returns
    -------
    SimulatedScan

    Raises
    ------
    InputError
        A flux or noise below zero.
    """
    finite = np.all(np.isfinite([photons_per_sample, read_noise, drift, dark]))
    if not finite or photons_per_sample <= 0 or read_noise < 0 or not 0 <= drift < 1:
        raise InputError(
            "photons_per_sample must be above 0, read_noise at least 0, drift from 0 to below 1, and all finite; got "
            f"{photons_per_sample}, {read_noise} and {drift}"
        )
    path = np.asarray(as_si(opd, u.m, "opd", "um"))
    signal = two_beam_signal(light, path * u.m, opd_centre=opd_centre, contrast=contrast, phase=phase)
    lamp = 1.0 + 0.5 * drift * np.sin(1.5 * np.pi * np.linspace(0, 1, path.size))
    photons = rng.poisson(photons_per_sample * lamp * np.maximum(signal, 0.0))
    counts = photons + rng.normal(dark, read_noise, path.size)
    truth = {
        "contrast": contrast,
        "opd_centre": u.Quantity(opd_centre),
        "photons_per_sample": photons_per_sample,
        "drift": drift,
        "read_noise": read_noise,
        "dark": dark,
    }
    return SimulatedScan(opd=(path * u.m).to(u.um), counts=read_only(counts), truth=MappingProxyType(truth))
