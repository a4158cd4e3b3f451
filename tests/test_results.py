"""`Measured`: what it shows, what it refuses; and the citation keys it may name."""

import dataclasses

import astropy.units as u
import numpy as np
import pytest

from whitefringe import errors
from whitefringe.references import CITATIONS, cite
from whitefringe.results import Measured, number_text, rows_text


@pytest.mark.parametrize(
    ("value", "sigma", "unit", "text"),
    [
        (9.0837, 0.0123, u.um, "9.084 ± 0.012 um"),
        (0.87654, 0.0123, None, "0.877 ± 0.012"),
        (14640.2, 35.1, u.m, "14640 ± 35 m"),
        (1.0, 0.0996, None, "1.00 ± 0.10"),
        (-3.14159, 0.5, u.rad, "-3.14 ± 0.50 rad"),
        (1.23456789e-12, 2.3e-14, u.s, "1.2345679e-12 ± 2.3e-14 s"),
        (1.5, None, None, "1.5"),
        (1.5, None, u.dimensionless_unscaled, "1.5"),
        (123456.789, None, u.Hz, "123457 Hz"),
        (1.5, 0.0, u.um, "1.5 um"),
    ],
)
def test_two_digits_of_the_uncertainty_set_the_digits_of_the_value(value, sigma, unit, text):
    assert number_text(value, sigma, unit) == text


def test_measured_shows_its_definition():
    number = Measured(value=9.0 * u.um, uncertainty=20 * u.nm, definition="bandwidth: c / dnu")
    assert str(number) == "9.000 ± 0.020 um (bandwidth: c / dnu)"
    assert str(Measured(value=9.0 * u.um)) == "9 um"


def test_the_uncertainty_takes_the_unit_of_the_value():
    number = Measured(value=9.0 * u.um, uncertainty=20 * u.nm)
    assert number.uncertainty.unit == number.unit == u.um
    assert number.uncertainty.value == pytest.approx(0.02)


def test_conversions():
    number = Measured(value=9.0 * u.um)
    assert number.to(u.nm).unit == u.nm
    assert number.to(u.nm).value == pytest.approx(9000)
    assert number.to_value(u.m) == pytest.approx(9e-6)
    assert type(number.to_value(u.m)) is float


def test_a_plain_number_is_dimensionless():
    assert Measured(value=0.8).unit == u.dimensionless_unscaled
    assert str(Measured(value=0.8, uncertainty=0.01)) == "0.800 ± 0.010"


def test_rows_are_laid_out_in_columns():
    width = Measured(value=9.0 * u.um, uncertainty=20 * u.nm, definition="at half contrast")
    text = rows_text([("packet width", width), ("null", "there is none"), ("plain", Measured(value=2.0))])
    assert text.splitlines() == [
        "packet width  9.000 ± 0.020 um  at half contrast",
        "null          none              there is none",
        "plain         2",
    ]


def test_measured_is_frozen():
    number = Measured(value=9.0 * u.um)
    with pytest.raises(dataclasses.FrozenInstanceError):
        number.value = 8.0 * u.um


def test_an_unknown_citation_is_refused():
    with pytest.raises(KeyError, match="unknown citation key 'nobody'"):
        Measured(value=1 * u.um, citation="nobody")


@pytest.mark.parametrize("key", CITATIONS)
def test_every_citation_can_be_looked_up(key):
    source = CITATIONS[key]
    assert source.locator.startswith(("doi:10.", "ISBN ", "bibcode:", "report "))
    assert cite(key) == f"{source.short}; {source.locator}"
    assert Measured(value=np.float64(1.0), citation=key).citation == key


def test_every_error_is_in_the_tree():
    found = [item for item in vars(errors).values() if isinstance(item, type) and item.__module__ == errors.__name__]
    assert len(found) > 10
    for item in found:
        if issubclass(item, Warning):
            assert issubclass(item, errors.WhitefringeWarning)
        else:
            assert issubclass(item, errors.WhitefringeError)


def test_no_fringe_carries_its_upper_limit():
    error = errors.NoFringeError("no fringe", upper_limit=0.03)
    assert (error.upper_limit, error.confidence) == (0.03, 0.95)
    assert str(error) == "no fringe"
