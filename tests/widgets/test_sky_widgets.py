"""The widgets of the sky in plain Python: each changes the bench's night, and shows what the core says of it."""

import threading
from dataclasses import replace

import astropy.units as u
import ipywidgets
import numpy as np
import pytest
from astropy.coordinates import SkyCoord

from whitefringe import sky, spectra
from whitefringe.errors import InputError
from whitefringe.widgets import (
    BaselineControl,
    Bench,
    DelayTrackPlot,
    NightPanel,
    ObjectControl,
    TargetControl,
    UvPlot,
    VisibilityPlot,
    WindowsTable,
)

from .conftest import finite, living_widgets, night

VIEWS = (BaselineControl, DelayTrackPlot, NightPanel, ObjectControl, TargetControl, UvPlot, VisibilityPlot, WindowsTable)


def test_the_summary_says_what_is_looked_at_and_when(night_panel):
    words = "night 2026-12-01, Ember on Kiln-Weir, observable 20:04 to 04:56 UTC, path difference -57.8 to 71.4 m"
    # rows are ten minutes apart, so the ends of the path difference are those of the rows inside
    assert repr(night_panel).startswith("NightPanel: night 2026-12-01, Ember on Kiln-Weir, observable 20:04 to 04:56 UTC, path difference ")
    assert repr(night_panel).endswith(" m")
    assert len(repr(night_panel)) == len("NightPanel: " + words)


def test_a_target_that_cannot_be_observed_says_so(night_panel, night_bench):
    night_panel.target.choice.value = "Fen"
    assert "Fen on Kiln-Weir, not observable, path difference" in repr(night_panel)
    assert "mid-night, not observable" in night_panel.track.text.value
    assert "altitude -56.8 to -2.9 deg, limit 30 deg" in night_panel.track.text.value
    assert not finite(night_panel.track.seen).size
    assert "not observable; |V| would be 1.000 to 1.000" in night_panel.visibility.text.value
    assert night(night_bench).target == "Fen"


def test_choices_keep_the_tables(night_panel, night_bench):
    table = night(night_bench).table
    night_panel.target.choice.set_state({"index": 1})
    night_panel.baseline.choice.set_state({"index": 2})
    assert (night(night_bench).target, night(night_bench).baseline) == ("Sable", "Weir-Tarn")
    assert night(night_bench).table is table


def test_two_panels_on_one_bench_stay_in_step(night_panel, night_bench):
    with NightPanel(night_bench) as other:
        other.target.choice.value = "Rush"
        other.baseline.length.box.value = 55
        assert night_panel.target.choice.value == "Rush"
        assert night_panel.target.rows["dec"].value == 62
        assert night_panel.baseline.length.value == 55
        assert night_panel.windows.html.value == other.windows.html.value
        assert night_panel.baseline.note.value == other.baseline.note.value


def test_another_night_moves_the_stars_four_minutes_a_day(night_panel, night_bench):
    before = night(night_bench)
    night_panel.target.date.value = "2026-12-11"
    after = night(night_bench)
    opens = [item.windows[item.windows["observable"]]["start"][0].mjd % 1 for item in (before, after)]
    start, later = (24 * 60 * day for day in opens)
    assert later - start == pytest.approx(-39.3, abs=1.0)
    assert "UTC on 2026-12-11, from 00:00 on 2026-12-12" in night_panel.track.figure.axes[0].label


def test_a_date_that_is_none_shows_an_error_and_the_last_good_night_stays(array_setup):
    with NightPanel(Bench(array_setup, strict=False)) as panel:
        kept = night(panel.bench)
        panel.target.date.value = "2026-13-01"
        assert "role='alert'" in panel.status.value
        assert "date must be a calendar date" in panel.status.value
        assert "2026-13-01" in panel.status.value
        assert night(panel.bench) is kept
        assert panel.target.date.value == "2026-12-01"
        assert "problem: date must be" in repr(panel)
        panel.target.date.value = "2026-12-02"
        assert "alert" not in panel.status.value


