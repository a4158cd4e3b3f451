"""Controls of the sky: each changes the bench's night as a script would, and can put it back."""

from dataclasses import replace

import astropy.units as u
import numpy as np
import pytest

from whitefringe import sky
from whitefringe.errors import InputError
from whitefringe.widgets import (
    NightPanel,
    ObjectControl,
    TargetControl,
)

from .conftest import finite, night


def test_moving_a_star_recomputes_its_rows_only(night_panel, night_bench):
    home = night(night_bench)
    night_panel.target.rows["dec"].slider.set_state({"value": 30.0})
    moved = night(night_bench)
    star = moved.chosen_target.coordinates
    assert (star.dec.deg, star.ra.deg) == pytest.approx((30.0, 60.0), abs=1e-12)
    direct = replace(home, targets=moved.targets)
    for name in ("opd", "opd_uncertainty", "u", "carriage_1", "reason", "target", "baseline"):
        assert np.all(moved.table[name] == direct.table[name]), name
    assert "moved by 5 deg from the setup&#x27;s place, right ascension 60 deg, declination 25 deg" in night_panel.target.note.value
    assert night_panel.target.back in night_panel.target.place.children


def test_the_button_puts_the_star_back(night_panel, night_bench):
    home = night(night_bench)
    night_panel.target.rows["ra"].box.value = 61.25
    assert night_panel.target.rows["ra"].value == 61.25
    night_panel.target.back.click()
    assert night(night_bench).targets == home.targets
    assert np.array_equal(night(night_bench).rows["opd"], home.rows["opd"])
    assert night_panel.target.back not in night_panel.target.place.children
    assert night_panel.target.rows["ra"].value == 60
    night_panel.target.back.click()  # a second click that was on its way does nothing
    assert night(night_bench).targets == home.targets


def test_digits_that_a_row_does_not_show_are_kept(night_bench):
    fine = 24.12345678901234
    star = sky.Star.at(name="Ember", ra=60 * u.deg, dec=fine * u.deg)
    night_bench.update(observation=replace(night(night_bench), targets=[star], objects={}))
    with TargetControl(night_bench) as control:
        control.rows["ra"].box.value = 61
        assert night(night_bench).chosen_target.coordinates.dec.deg == pytest.approx(fine, abs=1e-14)


def test_a_declination_beyond_the_pole_is_refused(night_panel):
    with pytest.raises(InputError, match=r"dec of star .Ember. must lie between -90 and 90 deg; got 95\.0 deg"):
        night_panel.target.rows["dec"].box.value = 95
    assert "role='alert'" in night_panel.status.value
    assert night_panel.target.rows["dec"].value == 25


def test_targets_that_are_no_stars_say_what_they_are(night_bench):
    others = [sky.LampTarget(), sky.FixedDirection(name="beacon", azimuth=120 * u.deg, altitude=40 * u.deg)]
    night_bench.update(observation=replace(night(night_bench), targets=[*night(night_bench).targets, *others]))
    with NightPanel(night_bench) as panel:
        panel.target.choice.value = "lamp"
        assert "no path difference" in panel.target.note.value
        assert not any(row in panel.target.place.children for row in panel.target.rows.values())
        assert np.all(panel.track.whole.y == 0)
        assert "path difference 0.0 to 0.0 m" in repr(panel)
        panel.target.choice.value = "beacon"
        assert "azimuth 120 deg, altitude 40 deg" in panel.target.note.value
        assert panel.target.place.children == (panel.target.note,)
        assert np.ptp(panel.track.whole.y) < 1e-9
        with pytest.raises(InputError, match="only a star can be moved; 'beacon' is a FixedDirection: choose a star as the target"):
            night(night_bench).star_at(ra=1 * u.deg)
        assert night(night_bench).star_back() is night(night_bench)


def test_length_and_azimuth_move_the_second_station_about_the_first(night_panel, night_bench):
    home = night(night_bench)
    night_panel.baseline.length.slider.set_state({"value": 150.0})
    night_panel.baseline.azimuth.box.value = 90
    moved = night(night_bench)
    assert moved.chosen_baseline.enu_si == pytest.approx([150, 0, 0.5], abs=1e-9)
    assert moved.array.enu_si[[0, 2]].tolist() == home.array.enu_si[[0, 2]].tolist()
    station = moved.array.stations[1]
    assert (station.up, station.uncertainty) == (home.array.stations[1].up, home.array.stations[1].uncertainty)
    assert "Weir moved by 92.195 m (east +70.000 m, north -60.000 m)" in night_panel.baseline.note.value
    direct = replace(home, array=moved.array)
    assert np.all(moved.table["opd"] == direct.table["opd"])
    night_panel.baseline.back.click()
    assert night(night_bench).array == home.array
    assert night_panel.baseline.more.children == ()
    assert night_panel.baseline.length.value == 100


def test_azimuths_of_all_quarters(night_panel, night_bench):
    for azimuth in (0.0, 45.0, 180.0, 225.5, 359.5):
        night_panel.baseline.azimuth.slider.set_state({"value": azimuth})
        east, north, _ = night(night_bench).chosen_baseline.enu_si
        assert np.degrees(np.arctan2(east, north)) % 360 == pytest.approx(azimuth, abs=1e-9)
        assert night_panel.baseline.azimuth.value == azimuth
        assert night_panel.baseline.azimuth.slider.value == azimuth  # nothing travels back to the slider


