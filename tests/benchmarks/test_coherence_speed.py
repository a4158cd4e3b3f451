"""self_coherence against a plain direct sum and the bare scipy transform, in one run."""

import astropy.units as u
import numpy as np
import pytest
from scipy.signal import czt

from whitefringe import spectra
from whitefringe.coherence import self_coherence_si

CELLS = DELAYS = 4096


@pytest.fixture(scope="module")
def light():
    band = spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um)
    return spectra.detected(spectra.Thermal(temperature=2900 * u.K), band, samples=CELLS)


@pytest.fixture(scope="module")
def tau(light):
    return np.linspace(-30, 30, DELAYS) / (light.step_si * CELLS)


def median(call, rounds):
    from time import perf_counter

    times = []
    for _ in range(rounds):
        start = perf_counter()
        call()
        times.append(perf_counter() - start)
    return float(np.median(times))


def direct_sum(light, tau):
    result = np.empty(tau.size, dtype=complex)
    for begin in range(0, tau.size, 256):
        block = tau[begin : begin + 256]
        result[begin : begin + 256] = np.exp(-2j * np.pi * block[:, None] * light.frequency_si) @ light.density
    return result / np.sum(light.density)


def test_self_coherence_against_direct_sum_and_bare_transform(benchmark, light, tau):
    ratio = np.exp(-2j * np.pi * light.step_si * (tau[1] - tau[0]))
    bare = median(lambda: czt(light.density, DELAYS, ratio), 15)
    plain = median(lambda: direct_sum(light, tau), 3)
    gamma = benchmark(self_coherence_si, light, tau)
    ours = median(lambda: self_coherence_si(light, tau), 15)
    benchmark.extra_info.update(direct_over_ours=round(plain / ours), ours_over_bare=round(ours / bare, 2))
    assert np.max(np.abs(gamma - direct_sum(light, tau))) < 1e-4  # the plain sum takes cells for points
    assert plain / ours >= 100
    assert ours / bare <= 4
