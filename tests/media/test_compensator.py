"""A plate of glass that makes up for unequal arms: against brute force, by every aim, with uncertainty."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe import media, spectra
from whitefringe.errors import InputError
from whitefringe.media.compensator import AIMS

SILICA = media.Glass.named("fused silica")
AIR = media.Ciddor1996(temperature=12 * u.deg_C, pressure=850 * u.hPa, humidity=30 * u.percent)
ARMS = media.ArmPair(first=[media.Segment(medium=AIR, length=30 * u.m, length_uncertainty=5 * u.cm)], second=[])


def band(centre, width):
    return spectra.detected(spectra.Flat(), spectra.TopHat(centre=centre * u.um, width=width * u.um), samples=512)


LONG = media.ArmPair(first=[media.Segment(medium=AIR, length=3 * u.km)], second=[])
LASER = spectra.Spectrum(lines=(spectra.Line(wavelength=0.7 * u.um),))
LIGHTS = (band(0.7, 0.08), band(0.85, 0.1))


@pytest.fixture(scope="module")
def found():
    return media.compensator(ARMS, SILICA, LIGHTS)


def packets(thickness, glass=SILICA):
    arms = media.with_plate(ARMS, glass, thickness)
    return [media.DispersedPacket(pair=arms, light=light) for light in LIGHTS]


def loss(thickness):
    return -sum(np.log(packet.peak_contrast.value.value) for packet in packets(thickness))


def loss_at_one_delay(thickness):
    """Brute force: every path difference on a fine grid."""
    found = packets(thickness)
    x = np.linspace(-6e-6, 6e-6, 601) + np.mean([packet.peak_si for packet in found])
    return float(np.min(-sum(np.log(np.maximum(np.abs(packet.degree_si(x)), 1e-12)) for packet in found)))


def spread(thickness):
    return float(np.var([packet.centre_si for packet in packets(thickness)]))


@pytest.mark.parametrize(
    ("aim", "function"), [("contrast loss", loss), ("loss at one delay", loss_at_one_delay), ("group delay spread", spread)]
)
def test_against_a_scan_of_thicknesses(aim, function):
    """The best of a grid of 0.5 um is within 1 um of what was found, and nothing on a coarse grid over many millimetres is better."""
    found = media.compensator(ARMS, SILICA, LIGHTS, minimise=aim).thickness.to_value(u.m)
    fine = found + np.arange(-8, 9) * 0.5e-6
    assert fine[int(np.argmin([function(place) for place in fine]))] == pytest.approx(found, abs=1e-6)
    coarse = found + np.linspace(-4e-3, 4e-3, 13)
    assert min(function(place) for place in coarse) >= function(found) - 1e-15


def test_what_remains(found):
    assert found.thickness.to_value(u.mm) > 5  # in the second arm, for air in the first
    for before, after in zip(found.before, found.contrasts, strict=True):
        assert after.value > before.value
        assert after.value > 0.95
    assert found.pair.second[-1].length.to_value(u.m) == pytest.approx(found.thickness.to_value(u.m), rel=1e-12)
    zeros = [packet.centre_si for packet in packets(found.thickness.to_value(u.m))]
    assert found.offsets[1].to_value(u.m) == pytest.approx(zeros[1] - zeros[0], abs=1e-12)
    assert found.delay.to_value(u.m) == pytest.approx(np.mean(zeros), abs=1e-11)
    assert [name for name, _ in found.rows][:3] == ["thickness", "band 1: contrast before", "band 1: contrast"]


def test_equal_group_delays_leave_no_spread_between_two_bands():
    found = media.compensator(ARMS, SILICA, LIGHTS, minimise="group delay spread")
    assert found.offsets[1].to_value(u.um) == pytest.approx(0, abs=1e-5)


def test_one_delay_is_where_both_bands_are_seen_at_once():
    found = media.compensator(ARMS, SILICA, LIGHTS, minimise="loss at one delay")
    at = packets(found.thickness.to_value(u.m))
    for packet, contrast in zip(at, found.contrasts, strict=True):
        assert abs(packet.degree(found.delay.value)) == pytest.approx(contrast.value.value, abs=1e-9)


def test_air_in_the_second_arm_asks_for_glass_in_the_first():
    turned = media.ArmPair(first=ARMS.second, second=ARMS.first)
    one, other = media.compensator(ARMS, SILICA, LIGHTS[:1]), media.compensator(turned, SILICA, LIGHTS[:1])
    assert other.thickness.to_value(u.mm) == pytest.approx(-one.thickness.to_value(u.mm), abs=1e-3)
    assert other.pair.first[-1].medium == SILICA


def test_uncertainty_against_recomputed_thickness():
    """Length and temperature each moved by one standard deviation; the thickness moves by its part."""
    air = media.AirUncertainty(temperature=2 * u.K)
    found = media.compensator(ARMS, SILICA, LIGHTS[:1], air=air)
    longer = media.ArmPair(first=[media.Segment(medium=AIR, length=30.05 * u.m)], second=[])
    warmer = ARMS.in_air(temperature=14 * u.deg_C)
    for arms, part in ((longer, "lengths"), (warmer, "air temperature")):
        moved = media.compensator(arms, SILICA, LIGHTS[:1]).thickness.value - found.thickness.value
        assert abs(moved.to_value(u.um)) == pytest.approx(found.parts[part].to_value(u.um), rel=0.02)
    total = np.hypot(*(found.parts[part].to_value(u.um) for part in ("lengths", "air temperature")))
    assert found.thickness.uncertainty.to_value(u.um) == pytest.approx(total, rel=1e-9)


def test_uncertainty_against_ten_thousand_draws():
    """Equal group delays: the solution is linear algebra, so it can be drawn in full; the spread is the uncertainty to 3 %."""
    arms = media.ArmPair(
        first=[media.Segment(medium=AIR, length=30 * u.m, length_uncertainty=5 * u.cm)],
        second=[media.Segment(medium=media.Glass.named("N-BK7"), length=4 * u.mm, length_uncertainty=50 * u.um)],
    )
    found = media.compensator(arms, SILICA, LIGHTS, minimise="group delay spread", air=media.AirUncertainty(temperature=2 * u.K))

    def zeros(these):
        return np.array([media.DispersedPacket(pair=these, light=light).centre_si for light in LIGHTS])

    def metre(medium):
        return zeros(media.ArmPair(first=[], second=[media.Segment(medium=medium, length=1 * u.m)]))

    glass, plate = metre(media.Glass.named("N-BK7")), metre(SILICA)
    rng = np.random.default_rng(11)
    temperatures = 12 + 2 * rng.normal(size=10_000)
    nodes = np.linspace(2, 22, 9)
    at_nodes = np.array([metre(AIR.under(temperature=t * u.deg_C)) for t in nodes])
    air = np.column_stack([np.polynomial.Polynomial.fit(nodes, at_nodes[:, k], 6)(temperatures) for k in (0, 1)])
    long, thick = 30 + 0.05 * rng.normal(size=10_000), 4e-3 + 50e-6 * rng.normal(size=10_000)
    gap = -long * (air[:, 1] - air[:, 0]) + thick * (glass[1] - glass[0])
    spread_of = np.std(-gap / (plate[1] - plate[0]))
    assert spread_of == pytest.approx(found.thickness.uncertainty.to_value(u.m), rel=0.03)


@pytest.mark.parametrize(
    ("options", "message"),
    [
        ({"minimise": "beauty"}, "minimise must be one of contrast loss, loss at one delay, group delay spread; got 'beauty'"),
        ({"lights": []}, "lights must be one or more spectra"),
        ({"lights": LIGHTS[:1], "minimise": "group delay spread"}, "a spread of group delays needs two bands or more"),
        ({"pair": LONG}, "mm of fused silica would be needed, more than 200 mm"),
        ({"lights": [LASER]}, "a compensator needs bands with a continuum"),
    ],
)
def test_messages(options, message):
    with pytest.raises(InputError, match=message):
        media.compensator(**({"pair": ARMS, "glass": SILICA, "lights": LIGHTS} | options))


def test_a_glass_that_delays_the_bands_alike_is_named():
    with pytest.raises(InputError, match="fused silica delays these bands alike"):
        media.compensator(ARMS, SILICA, (LIGHTS[0], LIGHTS[0]), minimise="group delay spread")


def test_out_of_the_glass_range():
    arms = media.ArmPair(first=[media.Segment(medium=SILICA, length=1 * u.mm)], second=[])
    with pytest.raises(InputError, match=r"ZnSe: wavelength .* lies outside 0\.54 to 18\.2 um"):
        media.compensator(arms, media.Glass.named("ZnSe"), [band(0.5, 0.05)])


def test_every_aim_is_said_in_words():
    assert all(words.startswith("least ") for words in AIMS.values())


def test_one_light_need_not_be_a_list_and_only_glass_will_do(found):
    assert media.compensator(ARMS, SILICA, LIGHTS[0]).thickness.value > 0 * u.mm
    for thing in (media.Vacuum(), AIR, "fused silica"):
        with pytest.raises(InputError, match=r"glass must be a media\.Glass"):
            media.compensator(ARMS, thing, LIGHTS)
