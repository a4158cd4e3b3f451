"""Wavelengths in standard air to vacuum wavelengths, for tables that are in air."""

from __future__ import annotations

import numpy as np

from .errors import InputError
from .units import FloatArray

RANGE = (0.3e-6, 1.69e-6)
"""Vacuum wavelengths [m] for which the dispersion formula is stated."""

DISPERSION = (5792105e-8, 167917e-8), (238.0185, 57.362)
"""k1, k3 (over 1e8) and k0, k2 of Ciddor 1996, eq. 1 [um^-2]: strengths and squares of the two poles."""


def standard_air_refractivity(wavelength: FloatArray) -> FloatArray:
    """Refractivity n - 1 of standard air at vacuum `wavelength` [m]: dry, 15 degrees C, 101325 Pa, 450 ppm CO2.

    n - 1 = k1 / (k0 - sigma^2) + k3 / (k2 - sigma^2), sigma = 1 / wavelength in 1/um (Ciddor 1996, eq. 1; "ciddor").
    """
    squared = (1e-6 / wavelength) ** 2
    (k1, k3), (k0, k2) = DISPERSION
    return np.asarray(k1 / (k0 - squared) + k3 / (k2 - squared))


def vacuum_from_air(wavelength: FloatArray, origin: str) -> FloatArray:
    """Vacuum wavelengths [m] of wavelengths in standard air: lambda = n(lambda) lambda_air, solved by repetition.

    Raises
    ------
    InputError
        A wavelength outside `RANGE`, with its data row.
    """
    found = wavelength
    for _ in range(4):  # every turn gains a factor of 1e5, as lambda dn/dlambda is about 1e-5
        with np.errstate(divide="ignore", invalid="ignore"):
            found = wavelength * (1.0 + standard_air_refractivity(found))
    outside = np.isfinite(wavelength) & ~((found >= RANGE[0]) & (found <= RANGE[1]))
    if np.any(outside):
        row = int(np.argmax(outside))
        raise InputError(
            f"{origin}: data row {row + 1}: {wavelength[row] * 1e6:.6g} um in air cannot be turned into a vacuum wavelength: the formula "
            f"for standard air holds from {RANGE[0] * 1e6:g} to {RANGE[1] * 1e6:g} um. Its use beyond is widespread, but nothing vouches "
            "for it; give vacuum wavelengths, or leave these rows out"
        )
    return found
