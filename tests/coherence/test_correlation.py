"""Correlation estimates: coverage of the stated intervals, closed forms, blocks, refusals."""

import tracemalloc

import astropy.units as u
import numpy as np
import pytest

from whitefringe.coherence import WaveTrains, correlate, intensity_correlation
from whitefringe.errors import InputError, UnitsError, WhitefringeWarning

PS = u.ps
STEP = {"sample_interval": 1 * PS}
THERMAL = WaveTrains(rate=1 / PS, damping_time=10 * PS)


def record(samples, seed=1, source=THERMAL):
    return source.simulate(duration=samples * PS, sample_interval=1 * PS, rng=np.random.default_rng(seed)).field


def covered(samples, lags, source=THERMAL, real=False):
    """Share of 200 seeds, at each lag, in which the 68 % interval holds |gamma|, and the errors over their standard errors."""
    inside, ratios = [], []
    for seed in range(200):
        field = record(samples, seed, source)
        found = correlate(field.real if real else field, lags=int(lags[-1]), **STEP)
        truth = np.abs(source.gamma(found.lag))
        low, high = found.abs_interval()
        inside.append(((low <= truth) & (truth <= high))[lags])
        ratios.append((np.abs(found.value) - truth)[lags] / found.standard_error[lags])
    return np.mean(inside, axis=0), np.array(ratios)


@pytest.mark.parametrize(
    ("source", "real"),
    [
        (THERMAL, False),
        (WaveTrains(rate=1 / PS, damping_time=10 * PS, envelope="gaussian"), False),
        (WaveTrains(rate=0.02 / PS, damping_time=10 * PS), False),
        (THERMAL, True),
    ],
    ids=["thermal", "gaussian", "few trains", "real"],
)
def test_the_interval_of_one_standard_error_holds_in_68_percent(source, real):
    lags = np.arange(1, 21) * (1 if real else 2)
    share, ratios = covered(16_000, lags, source, real)
    assert 0.63 <= np.mean(share) <= 0.73
    assert np.all((share > 0.55) & (share < 0.82))
    assert 0.9 <= np.std(ratios) <= 1.1


def test_the_complex_value_has_both_errors():
    lags = np.arange(1, 31, 3)
    scaled = []
    for seed in range(200):
        found = correlate(record(8000, seed), lags=30, **STEP)
        off = found.value - THERMAL.gamma(found.lag)
        scaled.append([off.real[lags] / found.standard_error[lags], off.imag[lags] / found.across_error[lags]])
    assert np.std(scaled, axis=(0, 2)) == pytest.approx([1, 1], abs=0.1)


@pytest.mark.parametrize("envelope", ["damped", "gaussian", "box"])
def test_the_shape_converges_to_the_closed_form(envelope):
    source = WaveTrains(rate=1 / PS, damping_time=20 * PS, envelope=envelope)
    found = correlate(record(2_000_000, 5, source), lags=60, **STEP)
    assert np.max(np.abs(found.value - source.gamma(found.lag))) < 0.012


def test_the_error_falls_as_one_over_the_square_root_of_duration():
    lengths, lags = np.array([4000, 16_000, 64_000]), np.arange(1, 30)
    actual, stated = [], []
    for samples in lengths:
        found = [correlate(record(int(samples), seed), lags=30, **STEP) for seed in range(40)]
        off = np.array([item.value - THERMAL.gamma(item.lag) for item in found])[:, lags]
        actual.append(np.sqrt(np.mean(np.abs(off) ** 2)))
        stated.append(np.sqrt(np.mean([item.standard_error[lags] ** 2 + item.across_error[lags] ** 2 for item in found])))
    slopes = [np.polyfit(np.log(lengths), np.log(errors), 1)[0] for errors in (actual, stated)]
    assert slopes == pytest.approx([-0.5, -0.5], abs=0.06)


def test_bartlett_for_white_noise_and_for_an_autoregression():
    n = 200_000
    noise = np.random.default_rng(2).normal(size=n)
    found = correlate(noise, lags=20, **STEP)
    assert found.standard_error[1:] == pytest.approx(1 / np.sqrt(n), rel=0.05)
    phi, k = np.exp(-0.1), np.arange(1, 21)
    field = record(n)
    # Bartlett 1946: var r_k for rho = phi^k of a real series; of a circular complex one half of it
    closed = ((1 + phi**2) * (1 - phi ** (2 * k)) / (1 - phi**2) - 2 * k * phi ** (2 * k)) / n
    assert correlate(field.real, lags=20, **STEP).standard_error[1:] == pytest.approx(np.sqrt(closed), rel=0.06)
    assert correlate(field, lags=20, **STEP).standard_error[1:] == pytest.approx(np.sqrt(closed / 2), rel=0.06)


