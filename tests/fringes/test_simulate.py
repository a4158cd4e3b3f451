"""Simulated scans: their mean and variance are those of the model, and their truth travels with them."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe import fringes, spectra
from whitefringe.errors import InputError, UnitsError

OPD = np.linspace(-20.0, 20.0, 401) * u.um
SCANS = 400
FLUX, READ_NOISE, DARK, DRIFT = 300.0, 12.0, 200.0, 0.4


@pytest.fixture(scope="module")
def light():
    return spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))


def simulate(light, seed=0, **options):
    settings = {"contrast": 0.85, "opd_centre": 3.7 * u.um, "phase": 0.6 * u.rad, **options}
    return fringes.simulate_lamp_scan(light, opd=OPD, rng=np.random.default_rng(seed), **settings)


@pytest.fixture(scope="module")
def many(light):
    rng = np.random.default_rng(11)
    settings = {"contrast": 0.85, "opd_centre": 3.7 * u.um, "phase": 0.6 * u.rad}
    noise = {"photons_per_sample": FLUX, "drift": DRIFT, "read_noise": READ_NOISE, "dark": DARK}
    scans = [fringes.simulate_lamp_scan(light, opd=OPD, rng=rng, **settings, **noise).counts for _ in range(SCANS)]
    # three quarters of a sine: up by half the drift at a third of the scan, down by half of it at its end
    lamp = 1 + 0.5 * DRIFT * np.sin(1.5 * np.pi * np.arange(OPD.size) / (OPD.size - 1))
    return np.array(scans), FLUX * lamp * fringes.two_beam_signal(light, OPD, **settings)


def test_mean_counts(many):
    counts, photons = many
    pulls = (counts.mean(axis=0) - photons - DARK) / np.sqrt((photons + READ_NOISE**2) / SCANS)
    assert np.max(np.abs(pulls)) < 5
    assert abs(pulls.mean()) < 4 / np.sqrt(pulls.size)


def test_variance_is_that_of_photons_and_read_out(many):
    counts, photons = many
    expected = photons + READ_NOISE**2
    ratio = counts.var(axis=0, ddof=1) / expected
    # a variance from n draws scatters by sqrt(2 / n), a little more for Poisson draws
    assert np.max(np.abs(ratio - 1)) < 5.5 * np.sqrt(2 / SCANS)
    assert ratio.mean() == pytest.approx(1.0, abs=4 * np.sqrt(2 / SCANS / OPD.size))
    bright = photons > np.median(photons)
    assert ratio[bright].mean() == pytest.approx(ratio[~bright].mean(), abs=0.02)


def test_samples_are_independent(many):
    counts, photons = many
    noise = (counts - photons - DARK) / np.sqrt(photons + READ_NOISE**2)
    assert abs(np.mean(noise[:, 1:] * noise[:, :-1])) < 4 / np.sqrt(noise.size)


def test_photons_come_whole(light):
    counts = simulate(light).counts
    np.testing.assert_array_equal(counts, np.round(counts))
    assert counts.min() >= 0


def test_truth_travels(light):
    scan = simulate(light, photons_per_sample=5_000.0, drift=0.1, read_noise=3.0, dark=50.0)
    assert dict(scan.truth) == {
        "contrast": 0.85,
        "opd_centre": 3.7 * u.um,
        "photons_per_sample": 5_000.0,
        "drift": 0.1,
        "read_noise": 3.0,
        "dark": 50.0,
    }
    with pytest.raises(TypeError):
        scan.truth["contrast"] = 1.0
    np.testing.assert_allclose(scan.opd.to_value(u.um), OPD.to_value(u.um))
    with pytest.raises(ValueError, match="read-only"):
        scan.counts[0] = 1.0


def test_the_generator_decides(light):
    np.testing.assert_array_equal(simulate(light, 5).counts, simulate(light, 5).counts)
    assert np.any(simulate(light, 5).counts != simulate(light, 6).counts)


@pytest.mark.parametrize(
    "settings",
    [
        {"photons_per_sample": 0.0},
        {"photons_per_sample": -1.0},
        {"photons_per_sample": float("nan")},
        {"read_noise": -1.0},
        {"read_noise": float("nan")},
        {"drift": -0.1},
        {"drift": 1.0},
        {"drift": float("nan")},
    ],
)
def test_impossible_settings(light, settings):
    with pytest.raises(InputError, match=r"photons_per_sample must be above 0, .* and all finite"):
        simulate(light, **settings)


def test_contrast_and_units_are_checked(light):
    with pytest.raises(InputError, match="contrast must be from 0 to 1"):
        simulate(light, contrast=1.5)
    with pytest.raises(UnitsError, match="opd must carry a unit"):
        fringes.simulate_lamp_scan(light, opd=[1.0, 2.0], rng=np.random.default_rng(0))
    with pytest.raises(UnitsError, match="opd_centre must carry a unit"):
        simulate(light, opd_centre=3.7)
