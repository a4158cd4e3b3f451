"""How far apart the zero points of two bands are: signs, drifts, definitions, uncertainties."""

from dataclasses import replace

import astropy.units as u
import numpy as np
import pytest

from whitefringe import media, spectra
from whitefringe.errors import InputError, UnitsError
from whitefringe.media.packets import centre_si
from whitefringe.media.uncertainty import PARTS, uncertainties

AIR = media.Ciddor1996(temperature=12 * u.deg_C, pressure=850 * u.hPa, humidity=30 * u.percent)
SILICA = media.Glass.named("fused silica")


def band(centre, width, samples=8192):
    shape = spectra.SuperGaussian(centre=centre * u.um, fwhm=width * u.um, order=3)
    return spectra.detected(spectra.Flat(), shape, samples=samples)


RED, NEAR = band(0.8, 0.06), band(1.25, 0.1)


def pair(**air):
    first = [media.Segment(medium=SILICA, length=8 * u.mm, length_uncertainty=20 * u.um)]
    second = [
        media.Segment(medium=AIR, length=30 * u.m, length_uncertainty=10 * u.mm, **air),
        media.Segment(medium=AIR, length=5 * u.m, temperature=15 * u.deg_C, temperature_uncertainty=0.5 * u.K),
    ]
    return media.ArmPair(first=first, second=second)


def test_air_in_the_second_arm_puts_the_redder_band_at_a_greater_added_path():
    """In normal dispersion the bluer band is delayed more, so that more path must be taken off the second arm for it."""
    arms = media.ArmPair(first=[], second=[media.Segment(medium=AIR, length=40 * u.m)])
    offset = media.band_offset(arms, RED, NEAR).offset.to_value(u.um)
    expected = -(arms.group_opd(1.25 * u.um) - arms.group_opd(0.8 * u.um)).to_value(u.um)
    assert offset > 100
    assert offset == pytest.approx(expected, rel=0.01)  # the bands are wide, and the group delay is not straight over them


def test_exchanged_bands_and_exchanged_arms_turn_the_sign():
    arms = pair()
    one = media.band_offset(arms, RED, NEAR).offset.value
    assert media.band_offset(arms, NEAR, RED).offset.value.value == pytest.approx(-one.value, rel=1e-12)
    turned = media.ArmPair(first=arms.second, second=arms.first)
    assert media.band_offset(turned, RED, NEAR).offset.value.value == pytest.approx(-one.value, rel=1e-12)


def test_the_two_definitions_differ_by_less_than_the_packets_are_wide():
    by_delay = media.band_offset(pair(), RED, NEAR)
    by_peak = media.band_offset(pair(), RED, NEAR, by="greatest contrast")
    assert "centre of |gamma|^2" in by_delay.offset.definition
    assert "greatest contrast" in by_peak.offset.definition
    gap = abs(by_delay.offset.to_value(u.um) - by_peak.offset.to_value(u.um))
    assert 1e-4 < gap < 3


@pytest.mark.parametrize(
    ("field", "change", "unit"),
    [
        ("per_kelvin", {"temperature": 1 * u.K}, u.K),
        ("per_hectopascal", {"pressure": 1 * u.hPa}, u.hPa),
        ("per_percent", {"humidity": 1 * u.percent}, u.percent),
    ],
)
def test_drifts_are_the_change_in_other_air(field, change, unit):
    """Against the same arms built in air a little warmer, denser, moister, and a little less so."""
    air = media.Ciddor1996(temperature=285.15 * u.K, pressure=850 * u.hPa, humidity=30 * u.percent)
    (key, step) = next(iter(change.items()))

    def offset(sign):
        here = replace(air, **{key: getattr(air, key) + sign * 0.1 * step})
        arms = media.ArmPair(first=[media.Segment(medium=SILICA, length=8 * u.mm)], second=[media.Segment(medium=here, length=30 * u.m)])
        return media.band_offset(arms, RED, NEAR)

    expected = (offset(1).offset.value - offset(-1).offset.value) / (0.2 * step)
    found = getattr(offset(0), field).value
    assert found.unit.is_equivalent(u.um / unit)
    assert found.to_value(u.um / unit) == pytest.approx(expected.to_value(u.um / unit), rel=1e-5)


