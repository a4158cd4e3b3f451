"""Array, targets and night in setup files: read, written, refused with file and key path."""

from dataclasses import replace

import astropy.units as u
import numpy as np
import pytest
from astropy.time import Time

from whitefringe import sky
from whitefringe.demo_array import ARRAY_TEXT
from whitefringe.errors import InputError, SetupError
from whitefringe.setup import Setup


@pytest.fixture(scope="module")
def setup(larkmoor):
    return Setup.read(larkmoor / "array.toml")


def changed(folder, old, new):
    assert old in ARRAY_TEXT
    path = folder / "array.toml"
    path.write_text(ARRAY_TEXT.replace(old, new), encoding="utf-8")
    return Setup.read(path)


def test_array_targets_and_night(setup):
    night = setup.observation
    assert night.array.names == ("Kiln", "Weir", "Tarn")
    assert [target.name for target in night.targets] == ["Ember", "Sable", "Rush", "Fen"]
    assert isinstance(night.objects["Ember"], sky.DarkenedDisc)
    assert isinstance(night.objects["Sable"], sky.Binary)
    assert [line.passes for line in night.delay_lines] == [4, 4, 4]
    assert night.delay_lines[1].offset == 0.35 * u.m
    assert (night.date, night.target, night.baseline) == ("2026-12-01", "Ember", "Kiln-Weir")
    ember = night.chosen_target.coordinates
    assert ember.distance.to_value(u.pc) == pytest.approx(1000 / 42)
    assert ember.pm_dec.to_value(u.mas / u.yr) == pytest.approx(-110)


def test_other_kinds_of_station_and_target(tmp_path):
    here = sky.Station.geocentric(name="Weir", x=5_053_000 * u.m, y=-1_354_000 * u.m, z=3_638_000 * u.m)
    text = 'east = "80 m"\nnorth = "60 m"\nup = "0.5 m"'
    setup = changed(tmp_path, text, 'x = "5053 km"\ny = "-1354 km"\nz = "3638 km"')
    assert np.allclose(setup.observation.array.enu_si[1], here.enu_si(setup.observation.array.location))
    extra = '[[target]]\nname = "beacon"\nazimuth = "10 deg"\naltitude = "35 deg"\n\n[[target]]\nname = "lamp"\nlamp = true\n\n[night]'
    targets = changed(tmp_path, "[night]", extra).observation.targets
    assert isinstance(targets[-2], sky.FixedDirection)
    assert isinstance(targets[-1], sky.LampTarget)


def test_a_delay_line_in_air(tmp_path):
    text = 'passes = 4, offset = "0.35 m"'
    line = changed(tmp_path, text, text + ', medium = "air", wavelength = "1.65 um"').observation.delay_lines[1]
    assert line.path_per_metre == pytest.approx(4 * 1.00024, abs=1e-4)


def test_written_array_reads_back(tmp_path, setup):
    more = (*setup.observation.targets, sky.FixedDirection(name="beacon", azimuth=10 * u.deg, altitude=35 * u.deg), sky.LampTarget())
    blend = sky.WithBackground(object=sky.Group(objects=[sky.Point(), sky.GaussianDisc(fwhm=2 * u.mas)], east=[0, 3] * u.mas), fraction=0.1)
    full = replace(setup, observation=replace(setup.observation, targets=more, objects={**setup.observation.objects, "Fen": blend}))
    first, second = tmp_path / "a.toml", tmp_path / "b.toml"
    full.write(first)
    again = Setup.read(first)
    again.write(second)
    assert first.read_text(encoding="utf-8") == second.read_text(encoding="utf-8")
    assert np.array_equal(again.observation.array.enu_si, full.observation.array.enu_si)
    spacing = [60, 20] * u.m
    for name, thing in full.observation.objects.items():
        assert np.allclose(again.observation.objects[name].visibility(*spacing, 1.65 * u.um), thing.visibility(*spacing, 1.65 * u.um))
    old, new = (night.rows["opd"].to_value(u.m) for night in (full.observation, again.observation))
    assert np.max(np.abs(old - new)) < 1e-9


