"""Two arms: signs, cancellation, orders of dispersion, and every message."""

import astropy.units as u
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from whitefringe import media, spectra
from whitefringe.errors import InputError, UnitsError
from whitefringe.units import SPEED_OF_LIGHT

from ..published import rows

AIR = media.Ciddor1996(temperature=15 * u.deg_C, pressure=101325 * u.Pa)
SILICA = media.Glass.named("fused silica")
VACUUM = media.Vacuum()


def segment(medium, length, **others):
    return media.Segment(medium=medium, length=length, **others)


UNEVEN = media.ArmPair(
    first=[segment(AIR, 100 * u.m), segment(VACUUM, 1 * u.m)],
    second=[segment(SILICA, 20 * u.mm), segment(AIR, 40 * u.m), segment(VACUUM, 61 * u.m)],
)
"""60 m of air in the first arm against 20 mm of silica and vacuum in the second."""


def test_signs_of_an_uneven_pair():
    """Second arm minus first, each segment by its own index."""
    where = 1.2 * u.um
    air, glass = AIR.refractive_index(where), SILICA.refractive_index(where)
    expected = (0.02 * glass + 40 * air + 61) - (100 * air + 1)
    assert UNEVEN.opd(where).to_value(u.m) == pytest.approx(expected.value, abs=1e-13)
    air, glass = AIR.group_index(where), SILICA.group_index(where)
    expected = (0.02 * glass + 40 * air + 61) - (100 * air + 1)
    assert UNEVEN.group_opd(where).to_value(u.m) == pytest.approx(expected.value, abs=1e-13)
    assert UNEVEN.geometric_si == pytest.approx(0.02, abs=1e-14)


def test_more_air_in_the_second_arm_makes_its_light_late():
    late = media.ArmPair(first=[segment(VACUUM, 10 * u.m)], second=[segment(AIR, 10 * u.m)])
    assert late.opd(1 * u.um).to_value(u.mm) == pytest.approx(2.74, abs=0.01)
    assert late.phase_delay(1 * u.um) > 0
    assert late.group_opd(1 * u.um) > late.opd(1 * u.um)


@pytest.mark.parametrize("row", rows("air_index", "group less phase path"))
def test_longitudinal_dispersion(row):
    pair = media.ArmPair(first=[], second=[segment(AIR, row.quantity("length"))])
    where = row.quantity("vacuum")
    assert (pair.group_opd(where) - pair.opd(where)).to_value(row.unit) == row.approx()


@given(length=st.floats(0, 1e4), place=st.integers(0, 2))
def test_equal_segments_cancel(length, place):
    """The same stretch in both arms changes nothing but by rounding."""
    more = segment((AIR, SILICA, VACUUM)[place], length * u.m)
    pair = media.ArmPair(first=[more, *UNEVEN.first], second=[*UNEVEN.second, more])
    for quantity in ("opd", "group_opd"):
        difference = getattr(pair, quantity)(0.8 * u.um) - getattr(UNEVEN, quantity)(0.8 * u.um)
        assert abs(difference.to_value(u.m)) < 1e-15 * 4 * length + 1e-13


def test_swapped_arms_change_the_sign():
    swapped = media.ArmPair(first=UNEVEN.second, second=UNEVEN.first)
    for quantity in ("opd", "group_opd", "phase_delay", "group_delay", "group_delay_dispersion", "third_order_dispersion"):
        here, there = (getattr(pair, quantity)(1.1 * u.um) for pair in (UNEVEN, swapped))
        assert there.value == pytest.approx(-here.value, rel=1e-11)


# ---------------------------------------------------------------- orders


def test_orders_are_derivatives_of_the_phase():
    """With phi = omega opd / c [rad]: delay, second and third order are its derivatives with omega, by sixth-order differences."""
    omega = 2 * np.pi * SPEED_OF_LIGHT / 1.1e-6 * 1e-15  # rad/fs
    step = 2e-3 * omega
    factors = {1: 3 / 4, 2: -3 / 20, 3: 1 / 60}

    def slope(quantity):
        def at(k):
            value = getattr(UNEVEN, quantity)((omega + k * step) / (2 * np.pi) / u.fs).value
            return value * (omega + k * step) if quantity == "phase_delay" else value

        return sum(factor * (at(k) - at(-k)) for k, factor in factors.items()) / step

    where = 1.1 * u.um
    assert UNEVEN.group_delay(where).to_value(u.fs) == pytest.approx(slope("phase_delay"), rel=1e-9)
    assert UNEVEN.group_delay_dispersion(where).to_value(u.fs**2) == pytest.approx(slope("group_delay"), rel=1e-8)
    assert UNEVEN.third_order_dispersion(where).to_value(u.fs**3) == pytest.approx(slope("group_delay_dispersion"), rel=1e-8)