def test_a_metre_more_of_air():
    found = media.band_offset(pair(), RED, NEAR).per_metre.value
    more = media.ArmPair(first=[], second=[media.Segment(medium=AIR, length=1 * u.m)])
    assert found.to_value(u.um / u.m) == pytest.approx(media.band_offset(more, RED, NEAR).offset.to_value(u.um), rel=1e-9)


def test_without_air_there_is_no_drift_and_the_table_says_so():
    arms = media.ArmPair(first=[media.Segment(medium=SILICA, length=8 * u.mm)], second=[])
    found = media.band_offset(arms, RED, NEAR)
    assert found.per_kelvin is None
    assert dict(found.rows)["drift per kelvin"] == "there is no air in the arms"


def test_equal_arms_have_no_offset():
    arm = [media.Segment(medium=AIR, length=40 * u.m)]
    found = media.band_offset(media.ArmPair(first=arm, second=arm), RED, NEAR)
    assert found.offset.to_value(u.um) == pytest.approx(0, abs=1e-9)
    assert found.offset.uncertainty is None


def test_parts_add_in_quadrature_and_carry_names():
    air = media.AirUncertainty(temperature=0.4 * u.K, pressure=1 * u.hPa, humidity=5 * u.percent)
    found = media.band_offset(pair(), RED, NEAR, air=air)
    assert set(found.parts) == set(PARTS.values())
    assert all(part.value > 0 for part in found.parts.values())
    total = np.sqrt(sum(part.to_value(u.um) ** 2 for part in found.parts.values()))
    assert found.offset.uncertainty.to_value(u.um) == pytest.approx(total, rel=1e-12)


def test_uncertainty_against_ten_thousand_draws():
    """Lengths, common air and one segment's own temperature drawn together; the spread of the offset is the uncertainty to 3 %."""
    lights = band(0.8, 0.06, samples=16), band(1.25, 0.1, samples=16)  # what matters is the group delay, not the shape
    arms = pair()
    air = media.AirUncertainty(temperature=0.4 * u.K, pressure=1 * u.hPa, humidity=5 * u.percent)

    def offset(these, shift):
        return centre_si(these, lights[1], **shift) - centre_si(these, lights[0], **shift)

    predicted = np.sqrt(sum(part**2 for part in uncertainties(offset, arms, air).values()))
    rng = np.random.default_rng(3)
    draws = rng.normal(size=(10_000, 6)) * [0.4, 100.0, 0.05, 0.5, 0.01, 20e-6]
    # the offset is linear in every length, so each draw needs only the two pieces of air and the plate
    sigma = [light.frequency_si / 299_792_458.0 for light in lights]
    weights = [light.density**2 + light.slopes**2 / 12 for light in lights]

    def group(medium_state, number):
        refractivity = AIR.refractivity_at_si(sigma[number], medium_state)
        return np.sum(weights[number] * (refractivity[0] + sigma[number] * refractivity[1])) / np.sum(weights[number])

    plate = [
        float(-centre_si(media.ArmPair(first=[], second=[media.Segment(medium=SILICA, length=1 * u.m)]), light)) - 1 for light in lights
    ]
    own = arms.second[1].medium_here
    spread = []
    for warmer, denser, moister, alone, longer, thicker in draws:
        common = AIR.shifted_si(temperature=warmer, pressure=denser, humidity=moister)
        single = own.shifted_si(temperature=warmer + alone, pressure=denser, humidity=moister)
        delays = [(30 + longer) * group(common, k) + 5 * group(single, k) - (8e-3 + thicker) * plate[k] for k in (0, 1)]
        spread.append(delays[0] - delays[1])
    assert np.std(spread) == pytest.approx(predicted, rel=0.03)


def test_flags_say_where_two_models_meet():
    air = media.TwoModelAir(
        short=media.Ciddor1996(temperature=288.15 * u.K, co2=370e-6), long=media.Mathar2007(temperature=288.15 * u.K), meet=1.4 * u.um
    )
    arms = media.ArmPair(first=[], second=[media.Segment(medium=air, length=100 * u.m)])
    science = band(1.65, 0.2)
    stepped = media.band_offset(arms, RED, science)
    levelled = media.ArmPair(first=[], second=[media.Segment(medium=replace(air, levelled=True), length=100 * u.m)])
    smooth = media.band_offset(levelled, RED, science)
    assert any(f"a step in n of {air.step:.2e}" in flag and "left in" in flag for flag in stepped.flags)
    assert any("taken out" in flag for flag in smooth.flags)
    assert (smooth.offset.value - stepped.offset.value).to_value(u.um) == pytest.approx(100 * air.step * 1e6, rel=1e-6)


