"""The lag between two channels: its stated error, its sign, and channels that share nothing."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.coherence import WaveTrains, lag_between
from whitefringe.errors import InputError

STEP = {"sample_interval": 1 * u.ms}
SMOOTH = WaveTrains(rate=1 / u.ps, damping_time=5 * u.ps, envelope="gaussian")


def delayed(signal, lag):
    turned = np.fft.ifft(np.fft.fft(signal) * np.exp(-2j * np.pi * np.fft.fftfreq(signal.size) * lag))
    return turned if np.iscomplexobj(signal) else turned.real


def white(rng, noise=1.0, samples=4000):
    signal = rng.normal(size=samples)
    return delayed(signal, 7.3) + noise * rng.normal(size=samples), signal + noise * rng.normal(size=samples), 7.3


def smooth(rng, noise=0.3, samples=6000):
    """A field of narrow band under noise of every frequency, with an unknown phase between its channels."""
    signal = SMOOTH.simulate(duration=samples * u.ps, sample_interval=1 * u.ps, rng=rng).field
    both = noise * rng.normal(size=(2, samples, 2)).view(complex)[..., 0]
    return delayed(signal, -13.6) + both[0], np.exp(1.7j) * signal + both[1], -13.6


def real(rng):
    x, y, lag = smooth(rng)
    return x.real, (y * np.exp(-1.7j)).real, lag


@pytest.mark.parametrize(
    ("make", "records"),
    [(white, 600), (smooth, 300), (real, 300), (lambda rng: white(rng, 0.5, 300), 1000)],
    ids=["white", "narrow field", "narrow real", "short"],
)
def test_one_standard_error_holds_in_68_percent(make, records):
    scaled = []
    for seed in range(records):
        x, y, lag = make(np.random.default_rng(seed))
        found = lag_between(x, y, **STEP)
        scaled.append((found.to_value(u.ms) - lag) / found.uncertainty.to_value(u.ms))
    assert 0.63 <= np.mean(np.abs(scaled) < 1) <= 0.73
    assert np.abs(np.mean(scaled)) < 0.2


def test_positive_where_x_is_later():
    signal = np.random.default_rng(1).normal(size=1020)
    found = lag_between(signal[:1000], signal[20:], **STEP)
    assert found.value.unit == u.ms
    assert found.to_value(u.ms) == pytest.approx(20, abs=1e-9)
    assert lag_between(signal[20:], signal[:1000], **STEP).to_value(u.ms) == pytest.approx(-20, abs=1e-9)
    with pytest.raises(InputError, match="x and y share no signal"):
        lag_between(signal[:1000], signal[20:], longest=10 * u.ms, **STEP)


def test_channels_that_share_nothing_are_refused():
    for seed in range(100):
        x, y = np.random.default_rng(seed).normal(size=(2, 2000))
        with pytest.raises(InputError, match=r"x and y share no signal: their correlation is .* times its noise"):
            lag_between(x, y, **STEP)


@pytest.mark.parametrize(
    ("x", "y", "message"),
    [
        (np.arange(10.0), np.arange(10.0), "x must have at least 64 samples; got 10"),
        (np.arange(100.0), np.ones(100), "y does not change: it has no lag"),
        (np.arange(100.0), np.arange(101.0), "x and y must be both real or both complex, of one length; got 100 of float64 and 101"),
        (np.append(np.arange(100.0), np.inf), np.arange(101.0), "x must be finite; sample 100 is inf"),
    ],
)
def test_refused_channels(x, y, message):
    with pytest.raises(InputError, match=message):
        lag_between(x, y, **STEP)
