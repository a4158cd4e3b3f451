"""Index of air against printed tables, other people's digits, an independent package, and a closed formula of its own kind."""

import math
import warnings

import astropy.units as u
import numpy as np
import pytest

from whitefringe import media
from whitefringe.media.mathar import mathar_windows
from whitefringe.media.moist_air import compressibility_si

from ..published import rows

MODELS = {model.shape: model for model in media.AIR_MODELS}


def air_of(row):
    """The air that a row describes."""
    others = {"saturation": row.inputs["saturation"]} if "saturation" in row.inputs else {}
    if "co2" in row.inputs:
        others["co2"] = float(row.inputs["co2"])
    conditions = {name: row.quantity(name) for name in ("temperature", "pressure", "humidity")}
    # hot rows of the unscaled water term stand in the table to be told from the scaled ones, outside the range of laboratory air
    return MODELS[row.inputs["model"]](**conditions, **others, extrapolate=row.inputs["model"] == media.BirchDowns1994.shape)


# ---------------------------------------------------------------- tables


@pytest.mark.parametrize("row", rows("air_index", "refractivity"))
def test_refractivity(row):
    # the 40 deg_C, 80 kPa entry of Ciddor's table 3 is a misprint, 19996.5 for 19896.5: the row holds the latter
    index = air_of(row).refractive_index(row.quantity("vacuum"))
    assert (index - 1).to_value(row.unit) == row.approx()


@pytest.mark.parametrize("row", rows("air_index", "group refractivity"))
def test_group_refractivity(row):
    index = air_of(row).group_index(row.quantity("vacuum"))
    assert (index - 1).to_value(row.unit) == row.approx()


@pytest.mark.parametrize("row", rows("air_index", "index"))
def test_index(row):
    assert air_of(row).refractive_index(row.quantity("vacuum")).value == row.approx(absolute=0)


@pytest.mark.parametrize("row", rows("air_index", "measured refractivity"))
def test_measured_air(row):
    """Laboratory air: the model lies within 1.2e-8, the measurement's own uncertainty."""
    index = air_of(row).refractive_index(row.quantity("vacuum"))
    assert (index - 1).to_value(row.unit) == row.approx()


def test_a_misprint_stays_a_misprint():
    air = media.Ciddor1996(temperature=40 * u.deg_C, pressure=80 * u.kPa, humidity=75 * u.percent, saturation="cipm")
    found = 1e8 * (air.refractive_index(633 * u.nm).value - 1)
    assert found == pytest.approx(19896.5, abs=0.05)
    assert abs(found - 19996.5) > 99


def test_the_two_water_terms_are_not_confused():
    """The scaled water term and the first one differ by far more than the digits of the tables."""
    conditions = {"temperature": 50 * u.deg_C, "pressure": 120 * u.kPa, "humidity": 100 * u.percent}
    first = media.BirchDowns1994(**conditions, extrapolate=True).refractive_index(633 * u.nm)
    scaled = media.BirchDowns1994WaterScaled(**conditions).refractive_index(633 * u.nm)
    assert (scaled - first).value == pytest.approx(4.223e-7, abs=1e-10)


@pytest.mark.parametrize("row", rows("air_index", "mathar above ciddor"))
def test_step_between_two_models(row):
    short, long = media.Ciddor1996(co2=370e-6), media.Mathar2007()
    where = row.quantity("vacuum")
    step = (long.refractive_index(where) - short.refractive_index(where)).to_value(row.unit)
    assert step == row.approx(absolute=1e-3)
    assert media.TwoModelAir(short=short, long=long, meet=where).step * 1e8 == pytest.approx(step, abs=1e-7)


@pytest.mark.parametrize("number", range(5))
def test_mathar_at_its_references_is_the_first_coefficient(number):
    window = mathar_windows()[number]
    air = media.Mathar2007(temperature=290.65 * u.K, pressure=75 * u.kPa, humidity=10 * u.percent)
    found = air.refractivity_si(np.array(1e6 / window.reference))
    assert found[0] == pytest.approx(window.coefficients["cref"][0], rel=1e-13)
    assert found[1] == pytest.approx(window.coefficients["cref"][1] * 1e-2, rel=1e-9)


# ---------------------------------------------------------------- water


@pytest.mark.parametrize("row", rows("air_index", "saturation pressure"))
def test_saturation_pressure(row):
    found = media.saturation_vapour_pressure(row.quantity("temperature"), row.inputs["form"])
    assert found.to_value(row.unit) == row.approx()


@pytest.mark.parametrize("row", rows("air_index", "saturation pressure of 1982"))
def test_the_older_constants_are_another_formula(row):
    """Giacomo's table of 1982 needs its own constants (from memory); Ciddor's paper uses those of 1991, up to 3.5e-4 higher."""
    T = row.quantity("temperature").to_value(u.K, equivalencies=u.temperature())
    assert math.exp(1.2811805e-5 * T**2 - 1.9509874e-2 * T + 34.04926034 - 6.3536311e3 / T) == row.approx()
    now = media.saturation_vapour_pressure(T * u.K, "cipm").to_value(u.Pa)
    assert now == pytest.approx(row.value, rel=4e-4)


@pytest.mark.parametrize("row", rows("air_index", "enhancement factor"))
def test_enhancement_factor(row):
    assert media.enhancement_factor(row.quantity("pressure"), row.quantity("temperature")) == row.approx()


