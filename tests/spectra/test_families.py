"""Every filter shape, source and line profile keeps the contract of its family."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.spectra import (
    FILTER_SHAPES,
    LINE_PROFILES,
    REPAIRS,
    SOURCE_SHAPES,
    Flat,
    Lamp,
    Line,
    Lines,
    Tabulated,
    TabulatedSource,
    Thermal,
    Tilted,
    Together,
    TopHat,
    detected,
    parameters_of,
)

from .. import contracts

BAND = (150e12, 250e12)

WITHOUT_PARAMETERS = {
    Tabulated: {"wavelength": [1.5, 1.6, 1.7] * u.um, "transmission_values": [0.0, 0.9, 0.0]},
    Flat: {},
    Lines: {"lines": [Line(wavelength=633 * u.nm)]},
    Lamp: {"name": "mercury"},
    TabulatedSource: {"wavelength": [1.5, 1.6, 1.7] * u.um, "values": [0.0, 0.9, 0.0], "quantity": "power", "per": "wavelength"},
    Together: {"sources": (Thermal(temperature=2900 * u.K), Lamp(name="mercury"))},
}
"""Arguments of the members that no slider can describe."""

LINES = {
    "monochromatic": Line(wavelength=633 * u.nm),
    "gaussian": Line(wavelength=633 * u.nm, fwhm=5 * u.GHz),
    "lorentzian": Line(wavelength=633 * u.nm, fwhm=5 * u.GHz, profile="lorentzian"),
    "voigt": Line(wavelength=633 * u.nm, gaussian_fwhm=2 * u.GHz, lorentzian_fwhm=5 * u.GHz),
}

FAMILY = [*FILTER_SHAPES, *SOURCE_SHAPES]


def built(member):
    if member in WITHOUT_PARAMETERS:
        return member(**WITHOUT_PARAMETERS[member])
    return member(**{name: item.start * item.unit for name, item in parameters_of(member).items()})


@pytest.mark.parametrize("member", FAMILY, ids=lambda member: member.shape)
def test_names_words_and_parameters(member):
    contracts.has_a_name(member)
    contracts.has_a_docstring(member)
    contracts.parameters_make_sense(member)
    contracts.is_frozen(built(member))


@pytest.mark.parametrize("member", FILTER_SHAPES, ids=lambda member: member.shape)
def test_filters(member):
    contracts.is_a_filter(built(member))
    contracts.takes_every_spectral_axis(built(member))


@pytest.mark.parametrize("member", FILTER_SHAPES, ids=lambda member: member.shape)
def test_a_tilted_filter_is_a_filter(member):
    tilted = Tilted(filter=built(member), angle=5 * u.deg)
    contracts.is_a_filter(tilted)
    contracts.takes_every_spectral_axis(tilted)
    contracts.is_frozen(tilted)


@pytest.mark.parametrize("member", SOURCE_SHAPES, ids=lambda member: member.shape)
def test_sources(member):
    contracts.is_a_source(built(member), BAND)


@pytest.mark.parametrize("member", SOURCE_SHAPES, ids=lambda member: member.shape)
def test_every_source_can_be_detected(member):
    wide = TopHat(centre=300 * u.THz, width=500 * u.THz)
    light = detected(built(member), wide, samples=64)
    assert light.weight == "photon"
    assert light.total_rate > 0


@pytest.mark.parametrize("profile", LINE_PROFILES)
def test_line_profiles(profile):
    line = LINES[profile]
    assert line.profile == profile
    contracts.is_a_line(line)
    contracts.is_frozen(line)


@pytest.mark.parametrize("family", [FILTER_SHAPES, SOURCE_SHAPES])
def test_shape_names_differ(family):
    names = [member.shape for member in family]
    assert len(set(names)) == len(names)


def test_names_of_repairs_and_profiles_differ():
    assert len(set(REPAIRS)) == len(REPAIRS)
    assert set(LINES) == set(LINE_PROFILES)


def test_shapes_of_equal_parameters_are_equal():
    first = TopHat(centre=2 * u.um, width=0.5 * u.um)
    assert first == TopHat(centre=2 * u.um, width=500 * u.nm)
    assert first != TopHat(centre=2 * u.um, width=501 * u.nm)
    assert len({first, TopHat(centre=2 * u.um, width=0.5 * u.um)}) == 1


def test_lines_have_a_source_of_no_continuum():
    lamp = Lines([LINES["gaussian"]])
    assert np.all(lamp.rate_si(np.array([1e14, 2e14])) == 0)
    assert lamp.support_si == (0.0, 0.0)
