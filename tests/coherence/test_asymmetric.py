"""An asymmetric tabulated curve against high-precision quadrature between its points: every sign shows."""

from itertools import pairwise

import astropy.units as u
import mpmath as mp
import numpy as np
import pytest
from astropy.constants import h, k_B

from whitefringe.coherence import self_coherence
from whitefringe.spectra import Flat, Tabulated, Thermal, detected

MICRON = np.array([1.40, 1.45, 1.50, 1.52, 1.60, 1.66, 1.70, 1.78, 1.80, 1.85])
PASSED = np.array([0.0, 0.02, 0.35, 0.80, 0.95, 0.90, 0.60, 0.10, 0.02, 0.0])
CURVE = Tabulated(wavelength=MICRON * u.um, transmission_values=PASSED)

PATHS = np.linspace(-40e-6, 55e-6, 50)
"""Path differences [m], not symmetric about zero."""

C = mp.mpf(299792458)
KELVIN = 1200


def flat(frequency):
    return mp.mpf(1)


def planck(frequency):
    return frequency**2 / mp.expm1(mp.mpf(h.value) * frequency / (mp.mpf(k_B.value) * KELVIN))


def quadrature(rate):
    """Frequencies and weights: 24 Gauss-Legendre nodes between neighbouring points, 30 digits."""
    nodes = mp.calculus.quadrature.GaussLegendre(mp.mp).calc_nodes(4, 100)
    points = [(mp.mpf(float(x)) / 10**6, mp.mpf(float(t))) for x, t in zip(MICRON, PASSED, strict=True)]
    weighted = []
    for (l0, t0), (l1, t1) in pairwise(points):
        middle, half = (C / l0 + C / l1) / 2, (C / l0 - C / l1) / 2
        for x, weight in nodes:
            frequency = middle + half * x
            passed = t0 + (C / frequency - l0) * (t1 - t0) / (l1 - l0)
            weighted.append((frequency, weight * half * passed * rate(frequency)))
    return weighted


def reference(rate):
    weighted = quadrature(rate)
    total = mp.fsum(weight for _, weight in weighted)
    terms = ((mp.fsum(w * mp.expj(-2 * mp.pi * f * mp.mpf(float(x)) / C) for f, w in weighted)) for x in PATHS)
    return np.array([complex(term / total) for term in terms])


@pytest.fixture(scope="module", params=["flat", "thermal"])
def case(request):
    source = Flat() if request.param == "flat" else Thermal(temperature=KELVIN * u.K)
    with mp.workdps(30):
        exact = reference(flat if request.param == "flat" else planck)
    return self_coherence(detected(source, CURVE), PATHS * u.m), exact


def test_complex_value_at_fifty_delays(case):
    found, exact = case
    assert np.max(np.abs(found - exact)) < 1e-8


def test_the_other_sign_would_be_seen(case):
    found, exact = case
    assert np.max(np.abs(np.conj(found) - exact)) > 1
    # also in the packet alone, without its carrier
    carrier = np.exp(2j * np.pi * PATHS / 1.6e-6)
    assert np.max(np.abs(np.conj(found * carrier) - exact * carrier)) > 0.01


def test_the_quadrature_has_converged():
    with mp.workdps(30):
        first, last = C / mp.mpf("1.52e-6"), C / mp.mpf("1.50e-6")
        area = mp.quad(lambda f: 0.35 + (C / f * 10**6 - 1.5) / 0.02 * 0.45, [first, last])
        part = mp.fsum(w for f, w in quadrature(flat) if first < f < last)
    assert float(part) == pytest.approx(float(area), rel=1e-12)
