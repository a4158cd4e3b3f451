"""Arms in setup files: read, written, refused with file and key path."""

import astropy.units as u
import pytest

from whitefringe import media
from whitefringe.errors import SetupError
from whitefringe.setup import Setup

BENCH = """
[source]
shape = "flat"
[[filter]]
shape = "top-hat"
centre = "1.25 um"
width = "0.1 um"
"""
AIR = '[air]\nmodel = "ciddor 1996"\ntemperature = "12 deg_C"\npressure = "850 hPa"\nhumidity = "30 %"\nco2 = 420e-6\n'
ARM = '[[second_arm]]\nmedium = "air"\nlength = "30 m"\n'


def read(folder, text):
    path = folder / "setup.toml"
    path.write_text(text + BENCH if "=" in text.split("[")[0] else BENCH + text, encoding="utf-8")
    return Setup.read(path)


def test_air_glass_and_vacuum(tmp_path):
    text = AIR + ARM + '[[second_arm]]\nmedium = "N-BK7"\nlength = "4 mm"\ntemperature = "25 deg_C"\n'
    text += '[[first_arm]]\nmedium = "vacuum"\nlength = "30 m"\nlength_uncertainty = "2 mm"\n'
    arms = read(tmp_path, text).arms
    air = media.Ciddor1996(temperature=12 * u.deg_C, pressure=850 * u.hPa, humidity=30 * u.percent, co2=420e-6)
    assert arms.air == air
    expected = media.ArmPair(
        first=[media.Segment(medium=media.Vacuum(), length=30 * u.m)],
        second=[
            media.Segment(medium=air, length=30 * u.m),
            media.Segment(medium=media.Glass.named("N-BK7"), length=4 * u.mm, temperature=25 * u.deg_C),
        ],
    )
    assert arms.opd(1.25 * u.um) == expected.opd(1.25 * u.um)
    assert arms.first[0].length_uncertainty == 2 * u.mm


def test_a_setup_without_arms_has_none(tmp_path):
    assert read(tmp_path, "").arms is None


def test_two_models_that_meet(larkmoor):
    air = Setup.read(larkmoor / "array.toml").arms.air
    assert isinstance(air, media.TwoModelAir)
    assert (type(air.short), type(air.long), air.levelled) == (media.Ciddor1996, media.Mathar2007, True)
    assert air.short.co2 == 370e-6


def test_glasses_of_ones_own_lie_beside_the_file(tmp_path):
    table = "name,form,b1,c1,low [um],high [um],temperature [deg_C],relative_to,source\nplain,length,1.1,0.09,0.4,2.0,20,vacuum,invented\n"
    (tmp_path / "mine.csv").write_text(table, encoding="utf-8")
    arms = read(tmp_path, '[[first_arm]]\nmedium = "plain"\nlength = "5 mm"\nglasses = "mine.csv"\n').arms
    assert arms.first[0].medium.refractive_index(1.25 * u.um).value == pytest.approx((1 + 1.1 / (1 - (0.09 / 1.25) ** 2)) ** 0.5, rel=1e-14)


def test_a_tracking_band(larkmoor):
    light = Setup.read(larkmoor / "array.toml").tracking_light
    assert 0.75 < light.wavelength[light.density.argmax()].to_value(u.um) < 0.85
    assert Setup.read(larkmoor / "bench.toml").tracking_light is None


def test_how_well_the_air_is_known(larkmoor):
    known = Setup.read(larkmoor / "array.toml").air_uncertainty
    assert (known.temperature, known.pressure, known.humidity) == (0.3 * u.K, 0.5 * u.hPa, 5 * u.percent)
    assert Setup.read(larkmoor / "bench.toml").air_uncertainty is None