def test_out_of_range_is_refused_or_flagged():
    arms = media.ArmPair(first=[], second=[media.Segment(medium=AIR, length=40 * u.m)])
    with pytest.raises(InputError, match=r"Ciddor 1996: wavelength .* lies outside 0\.3 to 1\.7 um .*TwoModelAir"):
        media.band_offset(arms, RED, band(2.2, 0.2))
    beyond = media.ArmPair(first=[], second=[media.Segment(medium=replace(AIR, extrapolate=True), length=40 * u.m)])
    assert any("Ciddor 1996 extrapolated: wavelength" in flag for flag in media.band_offset(beyond, RED, band(2.2, 0.2)).flags)


def test_messages():
    with pytest.raises(InputError, match="by must be one of group delay, greatest contrast; got 'phase'"):
        media.band_offset(pair(), RED, NEAR, by="phase")
    with pytest.raises(UnitsError, match="temperature must carry a unit"):
        media.AirUncertainty(temperature=0.5)
    with pytest.raises(InputError, match="an uncertainty must be one number, zero or more"):
        media.AirUncertainty(pressure=-1 * u.hPa)
    mixed = replace(RED, lines=(spectra.Line(wavelength=0.8 * u.um, strength=RED.total_rate),))
    with pytest.raises(InputError, match="not defined for light of continuum and lines together"):
        media.band_offset(pair(), mixed, NEAR)


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (([ARMS := pair()], RED, NEAR), "pair must be a media.ArmPair"),
        ((ARMS, 0.8 * u.um, NEAR), "lights must be one or more spectra"),
        ((ARMS, RED, None), "lights must be one or more spectra"),
    ],
)
def test_wrong_things_are_named(arguments, message):
    with pytest.raises(InputError, match=message):
        media.band_offset(*arguments)


def test_an_uncertainty_of_the_air_is_not_a_temperature():
    with pytest.raises(InputError, match=r"air must be a media\.AirUncertainty"):
        media.band_offset(pair(), RED, NEAR, air=1 * u.K)
    with pytest.raises(InputError, match="an uncertainty must be one number"):
        media.AirUncertainty(temperature=[1, 2] * u.K)


def test_air_by_two_models_in_one_pair_is_flagged():
    """What parts the models, about 5e-8, then stands in the path difference."""
    dry = {"temperature": 288.15 * u.K, "pressure": 101325 * u.Pa, "humidity": 10 * u.percent}
    ours, other = media.Ciddor1996(**dry, co2=370e-6), media.Mathar2007(**dry)
    arms = media.ArmPair(first=[media.Segment(medium=ours, length=24 * u.m)], second=[media.Segment(medium=other, length=24 * u.m)])
    words = "the arms' air is by different models, Ciddor 1996 and Mathar 2007"
    assert words in arms.opd(1.5 * u.um).info.description
    assert any(words in flag for flag in media.band_offset(arms, band(1.45, 0.05), band(1.6, 0.05)).flags)


def test_a_glass_of_uncertain_temperature():
    """Propagated where the glass has temperature coefficients, refused where it has none."""

    def arms(temperature, sigma):
        plate = media.Segment(
            medium=media.Glass.named("N-BK7"), length=20 * u.mm, temperature=temperature * u.deg_C, temperature_uncertainty=sigma * u.K
        )
        return media.ArmPair(first=[], second=[plate])

    moved = media.band_offset(arms(30, 0), RED, NEAR).offset.value - media.band_offset(arms(25, 0), RED, NEAR).offset.value
    found = media.band_offset(arms(25, 5), RED, NEAR)
    assert found.offset.uncertainty.to_value(u.um) == pytest.approx(abs(moved.to_value(u.um)), rel=0.05)
    assert found.parts["single segments' temperatures"] == found.offset.uncertainty
    with pytest.raises(InputError, match="fused silica has no temperature coefficients"):
        media.Segment(medium=SILICA, length=1 * u.mm, temperature_uncertainty=1 * u.K)
