"""Fewer points for a plot."""

import numpy as np

from whitefringe.scans import thinned


def test_every_extreme_is_kept():
    values = np.random.default_rng(3).normal(size=50_001)
    values[[17, 40_000]] = 30, -30
    axis, kept = thinned(np.arange(values.size, dtype=float), values, most=1000)
    assert kept.size <= 1002
    assert kept.max() == 30
    assert kept.min() == -30
    assert np.all(np.diff(axis) >= 0)
    assert np.array_equal(values[axis.astype(int)], kept)


def test_the_tail_is_kept():
    values = np.zeros(5999)
    values[-1] = 1.0
    assert thinned(np.arange(5999.0), values, most=4000)[1].max() == 1.0


def test_short_curves_stay():
    axis = np.arange(100.0)
    assert thinned(axis, axis)[1] is axis
