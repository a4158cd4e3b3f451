"""Effective and pivot wavelength, root-mean-square width."""

from itertools import pairwise

import astropy.units as u
import numpy as np
import pytest

from whitefringe import coherence, spectra
from whitefringe.errors import UndefinedWidthError
from whitefringe.spectra import Flat, Gaussian, Line, Lines, Tabulated, TopHat, detected

CURVE = Tabulated(wavelength=[500, 520, 560, 640, 700] * u.nm, transmission_values=[0, 0.6, 0.9, 0.3, 0])
LIGHT = detected(Flat(per="wavelength"), CURVE)


def integral(weight):
    """Integral of weight(lambda) R(lambda), exact for polynomials of degree 40, piece by piece."""
    nodes, weights = np.polynomial.legendre.leggauss(20)
    points, total = CURVE.curve.wavelength_si, 0.0
    for low, high in pairwise(points):
        wavelength = 0.5 * (low + high) + 0.5 * (high - low) * nodes
        response = np.interp(wavelength, points, CURVE.curve.transmission)
        total += 0.5 * (high - low) * float(np.sum(weights * response * weight(wavelength)))
    return total


def test_definitions_of_tokunaga_and_vacca():
    # Tokunaga & Vacca 2005, PASP 117, 421, appendix: pivot for a photon response R; mean int lambda R / int R
    pivot = np.sqrt(integral(lambda w: w) / integral(lambda w: 1 / w))
    mean = integral(lambda w: w) / integral(lambda w: np.ones_like(w))
    assert spectra.pivot_wavelength(LIGHT).to_value(u.m) == pytest.approx(pivot, rel=1e-8)
    assert spectra.effective_wavelength(LIGHT).to_value(u.m) == pytest.approx(mean, rel=1e-8)


def test_order_of_the_wavelengths():
    names = ("mean_wavelength", "pivot_wavelength", "effective_wavelength")
    values = [getattr(spectra, name)(LIGHT).to_value(u.nm) for name in names]
    assert values == sorted(values)
    assert values[2] - values[0] > 1


def test_rms_width_of_known_shapes():
    hat = TopHat(centre=200 * u.THz, width=20 * u.THz)
    assert spectra.rms_width(detected(Flat(), hat)).to_value(u.THz) == pytest.approx(20 / np.sqrt(12), rel=1e-9)
    bell = Gaussian(centre=200 * u.THz, fwhm=20 * u.THz)
    sigma = 20 / np.sqrt(8 * np.log(2))
    assert spectra.rms_width(detected(Flat(), bell)).to_value(u.THz) == pytest.approx(sigma, rel=1e-6)
    line = detected(Lines([Line(wavelength=200 * u.THz, fwhm=20 * u.THz)]))
    assert spectra.rms_width(line).to_value(u.THz) == pytest.approx(sigma, rel=1e-9)
    pair = detected(Lines([Line(wavelength=f * u.THz) for f in (199, 201)]))
    assert spectra.rms_width(pair).to_value(u.THz) == pytest.approx(1.0, rel=1e-9)


def test_rms_width_is_the_curvature_of_the_contrast():
    tau = 2e-16
    contrast = abs(coherence.self_coherence(LIGHT, tau * u.s))
    rms = spectra.rms_width(LIGHT).to_value(u.Hz)
    assert 1 - contrast == pytest.approx(0.5 * (2 * np.pi * rms * tau) ** 2, rel=1e-3)


def test_lorentzian_wings_have_no_rms():
    light = detected(Lines([Line(wavelength=633 * u.nm, fwhm=1 * u.GHz, profile="lorentzian")]))
    with pytest.raises(UndefinedWidthError, match="no root-mean-square width"):
        spectra.rms_width(light)
