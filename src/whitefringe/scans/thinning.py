"""Fewer points for a plot, with every extreme kept."""

from __future__ import annotations

import numpy as np

from ..units import FloatArray


def thinned(axis: FloatArray, values: FloatArray, most: int = 4000) -> tuple[FloatArray, FloatArray]:
    """Return at most `most` points of a curve: the lowest and highest of each stretch, in order.

    A curve that is short enough is returned as it is.
    """
    if values.size <= most:
        return axis, values
    length = -(-values.size // (most // 2))
    stretches = -(-values.size // length)
    body = np.pad(values, (0, stretches * length - values.size), mode="edge").reshape(stretches, length)
    starts = np.arange(stretches) * length
    kept = np.unique(np.concatenate([starts + body.argmin(axis=1), starts + body.argmax(axis=1)]))
    return axis[kept], values[kept]