def test_orders_add_up_over_the_segments():
    where = [0.8, 1.2] * u.um
    for pair_quantity, medium_quantity in (
        ("group_delay_dispersion", "group_velocity_dispersion"),
        ("third_order_dispersion", "third_order_dispersion"),
    ):
        air, glass = (getattr(medium, medium_quantity)(where) for medium in (AIR, SILICA))
        expected = (20 * u.mm) * glass - (60 * u.m).to(u.mm) * air
        assert getattr(UNEVEN, pair_quantity)(where).to_value(expected.unit) == pytest.approx(expected.value, rel=1e-12)


def test_delays_are_path_differences_over_c():
    c = SPEED_OF_LIGHT * u.m / u.s
    assert (UNEVEN.phase_delay(1 * u.um) * c).to_value(u.m) == pytest.approx(UNEVEN.opd(1 * u.um).to_value(u.m), rel=1e-15)
    assert (UNEVEN.group_delay(1 * u.um) * c).to_value(u.m) == pytest.approx(UNEVEN.group_opd(1 * u.um).to_value(u.m), rel=1e-15)


@pytest.mark.parametrize("quantity", ["opd", "group_opd", "phase_delay", "group_delay", "group_delay_dispersion", "third_order_dispersion"])
def test_every_result_carries_the_flags(quantity):
    bold = media.Ciddor1996(extrapolate=True)
    pair = media.ArmPair(first=[segment(bold, 1 * u.m)], second=[segment(bold, 2 * u.m)])
    found = getattr(pair, quantity)(2.2 * u.um)
    assert found.info.description.startswith("Ciddor 1996 extrapolated: wavelength 2.2 um")
    assert found.info.description.count("extrapolated") == 1
    with pytest.raises(InputError, match="Ciddor 1996: wavelength 5 um lies outside"):
        getattr(UNEVEN, quantity)(5 * u.um)
    with pytest.raises(UnitsError, match="wavelength must carry a unit"):
        getattr(pair, quantity)(2.2)


def test_shapes_and_order():
    where = np.linspace(1.6, 0.5, 6).reshape(2, 3) * u.um
    found = UNEVEN.group_opd(where)
    assert found.shape == (2, 3)
    assert found[1, 2] == UNEVEN.group_opd(where[1, 2])
    assert UNEVEN.opd(np.float64(1.0) * u.um).shape == ()


# ---------------------------------------------------------------- segments


def test_conditions_of_a_segment():
    warm = segment(AIR, 100 * u.m, temperature=20 * u.deg_C)
    pair = media.ArmPair(first=[segment(AIR, 100 * u.m)], second=[warm])
    expected = 100 * (AIR.under(temperature=20 * u.deg_C).refractive_index(1 * u.um) - AIR.refractive_index(1 * u.um))
    assert pair.opd(1 * u.um).to_value(u.m) == pytest.approx(expected.value, abs=1e-13)
    assert pair.opd(1 * u.um) < 0
    moist = segment(AIR, 1 * u.m, pressure=900 * u.hPa, humidity=50 * u.percent)
    assert (moist.medium_here.pressure, moist.medium_here.humidity) == (900 * u.hPa, 50 * u.percent)
    assert segment(AIR, 1 * u.m).medium_here == AIR


def test_a_warm_glass():
    glass = media.Glass.named("N-BK7")
    pair = media.ArmPair(first=[segment(glass, 1 * u.cm)], second=[segment(glass, 1 * u.cm, temperature=40 * u.deg_C)])
    assert pair.opd(633 * u.nm).to_value(u.nm) == pytest.approx(1e7 * 20 * 1.5e-6, rel=0.1)


