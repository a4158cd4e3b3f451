"""Mean values of a function in equal cells, exact across its kinks."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from ..units import FloatArray

_NODES = np.array([-1.0, 1.0]) / np.sqrt(3.0)
"""Two-point Gauss-Legendre nodes: exact for cubics in every piece."""


def cell_means(function: Callable[[FloatArray], FloatArray], low: float, high: float, cells: int, breakpoints: FloatArray) -> FloatArray:
    """Mean of `function` in each of `cells` equal cells between `low` and `high`.

    Each cell is cut at the breakpoints inside it and every piece is integrated by two Gauss-Legendre nodes, so a kink costs no
    accuracy wherever it falls; the error is of fourth order in the cell width.
    """
    edges = np.linspace(low, high, cells + 1)
    kinks = np.asarray(breakpoints, dtype=float)
    kinks = np.unique(kinks[(kinks > low) & (kinks < high)])
    cuts = np.insert(edges, np.searchsorted(edges, kinks), kinks) if kinks.size else edges
    middle, half = 0.5 * (cuts[1:] + cuts[:-1]), 0.5 * np.diff(cuts)
    pieces = half * sum(function(middle + node * half) for node in _NODES)
    starts = np.searchsorted(cuts, edges[:-1])
    return np.asarray(np.add.reduceat(pieces, starts) / ((high - low) / cells), dtype=float)
