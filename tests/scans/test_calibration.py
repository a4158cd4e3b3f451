"""Error bars against simulation: one-sigma intervals hold the truth in two cases out of three."""

import numpy as np
import pytest

from whitefringe import demo
from whitefringe.scans import reduce_scan

NAMES = ("opd_centre", "contrast", "packet_width", "packet_width_fringes", "wavelength")
SEEDS, FAINT_SEEDS = 500, 300


def pulls_of(scans, truth):
    """(value - truth) / sigma for each scan, by name."""
    results = [reduce_scan(scan) for scan in scans]
    columns = {}
    for name in NAMES:
        numbers = [getattr(result, name) for result in results]
        value = np.array([number.value.value for number in numbers])
        sigma = np.array([number.uncertainty.value for number in numbers])
        columns[name] = (value - truth[name]) / sigma
    return columns


@pytest.fixture(scope="module")
def bench_pulls(truth):
    return pulls_of((demo.bench_scan(seed=seed) for seed in range(SEEDS)), truth)


@pytest.fixture(scope="module")
def faint_pulls(truth, lamp_scan):
    faint = {"photons_per_sample": 2_000.0, "drift": 0.15, "read_noise": 12.0}
    return pulls_of((lamp_scan(seed=seed, **faint) for seed in range(FAINT_SEEDS)), truth)


@pytest.mark.parametrize("name", NAMES)
def test_one_sigma_intervals_hold_the_truth_in_two_thirds_of_bench_scans(bench_pulls, name):
    assert 0.63 <= np.mean(np.abs(bench_pulls[name]) <= 1) <= 0.73


@pytest.mark.parametrize("name", NAMES)
def test_bench_numbers_are_unbiased(bench_pulls, name):
    pulls = bench_pulls[name]
    assert abs(pulls.mean()) < 4 * pulls.std(ddof=1) / np.sqrt(pulls.size)


@pytest.mark.parametrize("name", NAMES)
def test_no_bench_scan_is_far_off(bench_pulls, name):
    # 5 sigma either way happens once in 1.7 million normal draws
    assert np.max(np.abs(bench_pulls[name])) < 5


@pytest.mark.parametrize("name", NAMES)
def test_a_tenth_of_the_photons_keeps_the_calibration(faint_pulls, name):
    pulls = faint_pulls[name]
    margin = 3 * np.sqrt(0.683 * 0.317 / FAINT_SEEDS)
    assert abs(np.mean(np.abs(pulls) <= 1) - 0.683) < margin
    assert abs(pulls.mean()) < 4 * pulls.std(ddof=1) / np.sqrt(pulls.size)


def test_uncertainties_grow_as_one_over_the_root_of_the_photons(lamp_scan):
    bright = reduce_scan(lamp_scan(photons_per_sample=40_000.0))
    faint = reduce_scan(lamp_scan(photons_per_sample=2_500.0))
    for name in NAMES:
        ratio = getattr(faint, name).uncertainty / getattr(bright, name).uncertainty
        assert float(ratio) == pytest.approx(4.0, rel=0.15), name
