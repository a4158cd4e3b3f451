"""Line profiles: widths, degree of coherence, and what a line refuses."""

import astropy.units as u
import numpy as np
import pytest
from scipy.integrate import quad

from whitefringe.errors import InputError, UnitsError
from whitefringe.spectra import Line

from ..published import rows


def voigt(row):
    gaussian, lorentzian = float(row.inputs["gaussian"]), float(row.inputs["lorentzian"])
    return Line(wavelength=500 * u.THz, gaussian_fwhm=gaussian * u.GHz, lorentzian_fwhm=lorentzian * u.GHz)


@pytest.mark.parametrize("row", rows("closed_forms", "voigt contrast"))
def test_voigt_contrast(row):
    assert abs(voigt(row).coherence_si(float(row.inputs["tau"]) * 1e-9)) == row.approx()


@pytest.mark.parametrize("row", rows("closed_forms", "voigt full width"))
def test_voigt_full_width(row):
    assert voigt(row).fwhm_si / 1e9 == row.approx()


@pytest.mark.parametrize("row", rows("closed_forms", "voigt full width by formula"))
def test_voigt_full_width_agrees_with_olivero_and_longbothum(row):
    assert voigt(row).fwhm_si / 1e9 == row.approx()


@pytest.mark.parametrize("row", rows("closed_forms", "contrast", shape=("gaussian", "lorentzian")))
def test_gaussian_and_lorentzian_lines(row):
    line = Line(wavelength=633 * u.nm, fwhm=2 * u.GHz, profile=row.inputs["shape"])
    assert abs(line.coherence_si(float(row.inputs["x"]) / 2e9)) == row.approx()


@pytest.mark.parametrize("row", rows("sources", "vacuum wavelength"))
def test_wavelength_of_a_frequency(row):
    line = Line(wavelength=row.value * row.unit)
    assert line.frequency_si == pytest.approx(row.quantity("frequency").to_value(u.Hz), rel=row.tolerance)


@pytest.mark.parametrize("profile", ["gaussian", "lorentzian"])
def test_profile_is_the_transform_of_its_coherence(profile):
    line = Line(wavelength=500 * u.THz, fwhm=1 * u.GHz, profile=profile)
    for offset in (0.0, 0.3e9, 1.1e9):
        wave = quad(lambda tau: abs(line.coherence_si(tau * 1e-9)), 0, 40, weight="cos", wvar=2 * np.pi * offset / 1e9)
        assert line.density_si(500e12 + offset) == pytest.approx(2e-9 * wave[0], rel=1e-7)


def test_density_has_unit_area():
    line = Line(wavelength=500 * u.THz, gaussian_fwhm=1 * u.GHz, lorentzian_fwhm=0.1 * u.GHz)
    offsets = np.linspace(-200e9, 200e9, 400_001)
    # a Lorentzian wing beyond 200 GHz on both sides holds 2 (dL/2) / (pi 200 GHz)
    assert np.trapezoid(line.density_si(500e12 + offsets), offsets) == pytest.approx(1 - 0.1 / (np.pi * 200), abs=1e-7)


def test_phase_turns_with_a_minus_sign():
    line = Line(wavelength=200 * u.THz)
    assert line.coherence_si(0.25 / 200e12) == pytest.approx(-1j)


def test_a_width_in_wavelength_is_converted_exactly():
    line = Line(wavelength=600 * u.nm, fwhm=1 * u.nm)
    assert line.fwhm_si == pytest.approx(299792458 * (1 / 599.5e-9 - 1 / 600.5e-9))


def test_default_profiles():
    assert Line(wavelength=1 * u.um).profile == "monochromatic"
    assert Line(wavelength=1 * u.um, fwhm=1 * u.GHz).profile == "gaussian"
    assert Line(wavelength=1 * u.um, gaussian_fwhm=1 * u.GHz, lorentzian_fwhm=1 * u.GHz).profile == "voigt"
    assert Line(wavelength=1 * u.um).fwhm_si == 0.0


WIDTH = 1 * u.GHz


@pytest.mark.parametrize(
    ("given", "message"),
    [
        (
            {"profile": "square"},
            "profile must be one of monochromatic, gaussian, lorentzian, voigt; got 'square'",
        ),
        ({"profile": "gaussian"}, "a gaussian line needs fwhm"),
        ({"profile": "monochromatic", "fwhm": WIDTH}, "a monochromatic line takes no fwhm"),
        (
            {"profile": "voigt", "fwhm": WIDTH},
            "a voigt line takes gaussian_fwhm and lorentzian_fwhm, and no fwhm",
        ),
        ({"gaussian_fwhm": WIDTH}, "a voigt line takes gaussian_fwhm and lorentzian_fwhm"),
        (
            {"profile": "gaussian", "fwhm": WIDTH, "lorentzian_fwhm": WIDTH},
            "belong to a voigt line, not to a gaussian one",
        ),
        ({"strength": -1.0}, "strength must be zero or more; got -1.0"),
        ({"strength": np.inf}, "strength must be zero or more; got inf"),
        ({"fwhm": 0 * u.GHz}, "fwhm must be above zero"),
        ({"fwhm": 3 * u.um}, "fwhm must be less than twice the centre"),
    ],
)
def test_what_a_line_refuses(given, message):
    with pytest.raises(InputError, match=message):
        Line(wavelength=633 * u.nm, **given)


def test_bare_numbers_are_refused():
    with pytest.raises(UnitsError, match="wavelength must carry a unit"):
        Line(wavelength=633)
    with pytest.raises(UnitsError, match="fwhm must carry a unit"):
        Line(wavelength=633 * u.nm, fwhm=1.0)


def test_a_monochromatic_line_has_no_density():
    with pytest.raises(InputError, match="a monochromatic line has no finite spectral density"):
        Line(wavelength=633 * u.nm).density_si(4e14)
