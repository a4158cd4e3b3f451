"""Air: what is refused and what is flagged, and derivatives with the conditions."""

from dataclasses import replace

import astropy.units as u
import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from whitefringe import media
from whitefringe.errors import InputError, UnitsError
from whitefringe.units import PPM

from ..contracts import has_a_docstring, has_a_name, is_frozen

MOIST = {"temperature": 18 * u.deg_C, "pressure": 900 * u.hPa, "humidity": 40 * u.percent}
WITHIN = {media.Mathar2007: (1.4, 2.4), media.BirchDowns1994: (0.36, 0.64)}
"""Wavelengths [um] inside a model's range; 0.4 to 1.6 for the others."""


def inside(model, count=7):
    return np.linspace(*WITHIN.get(model, (0.4, 1.6)), count)


@pytest.fixture(params=media.AIR_MODELS, ids=lambda model: model.shape)
def model(request):
    return request.param


# ---------------------------------------------------------------- the family


def test_family(model):
    has_a_name(model)
    has_a_docstring(model)
    is_frozen(model())
    assert model().is_air
    assert not media.Vacuum().is_air
    assert len({member.shape for member in media.AIR_MODELS}) == len(media.AIR_MODELS)


def test_shapes_and_order(model):
    air = model(**MOIST)
    where = inside(model, 6)[::-1].reshape(2, 3) * u.um
    index = air.refractive_index(where)
    assert index.shape == (2, 3)
    assert index[1, 0] == air.refractive_index(where[1, 0])
    assert air.refractive_index(where.to(u.THz, u.spectral())).value == pytest.approx(index.value, rel=1e-15)
    assert air.group_index(where[0, 0]).shape == ()
    assert air.group_index([] * u.um).shape == (0,)
    assert air.refractive_index(np.float64(where[0, 0].value) * u.um) == index[0, 0]


def test_group_index_and_dispersion_are_derivatives(model):
    """n_g = n + sigma dn/dsigma, by central differences of sixth order."""
    air = model(**MOIST)
    sigma = 1 / inside(model)
    step = 2e-3 * sigma
    factors = {1: 3 / 4, 2: -3 / 20, 3: 1 / 60}

    def slope(quantity):
        def at(shift):
            return getattr(air, quantity)(1 / (sigma + shift * step) * u.um).value

        return sum(factor * (at(k) - at(-k)) for k, factor in factors.items()) / step

    group = air.refractive_index(1 / sigma * u.um).value + sigma * slope("refractive_index")
    assert air.group_index(1 / sigma * u.um).value == pytest.approx(group, abs=2e-12)
    omega = 2 * np.pi * 0.299792458  # rad/fs for sigma = 1/um
    second = slope("group_index") / omega / 0.299792458 * 1e3  # fs2/mm
    assert air.group_velocity_dispersion(1 / sigma * u.um).value == pytest.approx(second, rel=1e-6, abs=1e-7)
    third = slope("group_velocity_dispersion") / omega
    assert air.third_order_dispersion(1 / sigma * u.um).value == pytest.approx(third, rel=1e-6, abs=1e-7)


def test_ciddor_group_index_by_mpmath():
    """Dry standard air, where the whole formula is two poles."""
    with mp.workdps(30):

        def path(s):
            return s * (mp.mpf("0.05792105") / (mp.mpf("238.0185") - s**2) + mp.mpf("0.00167917") / (mp.mpf("57.362") - s**2))

        expected = mp.diff(path, 1 / mp.mpf("0.633"))
    assert media.Ciddor1996().group_index(0.633 * u.um).value - 1 == pytest.approx(float(expected), rel=1e-11)


@given(t=st.floats(11, 24), p=st.floats(55, 102), h=st.floats(6, 59))
@settings(max_examples=20, deadline=None)
def test_models_agree_where_they_meet(t, p, h):
    """Near 1.5 um all are within 1.5e-7 of Ciddor, in all weathers that all are stated for."""
    conditions = {"temperature": t * u.deg_C, "pressure": p * u.kPa, "humidity": h * u.percent}
    ciddor = media.Ciddor1996(co2=370 * PPM, **conditions).refractive_index(1.5 * u.um)
    for other in (media.Mathar2007, media.BirchDowns1994WaterScaled):
        assert abs(other(**conditions).refractive_index(1.5 * u.um) - ciddor) < 1.5e-7


# ---------------------------------------------------------------- conditions