@pytest.mark.parametrize("pair", [media.ArmPair(first=[], second=[]), media.ArmPair(first=(segment(AIR, 0 * u.m),), second=())])
def test_nothing_in_the_way(pair):
    for quantity in ("opd", "group_opd", "phase_delay", "group_delay", "group_delay_dispersion", "third_order_dispersion"):
        assert np.all(getattr(pair, quantity)([[0.5, 1.0, 1.5]] * u.um) == 0)
    assert pair.has_air == bool(pair.first)


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"medium": "air"}, r"medium must be one such as media\.Ciddor1996\(\.\.\.\) or media\.Glass\.named\(\.\.\.\); got 'air'"),
        ({"medium": media.Ciddor1996}, "medium must be one such as"),
        ({"length": -1 * u.m}, r"length must be one number, zero or more; got -1\.0 m"),
        ({"length": [1, 2] * u.m}, r"length must be one number, zero or more; got \[1\. 2\.\] m"),
        ({"length_uncertainty": -1 * u.um}, "length_uncertainty must be one number, zero or more"),
        ({"temperature_uncertainty": -1 * u.K}, "temperature_uncertainty must be one number, zero or more"),
        ({"humidity": 140 * u.percent}, "humidity must be from 0 to 100 %"),
        ({"medium": media.Vacuum(), "temperature": 20 * u.deg_C}, "vacuum has no temperature to set here; leave it out"),
        ({"medium": SILICA, "pressure": 1 * u.bar}, "fused silica has no pressure to set here"),
    ],
)
def test_segment_messages(changes, message):
    with pytest.raises(InputError, match=message):
        media.Segment(**{"medium": AIR, "length": 1 * u.m, **changes})


@pytest.mark.parametrize("length", [1, 1 * u.s])
def test_a_length_is_a_length(length):
    with pytest.raises(UnitsError, match="length must"):
        segment(AIR, length)


@pytest.mark.parametrize("arm", [[AIR], segment(AIR, 1 * u.m), [3], None])
def test_arm_messages(arm):
    with pytest.raises(InputError, match=r"second must be a list of media\.Segment; got"):
        media.ArmPair(first=[], second=arm)


# ---------------------------------------------------------------- ranges of a light


def light(centre, width):
    return spectra.detected(spectra.Flat(), spectra.TopHat(centre=centre * u.um, width=width * u.um), samples=512)


def test_a_light_that_a_medium_is_not_stated_for():
    pair = media.ArmPair(first=[], second=[segment(AIR, 1 * u.m)])
    assert pair.flags(light(1.5, 0.3)) == ()
    with pytest.raises(InputError, match=r"Ciddor 1996: wavelength 1\.5\d* to 1\.79\d* um lies outside"):
        pair.flags(light(1.65, 0.3))


def test_a_gap_inside_a_light_is_not_overlooked():
    """From 2.4 to 3.0 um both ends lie in a window of the formula, the middle in none."""
    pair = media.ArmPair(first=[], second=[segment(media.Mathar2007(humidity=20 * u.percent), 1 * u.m)])
    assert pair.flags(light(2.3, 0.2), light(3.5, 0.4)) == ()
    with pytest.raises(InputError, match="lies outside the windows"):
        pair.flags(light(2.7, 0.6))


def test_a_gap_without_light_is_not_asked():
    """Two bands with 1e-5 of their rate between them: no formula is needed there."""
    both = light(2.7, 0.8)
    micron = both.wavelength.to_value(u.um)
    dark = np.where((micron > 2.45) & (micron < 2.85), 1e-6, 1.0) * both.density
    two = spectra.Spectrum(start=both.start, step=both.step, density=dark)
    pair = media.ArmPair(first=[], second=[segment(media.Mathar2007(humidity=20 * u.percent), 1 * u.m)])
    assert pair.flags(two) == ()


def test_two_lights_on_two_sides_show_the_step():
    conditions = {"temperature": 15 * u.deg_C, "pressure": 900 * u.hPa, "humidity": 20 * u.percent}
    air = media.TwoModelAir(short=media.Ciddor1996(co2=370e-6, **conditions), long=media.Mathar2007(**conditions))
    pair = media.ArmPair(first=[], second=[segment(air, 1 * u.m)])
    assert pair.flags(light(1.2, 0.1)) == () == pair.flags(light(2.2, 0.2))
    (flag,) = pair.flags(light(1.2, 0.1), light(2.2, 0.2))
    assert "meet at 1.5 um with a step in n of" in flag


def test_lines_are_asked_too():
    lines = spectra.Spectrum(lines=(spectra.Line(wavelength=1.5 * u.um), spectra.Line(wavelength=2.0 * u.um)))
    with pytest.raises(InputError, match=r"wavelength 1\.5 to 2 um lies outside"):
        media.ArmPair(first=[segment(AIR, 1 * u.m)], second=[]).flags(lines)
