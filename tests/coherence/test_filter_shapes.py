"""Degree of coherence behind the filter shapes that have a closed form, about their centre frequency."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.coherence import coherence_time, fringe_contrast, self_coherence
from whitefringe.spectra import Flat, Gaussian, Lorentzian, MultiCavity, SuperGaussian, TopHat, Trapezoid, detected

GIVEN = {"centre": 200 * u.THz, "fwhm": 2 * u.THz}
X = np.linspace(0.0, 4.0, 401)
"""Full width times delay."""

DELAY = X / 2e12 * u.s


def contrast(shape, samples=8192):
    return fringe_contrast(detected(Flat(), shape, samples=samples), DELAY)


def test_super_gaussian_of_order_one():
    # Goodman, Statistical Optics, sec. 5.1: exp(-(pi x)^2 / (4 ln 2))
    expected = np.exp(-((np.pi * X) ** 2) / (4 * np.log(2)))
    assert np.max(np.abs(contrast(SuperGaussian(order=1, **GIVEN)) - expected)) < 1e-9
    assert np.max(np.abs(contrast(SuperGaussian(order=1, **GIVEN)) - contrast(Gaussian(**GIVEN)))) < 1e-12


def test_a_super_gaussian_of_high_order_tends_to_the_top_hat():
    errors = [np.max(np.abs(contrast(SuperGaussian(order=order, **GIVEN)) - np.abs(np.sinc(X)))) for order in (5, 10, 20)]
    assert errors[0] > errors[1] > errors[2]
    assert errors[2] < 0.02


@pytest.mark.parametrize("share", [0.1, 0.5, 1.0])
def test_trapezoid(share):
    # convolution theorem: the product of two sinc; with share 1 the triangle's sinc^2
    light = detected(Flat(), Trapezoid(edge=share * 2 * u.THz, **GIVEN))
    expected = np.sinc(X) * np.sinc(share * X) * np.exp(-2j * np.pi * 100 * X)
    assert np.max(np.abs(self_coherence(light, DELAY) - expected)) < 1e-9


@pytest.mark.parametrize("reach", [20, 49, 98])
def test_lorentzian_to_what_it_leaves_out(reach):
    # Goodman, Statistical Optics, sec. 5.1: exp(-pi |x|); the cut changes it by twice the missing part at most
    shape = Lorentzian(reach=reach, centre=200 * u.THz, fwhm=2 * u.THz)
    error = np.max(np.abs(contrast(shape) - np.exp(-np.pi * X)))
    assert shape.missing / 10 < error < 2 * shape.missing
    assert error < 2.1 * (1 - 2 / np.pi * np.arctan(2 * reach))


def test_the_cut_rounds_the_cusp_at_zero_delay():
    # within 1/(2 reach fwhm) of zero |gamma| falls more slowly than the endless shape's, whose slope there is -pi
    shape = Lorentzian(reach=25, **GIVEN)
    near = np.array([0.0, 0.1, 0.2]) / 50
    found = fringe_contrast(detected(Flat(), shape), near / 2e12 * u.s)
    assert np.all(found[1:] > np.exp(-np.pi * near[1:]))
    # a parabola: four times the loss at twice the delay, where a cusp would have twice
    assert (1 - found[2]) / (1 - found[1]) == pytest.approx(4, rel=0.02)


def test_two_cavities():
    # contour integral of 1 / (1 + t^4): exp(-k/sqrt2) (cos(k/sqrt2) + sin(k/sqrt2)), k = pi fwhm |tau|; derived
    k = np.pi * X / np.sqrt(2)
    expected = np.abs(np.exp(-k) * (np.cos(k) + np.sin(k)))
    shape = MultiCavity(cavities=2, **GIVEN)
    assert np.max(np.abs(contrast(shape) - expected)) < 2 * shape.missing
    assert shape.missing < 1e-4


def test_one_cavity_is_the_lorentzian():
    assert np.array_equal(contrast(MultiCavity(cavities=1, **GIVEN)), contrast(Lorentzian(**GIVEN)))


def test_power_coherence_time_of_shapes():
    # integral of |gamma|^2 = int S^2 / (int S)^2; trapezoid of flank e: (1 - e/3) / fwhm; derived
    light = detected(Flat(), Trapezoid(edge=1 * u.THz, **GIVEN))
    assert coherence_time(light, "power").to_value(u.ps) * 2 == pytest.approx(1 - 0.5 / 3, rel=1e-7)
    top = detected(Flat(), TopHat(centre=200 * u.THz, width=2 * u.THz))
    assert coherence_time(top, "power").to_value(u.ps) * 2 == pytest.approx(1, rel=1e-9)
