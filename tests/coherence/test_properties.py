"""What holds for the degree of coherence of any light."""

import astropy.units as u
import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from whitefringe.coherence import coherence_time, self_coherence_si
from whitefringe.spectra import Line, Spectrum
from whitefringe.spectra.measures import mean_frequency_si

STEP = 0.2e12

densities = arrays(float, st.integers(4, 60), elements=st.floats(0, 1, allow_subnormal=False)).filter(lambda values: values.sum() > 1e-3)
starts = st.floats(50e12, 500e12)
lines = st.builds(
    Line,
    wavelength=st.floats(100, 500).map(lambda value: value * u.THz),
    gaussian_fwhm=st.floats(1e-3, 1).map(lambda value: value * u.THz),
    lorentzian_fwhm=st.floats(1e-3, 1).map(lambda value: value * u.THz),
    strength=st.floats(0, 3e12),
)
lights = st.builds(
    lambda start, density, added: Spectrum(start=start * u.Hz, step=STEP * u.Hz, density=density, lines=tuple(added)),
    starts,
    densities,
    st.lists(lines, max_size=3),
)
delays = arrays(float, 30, elements=st.floats(-0.5 / STEP, 0.5 / STEP, allow_subnormal=False))

quick = settings(deadline=None, derandomize=True, max_examples=60)


@quick
@given(lights, delays)
def test_never_above_one(light, tau):
    assert np.max(np.abs(self_coherence_si(light, tau))) <= 1 + 1e-9


@quick
@given(starts, densities, delays)
def test_never_above_one_where_the_linear_pieces_stay_above_zero(start, density, tau):
    light = Spectrum(start=start * u.Hz, step=STEP * u.Hz, density=1 + density)
    assert np.all(np.abs(light.slopes) <= 2 * light.density)
    assert np.max(np.abs(self_coherence_si(light, tau))) <= 1 + 1e-9


@quick
@given(lights, delays)
def test_hermitian(light, tau):
    assert np.max(np.abs(self_coherence_si(light, -tau) - np.conj(self_coherence_si(light, tau)))) < 1e-10


@quick
@given(lights)
def test_one_at_zero_delay(light):
    assert abs(self_coherence_si(light, 0.0) - 1) < 1e-12


@quick
@given(starts, densities, delays, st.floats(-40e12, 40e12))
def test_a_shift_in_frequency_is_a_phase(start, density, tau, shift):
    here = Spectrum(start=start * u.Hz, step=STEP * u.Hz, density=density)
    there = Spectrum(start=(start + shift) * u.Hz, step=STEP * u.Hz, density=density)
    turned = self_coherence_si(here, tau) * np.exp(-2j * np.pi * shift * tau)
    assert np.max(np.abs(self_coherence_si(there, tau) - turned)) < 1e-9


@quick
@given(starts, densities, st.floats(0.1, 10), delays)
def test_brightness_does_not_matter(start, density, factor, tau):
    grid = {"start": start * u.Hz, "step": STEP * u.Hz}
    plain, bright = Spectrum(**grid, density=density), Spectrum(**grid, density=factor * density)
    assert np.max(np.abs(self_coherence_si(plain, tau) - self_coherence_si(bright, tau))) < 1e-9


@quick
@given(lights)
def test_the_phase_turns_at_the_mean_frequency(light):
    tau = 1e-19
    turns = -np.angle(self_coherence_si(light, tau)) / (2 * np.pi * tau)
    assert abs(turns / mean_frequency_si(light) - 1) < 1e-6


@quick
@given(starts, densities)
def test_power_width_is_at_least_one_over_the_whole_band(start, density):
    light = Spectrum(start=start * u.Hz, step=STEP * u.Hz, density=density)
    # Cauchy and Schwarz: (int S)^2 <= int S^2 times the width of the band
    assert coherence_time(light, "power").to_value(u.s) >= (1 - 1e-9) / (STEP * density.size)