def test_star_and_station_are_put_back_apart(night_panel, night_bench):
    home = night(night_bench)
    night_panel.target.rows["dec"].box.value = 40
    night_panel.baseline.length.box.value = 70
    night_panel.target.back.click()
    assert night(night_bench).targets == home.targets
    assert night(night_bench).array.stations[1].east.to_value(u.m) == pytest.approx(56)
    night_panel.baseline.back.click()
    assert np.array_equal(night(night_bench).table["opd"], home.table["opd"])


def test_an_object_moves_the_visibility_only(night_panel, night_bench):
    table = night(night_bench).table
    tracks = night_panel.track.whole.y, night_panel.uv.chosen.y
    night_panel.object.choice.value = "uniform-disc"
    night_panel.object.row("diameter").slider.set_state({"value": 4.0})
    shape = night(night_bench).chosen_object
    assert shape == sky.UniformDisc(diameter=4 * u.mas)
    rows = night(night_bench).rows
    band = abs(sky.band_visibility(shape, rows["u"], rows["v"], night_bench.results.light))
    assert night_panel.visibility.whole.y == pytest.approx(band, abs=1e-12)
    assert night(night_bench).table is table
    assert (night_panel.track.whole.y is tracks[0], night_panel.uv.chosen.y is tracks[1]) == (True, True)


def test_the_first_null_is_that_of_the_disc(night_panel, night_bench):
    night_bench.update(observation=night(night_bench).looking_like(sky.UniformDisc(diameter=2 * u.mas)))
    wavelength = night_bench.results.wavelength.value
    null = 1.21966989 * (wavelength / (2 * u.mas).to(u.rad)).to_value(u.m, equivalencies=u.dimensionless_angles())
    assert f"first null in its direction at {null:.1f} m" in night_panel.visibility.text.value
    night_bench.update(observation=night(night_bench).looking_like(sky.GaussianDisc(fwhm=2 * u.mas)))
    assert "no null in its direction" in night_panel.visibility.text.value


def test_every_shape_that_is_offered_can_be_chosen(night_panel, night_bench):
    assert "group" not in night_panel.object.choice.options
    assert "picture" not in night_panel.object.choice.options
    for name in night_panel.object.choice.options:
        night_panel.object.choice.value = name
        assert night(night_bench).chosen_object.shape == name
        assert name in repr(night_panel.object)


def test_companion_and_background_are_added_to_what_is_there(night_panel, night_bench):
    disc = night(night_bench).chosen_object
    night_panel.object.choice.value = "with-background"
    assert night(night_bench).chosen_object.object == disc
    assert "before the background: darkened-disc, diameter 2.1 mas, limb darkening 0.3" in night_panel.object.parts.value
    night_panel.object.choice.value = "darkened-disc"
    assert night(night_bench).chosen_object == disc
    night_panel.object.choice.value = "binary"
    assert night(night_bench).chosen_object.first == disc
    night_panel.object.row("separation").box.value = 12
    assert night(night_bench).chosen_object.first == disc


def test_each_target_keeps_its_own_objects(night_panel, night_bench):
    night_panel.object.choice.value = "uniform-disc"
    night_panel.object.row("diameter").box.value = 3.3
    night_panel.target.choice.value = "Sable"
    assert night_panel.object.choice.value == "binary"
    assert night_panel.object.row("separation").value == 6
    night_panel.target.choice.value = "Ember"
    assert night(night_bench).chosen_object == sky.UniformDisc(diameter=3.3 * u.mas)
    night_panel.object.choice.value = "darkened-disc"
    assert night(night_bench).chosen_object == sky.DarkenedDisc(diameter=2.1 * u.mas, darkening=0.3)


def test_groups_and_pictures_are_offered_where_the_setup_has_them(night_bench):
    group = sky.Group(objects=[sky.Point(), sky.Point()], east=[0, 4] * u.mas)
    picture = sky.Picture(image=[[1, 0, 1]], pixel=1 * u.mas)
    other = replace(night(night_bench), objects={"Ember": group, "Rush": picture})
    night_bench.update(observation=other)
    with ObjectControl(night_bench) as control:
        assert control.choice.value == "group"
        assert "picture" not in control.choice.options
        control.choice.value = "point"
        assert night(night_bench).chosen_object == sky.Point()
        control.choice.value = "group"
        assert night(night_bench).chosen_object is group
        assert repr(control) == "ObjectControl: Ember: group, point; point"
        night_bench.update(observation=night(night_bench).choosing(target="Rush"))
        assert control.choice.value == "picture"
        assert "group" not in control.choice.options
        assert repr(control) == "ObjectControl: Rush: picture, 1 by 3 pixels of 1 mas"


def test_an_object_too_wide_for_the_band_is_said(night_panel, night_bench):
    wide = sky.Binary(flux_ratio=0.5, separation=1 * u.arcmin, position_angle=90 * u.deg)
    night_bench.update(observation=night(night_bench).looking_like(wide))
    assert "obj is too wide for this band and baseline" in night_panel.visibility.text.value
    assert finite(night_panel.visibility.mean).size
    assert not finite(night_panel.visibility.seen).size
