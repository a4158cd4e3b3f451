"""Mirrors, windows and detectors: powers of a fraction, tables, and what they refuse."""

import dataclasses

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import InputError
from whitefringe.spectra import (
    TRAIN_SHAPES,
    Detector,
    Filter,
    Flat,
    Gaussian,
    Lines,
    Mirrors,
    Tabulated,
    Thermal,
    TopHat,
    WavelengthTable,
    Windows,
    detected,
    parameters_of,
)
from whitefringe.spectra import Line as OneLine
from whitefringe.units import SPEED_OF_LIGHT as C

from .. import contracts

BAND = TopHat(centre=1.65 * u.um, width=0.3 * u.um)
TABLE = WavelengthTable(wavelength=[1.4, 1.6, 1.9] * u.um, values=[0.9, 0.98, 0.95], origin="silver.csv")
FIELD = {Mirrors: "reflectivity", Windows: "throughput", Detector: "efficiency"}


@pytest.mark.parametrize("member", TRAIN_SHAPES, ids=lambda member: member.shape)
def test_names_words_and_parameters(member):
    part = member(**{FIELD[member]: 0.9})
    contracts.has_a_name(member)
    contracts.has_a_docstring(member)
    contracts.is_frozen(part)
    assert isinstance(part, Filter)
    assert parameters_of(member) == {}
    assert part == dataclasses.replace(part)


@pytest.mark.parametrize("member", TRAIN_SHAPES, ids=lambda member: member.shape)
@pytest.mark.parametrize("value", [0.9, 1, TABLE])
def test_a_fraction_of_every_photon(member, value):
    part = member(**{FIELD[member]: value})
    assert part.support_si == (0.0, np.inf)
    at = np.array([[1.45, 1.6], [1.7, 1.85]]) * u.um
    once = TABLE.at(at) if value is TABLE else np.full(at.shape, float(value))
    assert part.transmission(at) == pytest.approx(once)
    assert part.transmission((C / at.to_value(u.m)) * u.Hz) == pytest.approx(once)


@pytest.mark.parametrize(("member", "count"), [(Mirrors, 0), (Mirrors, 11), (Windows, 3)])
@pytest.mark.parametrize("value", [0.97, TABLE])
def test_to_the_power_of_the_number(member, count, value):
    part = member(**{FIELD[member]: value}, count=count)
    once = 0.98 if value is TABLE else value
    assert float(part.transmission(1.6 * u.um)) == pytest.approx(once**count)


def test_a_constant_train_changes_the_rate_only():
    bare = detected(Thermal(temperature=2900 * u.K), BAND)
    train = (Mirrors(reflectivity=0.97, count=11), Windows(throughput=0.92, count=2), Detector(efficiency=0.7))
    light = detected(Thermal(temperature=2900 * u.K), BAND, *train)
    assert light.extent_si == bare.extent_si
    assert light.density == pytest.approx(bare.density * 0.97**11 * 0.92**2 * 0.7)


def test_a_tabulated_train_is_exact_across_its_kink():
    light = detected(Flat(), BAND, Mirrors(reflectivity=TABLE, count=5))
    at = light.frequency_si[::700]
    assert light.density_si(at) == pytest.approx(TABLE.at(at * u.Hz) ** 5, rel=1e-6)


def test_a_table_must_cover_the_light():
    with pytest.raises(InputError, match=r"silver.csv: the table goes from 1.4 to 1.9 um, but light at .* um was asked for"):
        detected(Flat(), Mirrors(reflectivity=TABLE), Gaussian(centre=1.8 * u.um, fwhm=0.1 * u.um))


def test_lines_are_weakened():
    lamp = Lines([OneLine(wavelength=1.6 * u.um, fwhm=1 * u.GHz), OneLine(wavelength=1.65 * u.um, strength=2.0)])
    first, second = detected(lamp, Mirrors(reflectivity=TABLE, count=2), Detector(efficiency=0.5)).lines
    assert first.strength == pytest.approx(0.5 * 0.98**2, rel=1e-6)
    assert second.strength == pytest.approx(0.975**2)


def test_a_train_bounds_no_light():
    with pytest.raises(InputError, match="nothing bounds the light: give at least one filter"):
        detected(Flat(), Mirrors(reflectivity=0.97))


def test_a_table_filter_serves_as_a_detector_as_well():
    efficiency = Tabulated(wavelength=[1.4, 1.5, 1.7, 1.8] * u.um, transmission_values=[0, 0.7, 0.8, 0], origin="detector")
    light = detected(Flat(), efficiency, Mirrors(reflectivity=0.9))
    assert light.extent_si == pytest.approx(efficiency.support_si)
    assert float(light.density_at(1.6 * u.um)) == pytest.approx(0.9 * 0.75, rel=1e-6)


@pytest.mark.parametrize("member", TRAIN_SHAPES, ids=lambda member: member.shape)
@pytest.mark.parametrize("value", [0, -0.1, 1.01, np.nan, "silver", True, None])
def test_what_is_no_fraction(member, value):
    name = FIELD[member]
    with pytest.raises(InputError, match=rf"{name} must be above 0 and at most 1, or a spectra.WavelengthTable; got"):
        member(**{name: value})


@pytest.mark.parametrize(("count", "message"), [(-1, "count must be at least 0"), (1.5, "count must be a whole number; got 1.5")])
@pytest.mark.parametrize("member", [Mirrors, Windows])
def test_what_is_no_number_of_parts(member, count, message):
    with pytest.raises(InputError, match=message):
        member(**{FIELD[member]: 0.9}, count=count)