def test_bias_of_short_records_is_taken_off():
    lags = [5, 20, 40]
    records = [record(1000, seed) for seed in range(400)]
    found = np.mean([correlate(item, lags=40, **STEP).value[lags] for item in records], axis=0)
    # uncorrected, the ratio of means would be low by tau / duration of itself, and one with its mean taken off by 20 / 1000
    assert np.abs(found - THERMAL.gamma(lags * PS)) == pytest.approx(0, abs=0.01)
    centred = np.mean([correlate(item, lags=40, remove_mean=True, **STEP).value[lags] for item in records], axis=0)
    assert np.abs(centred - THERMAL.gamma(lags * PS)) == pytest.approx(0, abs=0.014)


def test_two_signals_and_the_sign_of_the_lag():
    signal = record(50_010)
    late, early = signal[:50_000], signal[10:]
    found = correlate(late, 2j * early, lags=30, **STEP)
    assert found.lag[0] == -30 * PS
    assert found.lag[np.argmax(found.abs)] == 10 * PS
    # <x(t + tau) y*(t)> with y = 2j x(t + 10): -j gamma(tau - 10)
    assert np.max(np.abs(found.value + 1j * THERMAL.gamma(found.lag - 10 * PS))) < 0.06
    assert "y*(t)" in found.definition


def test_errors_of_two_noisy_channels():
    scaled = []
    for seed in range(100):
        rng = np.random.default_rng(seed)
        signal = record(6000, seed)
        x, y = (signal + 0.5 * rng.normal(size=(2, 6000)).T.copy().view(complex)[:, 0] for _ in range(2))
        found = correlate(x, y, lags=20, **STEP)
        scaled.append((np.abs(found.value) - THERMAL.gamma(found.lag).real / 1.5) / found.standard_error)
    assert np.std(scaled) == pytest.approx(1, abs=0.1)
    assert abs(np.mean(scaled)) < 0.2


def test_a_faint_correlation_has_an_interval_that_reaches_zero():
    found = [correlate(record(3000, seed), lags=200, **STEP) for seed in range(40)]
    low = np.array([item.abs_interval()[0][100:] for item in found])
    assert np.mean(low == 0) > 0.8
    assert np.all(found[0].abs_interval(0.95)[1] >= found[0].abs_interval()[1] - 1e-12)
    with pytest.raises(InputError, match="level must be between 0 and 1; got 68"):
        found[0].abs_interval(68)


def test_against_the_sum_itself():
    rng = np.random.default_rng(4)
    x, y = rng.normal(size=(2, 300)) + 40.0
    found = correlate(x, y, lags=10, **STEP)
    a, b = x - x.mean(), y - y.mean()
    plain = np.array([np.sum(a[max(k, 0) : 300 + min(k, 0)] * b[max(-k, 0) : 300 - max(k, 0)]) / (300 - abs(k)) for k in range(-10, 11)])
    # the bias that is taken off is of order 1/n of the value
    assert found.value == pytest.approx(plain / np.sqrt(np.mean(a**2) * np.mean(b**2)), abs=0.01)


@pytest.mark.parametrize("real", [False, True])
def test_pieces_give_what_the_whole_gives(tmp_path, real):
    x, y = record(100_000, 1), record(100_000, 2)
    if real:
        x, y = x.real + 3, y.real - 7
    cuts = [1, 17, 16_384, 16_385, 50_000, 99_999]
    for second in (None, y):
        whole = correlate(x, second, lags=300 * PS, **STEP)
        pieces = correlate(iter(np.split(x, cuts)), None if second is None else iter(np.split(y, cuts[::2])), lags=300, **STEP)
        assert np.max(np.abs(pieces.value - whole.value)) < 1e-12
        assert np.max(np.abs(pieces.standard_error - whole.standard_error)) < 1e-12
    np.save(tmp_path / "x.npy", x)
    mapped = correlate(np.load(tmp_path / "x.npy", mmap_mode="r"), lags=300, **STEP)
    assert np.array_equal(mapped.value, correlate(x, lags=300, **STEP).value)
    g2 = [intensity_correlation(source, lags=50, **STEP).value for source in (np.abs(x), iter(np.split(np.abs(x), cuts)))]
    assert np.max(np.abs(g2[0] - g2[1])) < 1e-12


def test_many_blocks_against_one_transform():
    x = record(100_000)
    size = 1 << 18
    spectrum = np.fft.fft(x, size)
    plain = np.fft.ifft(np.abs(spectrum) ** 2)[:101] / (x.size - np.arange(101))
    found = correlate(x, lags=100, **STEP)
    assert np.max(np.abs(found.value - plain / plain[0].real)) < 5 * 1e-4  # the bias, which is tau / duration
    whole = intensity_correlation(x, lags=100, **STEP)
    bright = np.abs(x) ** 2
    pairs = np.fft.ifft(np.abs(np.fft.fft(bright, size)) ** 2).real[:101] / (x.size - np.arange(101))
    assert np.max(np.abs(whole.value - pairs / np.mean(bright) ** 2)) < 2e-3


