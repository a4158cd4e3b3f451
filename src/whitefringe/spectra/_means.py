"""Means of a filter's transmission over ranges of frequency, by a piecewise polynomial fitted to it once."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from ..units import FloatArray
from ._shape import Filter

if TYPE_CHECKING:
    from scipy.interpolate import PPoly

_TOLERANCE = 2e-10
"""Greatest misfit of a piece in transmission."""

_FIRST_PIECES = 256
_HALVINGS = 26
_NEAREST = 1e-12
"""Breakpoints nearer to each other than this part of the frequency count as one."""

_NODES = np.cos(np.pi * (np.arange(6) + 0.5) / 6)[::-1]
"""Chebyshev nodes of a piece, from -1 to 1: none at an end, where the transmission may jump."""

_TO_POWERS = np.linalg.inv(np.vander(0.5 * (_NODES + 1.0)))
"""From values at the nodes to coefficients of powers of the place in the piece, from 0 to 1, highest first."""

_CHECKS = 0.5 * (np.concatenate([[-1 + 1e-6], 0.5 * (_NODES[1:] + _NODES[:-1]), [1 - 1e-6]]) + 1.0)


class SquareMean:
    """Mean of T(q) over q^2 between two frequencies: 1/(b^2 - a^2) int_a^b T(q) 2 q dq.

    The transmission is cut at its breakpoints and fitted piece by piece with polynomials of degree 5, pieces being halved until they fit
    to 2e-10; their integral is then closed.
    """

    def __init__(self, shape: Filter) -> None:
        self.low, self.high = shape.support_si
        self._integral = _integral(shape, self.low, self.high)

    def __call__(self, first: FloatArray, last: FloatArray) -> FloatArray:
        """Mean between the frequencies `first` and `last` [Hz], elementwise; zero outside the support counts in."""
        scale = 1.0 / self.high
        ends = [np.clip(end, self.low, self.high) * scale for end in (first, last)]
        return np.asarray((self._integral(ends[1]) - self._integral(ends[0])) / ((last * scale) ** 2 - (first * scale) ** 2))


def _integral(shape: Filter, low: float, high: float) -> PPoly:
    """Return int T(q) 2 q dq as a piecewise polynomial of q over `high`."""
    from scipy.interpolate import PPoly

    starts, widths, powers = _fitted(shape, low, high)
    order = np.argsort(starts)
    starts, widths, powers = starts[order] / high, widths[order] / high, powers[order]
    # T as powers of the place s = (q - start) / width, times 2 (start + s width), then in powers of q - start
    product = np.zeros((starts.size, powers.shape[1] + 1))
    product[:, 1:] += 2.0 * starts[:, None] * powers
    product[:, :-1] += 2.0 * widths[:, None] * powers
    degree = product.shape[1] - 1
    product /= widths[:, None] ** np.arange(degree, -1, -1)
    return PPoly(product.T, np.append(starts, 1.0), extrapolate=True).antiderivative()


def _fitted(shape: Filter, low: float, high: float) -> tuple[FloatArray, FloatArray, FloatArray]:
    kinks = np.asarray(shape.breakpoints_si, dtype=float)
    edges = np.unique(np.concatenate([np.linspace(low, high, _FIRST_PIECES + 1), kinks[(kinks > low) & (kinks < high)]]))
    edges = edges[np.append(True, np.diff(edges) > _NEAREST * high)]
    starts, widths = edges[:-1], np.diff(edges)
    done: list[tuple[FloatArray, FloatArray, FloatArray]] = []
    places = 0.5 * (_NODES + 1.0)
    for halving in range(_HALVINGS + 1):
        powers = shape.transmission_si(starts[:, None] + widths[:, None] * places) @ _TO_POWERS.T
        found = shape.transmission_si(starts[:, None] + widths[:, None] * _CHECKS)
        misfit = np.max(np.abs(powers @ np.vander(_CHECKS, _NODES.size).T - found), axis=1)
        good = (misfit <= _TOLERANCE) | (halving == _HALVINGS)
        done.append((starts[good], widths[good], powers[good]))
        if np.all(good):
            break
        half = 0.5 * widths[~good]
        starts, widths = np.concatenate([starts[~good], starts[~good] + half]), np.concatenate([half, half])
    first, second, third = zip(*done, strict=True)
    return np.concatenate(first), np.concatenate(second), np.concatenate(third)
