"""At the edge of detection: false alarms, missed packets, and the upper limit that a refusal states."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import NoFringeError, WhitefringeError
from whitefringe.scans import reduce_scan, spectrum_from_scan

PATH = np.linspace(-60.0, 60.0, 601)


def refusal_of(scan):
    """The refusal, or None for a scan that was reduced."""
    try:
        reduce_scan(scan)
    except WhitefringeError as error:
        return error
    return None


@pytest.fixture(scope="module")
def noise_refusals(noise_scan):
    return [refusal_of(noise_scan(seed)) for seed in range(300)]


def test_noise_is_not_taken_for_fringes(noise_refusals):
    assert sum(not isinstance(error, NoFringeError) for error in noise_refusals) <= 1


def test_refusals_state_a_sane_limit(noise_refusals):
    limits = np.array([error.upper_limit for error in noise_refusals if isinstance(error, NoFringeError)])
    assert np.all((limits > 0) & (limits < 0.05))
    assert all(error.confidence == 0.95 for error in noise_refusals if isinstance(error, NoFringeError))


def test_the_refusal_says_what_may_have_been_missed(noise_scan):
    with pytest.raises(NoFringeError, match=r"no fringes above the noise; a packet longer than .* below 0\.0\d+ \(95 %\)") as caught:
        reduce_scan(noise_scan(0))
    assert f"{caught.value.upper_limit:.2g}" in str(caught.value)


def test_the_limit_falls_with_the_noise(scan_of):
    def limit(photons):
        return refusal_of(scan_of(PATH, np.random.default_rng(1).poisson(photons, PATH.size))).upper_limit

    assert limit(1_000) / limit(100_000) == pytest.approx(10.0, rel=0.15)


def test_a_spoilt_sample_does_not_lead_to_an_impossible_limit(scan_of):
    counts = np.random.default_rng(1).poisson(20_000, PATH.size).astype(float)
    counts[500] = 1e7
    error = refusal_of(scan_of(PATH, counts))
    assert error is not None
    assert getattr(error, "upper_limit", 0.5) <= 1


@pytest.mark.parametrize("contrast", [0.008, 0.010, 0.013, 0.018])
def test_a_packet_above_the_limit_is_missed_in_one_case_of_twenty_at_most(lamp_scan, contrast):
    # the bench's packet, 12.3 um, is longer than a twelfth of this scan, as the limit's sentence asks
    cases = 100
    refusals = [refusal_of(lamp_scan(seed=seed, contrast=contrast)) for seed in range(cases)]
    limits = np.array([error.upper_limit for error in refusals if isinstance(error, NoFringeError)])
    assert np.mean(limits < contrast) * limits.size / cases <= 0.05 + 3 * np.sqrt(0.05 * 0.95 / cases)


@pytest.mark.parametrize("seed", range(20))
def test_a_contrast_of_five_percent_is_found(lamp_scan, seed):
    result = reduce_scan(lamp_scan(seed=seed, contrast=0.05))
    assert abs(float(result.contrast.value) - 0.05) < 4 * float(result.contrast.uncertainty)
    assert abs(result.opd_centre.value - 3.7 * u.um) < 4 * result.opd_centre.uncertainty
    assert result.signal_to_noise == pytest.approx(float(result.contrast.value / result.contrast.uncertainty))


def test_no_line_above_the_noise(noise_scan):
    with pytest.raises(NoFringeError, match=r"no line above the noise; amplitude below 0\.0\d+ \(95 %\)") as caught:
        spectrum_from_scan(noise_scan(0))
    assert 0 < caught.value.upper_limit < 0.05


def test_lines_are_rarely_found_in_noise(noise_scan):
    found = 0
    for seed in range(100):
        try:
            spectrum_from_scan(noise_scan(seed))
        except NoFringeError:
            continue
        found += 1
    assert found <= 1
