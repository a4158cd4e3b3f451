"""Lasers: closed forms of one mode and of many, where the fringes come back, and what is refused."""

import astropy.units as u
import numpy as np
import pytest
from scipy.optimize import minimize_scalar

from whitefringe.coherence import fringe_contrast, self_coherence
from whitefringe.coherence.degree import self_coherence_si
from whitefringe.errors import InputError, UnitsError
from whitefringe.spectra import LASER_CAUTION, Line, MultimodeLaser, SingleModeLaser, detected
from whitefringe.units import SPEED_OF_LIGHT as C

from ..published import rows

RED = 633 * u.nm


def multimode(**given):
    return MultimodeLaser(**{"wavelength": RED, "cavity_length": 15 * u.cm, "gain_fwhm": 1.5 * u.GHz, **given})


def contrast(laser, opd):
    return fringe_contrast(detected(laser), u.Quantity(opd))


@pytest.mark.parametrize(
    ("options", "line"),
    [
        ({}, Line(wavelength=RED, fwhm=2 * u.MHz, profile="lorentzian")),
        ({"profile": "gaussian"}, Line(wavelength=RED, fwhm=2 * u.MHz, profile="gaussian")),
        ({"profile": "voigt", "jitter": 3 * u.MHz}, Line(wavelength=RED, lorentzian_fwhm=2 * u.MHz, gaussian_fwhm=3 * u.MHz)),
    ],
)
def test_a_single_mode_is_one_line(options, line):
    assert SingleModeLaser(wavelength=RED, linewidth=2 * u.MHz, **options).lines == (line,)


def test_single_mode_closed_form():
    # |gamma| = exp(-pi dnu tau) (references 3.1): x = 0.25 gives 0.455938127766
    laser = SingleModeLaser(wavelength=RED, linewidth=1 * u.MHz)
    assert contrast(laser, 0.25e-6 * C * u.m) == pytest.approx(0.455938127766, abs=1e-11)


@pytest.mark.parametrize("row", rows("sources", "mode spacing"))
def test_mode_spacing(row):
    laser = multimode(cavity_length=row.quantity("cavity_length"))
    assert laser.spacing.to_value(row.unit) == row.approx()
    frequencies = np.array([line.frequency_si for line in laser.lines])
    # a frequency of 5e14 Hz is stored to 0.06 Hz
    assert np.diff(frequencies) == pytest.approx(laser.spacing.to_value(u.Hz), abs=0.5)


def test_modes_follow_the_gain_down_to_a_millionth():
    laser = multimode(cavity_length=30 * u.cm)
    offsets = np.array([line.frequency_si for line in laser.lines]) - (RED.to_value(u.Hz, u.spectral()))
    strengths = np.array([line.strength for line in laser.lines])
    assert strengths == pytest.approx(np.exp(-4 * np.log(2) * (offsets / 1.5e9) ** 2), rel=1e-6)
    assert len(strengths) % 2 == 1
    assert strengths.max() == 1.0
    assert strengths.min() >= 1e-6
    # the next one on either side would be fainter
    beyond = offsets[-1] + laser.spacing.to_value(u.Hz)
    assert np.exp(-4 * np.log(2) * (beyond / 1.5e9) ** 2) < 1e-6


@pytest.mark.parametrize(("modes", "offsets"), [(1, [0]), (2, [-0.5, 0.5]), (3, [-1, 0, 1]), (4, [-1.5, -0.5, 0.5, 1.5])])
def test_so_many_modes_about_the_centre(modes, offsets):
    laser = multimode(modes=modes)
    centre = RED.to_value(u.Hz, u.spectral())
    found = [(line.frequency_si - centre) / laser.spacing.to_value(u.Hz) for line in laser.lines]
    assert found == pytest.approx(offsets, abs=1e-8)
    assert max(line.strength for line in laser.lines) == 1.0


def test_a_narrow_gain_leaves_the_modes_nearest_to_it():
    assert len(multimode(gain_fwhm=1 * u.MHz).lines) == 1
    assert len(multimode(gain_fwhm=1 * u.MHz, modes=5).lines) == 1
    pair = multimode(gain_fwhm=1 * u.kHz, modes=2).lines
    assert [line.strength for line in pair] == [1.0, 1.0]


@pytest.mark.parametrize("modes", [None, 3, 4])
@pytest.mark.parametrize("index", [1.0, 3.5])
@pytest.mark.parametrize("linewidth", [None, 1 * u.kHz])
@pytest.mark.parametrize("order", [1, 2, 7])
def test_fringes_come_back_at_multiples_of_twice_the_cavity(modes, index, linewidth, order):
    laser = multimode(modes=modes, index=index, linewidth=linewidth)
    light, period = detected(laser), 2 * index * 0.15 / C
    found = minimize_scalar(
        lambda tau: -abs(self_coherence_si(light, tau)),
        bounds=((order - 0.2) * period, (order + 0.2) * period),
        method="bounded",
        options={"xatol": 1e-9 * period},
    )
    assert abs(found.x / period - order) < 1e-6
    width = 0.0 if linewidth is None else 1e3
    assert -found.fun == pytest.approx(np.exp(-np.pi * width * order * period), abs=1e-3)


