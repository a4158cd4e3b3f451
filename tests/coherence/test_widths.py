"""Coherence times and lengths: names, words, lines, and light that has none."""

import astropy.units as u
import numpy as np
import pytest
from scipy.optimize import brentq

from whitefringe.coherence import (
    COHERENCE_DEFINITIONS,
    coherence_length,
    coherence_time,
    packet_width,
)
from whitefringe.errors import InputError, UndefinedWidthError
from whitefringe.spectra import Line, Spectrum

from .shapes import CONTINUA, WIDTH

NAMES = [item.name for item in COHERENCE_DEFINITIONS]
FROM_CURVE = ["half", "e-fold", "first-null"]
BELL = CONTINUA["gaussian"]


def of(*lines, **others):
    return Spectrum(lines=lines, **others)


def laser(terahertz, strength=1.0, **widths):
    return Line(wavelength=terahertz * u.THz, strength=strength, **widths)


@pytest.mark.parametrize("name", NAMES)
def test_length_is_c_times_time_and_both_say_their_definition(name):
    light = CONTINUA["top-hat"]
    time, length = coherence_time(light, name), coherence_length(light, name)
    assert time.unit == u.fs
    assert length.to_value(u.m) == pytest.approx(299792458 * time.to_value(u.s))
    for number in (time, length):
        assert number.definition.startswith(f"{name}: ")
        assert number.definition.endswith("photon-weighted")
        assert number.citation
    assert "power-weighted" in coherence_time(light.power_weighted(), name).definition


def test_the_default_is_bandwidth_and_is_printed():
    assert str(coherence_length(CONTINUA["top-hat"])).startswith("9.9930")
    assert "(bandwidth: 1 over the full width at half maximum in frequency" in str(coherence_length(BELL))


def test_an_unknown_definition_lists_the_known():
    for function in (coherence_time, coherence_length):
        with pytest.raises(
            InputError,
            match=r"definition must be one of bandwidth, power, half, e-fold, first-null; got 'fwhm'",
        ):
            function(BELL, "fwhm")


def test_packet_width_is_the_half_length():
    width = packet_width(BELL)
    assert width.value == coherence_length(BELL, "half").value
    assert width.definition == "full width of the packet at half its greatest contrast, photon-weighted"


def test_e_fold_of_a_triangle():
    x = brentq(lambda x: np.sinc(x) ** 2 - np.exp(-1), 0.1, 0.9)
    assert coherence_time(CONTINUA["triangle"], "e-fold").to_value(u.s) * WIDTH == pytest.approx(x, rel=1e-9)


def test_half_of_two_sharp_lines():
    # 2:1 lines: |gamma|^2 = (5 + 4 cos phi) / 9, one quarter at cos phi = -11/16
    light = of(laser(508.3, 2.0), laser(508.8))
    expected = 2 * np.arccos(-11 / 16) / (2 * np.pi * 0.5e12)
    assert coherence_time(light, "half").to_value(u.s) == pytest.approx(expected, rel=1e-9)


def test_first_null_of_equal_lines_is_half_a_beat():
    assert coherence_time(of(laser(508.3), laser(508.8)), "first-null").to_value(u.ps) == pytest.approx(1, rel=1e-6)


def test_power_of_two_broad_lines():
    # apart by far more than their widths: each is alone, so half the power width of one
    pair = of(laser(500, fwhm=1 * u.GHz), laser(510, fwhm=1 * u.GHz))
    one = coherence_time(of(laser(500, fwhm=1 * u.GHz)), "power").to_value(u.ns)
    assert coherence_time(pair, "power").to_value(u.ns) == pytest.approx(one / 2, rel=1e-12)


@pytest.mark.parametrize("width", [0.002, 0.04, 0.4, 4.0])
def test_power_of_a_line_on_a_continuum(width):
    # 40 THz of continuum at density 1 and a line of 20 THz: int S^2 has the two squares and twice the product
    light = Spectrum(
        start=180 * u.THz,
        step=0.01 * u.THz,
        density=np.ones(4000),
        lines=(laser(195, 20e12, fwhm=width * u.THz),),
    )
    alone = np.sqrt(2 * np.log(2) / np.pi) / width
    picoseconds = (40 + 2 * 20 + 20**2 * alone) / (40 + 20) ** 2
    assert coherence_time(light, "power").to_value(u.ps) == pytest.approx(picoseconds, rel=1e-9)


@pytest.mark.parametrize("split", [0.5, 5.0, 20.0])
def test_e_fold_of_a_narrow_doublet_is_the_first_crossing(split):
    # 3:1 lines of one width: the beat first touches 1/e where half the line's own contrast does, near 172 ps
    light = of(laser(500, 3.0, fwhm=1.7 * u.GHz), laser(500 + split, fwhm=1.7 * u.GHz))
    beat = 1 / (split * 1e12)
    low = brentq(lambda tau: 0.5 * np.exp(-((np.pi * 1.7e9 * tau) ** 2) / (4 * np.log(2))) - np.exp(-1), 0, 1e-9, xtol=1e-18)
    found = coherence_time(light, "e-fold").to_value(u.s)
    assert low - beat < found < low + beat


def test_no_null():
    for light in (BELL, of(laser(500, fwhm=1 * u.GHz)), of(laser(500, 2.0), laser(501))):
        with pytest.raises(UndefinedWidthError, match=r"has no null: no minimum below 0\.1 before it fades; use another"):
            coherence_time(light, "first-null")


def test_contrast_that_stays_high():
    with pytest.raises(
        UndefinedWidthError,
        match=r'does not fall to 0\.5 within .* m of path difference: ask for definition="power"',
    ):
        coherence_time(of(laser(500, 9.0), laser(501)), "half")


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize(
    "lines",
    [(laser(500),), (laser(500), laser(500)), (laser(500), laser(510, strength=0.0))],
    ids=["one", "twice", "and none"],
)
def test_a_monochromatic_line_never_loses_coherence(name, lines):
    with pytest.raises(UndefinedWidthError):
        coherence_time(of(*lines), name)


def test_words_for_a_monochromatic_line():
    light = of(laser(500))
    with pytest.raises(UndefinedWidthError, match="a monochromatic line has no width, and its coherence length has no end"):
        coherence_time(light)
    with pytest.raises(UndefinedWidthError, match=r"never loses coherence: its integral of \|gamma\|\^2 has no end"):
        coherence_time(light, "power")
    with pytest.raises(UndefinedWidthError, match="a monochromatic line never loses coherence"):
        coherence_time(light, "half")


@pytest.mark.parametrize("name", ["half", "e-fold"])
def test_a_coarse_grid_is_scanned_only_as_far_as_it_resolves(name):
    light = Spectrum.from_samples(np.linspace(170, 230, 61) * u.THz, np.hanning(61))
    fine = Spectrum.from_samples(np.linspace(170, 230, 6001) * u.THz, np.hanning(6001))
    assert coherence_time(light, name).to_value(u.fs) == pytest.approx(coherence_time(fine, name).to_value(u.fs), rel=1e-2)


def test_half_of_a_lamp_with_a_laser_line():
    # continuum and line of equal rate: the packet of the continuum fades to one half, which only the line's own width takes below
    light = Spectrum(
        start=180 * u.THz,
        step=20 / 8192 * u.THz,
        density=np.ones(8192),
        lines=(laser(190, 16e12, fwhm=1 * u.GHz),),
    )
    x = brentq(lambda x: (20 * np.sinc(x) + 16) / 36 - 0.5, 0.1, 0.99)
    assert coherence_time(light, "half").to_value(u.s) == pytest.approx(2 * x / 20e12, rel=1e-4)