def test_a_picture_is_not_written(tmp_path, setup):
    picture = sky.Picture(image=np.ones((3, 3)), pixel=1 * u.mas)
    with pytest.raises(SetupError, match="an object given as a picture is not written"):
        replace(setup, observation=replace(setup.observation, objects={"Fen": picture})).write(tmp_path / "a.toml")


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ('east = "80 m"', 'east = "80 deg"', r"array.station\[1\]: .*east .*m"),
        ('up = "0.5 m"\n', "", r"array.station\[1\]: a station has east, north and up, or x, y and z; got east, north"),
        ('name = "Weir"', 'name = "Kiln"', "array: station names must differ; twice or more: Kiln"),
        ('latitude = "35 deg"', 'latitude = "95 deg"', "array.latitude: must lie between -90 and 90 deg; got 95.0 deg"),
        ('height = "1000 m"', 'height = "1000 s"', "array.height: must be one number in a unit such as m; got 1000.0 s"),
        ('dec = "25 deg"', 'dec = "125 deg"', r"target\[0\]: dec of star 'Ember' must lie between -90 and 90 deg"),
        ('dec = "25 deg"\n', "", r"target\[0\]: a target has ra and dec .*or azimuth and altitude, or lamp = true; got ra, pm_ra_cosdec"),
        ('height = "1000 m"', 'height = "1e12 m"', "array.height: must lie between -12000 and 10000 m; got"),
        ('latitude = "35 deg"', 'latitude = "nan deg"', "array.latitude: must lie between -90 and 90 deg; got nan deg"),
        ('latitude = "35 deg"', 'latitude = ["1 deg", "2 deg"]', "array.latitude: must be"),
        ('ra = "60 deg"', 'ra = "04:00:00"', r"target\[0\].ra: colons leave open whether hours or degrees are meant; write .04h00m00s."),
        ('ra = "60 deg"', 'ra = "60 um"', r'target\[0\].ra: must be an angle, for example "60 deg", "04h00m00s"'),
        ('temperature = "14 deg_C"', 'temperature = "14 C"', "air.temperature: is in coulomb; write deg_C"),
        ('epoch = "J2016.0"', 'epoch = "long ago"', r'target\[0\].epoch: must be a time such as "J2016.0"'),
        ('name = "Sable"', 'name = "Ember"', "target: target names must differ; twice or more: Ember"),
        ('shape = "binary"', 'shape = "star"', r"target\[1\].object.shape: must be one of point, uniform-disc, .*; got 'star'"),
        ('separation = "6 mas"', "separation = 6", r"target\[1\].object.separation: must be text with a unit"),
        ("passes = 4, offset", "passes = 3, offset", r"array.station\[1\].line: .*passes .*2 .*4"),
        (
            "passes = 4, offset",
            'medium = "water", passes = 4, offset',
            r'array.station\[1\].line.medium: must be "vacuum" or "air"; got \'water\'',
        ),
        ('stroke = "12 m"', 'length = "12 m"', r"array.station\[2\].line\.(stroke: this key is missing|length: unknown key)"),
        ('date = "2026-12-01"', 'date = "next week"', r"night\.date: date must be a calendar date such as"),
        ('step = "5 min"', 'step = "5 deg"', r"night\.step: step must be convertible to s \(for example 1 min\); got deg"),
        ('step = "5 min"', 'step = "2 h"', r"night\.step: step must be at most 1 h, to follow the sky; got 2\.0 h"),
        ('step = "5 min"', "step = 5", r'night\.step: must be text with a unit, for example "5 min"; got 5'),
        ('sun_below = "-12 deg"', 'sun_below = "12 deg"', r"night\.sun_below: sun_below must be one angle from -90 to 0 deg"),
        ('least_altitude = "30 deg"', 'least_altitude = "95 deg"', r"night\.least_altitude: least_altitude must be one angle from 0 to 90"),
        ('latitude = "35 deg"', "latitude = 35", r'array\.latitude: must be text with a unit, for example "60 deg"; got 35'),
        ('longitude = "-15 deg"', 'longitude = "-15:00:00"', r"array\.longitude: colons leave open whether hours or degrees are meant"),
        ('dec = "25 deg"', 'dec = "04h00m00s"', r'target\[0\]\.dec: is in hours, .*; write degrees, as in "\+25d30m00s"'),
        ('dec = "25 deg"', 'dec = "25d61m00s"', r"target\[0\]\.dec: must be an angle, for example"),
        ('dec = "25 deg"', 'dec = "25d60m00s"', r"target\[0\]\.dec: must be an angle, for example"),
        ('pm_dec = "-110 mas / yr"', "pm_dec = -110", r'target\[0\]\.pm_dec: must be text with a unit, for example "-110 mas / yr"'),
        ('uncertainty = "1 mas"', "uncertainty = 1", r'target\[\d\]\.uncertainty: must be text with a unit, for example "1 mas"'),
        ('east = "80 m"', "east = 80", r'array\.station\[1\]\.east: must be text with a unit, for example "20 m"'),
        ('stroke = "12 m"', "stroke = 12", r'line\.stroke: must be text with a unit, for example "25 m"'),
        ('separation = "6 mas"', "separation = 6", r'separation: must be text with a unit, for example "5 mas"; got 6'),
        ('separation = "6 mas"', 'separation = "06h00m00s"', r'separation: must be a number with a unit, for example "5 mas"'),
        ('humidity = "', "humidity = 20 # ", r'air\.humidity: must be text with a unit, for example "30 %"; got 20'),
        ('east = "80 m"', 'east = "800 km"', r"array: station 'Weir' stands 800 km from the array's location"),
        ('name = "Sable"', 'name = " "', r"target\[1\]: a star needs a name; got ' '"),
        ('epoch = "J2016.0"', 'epoch = "9999-01-01"', r"target\[0\]: epoch of star 'Ember': times must lie in the years 1000 to 3000"),
        ('date = "2026-12-01"', "day = 1", r"night\.(date: this key is missing|day: unknown key)"),
    ],
)
def test_faults_carry_file_and_key(tmp_path, old, new, message):
    with pytest.raises(SetupError, match=message) as caught:
        changed(tmp_path, old, new)
    assert str(caught.value).startswith(str(tmp_path / "array.toml"))


