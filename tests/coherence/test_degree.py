"""`self_coherence`: its two ways of summing, shapes, units, weights and warnings."""

import warnings

import astropy.units as u
import numpy as np
import pytest

from whitefringe.coherence import fringe_contrast, self_coherence, self_coherence_si
from whitefringe.errors import InputError, ResolutionWarning, UnitsError
from whitefringe.spectra import Flat, Gaussian, Line, Spectrum, Thermal, TopHat, detected
from whitefringe.units import SPEED_OF_LIGHT

WARM = detected(Thermal(temperature=1500 * u.K), Gaussian(centre=1.65 * u.um, fwhm=250 * u.nm))
BAND = detected(Flat(), TopHat(centre=1.65 * u.um, width=0.3 * u.um))


@pytest.mark.parametrize("light", [WARM, BAND], ids=["gaussian", "top-hat"])
@pytest.mark.parametrize(
    ("first", "last", "count"),
    [(-60, 90, 1001), (0, 3, 25), (90, -60, 500), (-4000, 2000, 20001), (-1, 1, 100_001)],
)
def test_chirp_transform_agrees_with_the_direct_sum(light, first, last, count):
    micron = np.linspace(first, last, count)
    shuffled = np.random.default_rng(5).permutation(count)[:2000]
    even = self_coherence(light, micron * u.um)
    single = self_coherence(light, micron[shuffled] * u.um)
    assert np.max(np.abs(even[shuffled] - single)) < 1e-9


def test_even_delays_go_through_the_chirp_transform_and_others_do_not(monkeypatch):
    def refuse(*_):
        raise AssertionError("the other way of summing was expected")

    even = np.linspace(-20, 30, 201) * u.um
    monkeypatch.setattr("whitefringe.coherence.degree._block_sum", refuse)
    expected = self_coherence(WARM, even)
    monkeypatch.undo()
    monkeypatch.setattr("whitefringe.coherence.degree._chirp_sum", refuse)
    assert self_coherence(WARM, even[::-1][np.r_[1:201, 0]]) == pytest.approx(expected[::-1][np.r_[1:201, 0]], abs=1e-9)


def test_delays_that_are_almost_even_are_taken_as_they_are():
    delay = np.linspace(-20, 30, 201)
    delay[100] += 1e-4
    gamma = self_coherence(WARM, delay * u.um)
    assert abs(gamma[100] - self_coherence(WARM, delay[100] * u.um)) < 1e-9


def test_few_delays_agree_with_many():
    delay = np.linspace(-20, 30, 201) * u.um
    assert self_coherence(WARM, delay[:3]) == pytest.approx(self_coherence(WARM, delay)[:3], abs=1e-12)


@pytest.mark.parametrize("shape", [(), (1,), (7,), (60,), (3, 20), (2, 3, 4), (0,), (3, 0)])
@pytest.mark.parametrize("light", [WARM, Spectrum(lines=(Line(wavelength=633 * u.nm),))], ids=["continuum", "line"])
def test_the_shape_of_the_delay_is_kept(light, shape):
    delay = np.linspace(-9, 9, int(np.prod(shape))).reshape(shape) * u.um
    gamma = self_coherence(light, delay)
    assert gamma.shape == shape
    assert np.iscomplexobj(gamma)
    assert fringe_contrast(light, delay).shape == shape


def test_scalar_delay():
    assert complex(self_coherence(WARM, 0 * u.um)) == pytest.approx(1)
    assert float(fringe_contrast(WARM, 0 * u.fs)) == pytest.approx(1)


def test_constant_delays():
    assert self_coherence(WARM, np.zeros(50) * u.um) == pytest.approx(np.ones(50))


def test_a_delay_is_a_time_or_a_path():
    path = np.array([-3.0, 0.0, 7.0]) * u.um
    assert np.array_equal(self_coherence(WARM, path), self_coherence(WARM, path.to_value(u.m) / SPEED_OF_LIGHT * u.s))
    assert np.array_equal(self_coherence(WARM, path), self_coherence_si(WARM, path.to_value(u.m) / SPEED_OF_LIGHT))