def test_written_arms_read_back(tmp_path, larkmoor):
    setup = Setup.read(larkmoor / "array.toml")
    first, second = tmp_path / "a.toml", tmp_path / "b.toml"
    setup.write(first)
    again = Setup.read(first)
    again.write(second)
    assert first.read_text(encoding="utf-8") == second.read_text(encoding="utf-8")
    assert again.arms.opd(1.65 * u.um) == setup.arms.opd(1.65 * u.um)
    assert [item.length_uncertainty for _, item in again.arms.signed] == [item.length_uncertainty for _, item in setup.arms.signed]
    assert again.tracking == setup.tracking
    assert again.air_uncertainty == setup.air_uncertainty


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (AIR, r"air: there is air but no arm; add \[\[first_arm\]\]"),
        (
            AIR.replace("ciddor 1996", "warm"),
            "air.model: must be one of ciddor 1996, .*mathar 2007, two air models; got 'warm'",
        ),
        (AIR.replace("30 %", "140 %") + ARM, "air: humidity must be from 0 to 100 %"),
        (AIR.replace('"12 deg_C"', "12") + ARM, 'air.temperature: must be text with a unit, for example "288 K"; got 12'),
        (AIR + "levelled = true\n" + ARM, r'air.levelled: this key belongs to model = "two air models"'),
        (AIR.replace("ciddor 1996", "two air models") + ARM, "air.short: this key is missing"),
        (AIR + "colour = 1\n" + ARM, "air.colour: unknown key; the keys here are model, temperature"),
        (AIR + '[air_uncertainty]\ntemperature = "-1 K"\n' + ARM, "air_uncertainty: an uncertainty must be one number, zero or more"),
        (ARM, r"second_arm\[0\].medium: there is no \[air\] in this file"),
        (ARM.replace('"air"', '"mud"'), r"second_arm\[0\].medium: no glass is named 'mud'; there are fused silica"),
        (AIR + ARM.replace("30 m", "-30 m"), r"second_arm\[0\]: length must be one number, zero or more"),
        (AIR + ARM.replace("30 m", "30 deg"), r"second_arm\[0\]: length must be convertible to m"),
        (AIR + '[[second_arm]]\nmedium = "air"\n', r"second_arm\[0\].length: this key is missing"),
        (ARM.replace('"air"', '"vacuum"') + 'temperature = "3 K"\n', r"second_arm\[0\]: vacuum has no temperature to set here"),
    ],
)
def test_faults_carry_file_and_key(tmp_path, text, message):
    with pytest.raises(SetupError, match=message) as caught:
        read(tmp_path, text)
    assert str(caught.value).startswith(str(tmp_path / "setup.toml"))


def test_what_cannot_be_written_is_said(tmp_path, larkmoor):
    from dataclasses import replace

    setup = Setup.read(larkmoor / "bench.toml")
    own = media.Glass(name="plain", strengths=[1.1], resonances=[0.09] * u.um, low=0.4 * u.um, high=2 * u.um)
    arms = media.ArmPair(first=[media.Segment(medium=own, length=1 * u.mm)], second=[])
    with pytest.raises(SetupError, match="the glass 'plain' is not a packaged one"):
        replace(setup, arms=arms).write(tmp_path / "a.toml")
    airs = [media.Segment(medium=media.Ciddor1996(temperature=t * u.deg_C), length=1 * u.m) for t in (10, 12)]
    with pytest.raises(SetupError, match=r"a setup file holds one \[air\]"):
        replace(setup, arms=media.ArmPair(first=airs, second=[])).write(tmp_path / "a.toml")
    assert not list(tmp_path.iterdir())


def test_wrong_objects_in_a_setup(larkmoor):
    from dataclasses import replace

    from whitefringe.errors import InputError

    setup = Setup.read(larkmoor / "bench.toml")
    with pytest.raises(InputError, match=r"arms must be a media\.ArmPair; got 3"):
        replace(setup, arms=3)
    with pytest.raises(InputError, match="tracking must be a tuple of filters"):
        replace(setup, tracking=(3,))
