"""Values and derivatives that dispersion formulas are made of, against mpmath's own differentiation."""

import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from whitefringe.media._derivatives import composed, poles, polynomial, product, rescaled, root_of_one_plus, times_wavenumber

PLACES = st.floats(0.05, 3.0)
COEFFICIENTS = st.lists(st.floats(-2.0, 2.0).map(lambda x: round(x, 6)), min_size=1, max_size=6)
STRENGTHS = st.lists(st.floats(0.01, 3.0), min_size=1, max_size=3)


def derivatives(function, s):
    """Value and three derivatives, to 40 digits."""
    with mp.workdps(60):
        return np.array([float(mp.diff(function, mp.mpf(s), order)) for order in range(4)])


def exact(function):
    """The same, of what mpmath's functions make of a polynomial with the given coefficients."""
    return lambda x: mp.fsum(mp.mpf(a) * x**j for j, a in enumerate(function))


def close(found, expected, scale):
    """To 1e-12 of the largest term that went into each row."""
    return np.all(np.abs(found - expected) <= 1e-12 * np.maximum(np.abs(expected), scale))


@given(s=PLACES, strengths=STRENGTHS, gaps=st.lists(st.floats(10.0, 300.0), min_size=3, max_size=3))
@settings(max_examples=25, deadline=None)
def test_poles(s, strengths, gaps):
    """Sum of b / (c - s^2); all terms have one sign, so nothing cancels."""
    squares = gaps[: len(strengths)]
    found = poles(np.array(s), strengths, squares)

    def function(x):
        return mp.fsum(mp.mpf(b) / (mp.mpf(c) - x**2) for b, c in zip(strengths, squares, strict=True))

    assert found == pytest.approx(derivatives(function, s), rel=1e-12)


def test_poles_beyond_a_resonance():
    """On the far side of a resonance, where c < s^2, as with the infrared term of a glass."""
    found = poles(np.array(1.5), [0.9], [0.0102])
    assert found == pytest.approx(derivatives(lambda x: mp.mpf(0.9) / (mp.mpf(0.0102) - x**2), 1.5), rel=1e-12)


@given(s=PLACES, coefficients=COEFFICIENTS)
@settings(max_examples=25, deadline=None)
def test_polynomial(s, coefficients):
    found = polynomial(np.array(s), coefficients)
    expected = derivatives(exact(coefficients), s)
    scale = derivatives(exact([abs(a) for a in coefficients]), s)
    assert found.shape == (4,)
    assert close(found, expected, scale)


@given(s=PLACES, f=COEFFICIENTS, g=COEFFICIENTS)
@settings(max_examples=25, deadline=None)
def test_product(s, f, g):
    at = np.array(s)
    found = product(polynomial(at, f), polynomial(at, g))
    expected = derivatives(lambda x: exact(f)(x) * exact(g)(x), s)
    scale = product(polynomial(at, np.abs(f)), polynomial(at, np.abs(g)))
    assert close(found, expected, scale)


@given(s=PLACES, f=COEFFICIENTS, g=COEFFICIENTS)
@settings(max_examples=25, deadline=None)
def test_composed(s, f, g):
    at = np.array(s)
    inner = polynomial(at, g)
    found = composed(polynomial(inner[0], f), inner)
    expected = derivatives(lambda x: exact(f)(exact(g)(x)), s)
    size = polynomial(at, np.abs(g))
    scale = composed(polynomial(size[0], np.abs(f)), size)
    assert close(found, expected, scale)


@given(s=PLACES, strengths=STRENGTHS)
@settings(max_examples=25, deadline=None)
def test_root_of_one_plus(s, strengths):
    squares = [20.0, 45.0, 190.0][: len(strengths)]
    found = root_of_one_plus(poles(np.array(s), strengths, squares))

    def function(x):
        return mp.sqrt(1 + mp.fsum(mp.mpf(b) / (mp.mpf(c) - x**2) for b, c in zip(strengths, squares, strict=True))) - 1

    expected = derivatives(function, s)
    square = poles(np.array(s), strengths, squares)
    assert close(found, expected, np.abs(square))


def test_root_keeps_the_digits_of_a_tiny_refractivity():
    found = root_of_one_plus(np.array([1e-12, 0.0, 0.0, 0.0]))
    assert found[0] == pytest.approx(5e-13, rel=1e-12)


@given(s=PLACES, f=COEFFICIENTS)
@settings(max_examples=25, deadline=None)
def test_times_wavenumber(s, f):
    at = np.array(s)
    found = times_wavenumber(polynomial(at, f), at)
    expected = derivatives(lambda x: x * exact(f)(x), s)
    assert close(found, expected, times_wavenumber(polynomial(at, np.abs(f)), at))
    assert found == pytest.approx(product(polynomial(at, f), polynomial(at, [0, 1])), rel=1e-13, abs=1e-13)


def test_rescaled():
    """With t = s / 1e-6: f(s) as a function of t."""
    found = rescaled(polynomial(np.array(0.7), [1, -2, 0.5, 3]), 1e-6)
    expected = derivatives(lambda t: exact([1, -2, 0.5, 3])(mp.mpf("1e-6") * t), 0.7e6)
    assert found == pytest.approx(expected, rel=1e-12, abs=0)


@pytest.mark.parametrize("shape", [(), (3,), (2, 3)])
def test_shapes(shape):
    s = np.linspace(0.4, 1.2, int(np.prod(shape))).reshape(shape)
    dry = poles(s, [1.0], [20.0])
    for found in (dry, polynomial(s, [1.0]), polynomial(s, [1, 2, 3]), root_of_one_plus(dry), product(dry, dry), composed(dry, dry)):
        assert found.shape == (4, *shape)