def test_a_night_far_ahead_is_drawn_and_flagged(array_setup):
    far = replace(array_setup.observation, orientation=None, date="2060-12-01", step=1 * u.hour)
    with NightPanel(Bench(replace(array_setup, observation=far))) as panel:
        assert "beyond the table" in panel.windows.notes.value
        assert "last measured 20" in panel.windows.notes.value
        assert panel.track.figure.axes[0].label == "UTC on 2060-12-01, from 00:00 on 2060-12-02"
        assert finite(panel.track.curves[0]).max() > 1000  # micrometres: UT1 is not known that far


def test_the_observable_stretch_is_drawn_strong(night_panel, night_bench):
    rows = night(night_bench).rows
    assert night_panel.track.whole.y.tolist() == rows["opd"].to_value(u.m).tolist()
    assert np.isfinite(night_panel.track.seen.y).tolist() == rows["observable"].tolist()
    assert night_panel.track.whole.x[0] == pytest.approx(18.78, abs=0.02)
    assert night_panel.track.whole.x[-1] == pytest.approx(24 + 6.85, abs=0.02)
    axis = night_panel.track.figure.axes[0]
    assert axis.tick_labels == {f"{hour}": f"{hour % 24:02d}:00" for hour in range(20, 31, 2)}
    assert axis.label == "UTC on 2026-12-01, from 00:00 on 2026-12-02"
    assert "not observable 18:47 to 20:04 UTC: below the horizon limit" in night_panel.track.text.value


@pytest.mark.parametrize(
    ("view", "label", "columns", "unit"),
    [
        ("uncertainty", "one sigma [µm]", [f"opd_uncertainty{end}" for end in ("", "_ut1", "_target", "_stations", "_pole")], u.um),
        ("rate and speeds", "rate [mm/s]", ["opd_rate", "speed_1", "speed_2"], u.mm / u.s),
        ("carriages", "carriage position [m]", ["carriage_1", "carriage_2"], u.m),
        ("altitude", "altitude [deg]", ["altitude"], u.deg),
    ],
)
def test_the_lower_plot_shows_what_is_chosen_in_its_unit(night_panel, night_bench, view, label, columns, unit):
    night_panel.track.view.value = view
    assert night_panel.track.lower.axes[1].label == label
    for mark, column in zip(night_panel.track.curves, columns, strict=False):
        values = night(night_bench).rows[column].to_value(unit)
        assert mark.y == pytest.approx(values, abs=1e-9)
        assert night_panel.track.lower_y.min <= values.min()
        assert values.max() <= night_panel.track.lower_y.max


def test_limits_are_drawn_with_what_they_limit(night_panel):
    night_panel.track.view.value = "carriages"
    assert np.all(night_panel.track.curves[2].y == 18)
    assert "end of stroke: Kiln and Weir" in night_panel.track.lower_names.value
    night_panel.baseline.choice.value = "Weir-Tarn"
    assert [np.unique(mark.y).tolist() for mark in night_panel.track.curves[2:4]] == [[18.0], [12.0]]
    night_panel.track.view.value = "altitude"
    assert np.all(night_panel.track.curves[1].y == 30)


def test_both_signs_of_all_baselines_are_drawn_east_to_the_left(night_panel, night_bench):
    assert night_panel.uv.x.reverse
    assert "to the left" in night_panel.uv.figure.axes[0].label
    rows = night(night_bench).rows
    drawn = night_panel.uv.chosen
    east = drawn.x[np.isfinite(drawn.x)]
    assert east.tolist() == [*rows["u_icrs"].to_value(u.m), *(-rows["u_icrs"].to_value(u.m))]
    assert np.isfinite(night_panel.uv.others.x).sum() == 4 * len(rows)
    assert np.isfinite(night_panel.uv.chosen_seen.y).sum() == 2 * rows["observable"].sum()
    assert night_panel.uv.x.max == night_panel.uv.y.max