def test_a_night_needs_an_array_and_targets(tmp_path):
    bench = ARRAY_TEXT.split("[array]")[0]
    path = tmp_path / "a.toml"
    path.write_text(bench + '[night]\ndate = "2026-12-01"\n', encoding="utf-8")
    with pytest.raises(SetupError, match=r"night: this needs an \[array\] in the same file"):
        Setup.read(path)
    path.write_text(ARRAY_TEXT.split("[[target]]")[0], encoding="utf-8")
    with pytest.raises(SetupError, match=r"target: an array needs at least one \[\[target\]\]"):
        Setup.read(path)


def test_air_for_a_delay_line_must_be_there(tmp_path):
    path = tmp_path / "a.toml"
    start, rest = ARRAY_TEXT.split("[air]")
    path.write_text(
        start + "[array]" + rest.split("[array]", 1)[1].replace("passes = 4, offset", 'medium = "air", passes = 4, offset'),
        encoding="utf-8",
    )
    with pytest.raises(SetupError, match=r"line.medium: there is no \[air\] in this file"):
        Setup.read(path)


def test_another_choice_keeps_the_tables(setup):
    night = setup.observation
    table = night.table
    other = night.choosing(target="Rush", baseline="Weir-Tarn")
    assert other.table is table
    assert set(other.rows["target"]) == {"Rush"}
    assert set(other.rows["baseline"]) == {"Weir-Tarn"}
    assert len(other.rows) == len(night.times)
    assert other.chosen_baseline.name == "Weir-Tarn"
    assert isinstance(other.chosen_object, sky.UniformDisc)
    assert isinstance(night.choosing(target="Fen").chosen_object, sky.Point)


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"target": "Moon"}, "there is no target 'Moon'; there are Ember, Sable, Rush, Fen"),
        ({"baseline": "Kiln-Mill"}, "there is no baseline 'Kiln-Mill'; there are Kiln-Weir, Kiln-Tarn, Weir-Tarn"),
        ({"targets": ()}, "targets must be one or more of Star, FixedDirection, LampTarget"),
        ({"targets": ("Ember",)}, "a target must be one of Star, FixedDirection, LampTarget; got str"),
        ({"objects": {"Moon": sky.Point()}}, "there is no target 'Moon' for this object"),
    ],
)
def test_messages_of_an_observation(setup, changes, message):
    with pytest.raises(InputError, match=message):
        replace(setup.observation, **changes)


def test_without_delay_lines_there_are_no_windows(setup):
    bare = replace(setup.observation, delay_lines=(), targets=setup.observation.targets[:1], objects={})
    assert bare.windows is None
    assert "carriage_1" not in bare.table.colnames


def test_sexagesimal_angles(tmp_path):
    place = changed(tmp_path, 'ra = "60 deg"\ndec = "25 deg"', 'ra = "04h00m30s"\ndec = "+25d30m00s"').observation.chosen_target.coordinates
    assert place.ra.to_value(u.deg) == pytest.approx(60.125, abs=1e-12)
    assert place.dec.to_value(u.deg) == pytest.approx(25.5, abs=1e-12)


def test_sexagesimal_angles_of_the_place(tmp_path):
    old = 'longitude = "-15 deg"\nlatitude = "35 deg"'
    place = changed(tmp_path, old, 'longitude = "-01h00m30s"\nlatitude = "35d30m"').observation.array.location
    assert place.lon.to_value(u.deg) == pytest.approx(-15.125, abs=1e-12)
    assert place.lat.to_value(u.deg) == pytest.approx(35.5, abs=1e-12)


def test_two_uncertainties_of_a_star_are_written(tmp_path, setup):
    star = sky.Star.at(
        name="Ember",
        ra=60 * u.deg,
        dec=25 * u.deg,
        uncertainty=[1, 2] * u.mas,
        proper_motion_uncertainty=[3, 4] * u.mas / u.yr,
        epoch=Time("1850-01-01", scale="tdb"),
    )
    one = replace(setup, observation=replace(setup.observation, targets=[star], objects={}, target=""))
    one.write(tmp_path / "a.toml")
    again = Setup.read(tmp_path / "a.toml").observation.targets[0]
    assert again.uncertainty.to_value(u.mas).tolist() == [1, 2]
    assert again.proper_motion_uncertainty.to_value(u.mas / u.yr).tolist() == [3, 4]