@pytest.mark.parametrize("row", rows("air_index", "compressibility"))
def test_compressibility(row):
    pressure, temperature = row.quantity("pressure").to_value(u.Pa), row.quantity("temperature").to_value(u.K)
    assert compressibility_si(pressure, temperature, float(row.inputs["vapour"])) == row.approx()


@pytest.mark.parametrize("row", rows("air_index", "water mole fraction"))
def test_water_mole_fraction(row):
    conditions = {name: row.quantity(name) for name in ("temperature", "pressure", "humidity")}
    air = media.Ciddor1996(**conditions)
    found = media.enhancement_factor(air.pressure, air.temperature) * air.vapour_pressure_si / air.pressure_si
    assert found == row.approx()


# ---------------------------------------------------------------- sensitivities


LAB = media.Ciddor1996(temperature=20 * u.deg_C, pressure=101325 * u.Pa, humidity=50 * u.percent)


@pytest.mark.parametrize("row", rows("air_index", "index sensitivity", by=("temperature", "pressure", "humidity")))
def test_sensitivities(row):
    found = LAB.index_derivative(633 * u.nm, row.inputs["by"])
    assert found.to_value(row.unit) == row.approx()


@pytest.mark.parametrize("row", rows("air_index", "index sensitivity", by=("co2",)))
def test_carbon_dioxide(row):
    richer = media.Ciddor1996(temperature=20 * u.deg_C, pressure=101325 * u.Pa, humidity=50 * u.percent, co2=550e-6)
    change = richer.refractive_index(633 * u.nm) - LAB.refractive_index(633 * u.nm)
    assert change.value / 100 == row.approx()


# ---------------------------------------------------------------- others' formulas


@pytest.mark.parametrize("co2", [300, 450, 600])
def test_dry_air_against_a_general_package(co2):
    """Dry air of 15 deg_C and 1 atm; the other side takes vacuum wavelengths too and stops at standard conditions."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # whatever that package says when it is imported is not about this number
        from specutils.utils.wcs_utils import refraction_index
    wavelength = np.linspace(0.3, 1.69, 200) * u.um
    air = media.Ciddor1996(temperature=15 * u.deg_C, pressure=101325 * u.Pa, co2=co2 * 1e-6)
    theirs = refraction_index(wavelength, method="Ciddor1996", co2=co2)
    assert np.max(np.abs(air.refractive_index(wavelength).value - theirs)) < 1e-15


def closed_group(micron, kelvin, hectopascal, vapour):
    """Group refractivity for distance meters by the resolution of the IAG of 1999."""
    standard = 287.6155 + 4.88660 / micron**2 + 0.06800 / micron**4
    return 1e-6 * (273.15 / 1013.25 * hectopascal / kelvin * standard - 11.27 * vapour / kelvin)


@pytest.mark.parametrize("row", rows("air_index", "closed group refractivity"))
def test_the_closed_formula_is_written_right(row):
    kelvin = row.quantity("temperature").to_value(u.K, equivalencies=u.temperature())
    arguments = row.quantity("vacuum").to_value(u.um), kelvin, *(row.quantity(k).to_value(u.hPa) for k in ("pressure", "vapour"))
    assert closed_group(*arguments) / row.unit.scale == row.approx()


def test_dry_group_index_against_the_closed_formula():
    """To 0.05 ppm of length from 0.63 to 1.55 um; the formula itself promises 1 ppm."""
    wavelength = np.linspace(0.633, 1.55, 40)
    air = media.Ciddor1996(temperature=0 * u.deg_C, pressure=101325 * u.Pa, co2=375e-6)
    found = air.group_index(wavelength * u.um).value - 1
    assert np.max(np.abs(found - closed_group(wavelength, 273.15, 1013.25, 0.0))) < 5e-8


@pytest.mark.parametrize(("celsius", "vapour"), [(12, 8.41486), (20, 14.02856)])
def test_moist_group_index_against_the_closed_formula(celsius, vapour):
    air = media.Ciddor1996(temperature=celsius * u.deg_C, pressure=1013.25 * u.hPa, humidity=vapour * u.hPa, co2=375e-6)
    found = air.group_index(0.658 * u.um).value - 1
    assert found == pytest.approx(closed_group(0.658, celsius + 273.15, 1013.25, vapour), abs=1e-7)


@pytest.mark.parametrize("row", rows("air_index", "closed phase refractivity"))
def test_phase_index_against_the_closed_formula(row):
    micron = row.quantity("vacuum").to_value(u.um)
    closed = 287.6155 + 1.62887 / micron**2 + 0.01360 / micron**4
    assert 1e2 * closed == row.approx()
    air = media.Ciddor1996(temperature=0 * u.deg_C, pressure=101325 * u.Pa, co2=375e-6)
    assert 1e6 * (air.refractive_index(micron * u.um).value - 1) == pytest.approx(closed, abs=0.05)


def test_the_shop_floor_formula():
    """A fit for the workshop (Stone & Zimmerman, from memory): within 3e-8 at 20 deg_C and 50 %."""
    simple = 7.86e-4 * 101.325 / (273 + 20) - 1.5e-11 * 50 * (20**2 + 160)
    assert LAB.refractive_index(633 * u.nm).value - 1 == pytest.approx(simple, abs=3e-8)