def test_windows_that_can_be_observed_come_first_with_the_caution(night_panel, night_bench):
    html = night_panel.windows.html.value
    assert html.count("<tr") == 1 + len(night(night_bench).windows)
    assert html.rindex("✓") < html.index("✗")
    assert html.count("▶") == 3  # Ember on Kiln-Weir: one window, and before and after it
    assert "Tarn needs 12.006 to 31.252 m, stroke 12 m" in html
    assert "role='note'" in night_panel.windows.caution.value
    assert "moves nothing and knows no interlock" in night_panel.windows.caution.value
    assert "Earth orientation: given values" in night_panel.windows.notes.value


def test_without_delay_lines_altitude_alone_decides(night_bench):
    night_bench.update(observation=replace(night(night_bench), delay_lines=()))
    with NightPanel(night_bench) as panel:
        seen = night(night_bench).rows["altitude"] >= 30 * u.deg
        assert np.isfinite(panel.track.seen.y).tolist() == seen.tolist()
        assert "carriages" not in panel.track.view.options
        assert "no delay lines in the setup" in panel.windows.html.value
        assert "no delay lines in the setup" in panel.track.text.value
        assert "observable 19:40 to 04:56 UTC" in repr(panel)
        panel.track.view.value = "rate and speeds"
        assert not finite(panel.track.curves[1]).size


def test_the_script_computes_what_is_shown(night_panel, night_bench):
    others = [sky.LampTarget(), sky.FixedDirection(name="beacon", azimuth=120 * u.deg, altitude=40 * u.deg)]
    night_bench.update(observation=replace(night(night_bench), targets=[*night(night_bench).targets, *others]))
    night_panel.target.choice.value = "Sable"
    night_panel.target.rows["dec"].box.value = 9.5
    night_panel.baseline.azimuth.box.value = 40
    night_panel.object.choice.value = "with-background"
    names = {}
    exec(night_panel.as_code(), names)
    rows = night(night_bench).rows
    assert names["track"]["opd"].to_value(u.m) == pytest.approx(rows["opd"].to_value(u.m), abs=2e-9)
    assert names["track"]["opd_uncertainty"].to_value(u.m) == pytest.approx(rows["opd_uncertainty"].to_value(u.m), rel=1e-6)
    assert names["contrast"] == pytest.approx(night_panel.visibility.whole.y, abs=1e-9)
    assert names["windows"]["reason"].tolist() == night(night_bench).windows["reason"].tolist()


def test_the_script_of_awkward_nights(night_bench):
    place = SkyCoord(
        l=10 * u.deg,
        b=20 * u.deg,
        distance=3 * u.pc,
        pm_l_cosb=3 * u.mas / u.yr,
        pm_b=2 * u.mas / u.yr,
        radial_velocity=9 * u.km / u.s,
        obstime="J2016",
        frame="galactic",
    )
    star = sky.Star(name="Drift", coordinates=place, uncertainty=[1, 2] * u.mas)
    group = sky.Group(objects=[sky.Point(), sky.Ring(diameter=2 * u.mas)], east=[0, 4] * u.mas)
    picture = sky.Picture(image=[[1, 0, 1]], pixel=1 * u.mas)
    plain = night(night_bench)
    other = replace(plain, targets=[star, *plain.targets], objects={"Drift": group, "Ember": picture}, delay_lines=(), target="")
    night_bench.update(observation=replace(other, orientation=None))
    names = {}
    exec(night_bench.as_code(), names)
    assert "windows" not in names
    assert names["track"]["opd"].to_value(u.m) == pytest.approx(night(night_bench).rows["opd"].to_value(u.m), abs=2e-9)
    assert names["night"].objects["Ember"].visibility(50 * u.m, 0 * u.m, 1.65 * u.um) == picture.visibility(50 * u.m, 0 * u.m, 1.65 * u.um)


