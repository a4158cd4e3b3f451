"""Values and first three derivatives with wavenumber of what dispersion formulas are made of.

Every function returns an array of shape (4, ...): the value, then its first, second and third derivative.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..units import FloatArray


def poles(s: FloatArray, strengths: Sequence[float] | FloatArray, squares: Sequence[float] | FloatArray) -> FloatArray:
    """Sum over j of b_j / (c_j - s^2), the form of Sellmeier, Edlen and Ciddor."""
    s = np.asarray(s, dtype=float)
    result = np.zeros((4, *s.shape))
    for b, c in zip(strengths, squares, strict=True):
        gap = c - s**2
        result += np.array([b / gap, 2 * b * s / gap**2, 2 * b * (c + 3 * s**2) / gap**3, 24 * b * s * (c + s**2) / gap**4])
    return result


def polynomial(s: FloatArray, coefficients: Sequence[float] | FloatArray) -> FloatArray:
    """Sum over j of a_j s^j."""
    s = np.asarray(s, dtype=float)
    result = np.zeros((4, *s.shape))
    for a in reversed(coefficients):  # Horner, for value and derivatives at once
        for k in (3, 2, 1):
            result[k] = result[k] * s + k * result[k - 1]
        result[0] = result[0] * s + a
    return result


def root_of_one_plus(square: FloatArray) -> FloatArray:
    """Refractivity n - 1 and the derivatives of n from those of n^2 - 1, without losing digits where n is close to 1."""
    n = np.sqrt(1 + square[0])
    first = square[1] / (2 * n)
    second = (square[2] - 2 * first**2) / (2 * n)
    third = (square[3] - 6 * first * second) / (2 * n)
    return np.array([square[0] / (n + 1), first, second, third])


def product(f: FloatArray, g: FloatArray) -> FloatArray:
    """Derivatives of f g (Leibniz)."""
    return np.array(
        [
            f[0] * g[0],
            f[1] * g[0] + f[0] * g[1],
            f[2] * g[0] + 2 * f[1] * g[1] + f[0] * g[2],
            f[3] * g[0] + 3 * f[2] * g[1] + 3 * f[1] * g[2] + f[0] * g[3],
        ]
    )


def composed(f: FloatArray, g: FloatArray) -> FloatArray:
    """Derivatives of f(g(s)), with f's taken at g(s) (Faa di Bruno)."""
    return np.array(
        [
            f[0],
            f[1] * g[1],
            f[2] * g[1] ** 2 + f[1] * g[2],
            f[3] * g[1] ** 3 + 3 * f[2] * g[1] * g[2] + f[1] * g[3],
        ]
    )


def times_wavenumber(f: FloatArray, s: FloatArray) -> FloatArray:
    """Derivatives of s f(s)."""
    return np.array([s * f[0], f[0] + s * f[1], 2 * f[1] + s * f[2], 3 * f[2] + s * f[3]])


def rescaled(f: FloatArray, scale: float) -> FloatArray:
    """Derivatives with t of f(s), for s = scale t."""
    return np.array([f[k] * scale**k for k in range(4)])
