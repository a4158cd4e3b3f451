"""Fourier-transform spectrum of a scan: lines at their wavelengths, and their beat."""

import astropy.units as u
import numpy as np
import pytest
from scipy.signal.windows import hann

from whitefringe import spectra
from whitefringe.errors import NoFringeError
from whitefringe.scans import Scan, spectrum_from_scan
from whitefringe.scans.spectrum import HANN_FREQUENCY_LOSS
from whitefringe.units import STEP

FIRST_NM, SECOND_NM = 579.23, 577.12
STEP_UM = 0.11
PATH = np.arange(0.0, 1600.0, STEP_UM)
SHORT = np.arange(0.0, 800.0, STEP_UM)
BEAT_UM = 1e-3 / abs(1 / FIRST_NM - 1 / SECOND_NM)


def lamp(strength):
    lines = (
        spectra.Line(wavelength=FIRST_NM * u.nm),
        spectra.Line(wavelength=SECOND_NM * u.nm, strength=strength),
    )
    return spectra.Spectrum(lines=lines)


@pytest.fixture(scope="module")
def two_lines(lamp_counts):
    def counts(seed=0, strength=0.7, path=PATH, drift=0.3):
        return lamp_counts(path, seed=seed, light=lamp(strength), photons_per_sample=500.0, drift=drift)

    return counts


@pytest.fixture(scope="module")
def found(two_lines, scan_of):
    return [spectrum_from_scan(scan_of(PATH, two_lines(seed))) for seed in range(40)]


@pytest.mark.parametrize(("index", "wavelength"), [(0, FIRST_NM), (1, SECOND_NM)])
def test_line_wavelengths(found, index, wavelength):
    lines = [spectrum.lines[index].wavelength for spectrum in found]
    pulls = np.array([(line.to_value(u.nm) - wavelength) / line.uncertainty.to_value(u.nm) for line in lines])
    assert np.max(np.abs(pulls)) < 4
    assert 0.6 < pulls.std(ddof=1) < 1.4


def test_two_lines_and_no_more(found):
    assert all(len(spectrum.lines) == 2 for spectrum in found)


def test_beat_period(found):
    for spectrum in found:
        beat = spectrum.beat_period
        assert abs(beat.to_value(u.um) - BEAT_UM) < 4 * beat.uncertainty.to_value(u.um)


def test_lines_two_and_a_half_resolutions_apart_keep_their_uncertainty(two_lines, scan_of):
    spectra_found = [spectrum_from_scan(scan_of(SHORT, two_lines(seed, path=SHORT))) for seed in range(10)]
    assert float(spectra_found[0].beat_period.value * spectra_found[0].resolution) == pytest.approx(1 / 2.5, abs=0.02)
    for index, wavelength in enumerate((FIRST_NM, SECOND_NM)):
        lines = [spectrum.lines[index].wavelength for spectrum in spectra_found]
        pulls = [(line.to_value(u.nm) - wavelength) / line.uncertainty.to_value(u.nm) for line in lines]
        assert abs(np.mean(pulls)) < 4 / np.sqrt(len(pulls))


def test_a_bright_line_keeps_its_uncertainty(lamp_counts, scan_of):
    light = spectra.Spectrum(lines=(spectra.Line(wavelength=FIRST_NM * u.nm),))
    counts = lamp_counts(SHORT, light=light, photons_per_sample=100_000.0)
    line = spectrum_from_scan(scan_of(SHORT, counts)).lines[0].wavelength
    assert abs(line.to_value(u.nm) - FIRST_NM) < 4 * line.uncertainty.to_value(u.nm)


@pytest.mark.parametrize("drift", [0.0, 0.3])
def test_amplitudes_are_contrast_times_share_of_the_light(two_lines, scan_of, drift):
    # 0.85 is the contrast, and 1 / 1.7 and 0.7 / 1.7 are the lines' shares
    spectrum = spectrum_from_scan(scan_of(PATH, two_lines(drift=drift)))
    for line, share in zip(spectrum.lines, (1 / 1.7, 0.7 / 1.7), strict=True):
        assert line.amplitude == pytest.approx(0.85 * share, rel=0.03)


def test_the_strongest_line_comes_first(two_lines, scan_of):
    lines = spectrum_from_scan(scan_of(PATH, two_lines(strength=1.6))).lines
    assert lines[0].wavelength.to_value(u.nm) == pytest.approx(SECOND_NM, abs=0.01)
    assert lines[0].amplitude > lines[1].amplitude


def test_axis_and_resolution(found):
    spectrum = found[0]
    assert spectrum.resolution.to_value(1 / u.um) == pytest.approx(2.0 / (PATH.size * STEP_UM), rel=1e-6)
    top = spectrum.frequency[np.argmax(spectrum.amplitude)]
    assert (1 / top).to_value(u.nm) == pytest.approx(FIRST_NM, abs=0.2)
    assert spectrum.frequency.shape == spectrum.amplitude.shape
    with pytest.raises(ValueError, match="read-only"):
        spectrum.amplitude[0] = 1.0


def test_wavelength_is_one_over_frequency(found):
    for line in found[0].lines:
        assert (1 / line.frequency.value).to_value(u.nm) == pytest.approx(line.wavelength.to_value(u.nm))
        relative = line.frequency.uncertainty / line.frequency.value
        assert float(relative) == pytest.approx(float(line.wavelength.uncertainty / line.wavelength.value))


def test_one_line_has_no_beat(lamp_counts, scan_of):
    light = spectra.Spectrum(lines=(spectra.Line(wavelength=FIRST_NM * u.nm),))
    spectrum = spectrum_from_scan(scan_of(PATH, lamp_counts(PATH, light=light)))
    assert len(spectrum.lines) == 1
    assert spectrum.beat_period is None


def test_without_a_scale_frequencies_are_per_step(two_lines, scan_of):
    spectrum = spectrum_from_scan(scan_of(PATH / STEP_UM, two_lines(), unit=STEP))
    assert all(line.wavelength is None for line in spectrum.lines)
    assert spectrum.frequency.unit == 1 / STEP
    assert spectrum.beat_period.unit == STEP
    assert spectrum.beat_period.value.value * STEP_UM == pytest.approx(BEAT_UM, rel=1e-3)


def test_passes_scale_the_wavelength(two_lines, scan_of):
    doubled = spectrum_from_scan(scan_of(PATH / 2, two_lines(), passes=2))
    assert doubled.lines[0].wavelength.to_value(u.nm) == pytest.approx(FIRST_NM, abs=0.01)


def test_what_the_window_costs_in_frequency():
    # for a windowed periodogram: sum w^2 n^2 sum n^2 / (sum w n^2)^2 about the middle, here for a Hann window
    n = np.arange(4000) - 1999.5
    w = hann(n.size, sym=False)
    loss = np.sum(w**2 * n**2) * np.sum(n**2) / np.sum(w * n**2) ** 2
    assert loss == pytest.approx(HANN_FREQUENCY_LOSS, abs=0.005)


def test_a_line_above_the_limit_is_missed_in_one_case_of_twenty_at_most():
    x = np.arange(1000.0)
    missed = []
    for seed in range(300):
        rng = np.random.default_rng(seed)
        amplitude = 0.0125
        counts = 1e4 * (1 + amplitude * np.cos(2 * np.pi * 0.11 * x + rng.uniform(0, 6)) + 0.03 * rng.normal(size=x.size))
        try:
            spectrum_from_scan(Scan(position=x * STEP, signals={"signal": counts}))
        except NoFringeError as error:
            missed.append(error.upper_limit < amplitude)
    assert sum(missed) <= 15 + 4 * np.sqrt(15)