def test_heights_of_broad_modes_at_the_revivals():
    # every mode has the factor exp(-pi dnu tau)
    laser = multimode(linewidth=20 * u.MHz)
    path = 0.3 * np.arange(5)
    assert contrast(laser, path * u.m) == pytest.approx(np.exp(-np.pi * 20e6 * path / C), abs=1e-3)


def test_between_the_revivals_packets_of_the_gain_add():
    # a comb under a Gaussian of full width G is, by Poisson's sum, packets exp(-(pi G (tau - m T))^2 / (4 ln2)) at every multiple of T
    laser = multimode()
    period, gain = 0.3 / C, 1.5e9
    tau = np.linspace(0, 2.5 * period, 301)

    def packets(at):
        # one mode stands at the centre, so that all packets have the carrier's phase
        orders = np.arange(-40, 41)[:, None]
        return np.sum(np.exp(-((np.pi * gain * (at - orders * period)) ** 2) / (4 * np.log(2))), axis=0)

    expected = packets(tau) / packets(np.zeros(1))
    assert contrast(laser, tau * C * u.m) == pytest.approx(expected, abs=1e-5)


def test_the_shift_of_the_maxima_that_the_docstring_names():
    laser = multimode(linewidth=1 * u.MHz)
    light, period = detected(laser), 0.3 / C
    found = minimize_scalar(
        lambda tau: -abs(self_coherence_si(light, tau)),
        bounds=(0.9 * period, 1.1 * period),
        method="bounded",
        options={"xatol": 1e-9 * period},
    )
    assert period - found.x == pytest.approx(2 * np.log(2) * 1e6 / (np.pi * 1.5e9**2), rel=0.01)


def test_power_and_photons_hardly_differ():
    light = detected(multimode())
    opd = [0.05, 0.3] * u.m
    assert self_coherence(light, opd, weight="power") == pytest.approx(self_coherence(light, opd), abs=1e-5)


@pytest.mark.parametrize("laser", [SingleModeLaser(wavelength=RED, linewidth=1 * u.MHz), multimode()])
def test_lasers_carry_one_caution_line(laser):
    assert laser.caution == LASER_CAUTION
    for words in ("maker's label", "IEC 60825-1", "laser safety officer decides", "infrared", "nothing is classified"):
        assert words in laser.caution
    assert "\n" not in laser.caution


@pytest.mark.parametrize(
    ("given", "error", "message"),
    [
        ({"linewidth": 1 * u.MHz, "profile": "round"}, InputError, "profile must be one of lorentzian, gaussian, voigt; got 'round'"),
        ({"linewidth": 1 * u.MHz, "profile": "voigt"}, InputError, 'jitter, .* goes with profile="voigt", and only with it'),
        ({"linewidth": 1 * u.MHz, "jitter": 1 * u.MHz}, InputError, 'jitter, .* goes with profile="voigt", and only with it'),
        ({"linewidth": 1 * u.MHz, "profile": "voigt", "jitter": 0 * u.MHz}, InputError, "jitter must be above zero"),
        ({"linewidth": 0 * u.MHz}, InputError, "linewidth must be above zero"),
        ({"linewidth": 1}, UnitsError, "linewidth must carry a unit"),
        ({"linewidth": 1 * u.MHz, "wavelength": 633}, UnitsError, "wavelength must carry a unit"),
    ],
)
def test_what_a_single_mode_laser_refuses(given, error, message):
    with pytest.raises(error, match=message):
        SingleModeLaser(**{"wavelength": RED, **given})


@pytest.mark.parametrize(
    ("given", "error", "message"),
    [
        ({"wavelength": 633}, UnitsError, "wavelength must carry a unit"),
        ({"cavity_length": 0 * u.m}, InputError, "cavity_length must be above zero"),
        ({"cavity_length": 1 * u.GHz}, UnitsError, "cavity_length must be convertible to m"),
        ({"gain_fwhm": 0 * u.GHz}, InputError, "gain_fwhm must be above zero"),
        ({"linewidth": 0 * u.GHz}, InputError, "linewidth must be above zero"),
        ({"index": 0.9}, InputError, "index must be at least 1; got 0.9"),
        ({"modes": 0}, InputError, "modes must be at least 1 and at most 2000; got 0"),
        ({"modes": 2.5}, InputError, "modes must be a whole number; got 2.5"),
        (
            {"gain_fwhm": 1 * u.THz},
            InputError,
            r"a cavity of 15.0 cm has more than 2000 modes .*; limit them with modes=, or use spectra.Diode",
        ),
        ({"gain_fwhm": 400 * u.THz, "cavity_length": 1 * u.um}, InputError, "the modes reach zero frequency; gain_fwhm is too wide"),
    ],
)
def test_what_a_multimode_laser_refuses(given, error, message):
    with pytest.raises(error, match=message):
        multimode(**given)
