"""Degree of coherence of simple shapes against closed forms and printed digits."""

import astropy.units as u
import numpy as np
import pytest
from scipy.special import erfcx

from whitefringe.coherence import coherence_time, fringe_contrast, self_coherence
from whitefringe.spectra import Line, Spectrum

from ..published import rows
from .shapes import CENTRE, CLOSED_FORMS, WIDTH, cases, with_name


@pytest.mark.parametrize("row", rows("closed_forms", "contrast"))
def test_printed_contrasts(row):
    delay = float(row.inputs["x"]) / WIDTH * u.s
    for light in with_name(row.inputs["shape"]):
        assert fringe_contrast(light, delay) == row.approx(absolute=1e-9)


@pytest.mark.parametrize(("shape", "light"), cases())
def test_closed_forms_with_their_phase(shape, light):
    x = np.linspace(-2.6, 3.1, 401)
    expected = CLOSED_FORMS[shape](x) * np.exp(-2j * np.pi * CENTRE / WIDTH * x)
    assert np.max(np.abs(self_coherence(light, x / WIDTH * u.s) - expected)) < 1e-9


@pytest.mark.parametrize("row", rows("closed_forms", "power width"))
def test_power_widths(row):
    for light in with_name(row.inputs["shape"]):
        assert coherence_time(light, "power").to_value(u.s) * WIDTH == row.approx()


@pytest.mark.parametrize("row", rows("closed_forms", "half-contrast delay"))
def test_half_is_the_full_width_at_half_contrast(row):
    for light in with_name(row.inputs["shape"]):
        assert coherence_time(light, "half").to_value(u.s) * WIDTH / 2 == row.approx()


@pytest.mark.parametrize("row", rows("closed_forms", "e-fold delay"))
def test_e_fold_is_measured_from_zero(row):
    for light in with_name(row.inputs["shape"]):
        assert coherence_time(light, "e-fold").to_value(u.s) * WIDTH == row.approx()


@pytest.mark.parametrize("row", rows("closed_forms", "first-null delay"))
def test_first_nulls(row):
    for light in with_name(row.inputs["shape"]):
        assert coherence_time(light, "first-null").to_value(u.s) * WIDTH == row.approx()


@pytest.mark.parametrize(("shape", "light"), cases())
def test_bandwidth_is_one_over_the_full_width(shape, light):
    # a pointed peak is known to one cell: 1 / 8192
    tolerance = 1.5e-4 if shape == "triangle" else 1e-6
    assert coherence_time(light).to_value(u.s) * WIDTH == pytest.approx(1, rel=tolerance)


def voigt(row):
    gaussian, lorentzian = float(row.inputs["gaussian"]), float(row.inputs["lorentzian"])
    line = Line(wavelength=CENTRE * u.Hz, gaussian_fwhm=gaussian * u.GHz, lorentzian_fwhm=lorentzian * u.GHz)
    return gaussian, lorentzian, Spectrum(lines=(line,))


@pytest.mark.parametrize("row", rows("closed_forms", "voigt power width"))
def test_voigt_power_width(row):
    gaussian, lorentzian, light = voigt(row)
    a, b = (np.pi * gaussian) ** 2 / (2 * np.log(2)), 2 * np.pi * lorentzian
    found = coherence_time(light, "power").to_value(u.ns)
    assert found == row.approx()
    assert found == pytest.approx(np.sqrt(np.pi / a) * erfcx(b / (2 * np.sqrt(a))), rel=1e-11)


@pytest.mark.parametrize("row", rows("closed_forms", "voigt contrast"))
def test_voigt_contrast(row):
    assert fringe_contrast(voigt(row)[2], float(row.inputs["tau"]) * u.ns) == row.approx()


@pytest.mark.parametrize("row", rows("closed_forms", "voigt full width"))
def test_voigt_bandwidth(row):
    assert 1 / coherence_time(voigt(row)[2]).to_value(u.ns) == row.approx()
