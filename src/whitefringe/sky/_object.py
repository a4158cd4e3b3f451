"""What every object shape has in common: the protocol, the public twin of its visibility, and the checks of its numbers.

V(u, v) = int I(alpha, delta) exp(-2 pi i (u alpha + v delta) / lambda) dalpha ddelta / int I dalpha ddelta

with alpha east and delta north of the phase centre [rad], and (u, v) the baseline, station 2 minus station 1, projected on the sky
towards east and north [m] (van Cittert-Zernike theorem with the sign of OIFITS). Inside, u and v are spatial frequencies in cycles
per radian. A negative lobe keeps its sign.

A star further to the east raises w, so that at a given added path difference its fringes lie as if that were less: against added path
difference, a packet is the degree of coherence times the conjugate of V.
"""

from __future__ import annotations

from typing import Any, Protocol, runtime_checkable

import numpy as np
from astropy import units
from numpy.typing import NDArray

from ..errors import InputError
from ..units import SPEED_OF_LIGHT, FloatArray, as_frequency_si, as_si

ComplexArray = NDArray[np.complex128]


@runtime_checkable
class SkyObject(Protocol):
    """What every object shape offers."""

    def visibility_si(self, u: Any, v: Any) -> ComplexArray:
        """Complex visibility at spatial frequencies towards east and north [cycles/rad], which broadcast."""
        ...


class ObjectShape:
    """Shared by all shapes: the public twin of `visibility_si`."""

    def visibility(self, u: Any, v: Any, wavelength: Any) -> ComplexArray:
        """Complex visibility of the object on a baseline.

        V = int I exp(-2 pi i (u alpha + v delta) / lambda) / int I

        Parameters
        ----------
        u, v : Quantity [m], shapes that broadcast
            Baseline projected towards east and towards north, station 2 minus station 1.
        wavelength : Quantity [vacuum wavelength or frequency], shape that broadcasts with them

        Returns
        -------
        ndarray of complex, the common shape

        Raises
        ------
        UnitsError
            A bare number, or a wrong unit.
        InputError
            Shapes that do not broadcast; a wavelength that is not above zero.

        References
        ----------
        Born & Wolf, Principles of Optics, 7th ed., sec. 10.4; sign of Duvert, Young & Hummel 2017, doi:10.1051/0004-6361/201526405 (from
        memory).
        """
        return self.visibility_si(*spatial_frequencies_si(u, v, wavelength))

    def visibility_si(self, u: Any, v: Any) -> ComplexArray:
        """Complex visibility at spatial frequencies towards east and north [cycles/rad]."""
        raise NotImplementedError


def spatial_frequencies_si(u: Any, v: Any, wavelength: Any, names: tuple[str, str] = ("u", "v")) -> tuple[FloatArray, FloatArray]:
    """Baselines (Quantities) over wavelength, in cycles per radian, broadcast to one shape."""
    parts = [np.asarray(as_si(value, units.m, name)) for value, name in zip((u, v), names, strict=True)]
    per_metre = np.asarray(as_frequency_si(wavelength, "wavelength")) / SPEED_OF_LIGHT
    together((*names, "wavelength"), *parts, per_metre)
    return parts[0] * per_metre, parts[1] * per_metre


def together(names: tuple[str, ...], *arrays: FloatArray) -> tuple[int, ...]:
    """Return the shape that the arrays share when broadcast, or refuse them."""
    shapes = [array.shape for array in arrays]
    try:
        return np.broadcast_shapes(*shapes)
    except ValueError:
        raise InputError(
            f"{', '.join(names)} must have shapes that broadcast; got {', '.join(map(str, shapes))}: give equal shapes, or single numbers"
        ) from None


def check_object(value: Any, name: str) -> None:
    """Refuse what is no object shape."""
    if not isinstance(value, SkyObject) or isinstance(value, type):
        raise InputError(f"{name} must be an object such as sky.UniformDisc(diameter=1 * u.mas); got {value!r}")


def angle_si(value: Any, name: str) -> float:
    """Return one angle in radians, zero or more."""
    angle = as_si(value, units.rad, name, "mas")
    if np.ndim(angle) != 0:
        raise InputError(f"{name} must be one angle; got an array of shape {np.shape(angle)}")
    if angle < 0:
        raise InputError(f"{name} must be zero or more; got {value}")
    return float(angle)


class Round(ObjectShape):
    """An object that looks the same from all sides, centred: its visibility is real and depends on the baseline's length only."""

    def visibility_si(self, u: Any, v: Any) -> ComplexArray:
        """Complex visibility at spatial frequencies towards east and north [cycles/rad]."""
        return np.asarray(self._radial_si(np.hypot(u, v)), dtype=complex)

    def _radial_si(self, q: FloatArray) -> FloatArray:
        """Visibility at spatial frequency q [cycles/rad]."""
        raise NotImplementedError