def test_a_table_of_the_earth_orientation_that_was_read_is_named_in_the_script(night_bench):
    table = replace(sky.EarthOrientation.packaged(), source="finals2000A from newer.all")
    night_bench.update(observation=replace(night(night_bench), orientation=table))
    assert "orientation=sky.EarthOrientation.read('newer.all')" in night_bench.as_code()


def test_events_from_two_threads_lose_nothing(night_panel, night_bench):
    def move(row, values):
        for value in values:
            row.box.set_state({"value": float(value)})

    threads = [
        threading.Thread(target=move, args=(night_panel.baseline.length, range(90, 96))),
        threading.Thread(target=move, args=(night_panel.object.row("diameter"), range(1, 7))),
    ]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert night(night_bench).chosen_object.diameter == 6 * u.mas
    assert np.hypot(*night(night_bench).chosen_baseline.enu_si[:2]) == pytest.approx(95)
    assert night_panel.visibility.whole.y == pytest.approx(
        abs(sky.band_visibility(night(night_bench).chosen_object, *(night(night_bench).rows[k] for k in "uv"), night_bench.results.light))
    )


def test_the_browsers_rounding_is_not_a_change(night_panel, night_bench):
    calls = []
    night_bench.listen(lambda: calls.append(1))
    night_panel.target.rows["dec"].slider.set_state({"value": 25.000000000000004})
    night_panel.baseline.length.slider.set_state({"value": 99.99999999999999})
    assert calls == []


def test_a_delay_or_a_problem_draws_nothing_again(night_panel, night_bench):
    marks = [night_panel.track.whole, night_panel.uv.chosen, night_panel.visibility.whole]
    before, html = [mark.y for mark in marks], night_panel.windows.html.value
    night_bench.update(delay=3 * u.um)
    night_bench.report("something else")
    assert all(mark.y is y for mark, y in zip(marks, before, strict=True))
    assert night_panel.windows.html.value is html
    assert "something else; the last good state is shown" in night_panel.status.value


@pytest.mark.parametrize("view", VIEWS)
def test_a_setup_without_an_array_is_refused_with_what_to_do(setup, view):
    with pytest.raises(InputError, match=r"this setup has no array: give its setup file an \[array\], \[\[target\]\] and \[night\]"):
        view(Bench(setup))


def test_views_hide_while_the_bench_has_no_night(night_panel, night_bench):
    before = night(night_bench)
    night_bench.update(observation=None)
    assert night_panel.layout.display == night_panel.object.layout.display == "none"
    assert repr(night_panel) == "NightPanel: no array"
    assert repr(night_panel.object) == "ObjectControl: no array"
    night_bench.update(observation=before)
    assert night_panel.layout.display is None
    assert "Ember" in night_panel.status.value


@pytest.mark.parametrize("view", VIEWS)
def test_closing_frees_every_widget_and_listener(array_setup, view):
    bench, before = Bench(array_setup), living_widgets()
    made = view(bench)
    if isinstance(made, NightPanel):
        made.object.choice.value = "binary"
        made.track.view.value = "carriages"
        made.target.rows["ra"].box.value = 61
        made.target.choice.value = "Fen"
        assert living_widgets() - before <= 230
    made.close()
    made.close()
    assert living_widgets() == before
    assert bench._listeners == []
    bench.update(delay=1 * u.um)


def test_a_dashboard_of_single_parts(array_setup):
    bench = Bench(replace(array_setup, filters=(spectra.TopHat(centre=2.2 * u.um, width=0.4 * u.um),)))
    with TargetControl(bench) as target, VisibilityPlot(bench) as plot:
        box = ipywidgets.VBox([target, plot])
        target.choice.value = "Rush"
        assert "Rush" in repr(plot)
        assert "mean wavelength 2.1" in plot.text.value
        box.close()