def test_humidity_is_relative_or_a_pressure():
    relative = media.Ciddor1996(**MOIST)
    pressure = replace(relative, humidity=relative.vapour_pressure_si * u.Pa)
    assert pressure.relative_humidity == pytest.approx(0.4, rel=1e-15)
    assert pressure.refractive_index(1 * u.um) == relative.refractive_index(1 * u.um)
    assert replace(relative, humidity=0.4 * u.one).relative_humidity == relative.relative_humidity
    assert media.Ciddor1996(humidity=100 * u.percent).relative_humidity == 1


def test_cold_air_is_saturated_over_ice():
    """Below 0 deg_C less vapour saturates the air than over supercooled water."""
    warm, cold = (media.saturation_vapour_pressure(t * u.deg_C).value for t in (0.0, -1e-6))
    assert cold == pytest.approx(warm, rel=2e-4)
    slope = [media.saturation_vapour_pressure(t * u.deg_C).value for t in (-2, -1, 1, 2)]
    assert slope[1] / slope[0] > slope[3] / slope[2]


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"humidity": 140 * u.percent}, r"humidity must be from 0 to 100 %, or up to 2064\.. Pa of vapour .* got 140\.0 % \(1\.4 of sat"),
        ({"humidity": 3000 * u.Pa}, r"up to 2064\.. Pa of vapour at this temperature; got 3000\.0 Pa \(1\.453 of saturation\)"),
        ({"humidity": -1 * u.percent}, r"humidity must be from 0 to 100 %.* got -1\.0 %"),
        ({"humidity": [10, 20] * u.Pa}, r"humidity must be one number .*; got \[10\. 20\.\] Pa"),
        ({"humidity": np.nan * u.percent}, "humidity must be finite"),
        ({"temperature": [10, 20] * u.deg_C}, r"temperature must be one number; got an array of shape \(2,\)"),
        (
            {"temperature": 1 * u.K},
            r"temperature 1 K lies outside 190 to 647 K, where the saturation pressure .* give a temperature of air",
        ),
        ({"pressure": 0 * u.Pa}, "pressure must be above zero"),
        ({"pressure": [1, 2] * u.hPa}, r"pressure must be one number; got an array of shape \(2,\)"),
        ({"saturation": "magnus"}, "saturation must be one of iapws, cipm; got 'magnus'"),
    ],
)
@pytest.mark.parametrize("extrapolate", [False, True])
def test_conditions_that_no_air_can_have(model, changes, message, extrapolate):
    with pytest.raises(InputError, match=message):
        model(**{**MOIST, **changes}, extrapolate=extrapolate)


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"humidity": 40}, r"humidity must carry a unit \(a relative humidity or a vapour pressure, for example 40 \* u\.percent"),
        ({"humidity": 3 * u.m}, "humidity must be a relative humidity or a vapour pressure, for example .*; got 3.0 m"),
        ({"temperature": 20}, "temperature must carry a unit"),
        ({"temperature": 20 * u.deg}, "temperature must be a temperature, for example 288.15 K or 15 deg_C; got deg"),
        ({"pressure": 900}, "pressure must carry a unit"),
        ({"pressure": 900 * u.m}, "pressure must be convertible to Pa"),
    ],
)
def test_units(model, changes, message):
    with pytest.raises(UnitsError, match=message):
        model(**{**MOIST, **changes})


@pytest.mark.parametrize("co2", [450e-6, 450 * PPM, 0.045 * u.percent])
def test_carbon_dioxide(co2):
    assert media.Ciddor1996(co2=co2).refractive_index(1 * u.um) == pytest.approx(media.Ciddor1996().refractive_index(1 * u.um), abs=1e-15)


def test_carbon_dioxide_messages():
    with pytest.raises(InputError, match=r"co2 must be a mole fraction from 0 to 0\.1, for example 450e-6 for 450 ppm; got 450"):
        media.Ciddor1996(co2=450)
    with pytest.raises(UnitsError, match=r"co2 must be one mole fraction, for example 450e-6 or 450 \* units\.PPM; got <Quantity 3\. m>"):
        media.Ciddor1996(co2=3 * u.m)


def test_saturation_messages():
    with pytest.raises(InputError, match="form must be one of iapws, cipm; got 'magnus'"):
        media.saturation_vapour_pressure(20 * u.deg_C, "magnus")
    with pytest.raises(InputError, match="temperature 700 K lies outside 190 to 647 K"):
        media.saturation_vapour_pressure(700 * u.K)
    with pytest.raises(InputError, match=r"temperature must be one number; got an array of shape \(2,\)"):
        media.saturation_vapour_pressure([280, 290] * u.K)
    with pytest.raises(UnitsError, match="pressure must carry a unit"):
        media.enhancement_factor(1e5, 20 * u.deg_C)


