"""The two-beam signal against closed forms."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe import fringes, spectra
from whitefringe.errors import InputError, UnitsError

C_UM_THZ = 299.792458  # speed of light [um THz]
OPD_UM = np.linspace(-30.0, 30.0, 1201)


def top_hat(low_thz=170.0, high_thz=200.0):
    shape = spectra.TopHat(centre=0.5 * (low_thz + high_thz) * u.THz, width=(high_thz - low_thz) * u.THz)
    return spectra.detected(spectra.Flat(), shape)


def test_a_top_hat_gives_a_sinc():
    mean, width = 185.0, 30.0
    tau = (OPD_UM - 3.7) / C_UM_THZ
    expected = 1 + 0.8 * np.sinc(width * tau) * np.cos(2 * np.pi * mean * tau + 0.6)
    signal = fringes.two_beam_signal(top_hat(), OPD_UM * u.um, opd_centre=3.7 * u.um, contrast=0.8, phase=0.6 * u.rad)
    np.testing.assert_allclose(signal, expected, atol=1e-9)


def test_sign_with_an_asymmetric_spectrum():
    """A weak line to the blue of a strong one, out of phase: only one sign of path and phase agrees."""
    frequencies, shares = np.array([170.0, 201.0]), np.array([0.75, 0.25])
    lines = tuple(spectra.Line(wavelength=f * u.THz, strength=s) for f, s in zip(frequencies, shares, strict=True))
    tau = (OPD_UM - 3.7)[:, None] / C_UM_THZ
    expected = 1 + 0.9 * np.sum(shares * np.cos(2 * np.pi * frequencies * tau + 0.6), axis=1)
    light = spectra.Spectrum(lines=lines)
    signal = fringes.two_beam_signal(light, OPD_UM * u.um, opd_centre=3.7 * u.um, contrast=0.9, phase=0.6 * u.rad)
    np.testing.assert_allclose(signal, expected, atol=1e-9)
    flipped = fringes.two_beam_signal(light, OPD_UM * u.um, opd_centre=3.7 * u.um, contrast=0.9, phase=-0.6 * u.rad)
    assert np.max(np.abs(flipped - expected)) > 0.5


def test_an_asymmetric_continuum_against_quadrature():
    light = spectra.detected(spectra.Thermal(temperature=1500 * u.K), spectra.TopHat(centre=185 * u.THz, width=60 * u.THz))
    opd = np.array([-7.3, -1.1, 0.0, 0.4, 2.9, 6.1])
    nu = np.linspace(155.0, 215.0, 200_001)
    x = nu / (20.836619123 * 1.5)  # h nu / k T, with k/h = 20.8366 GHz per kelvin
    rate = x**2 / np.expm1(x)
    turns = np.cos(2 * np.pi * nu * (opd[:, None] - 3.7) / C_UM_THZ + 0.6)
    expected = 1 + 0.85 * np.trapezoid(rate * turns, nu) / np.trapezoid(rate, nu)
    signal = fringes.two_beam_signal(light, opd * u.um, opd_centre=3.7 * u.um, contrast=0.85, phase=0.6 * u.rad)
    np.testing.assert_allclose(signal, expected, atol=1e-6)


def test_a_positive_phase_moves_fringes_to_smaller_path():
    light = spectra.Spectrum(lines=(spectra.Line(wavelength=1 * u.um),))
    crest = fringes.two_beam_signal(light, [-0.25, 0.0, 0.25] * u.um, phase=90 * u.deg)
    np.testing.assert_allclose(crest, [2.0, 1.0, 0.0], atol=1e-12)


def test_the_other_output_is_the_complement():
    one = fringes.two_beam_signal(top_hat(), OPD_UM * u.um, contrast=0.7)
    other = fringes.two_beam_signal(top_hat(), OPD_UM * u.um, contrast=0.7, phase=np.pi * u.rad)
    np.testing.assert_allclose(one + other, 2.0, atol=1e-12)


def test_scalars_shapes_and_units():
    light = top_hat()
    assert float(fringes.two_beam_signal(light, 0 * u.um, contrast=0.4)) == pytest.approx(1.4)
    grid = OPD_UM[:6].reshape(2, 3)
    assert fringes.two_beam_signal(light, grid * u.um).shape == (2, 3)
    np.testing.assert_allclose(fringes.two_beam_signal(light, grid * u.um), fringes.two_beam_signal(light, grid * 1e3 * u.nm), atol=1e-9)


def test_no_contrast_no_fringes():
    np.testing.assert_array_equal(fringes.two_beam_signal(top_hat(), OPD_UM * u.um, contrast=0.0), 1.0)


@pytest.mark.parametrize("contrast", [-0.1, 1.1, float("nan")])
def test_contrast_is_a_fraction(contrast):
    with pytest.raises(InputError, match="contrast must be from 0 to 1; got"):
        fringes.two_beam_signal(top_hat(), 0 * u.um, contrast=contrast)


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        ({"opd": 3.0}, "opd must carry a unit"),
        ({"opd": 3 * u.s}, "opd must be convertible to m"),
        ({"opd": 3 * u.um, "opd_centre": 1.0}, "opd_centre must carry a unit"),
        ({"opd": 3 * u.um, "phase": 1.0}, "phase must carry a unit"),
        ({"opd": 3 * u.um, "phase": 1 * u.m}, "phase must be convertible to rad"),
    ],
)
def test_units_are_asked_for(arguments, message):
    with pytest.raises(UnitsError, match=message):
        fringes.two_beam_signal(top_hat(), **arguments)
