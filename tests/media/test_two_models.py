"""One path with two air models: each on its side, the step between them shown or taken out."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe import media
from whitefringe.errors import InputError, UnitsError

MOIST = {"temperature": 18 * u.deg_C, "pressure": 900 * u.hPa, "humidity": 40 * u.percent}


def two(**others):
    return media.TwoModelAir(short=media.Ciddor1996(co2=370e-6, **MOIST), long=media.Mathar2007(**MOIST), **others)


def test_each_side_has_its_model():
    air = two()
    assert air.refractive_index(1.49 * u.um) == air.short.refractive_index(1.49 * u.um)
    assert air.refractive_index(1.51 * u.um) == air.long.refractive_index(1.51 * u.um)
    both = air.group_index([[0.6, 1.2, 1.4], [1.6, 2.2, 3.5]] * u.um)
    assert both[0, 0] == air.short.group_index(0.6 * u.um)
    assert both[1, 2] == air.long.group_index(3.5 * u.um)


def test_the_step_is_a_flag_only_where_both_sides_are_used():
    air = two()
    assert air.flags([0.6, 1.4] * u.um) == () == air.flags([1.6, 2.2] * u.um)
    (flag,) = air.flags([1.4, 1.6] * u.um)
    assert flag == f"Ciddor 1996 and Mathar 2007 meet at 1.5 um with a step in n of {air.step:.2e}, left in"
    assert air.refractive_index([1.4, 1.6] * u.um).info.description == flag
    assert two(levelled=True).flags([1.4, 1.6] * u.um)[0].endswith("taken out")


def test_levelled():
    plain, level = two(), two(levelled=True)
    beside = [1.5 - 1e-9, 1.5 + 1e-9] * u.um
    assert np.diff(plain.refractive_index(beside).value)[0] == pytest.approx(plain.step, rel=1e-3)
    assert abs(np.diff(level.refractive_index(beside).value)[0]) < 1e-13
    lower = (plain.refractive_index(2.2 * u.um) - level.refractive_index(2.2 * u.um)).value
    assert lower == pytest.approx(plain.step, rel=1e-6)
    assert plain.refractive_index(0.6 * u.um) == level.refractive_index(0.6 * u.um)
    # a constant does not disperse: only n itself is changed, and the group index by as much
    assert plain.group_velocity_dispersion(2.2 * u.um) == level.group_velocity_dispersion(2.2 * u.um)


def test_two_models_under_other_conditions():
    warm = two(levelled=True).under(temperature=22 * u.deg_C)
    assert warm.short.temperature == warm.long.temperature == 22 * u.deg_C
    assert warm.levelled
    sigma = np.array([1e6 / 1.2, 1e6 / 2.2])
    shifted = two(levelled=True).refractivity_shifted_si(sigma, temperature=4.0)
    assert shifted == pytest.approx(warm.refractivity_si(sigma), rel=1e-12)
    assert two().is_air


def test_two_model_messages():
    short, long = media.Ciddor1996(**MOIST), media.Mathar2007(**MOIST)
    with pytest.raises(InputError, match="both models must have the same temperature, pressure and humidity; got Ciddor1996"):
        media.TwoModelAir(short=short, long=long.under(pressure=901 * u.hPa))
    with pytest.raises(InputError, match=r"short and long must be air models such as media\.Ciddor1996\(\.\.\.\)"):
        media.TwoModelAir(short=short, long=media.Vacuum())
    with pytest.raises(InputError, match="Mathar 2007: wavelength 1 um lies outside the windows"):
        media.TwoModelAir(short=short, long=long, meet=1 * u.um)
    with pytest.raises(InputError, match="Ciddor 1996: wavelength 2 um lies outside"):
        media.TwoModelAir(short=short, long=long, meet=2 * u.um)
    with pytest.raises(UnitsError, match="meet must carry a unit"):
        media.TwoModelAir(short=short, long=long, meet=1.5)
    with pytest.raises(InputError, match=r"meet must be one number; got an array of shape \(2,\)"):
        media.TwoModelAir(short=short, long=long, meet=[1.4, 1.5] * u.um)


def test_derivatives_of_each_side():
    dry = {"temperature": 288.15 * u.K, "pressure": 101325 * u.Pa, "humidity": 20 * u.percent}
    short, long = media.Ciddor1996(**dry, co2=370e-6), media.Mathar2007(**dry)
    air = media.TwoModelAir(short=short, long=long, meet=1.5 * u.um)
    for by in ("temperature", "pressure", "humidity"):
        for method in ("index_derivative", "group_index_derivative"):
            both = getattr(air, method)([1.3, 2.2] * u.um, by)
            assert both[0] == getattr(short, method)(1.3 * u.um, by)
            assert both[1] == getattr(long, method)(2.2 * u.um, by)
    with pytest.raises(InputError, match="vacuum does not change with the conditions of the air"):
        media.Vacuum().index_derivative(1 * u.um, "temperature")
