"""The edge: Quantities in, SI floats inside, and a clear word for everything else."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import InputError, UnitsError, WhitefringeError
from whitefringe.units import (
    SPEED_OF_LIGHT,
    STEP,
    as_delay_si,
    as_frequency_si,
    as_quantity,
    as_si,
    is_length,
    positive_si,
    read_only,
)


def test_speed_of_light_is_the_si_value():
    assert SPEED_OF_LIGHT == 299_792_458.0  # 17th CGPM (1983), resolution 1: exact


@pytest.mark.parametrize("value", [5, 5.0, True, None, "5 um", [1.0, 2.0], np.arange(3.0), [], [1 * u.um, 2]])
def test_a_bare_number_is_refused_by_name(value):
    with pytest.raises(UnitsError, match=r"width must carry a unit \(for example 1 um\); got .* without one"):
        as_si(value, u.m, "width", "um")


def test_the_wrong_unit_is_refused():
    with pytest.raises(UnitsError, match=r"width must be convertible to m \(for example 1 m\); got s"):
        as_si(3 * u.s, u.m, "width")


@pytest.mark.parametrize("bad", [np.nan, np.inf, -np.inf])
def test_what_is_not_finite_is_refused_and_counted(bad):
    with pytest.raises(InputError, match="opd must be finite; 2 of 3 values are not"):
        as_si([0, bad, bad] * u.um, u.m, "opd")


def test_units_errors_are_value_errors_of_the_package():
    assert issubclass(UnitsError, InputError)
    assert issubclass(UnitsError, ValueError)
    assert issubclass(UnitsError, WhitefringeError)


def test_a_list_of_quantities_is_one_quantity():
    assert as_si([1 * u.mm, 2 * u.m], u.m, "x") == pytest.approx([0.001, 2.0])
    assert as_quantity([1 * u.mm, 1 * u.m], "x", "any").unit == u.mm


def test_scalars_become_floats_and_arrays_keep_their_shape():
    assert type(as_si(5 * u.um, u.m, "x")) is float
    assert as_si(np.ones((2, 3)) * u.um, u.m, "x").shape == (2, 3)
    assert as_si([] * u.um, u.m, "x").shape == (0,)
    assert as_si(u.Quantity(5, u.um, dtype=int), u.m, "x") == pytest.approx(5e-6)


def test_a_delay_is_a_time_or_a_path_over_c():
    assert as_delay_si(10 * u.fs) == pytest.approx(1e-14)
    assert as_delay_si(SPEED_OF_LIGHT * u.m) == 1.0
    assert as_delay_si([[3.0]] * u.um).shape == (1, 1)


@pytest.mark.parametrize("wrong", [3 * u.K, 3 * u.Hz, 3 / u.m, 3 * u.rad, 3 * STEP])
def test_a_delay_is_nothing_else(wrong):
    with pytest.raises(UnitsError, match="delay must be a time or a path difference, for example 10 fs or 3 um; got"):
        as_delay_si(wrong)


def test_frequency_from_every_spectral_axis():
    frequency = SPEED_OF_LIGHT / 1.65e-6
    planck = 6.62607015e-34  # SI (2019), exact
    assert as_frequency_si(1.65 * u.um, "at") == pytest.approx(frequency)
    assert as_frequency_si(frequency * u.Hz, "at") == pytest.approx(frequency)
    assert as_frequency_si(1 / (1.65 * u.um), "at") == pytest.approx(frequency)
    assert as_frequency_si(planck * frequency * u.J, "at") == pytest.approx(frequency)


def test_frequency_refuses_other_units():
    with pytest.raises(UnitsError, match=r"centre must be a vacuum wavelength or a frequency, .* got K"):
        as_frequency_si(300 * u.K, "centre")


@pytest.mark.parametrize("value", [-1 * u.um, 0 * u.THz, [1, -1] * u.um, 0 * u.um, [1, 0] * u.um])
def test_frequency_must_be_positive(value):
    with pytest.raises(InputError, match="centre must be positive; got"):
        as_frequency_si(value, "centre")


def test_length_or_not():
    assert is_length(1 * u.nm)
    assert not is_length(1 * u.THz)
    assert not is_length(1 / u.cm)


def test_positive_numbers_only():
    assert positive_si(2 * u.km, u.m, "baseline") == 2000.0
    with pytest.raises(InputError, match=r"temperature must be above zero; got 0\.0 K"):
        positive_si(0 * u.K, u.K, "temperature")
    with pytest.raises(InputError, match=r"temperature must be one number; got an array of shape \(2,\)"):
        positive_si([1, 2] * u.K, u.K, "temperature")


def test_read_only_is_a_copy_that_cannot_be_written():
    values = np.arange(3.0)
    frozen = read_only(values)
    values[0] = 9.0
    assert frozen[0] == 0.0
    with pytest.raises(ValueError, match="read-only"):
        frozen[1] = 1.0


def test_a_step_of_unknown_length_is_not_a_length():
    with pytest.raises(UnitsError, match="got step"):
        as_si(3 * STEP, u.m, "opd", "um")


def test_masked_and_complex_values_are_refused():
    from astropy.utils.masked import Masked

    with pytest.raises(InputError, match="delay must be finite; 1 of 2 values are masked"):
        as_quantity(Masked([0.5, 0.6] * u.um, mask=[True, False]), "delay", "a length")
    with pytest.raises(InputError, match="delay must be real"):
        as_quantity((1 + 2j) * u.um, "delay", "a length")