# ---------------------------------------------------------------- ranges


def test_wavelengths_beyond_the_range():
    air = media.Ciddor1996()
    with pytest.raises(InputError, match=r"Ciddor 1996: wavelength 10 um lies outside 0\.3 to 1\.7 um .*say extrapolate=True"):
        air.refractive_index(10 * u.um)
    bold = replace(air, extrapolate=True)
    found = bold.group_index([1.0, 10] * u.um)
    assert found.info.description == (
        "Ciddor 1996 extrapolated: wavelength 1 to 10 um lies outside 0.3 to 1.7 um (Stone & Zimmerman, from memory)"
    )
    assert bold.flags(1 * u.um) == ()
    assert bold.refractive_index(1.7 * u.um).info.description is None
    assert air.refractive_index(300 * u.nm) > 1  # an end that is typed in another unit is no extrapolation


@pytest.mark.parametrize(
    ("model", "changes", "words"),
    [
        (media.Ciddor1996, {"pressure": 1 * u.kPa}, r"pressure 1 kPa lies outside 10 to 140 kPa"),
        (media.Ciddor1996, {"temperature": -41 * u.deg_C}, r"temperature -41 deg_C lies outside -40 to 100 deg_C"),
        (media.Mathar2007, {"humidity": 70 * u.percent}, r"relative humidity 70 % lies outside 0 to 60 % \(fitted from 5 to 60 %"),
        (media.Mathar2007, {"temperature": 5 * u.deg_C}, r"temperature 5 deg_C lies outside 10 to 25 deg_C"),
    ],
)
def test_conditions_beyond_the_range(model, changes, words):
    conditions = {**MOIST, "humidity": 10 * u.percent, **changes}
    with pytest.raises(InputError, match=rf"{model().name}: {words}.*use another model, or say extrapolate=True"):
        model(**conditions)
    bold = model(**conditions, extrapolate=True)
    (flag,) = bold.flags()
    assert flag.startswith(f"{bold.name} extrapolated: ")
    assert bold.refractive_index(1.4 * u.um).info.description == flag
    with pytest.raises(InputError, match="use another model"):
        model(**{**MOIST, "humidity": 10 * u.percent}).under(**changes)


@pytest.mark.parametrize("wavelength", [1.29, 2.6, 4.3, 6.0, 15.0, 25.0])
def test_gaps_between_the_windows(wavelength):
    air = media.Mathar2007(**MOIST)
    message = (
        rf"Mathar 2007: wavelength {wavelength:g} um lies outside the windows 1\.3 to 2\.5, 2\.8 to 4\.2, 4\.35 to 5\.2, 7\.5 to 14\.1"
    )
    with pytest.raises(InputError, match=message):
        air.refractive_index([2.2, wavelength] * u.um)
    bold = replace(air, extrapolate=True)
    assert (
        f"extrapolated: wavelength {wavelength:g} um lies outside the windows" in bold.refractive_index(wavelength * u.um).info.description
    )
    assert bold.refractive_index(wavelength * u.um).value == pytest.approx(1.00024, abs=1e-5)


def test_all_windows_in_one_array():
    where = np.array([[1.3, 2.5, 2.8], [4.2, 4.35, 5.2], [7.5, 14.1, 16.0]]) * u.um
    air = media.Mathar2007(**MOIST)
    found = air.group_index(where)
    assert found.shape == (3, 3)
    for place, value in zip(where.ravel(), found.ravel(), strict=True):
        assert air.group_index(place) == value
    assert air.flags(where) == ()


def test_dry_air_carries_a_flag():
    air = media.Mathar2007(**{**MOIST, "humidity": 3 * u.percent})
    assert air.flags() == ("Mathar 2007 below the humidity it was fitted to: 3 % of 5 to 60 %",)
    assert air.refractive_index(2.2 * u.um).info.description == air.flags()[0]


def test_bare_wavelengths(model):
    with pytest.raises(UnitsError, match="wavelength must carry a unit"):
        model().refractive_index(1.0)
    with pytest.raises(UnitsError, match="wavelength must be a vacuum wavelength or a frequency"):
        model().flags(1 * u.kg)


# ---------------------------------------------------------------- other conditions