def repeated(samples, piece):
    for k in range(samples // piece.size):
        yield piece * np.exp(1j * k)


@pytest.mark.parametrize("reduce", [correlate, intensity_correlation])
def test_memory_does_not_grow_with_the_record(reduce):
    piece = record(100_000)
    peaks = []
    for samples in (1_500_000, 6_000_000):
        tracemalloc.start()
        reduce(repeated(samples, piece), lags=50, **STEP)
        peaks.append(tracemalloc.get_traced_memory()[1])
        tracemalloc.stop()
    # 6e6 complex samples would be 96 MB; what grows with the record would show as a factor of four
    assert peaks[1] < 60e6
    assert peaks[1] < 1.3 * peaks[0]


@pytest.mark.parametrize("rate", [50.0, 0.05], ids=["thermal", "few trains"])
def test_g2_and_the_siegert_relation(rate):
    source = WaveTrains(rate=rate / PS, damping_time=10 * PS)
    lags = np.arange(0, 40, 2)
    g2, excess = [], []
    for seed in range(40):
        found = intensity_correlation(record(40_000, seed, source), lags=40, **STEP)
        truth = source.g2(found.lag)
        g2.append(((found.value - truth) / found.standard_error)[lags])
        few = truth - 1 - np.abs(source.gamma(found.lag)) ** 2
        excess.append(((found.siegert_excess - few) / found.siegert_error)[lags])
    for scaled in (np.array(g2), np.array(excess)):
        assert 0.60 <= np.mean(np.abs(scaled) < 1) <= 0.76
        assert abs(np.mean(scaled)) < 0.3


def test_few_trains_are_told_from_thermal_light():
    few = intensity_correlation(record(200_000, 3, WaveTrains(rate=0.02 / PS, damping_time=10 * PS)), lags=20, **STEP)
    assert few.siegert_excess[0] == pytest.approx(5, abs=5 * few.siegert_error[0])
    assert few.siegert_excess[0] > 5 * few.siegert_error[0]
    many = intensity_correlation(record(200_000, 3, WaveTrains(rate=50 / PS, damping_time=10 * PS)), lags=20, **STEP)
    assert np.all(np.abs(many.siegert_excess) < 4.5 * many.siegert_error)


def test_a_recorded_intensity_has_no_field():
    field = record(50_000)
    bright = intensity_correlation(np.abs(field) ** 2, lags=20, **STEP)
    assert bright.value == pytest.approx(intensity_correlation(field, lags=20, **STEP).value, abs=1e-9)
    assert bright.siegert_excess is None


def test_a_correlation_that_does_not_die_away_is_said():
    tone = np.cos(0.3 * np.arange(4000))
    with pytest.warns(
        WhitefringeWarning, match="the correlation does not die away within 1000 samples, so its standard errors are too small"
    ):
        correlate(tone, lags=50, **STEP)


@pytest.mark.parametrize(
    ("x", "y", "others", "message"),
    [
        (np.ones((3, 4)), None, {}, r"x must be one row of real or complex numbers; got shape \(3, 4\)"),
        (np.array(["a", "b"]), None, {}, "x must be one row of real or complex numbers"),
        (np.append(np.ones(500), np.nan), None, {}, "x must be finite; sample 500 is nan"),
        (np.ones(500), None, {}, "x does not change: it has no correlation"),
        (np.arange(100.0), None, {}, "x must have at least 4 samples per lag, 400 for 100 lags; got 100"),
        (np.arange(500.0), np.arange(499.0), {}, "x and y must have the same number of samples"),
        (np.arange(500.0), np.arange(500) + 0j, {}, "x and y must be both real or both complex"),
        (iter([np.arange(9.0), np.arange(9) + 0j]), None, {}, "x must be real throughout or complex throughout; it changes at sample 9"),
        (iter([]), None, {}, "x has no samples"),
        (np.arange(500.0), None, {"lags": 0}, "lags must be at least one sample interval, 1e-12 s; got 0"),
        (np.arange(500.0), None, {"lags": [1, 2] * PS}, r"lags must be the greatest lag, one number; got an array of shape \(2,\)"),
    ],
)
def test_refused_signals(x, y, others, message):
    with pytest.raises(InputError, match=message):
        correlate(x, y, **STEP, **others)


def test_refused_intensities():
    with pytest.raises(InputError, match="x must have at least 32 samples per lag, 3200 for 100 lags; got 3000"):
        intensity_correlation(np.ones(3000), **STEP)
    with pytest.raises(InputError, match="x must have a mean intensity above zero; got -1"):
        intensity_correlation(-np.ones(4000), **STEP)
    with pytest.raises(InputError, match="x has no samples"):
        intensity_correlation(iter([]), **STEP)


def test_units_are_asked_for():
    with pytest.raises(UnitsError, match="sample_interval must carry a unit"):
        correlate(np.arange(500.0), sample_interval=1.0)
    with pytest.raises(UnitsError, match="lags must carry a unit"):
        correlate(np.arange(500.0), lags=2.5, **STEP)
