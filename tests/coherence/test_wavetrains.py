"""Wave trains against closed forms: shape, shot noise of few trains, thermal light of a given spectrum, refusals."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe import spectra
from whitefringe.coherence import ENVELOPES, WaveTrains, correlate, self_coherence_si
from whitefringe.coherence._emission import impulses
from whitefringe.coherence._synthesis import carrier_si, cumulative
from whitefringe.errors import InputError, UnitsError

PS = u.ps
NAMES = [item.name for item in ENVELOPES]

LOPSIDED = spectra.Spectrum.from_function(lambda nu: (nu - 170e12) / 40e12, (170e12, 210e12))
"""A ramp: its degree of coherence about the middle is complex."""


def trains(rate=1.0, damping=10.0, envelope="damped", **others):
    return WaveTrains(rate=rate / PS, damping_time=damping * PS, envelope=envelope, **others)


def draw(source, samples, seed=1, step=1 * PS):
    return source.simulate(duration=samples * step, sample_interval=step, rng=np.random.default_rng(seed))


def train(envelope, times, damping):
    if envelope == "damped":
        return np.where(times >= 0, np.exp(-np.maximum(times, 0) / damping), 0.0)
    if envelope == "gaussian":
        return np.exp(-((times / damping) ** 2))
    return ((times >= 0) & (times < damping)).astype(float)


@pytest.mark.parametrize("envelope", NAMES)
@pytest.mark.parametrize("lag", [0.0, 3.0, 7.5, 14.0])
def test_gamma_and_g2_are_the_integrals_over_one_train(envelope, lag):
    step = 1e-3
    times = np.arange(-60, 200, step) + step / 2
    h, shifted = train(envelope, times, 10.0), train(envelope, times + lag, 10.0)
    power = np.sum(h**2) * step
    gamma = np.sum(h * shifted) * step / power
    excess = np.sum(h**2 * shifted**2) * step / power**2 / 0.3
    source = trains(0.3, 10.0, envelope)
    assert source.gamma(lag * PS).real == pytest.approx(gamma, abs=2e-4)
    assert source.gamma(-lag * PS) == source.gamma(lag * PS)
    assert source.g2(lag * PS) == pytest.approx(1 + gamma**2 + excess, abs=4e-4)


def averaged(source, samples, lags, step=1 * PS, records=8):
    """Mean of <E(t + tau) E*(t)> and of <I I> over records, with the standard errors of the means."""
    fields, pairs = [], []
    for seed in range(records):
        field = draw(source, samples, seed, step).field
        bright = np.abs(field) ** 2
        fields.append([np.vdot(field[: samples - k], field[k:]) / (samples - k) for k in lags])
        pairs.append([np.vdot(bright[: samples - k], bright[k:]) / (samples - k) for k in lags])
    return [(np.mean(x, axis=0), np.std(x, axis=0) / np.sqrt(records - 1)) for x in (np.array(fields), np.array(pairs))]


@pytest.mark.parametrize("rate", [0.04, 0.6, 4.0])
@pytest.mark.parametrize(("envelope", "damping"), [("damped", 10.0), ("gaussian", 10.0), ("box", 10.0), ("box", 10.37)])
def test_the_field_has_the_moments_of_its_trains(envelope, damping, rate):
    source = trains(rate, damping, envelope)
    lags = np.array([0, 1, 4, 9, 14])
    (field, field_error), (pairs, pairs_error) = averaged(source, 40_000, lags)
    # not divided by the mean intensity: that it is one is tested too
    assert np.all(np.abs(field - source.gamma(lags * PS)) < 5 * field_error + 1e-3)
    assert np.all(np.abs(pairs - source.g2(lags * PS)) < 5 * pairs_error + 0.005 * source.g2(lags * PS))


def test_long_gaussian_trains_are_filled_in_from_a_coarser_grid():
    source = trains(0.05, 400.0, "gaussian")
    lags = np.array([0, 1, 200, 600])
    (field, field_error), _ = averaged(source, 100_000, lags)
    assert np.all(np.abs(field - source.gamma(lags * PS)) < 5 * field_error + 1e-3)
    # smooth: the third difference of a field that turns over in 400 samples
    assert np.max(np.abs(np.diff(draw(source, 50_000).field, 3))) < 1e-6


@pytest.mark.parametrize("rate", [0.1, 1.0, 9.0])
def test_merged_trains_keep_the_second_and_fourth_cumulant(rate):
    square = np.abs(impulses(2_000_000, rate, np.random.default_rng(3))) ** 2
    assert np.mean(square) == pytest.approx(rate, rel=0.01)
    assert np.mean(square**2) == pytest.approx(2 * rate**2 + rate, rel=0.02)


@pytest.mark.parametrize("envelope", NAMES)
def test_the_first_sample_is_like_any_other(envelope):
    first = [abs(draw(trains(2.0, 10.0, envelope), 2, seed).field[0]) ** 2 for seed in range(300)]
    assert np.mean(first) == pytest.approx(1, abs=0.25)


def test_trains_longer_than_a_block_and_than_the_record():
    for envelope in NAMES:
        power = [np.mean(draw(trains(0.01, 100_000.0, envelope), 1000, seed).intensity) for seed in range(100)]
        assert np.mean(power) == pytest.approx(1, abs=0.4)


def test_thermal_light_of_an_asymmetric_spectrum_turns_the_right_way():
    source = WaveTrains(spectrum=LOPSIDED)
    step = 5 * u.fs
    light = draw(source, 200_000, step=step)
    assert light.carrier.to_value(u.THz) == pytest.approx(190)
    found = correlate(light.field, sample_interval=step, lags=20)
    tau = found.lag.to_value(u.s)
    exact = self_coherence_si(LOPSIDED, tau) * np.exp(2j * np.pi * 190e12 * tau)
    assert np.max(np.abs(found.value - exact)) < 0.02
    assert np.max(np.abs(found.value - np.conj(exact))) > 0.3
    assert np.max(np.abs(light.truth["gamma"](found.lag) - exact)) < 1e-12


def test_lines_and_continuum_in_one_field():
    lines = (
        spectra.Line(wavelength=199e12 * u.Hz, fwhm=0.2 * u.THz, profile="lorentzian", strength=0.4),
        spectra.Line(wavelength=203e12 * u.Hz, gaussian_fwhm=0.3 * u.THz, lorentzian_fwhm=0.1 * u.THz, strength=0.3),
        spectra.Line(wavelength=201e12 * u.Hz, strength=0.05),
    )
    light = spectra.Spectrum(start=200e12 * u.Hz, step=0.0625e12 * u.Hz, density=np.full(64, 0.25 / 4e12), lines=lines)
    source = WaveTrains(spectrum=light)
    step = 50 * u.fs
    found = [correlate(draw(source, 100_000, seed, step).field, sample_interval=step, lags=60).value for seed in range(12)]
    expected = source.gamma(np.arange(61) * step)
    assert np.max(np.abs(np.mean(found, axis=0) - expected)) < 0.03


@pytest.mark.parametrize("rate", [1.2e12, 20e12])
def test_the_power_below_each_frequency_is_that_of_the_folded_line(rate):
    line = spectra.Line(wavelength=200e12 * u.Hz, fwhm=1 * u.THz, profile="lorentzian")
    offset, below = cumulative(spectra.Spectrum(lines=(line,)), rate)
    # the wrapped Lorentzian in closed form (Mardia & Jupp, Directional Statistics, sec. 3.5.7: the wrapped Cauchy distribution)
    keep = np.exp(-np.pi * 1e12 / rate)
    exact = 0.5 + np.arctan((1 + keep) / (1 - keep) * np.tan(np.pi * offset[1:-1] / rate)) / np.pi
    assert np.max(np.abs(below[1:-1] - exact)) < 1e-5


def test_power_below_each_frequency_of_a_ramp():
    offset, below = cumulative(LOPSIDED, 100e12)
    exact = np.clip((offset + 20e12) / 40e12, 0, 1) ** 2
    assert np.max(np.abs(below - exact)) < 1e-9
    assert carrier_si(LOPSIDED) == pytest.approx(190e12)


def test_a_monochromatic_line_keeps_its_amplitude():
    light = spectra.Spectrum(lines=(spectra.Line(wavelength=633 * u.nm),))
    field = draw(WaveTrains(spectrum=light), 1001, step=1 * u.ns).field
    assert np.ptp(np.abs(field)) < 1e-9 * abs(field[0])


def test_same_seed_same_field_and_nothing_can_be_written():
    light, again = draw(trains(), 1000), draw(trains(), 1000)
    assert np.array_equal(light.field, again.field)
    assert light.field.size == light.time.size == light.intensity.size == 1000
    assert light.time[-1] == 999 * PS
    with pytest.raises(ValueError, match="read-only"):
        light.field[0] = 1


def test_truth_and_carrier():
    light = draw(trains(wavelength=633 * u.nm), 100)
    assert light.carrier.to_value(u.THz) == pytest.approx(473.61, abs=0.01)
    assert light.truth["trains_per_damping_time"] == pytest.approx(10)
    assert light.truth["mean_intensity"] == 1
    assert draw(trains(), 100).carrier is None


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        ({}, "wave trains need rate and damping_time, or else a spectrum"),
        ({"rate": 1 / PS}, "wave trains need rate and damping_time"),
        ({"rate": 1 / PS, "damping_time": 0 * PS}, "damping_time must be above zero"),
        ({"rate": -1 / PS, "damping_time": 1 * PS}, "rate must be above zero"),
        ({"rate": 1 / PS, "damping_time": 1 * PS, "envelope": "bell"}, "envelope must be one of damped, gaussian, box; got 'bell'"),
        ({"rate": 1 / PS, "spectrum": LOPSIDED}, "give either spectrum, or rate and damping_time, not both"),
        ({"spectrum": 3}, "spectrum must be a spectra.Spectrum"),
        ({"rate": 1 / PS, "damping_time": 1 * PS, "wavelength": -1 * u.um}, "wavelength must be positive"),
    ],
)
def test_refused_sources(arguments, message):
    with pytest.raises(InputError, match=message):
        WaveTrains(**arguments)


def test_units_are_asked_for():
    with pytest.raises(UnitsError, match="rate must carry a unit"):
        WaveTrains(rate=1.0, damping_time=1 * PS)
    with pytest.raises(UnitsError, match="damping_time must be convertible to s"):
        WaveTrains(rate=1 / PS, damping_time=1 * u.um)
    with pytest.raises(UnitsError, match="lag must carry a unit"):
        trains().gamma(3.0)


@pytest.mark.parametrize(
    ("source", "step", "samples", "message"),
    [
        (trains(), 6, 100, "sample_interval must be from 1/1000000 to 1/2 of the damping time 10.0 ps; got 6e-12 s"),
        (trains(), 1e-6, 100, "sample_interval must be from 1/1000000 to 1/2 of the damping time"),
        (trains(), 1, 0.3, "duration must be 1 to 1e.09 times sample_interval; got 0.3 times: simulate a shorter record"),
        (trains(), 1, 1e12, "duration must be 1 to 1e.09 times sample_interval; got 1e.12 times"),
        (WaveTrains(spectrum=LOPSIDED), 1, 100, "sample_interval must be at most 25 fs, one over the 40 THz .* got 1000 fs"),
    ],
)
def test_refused_records(source, step, samples, message):
    with pytest.raises(InputError, match=message):
        source.simulate(duration=step * samples * PS, sample_interval=step * PS, rng=np.random.default_rng(1))


def test_a_seed_is_no_generator():
    with pytest.raises(InputError, match=r"rng must be a numpy.random.Generator, for example numpy.random.default_rng\(1\); got 7"):
        trains().simulate(duration=100 * PS, sample_interval=1 * PS, rng=7)