def test_under(model):
    air = model(**MOIST)
    assert air.under() == air
    other = air.under(temperature=290 * u.K, humidity=50 * u.percent)
    assert (other.temperature, other.pressure, other.humidity) == (290 * u.K, air.pressure, 50 * u.percent)
    with pytest.raises(InputError, match="vacuum has no temperature to set here; leave it out"):
        media.Vacuum().under(temperature=290 * u.K)


@pytest.mark.parametrize("by", ["temperature", "pressure", "humidity"])
def test_derivatives_with_the_conditions(model, by):
    """Against differences of fourth order with other steps, through the public constructor."""
    air = model(**MOIST)
    where = inside(model) * u.um
    step = {"temperature": 0.5 * u.K, "pressure": 200 * u.Pa, "humidity": 2 * u.percent}[by]

    def shifted(k):
        now = air.temperature.to(u.K, u.temperature()) if by == "temperature" else getattr(air, by)
        return air.under(**{by: now + k * step})

    for quantity, derivative in (("refractive_index", air.index_derivative), ("group_index", air.group_index_derivative)):
        at = {k: getattr(shifted(k), quantity)(where).value for k in (-2, -1, 1, 2)}
        expected = (8 * (at[1] - at[-1]) - (at[2] - at[-2])) / (12 * step)
        found = derivative(where, by)
        assert found.to_value(expected.unit) == pytest.approx(expected.value, rel=1e-6)
    sign = 1 if by == "pressure" else -1
    assert np.all(np.sign(air.index_derivative(where, by).value) == sign)


def test_derivative_messages(model):
    with pytest.raises(InputError, match="by must be one of temperature, pressure, humidity; got 'wind'"):
        model().index_derivative(inside(model)[0] * u.um, "wind")
    with pytest.raises(InputError, match="lies outside"):
        model().group_index_derivative(30 * u.um, "pressure")


def test_warmer_air_keeps_its_relative_humidity():
    air = media.Ciddor1996(**MOIST)
    warm = air.shifted_si(temperature=5.0)
    assert warm.vapour == pytest.approx(air.under(temperature=23 * u.deg_C).vapour_pressure_si, rel=1e-14)
    moister = air.shifted_si(humidity=0.01)
    assert moister.vapour / air.vapour_pressure_si == pytest.approx(41 / 40, rel=1e-14)


def test_what_was_given_may_change_afterwards():
    """A loop that adds to its own Quantity must not change what it has made before."""
    length, warmth, made = 5 * u.m, 280 * u.K, []
    for _ in range(3):
        made.append(media.Segment(medium=media.Ciddor1996(temperature=warmth), length=length))
        length += 10 * u.m
        warmth += 5 * u.K
    assert [item.length.value for item in made] == [5, 15, 25]
    assert [item.medium.temperature.value for item in made] == [280, 285, 290]
    with pytest.raises(ValueError, match="read-only"):
        made[0].length += 1 * u.m


@pytest.mark.parametrize(("model", "ppm"), [(media.BirchDowns1994, 450), (media.BirchDowns1994WaterScaled, 450), (media.Mathar2007, 370)])
def test_models_for_one_fraction_of_carbon_dioxide_say_so(model, ppm):
    assert model(co2=ppm * 1e-6).co2_si == pytest.approx(ppm * 1e-6)
    with pytest.raises(InputError, match=rf"is for {ppm} ppm of CO2 and no other: leave co2 out, or use Ciddor1996"):
        model(co2=400e-6)


@pytest.mark.parametrize("co2", ["450 ppm", None, [450e-6, 400e-6], 450 * u.um])
def test_carbon_dioxide_that_is_no_fraction(co2):
    with pytest.raises(UnitsError, match="co2 must be one mole fraction, for example 450e-6"):
        media.Ciddor1996(co2=co2)


def test_refractivity_keeps_the_digits_and_the_flag():
    air = media.Ciddor1996(extrapolate=True)
    assert air.refractivity(0.633 * u.um).value == pytest.approx(27653.0210e-8, rel=1e-9)
    assert "extrapolated" in air.refractivity(3 * u.um).info.description
    assert "extrapolated" in air.index_derivative(3 * u.um, "temperature").info.description


@pytest.mark.parametrize("celsius", [5, 35])
def test_laboratory_air_only_for_the_unscaled_water_term(celsius):
    with pytest.raises(InputError, match=r"Birch & Downs 1994: temperature .* lies outside 10 to 30 deg_C"):
        media.BirchDowns1994(temperature=celsius * u.deg_C)
