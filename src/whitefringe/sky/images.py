"""An object as a picture: brightness in square pixels."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from typing import Any, ClassVar

import numpy as np
from astropy import units

from ..errors import InputError
from ..units import FloatArray, frozen_quantities, positive_si, read_only
from ._object import ComplexArray, ObjectShape

_ENTRIES = 2**20
"""Complex numbers per block of the transform: bounds its memory."""


@dataclass(frozen=True, kw_only=True, eq=False)
class Picture(ObjectShape):
    """Any brightness as a picture, uniform in each of its square pixels.

    V = sinc(u p / lambda) sinc(v p / lambda) sum I_rc exp(-2 pi i (u alpha_c + v delta_r) / lambda) / sum I_rc, with p the side of a pixel
    and sinc(x) = sin(pi x)/(pi x).

    Parameters
    ----------
    image : array_like, shape (rows, columns)
        Flux in each pixel, on any scale; nowhere below zero. Rows grow to the north, columns to the east: turn round a picture with east
        on the left, as most are shown, by ``image[:, ::-1]``, and one whose first row is the top by ``image[::-1]``.
    pixel : Quantity [angle]
        Side of a pixel.

    Raises
    ------
    InputError, UnitsError

    Notes
    -----
    The phase centre is the middle of the picture: column (columns - 1)/2 and row (rows - 1)/2, counted from zero, so the middle pixel
    where the number is odd and a pixel's edge where it is even. Detail finer than a pixel is not in it: compare lambda/B with the pixel.

    References
    ----------
    Born & Wolf, Principles of Optics, 7th ed., sec. 10.4; Bracewell, The Fourier Transform and Its Applications, for the pixel's sinc.

    Examples
    --------
    >>> import astropy.units as u
    >>> double = Picture(image=[[1, 0, 1]], pixel=1 * u.mas)
    >>> print(double.visibility([0, 50] * u.m, 0 * u.m, 1.65 * u.um).real.round(4))
    [1.     0.5822]
    """

    shape: ClassVar[str] = "picture"
    image: Any = field(repr=False)
    pixel: units.Quantity

    def __post_init__(self) -> None:
        frozen_quantities(self)
        try:
            image = read_only(self.image)
        except (TypeError, ValueError):
            raise InputError("image must be rows of numbers without a unit, all of one length, such as [[0, 1], [2, 3]]") from None
        object.__setattr__(self, "image", image)
        if image.ndim != 2 or not image.size:
            raise InputError(f"image must have rows and columns, at least one of each; got shape {image.shape}")
        _refuse(image, ~np.isfinite(image), "not finite")
        _refuse(image, image < 0, "below zero")
        if not np.any(image > 0):
            raise InputError("image must have some light; every pixel is zero")
        _ = self.pixel_si

    @cached_property
    def pixel_si(self) -> float:
        """Side of a pixel [rad]."""
        return positive_si(self.pixel, units.rad, "pixel", "mas")

    @cached_property
    def _flux(self) -> FloatArray:
        # the largest pixel first taken to 1: a sum of large values must not overflow
        scaled = self.image / np.max(self.image)
        return np.asarray(scaled / np.sum(scaled))

    def visibility_si(self, u: Any, v: Any) -> ComplexArray:
        """Complex visibility at spatial frequencies towards east and north [cycles/rad]."""
        east, north = np.broadcast_arrays(np.asarray(u, dtype=float), np.asarray(v, dtype=float))
        result = np.empty(east.size, dtype=complex)
        block = max(1, _ENTRIES // sum(self.image.shape))
        for begin in range(0, east.size, block):
            part = slice(begin, begin + block)
            result[part] = self._transform(east.ravel()[part], north.ravel()[part])
        return result.reshape(east.shape)

    def _transform(self, east: FloatArray, north: FloatArray) -> ComplexArray:
        rows, columns = (np.arange(count) - 0.5 * (count - 1) for count in self.image.shape)
        along_rows = np.exp(-2j * np.pi * self.pixel_si * north[:, None] * rows)
        along_columns = np.exp(-2j * np.pi * self.pixel_si * east[:, None] * columns)
        total = np.einsum("kc,kc->k", along_rows @ self._flux, along_columns)
        return np.asarray(np.sinc(self.pixel_si * east) * np.sinc(self.pixel_si * north) * total)


def _refuse(image: FloatArray, bad: Any, fault: str) -> None:
    if np.any(bad):
        row, column = np.argwhere(bad)[0]
        raise InputError(
            f"image must be finite and nowhere below zero; row {row}, column {column} (from zero) is {image[row, column]:g}, {fault} "
            f"({int(np.sum(bad))} such pixels): set them to zero, or leave the background's noise out"
        )


__all__ = ["Picture"]