@pytest.mark.parametrize("delay", [3.0, np.arange(3), [1, 2]])
def test_bare_delays_are_refused(delay):
    for function in (self_coherence, fringe_contrast):
        with pytest.raises(
            UnitsError,
            match=r"delay must carry a unit \(a time or a path difference, for example 10 fs or 3 um",
        ):
            function(WARM, delay)


def test_other_units_are_refused():
    with pytest.raises(UnitsError, match=r"delay must be a time or a path difference, .*; got K"):
        self_coherence(WARM, 3 * u.K)
    with pytest.raises(InputError, match="delay must be finite; 1 of 2 values are not"):
        self_coherence(WARM, [0, np.nan] * u.um)


def test_power_weight_multiplies_the_spectrum_by_frequency():
    low, high = 170e12, 230e12
    delay = np.linspace(-60, 40, 77) * u.um
    flat = Spectrum.from_function(np.ones_like, (low, high))
    ramp = Spectrum.from_function(lambda frequency: frequency, (low, high))
    expected = self_coherence(ramp, delay)
    assert self_coherence(flat, delay, weight="power") == pytest.approx(expected, abs=1e-9)
    assert self_coherence(flat.power_weighted(), delay) == pytest.approx(expected, abs=1e-9)
    assert self_coherence(flat.power_weighted(), delay, weight="power") == pytest.approx(expected, abs=1e-9)
    assert np.max(np.abs(self_coherence(flat, delay, weight="photon") - expected)) > 1e-3


def test_power_weight_of_lines():
    pair = Spectrum(lines=(Line(wavelength=100 * u.THz), Line(wavelength=300 * u.THz)))
    # half a beat apart the two waves are opposite: contrast |1 - 3| / (1 + 3) by power, none by photons
    delay = 1 / (2 * 200e12) * u.s
    assert fringe_contrast(pair, delay) == pytest.approx(0, abs=1e-12)
    assert abs(self_coherence(pair, delay, weight="power")) == pytest.approx(0.5)


def test_weights_that_do_not_exist():
    with pytest.raises(InputError, match='weight must be "photon" or "power"; got \'energy\''):
        self_coherence(WARM, 0 * u.um, weight="energy")
    with pytest.raises(InputError, match="already weighted by power; build it again for photon weights"):
        self_coherence(WARM.power_weighted(), 0 * u.um, weight="photon")


def test_a_delay_that_the_grid_cannot_resolve_warns():
    coarse = detected(Flat(), TopHat(centre=200 * u.THz, width=40 * u.THz), samples=40)
    edge = 1 / (2 * coarse.step_si)
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        self_coherence(coarse, np.array([-0.999, 0.999]) * edge * u.s)
    message = r"the longest delay is 2 times what this spectral grid resolves .* ask for more samples, or add lines as lines"
    with pytest.warns(ResolutionWarning, match=message):
        self_coherence(coarse, [0.0, -2 * edge] * u.s)


def test_lines_need_no_grid():
    laser = Spectrum(lines=(Line(wavelength=633 * u.nm, fwhm=1 * u.MHz),))
    contrast = np.exp(-((np.pi * 1e6 * 100 / SPEED_OF_LIGHT) ** 2) / (4 * np.log(2)))
    assert fringe_contrast(laser, 100 * u.m) == pytest.approx(contrast, rel=1e-12)


def test_continuum_and_lines_add_by_their_rates():
    line = Line(wavelength=200 * u.THz, fwhm=1 * u.THz, strength=20e12)
    both = Spectrum(start=180 * u.THz, step=0.1 * u.THz, density=np.ones(400), lines=(line,))
    delay = np.linspace(0, 300, 40) * u.um
    tau = delay.to_value(u.m) / SPEED_OF_LIGHT
    alone = np.sinc(40e12 * tau) * np.exp(-2j * np.pi * 200e12 * tau)
    assert self_coherence(both, delay) == pytest.approx((2 * alone + line.coherence_si(tau)) / 3, abs=1e-9)
