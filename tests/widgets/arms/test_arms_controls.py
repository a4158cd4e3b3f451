"""Controls of the air and the glass in the arms, each alone on a bench."""

import astropy.units as u
import pytest

from whitefringe import media, spectra
from whitefringe.errors import InputError
from whitefringe.widgets import AirControl, ArmsPanel, Bench, GlassControl
from whitefringe.widgets.controls import glass as glass_module
from whitefringe.widgets.controls.glass import balance_si, balanced

from .conftest import AIR, SILICA, ZNSE, air, bench_of, plate

# ---------------------------------------------------------------- air


def test_rows_show_the_air_and_stay_within_both_models(bench):
    with AirControl(bench) as control:
        shown = {name: (row.value, row.slider.min, row.slider.max) for name, row in control.rows.items()}
        # the infrared model is stated for 10 to 25 deg_C, up to 1023 hPa, up to 60 %; the other ends are the usual ones
        assert shown == {"temperature": (14, 10, 25), "pressure": (900, 600, 1023), "humidity": (35, 0, 60)}
        assert [row.box.description for row in control.rows.values()] == [
            "air temperature [°C]",
            "air pressure [hPa]",
            "relative humidity [%]",
        ]


@pytest.mark.parametrize(
    ("name", "value", "read"),
    [
        ("temperature", 12.3, lambda air: air.temperature_si - 273.15),
        ("pressure", 913, lambda air: air.pressure_si / 100),
        ("humidity", 41, lambda air: 100 * air.relative_humidity),
    ],
)
def test_a_move_of_a_row_is_the_air_of_the_core(bench, name, value, read):
    before = bench.setup.arms
    with AirControl(bench) as control:
        control.rows[name].slider.set_state({"value": value})
        for model in (bench.setup.arms.air.short, bench.setup.arms.air.long):
            assert read(model) == pytest.approx(value, abs=1e-9)
        unit = {"temperature": u.deg_C, "pressure": u.hPa, "humidity": u.percent}[name]
        lights = bench.setup.tracking_light, bench.results.light
        wanted = media.band_offset(before.in_air(**{name: u.Quantity(value, unit)}), *lights)
        assert bench.results.offset.offset.value == wanted.offset.value
        assert bench.results.offset.offset.value != media.band_offset(before, *lights).offset.value


def test_the_ends_of_every_row_can_be_reached(bench):
    with AirControl(bench) as control:
        for name in control.rows:
            for end in ("min", "max"):
                row = control.rows[name]
                row.slider.value = getattr(row.slider, end)
                assert bench.problem == ""


def test_models_their_ranges_and_their_step_are_said(bench):
    with AirControl(bench) as control:
        words = control.text.value
        assert "Ciddor 1996: 0.3 to 1.7 µm, -40 to 100 °C, 10 to 140 kPa, 0 to 100 % humidity" in words
        assert "Mathar 2007: 5 windows in 1.3 to 24 µm, 10 to 25 °C" in words
        step = bench.setup.arms.air.step
        assert f"they meet at 1.4 µm with a step in n of {step:.2e}, taken out: {1e8 * step:.2f} µm of path per 100 m" in words


def test_without_air_or_arms_there_are_words_and_no_rows(bare):
    with AirControl(bare) as control:
        assert "This setup has no arms" in control.text.value
        assert control.body.children == (control.text,)
        bare.update(arms=media.ArmPair(first=[plate(3)], second=[]))
        assert "There is no air in these arms" in control.text.value
        bare.update(arms=media.ArmPair(first=[plate(3)], second=[air(20)]))
        assert len(control.body.children) == 4
        assert control.rows["pressure"].value == 850


def test_segments_that_keep_their_own_conditions_are_named():
    first = [air(20, temperature=15 * u.deg_C)]
    with AirControl(bench_of(first, [plate(1), air(21)])) as control:
        assert set(control.rows) == {"temperature", "pressure", "humidity"}
        assert "first arm, segment 1 keeps its own temperature 15 deg_C" in control.text.value
        control.rows["temperature"].box.value = 11
        arms = control.bench.setup.arms
        assert [item.medium_here.temperature_si - 273.15 for item in (arms.first[0], arms.second[1])] == pytest.approx([15, 11])
    # a condition that all segments set for themselves would be a dead row
    with AirControl(bench_of(first)) as control:
        assert set(control.rows) == {"pressure", "humidity"}


def test_rows_stay_within_every_model_in_the_arms():
    infrared = media.Mathar2007(temperature=12 * u.deg_C, pressure=850 * u.hPa, humidity=30 * u.percent)
    with AirControl(bench_of([air(20)], [media.Segment(medium=infrared, length=19 * u.m)])) as control:
        assert (control.rows["temperature"].slider.min, control.rows["temperature"].slider.max) == (10, 25)
        assert control.rows["humidity"].slider.max == 60
        assert "Ciddor 1996: " in control.text.value
        assert "Mathar 2007: " in control.text.value


def test_air_under_other_conditions_is_named():
    other = media.Segment(medium=AIR.under(pressure=900 * u.hPa), length=3 * u.m)
    with AirControl(bench_of([air(20)], [other])) as control:
        assert "second arm, segment 1 is air under other conditions; a move of a row sets it alike" in control.text.value


def test_air_that_may_be_extrapolated_has_the_usual_ranges_and_says_so():
    hot = media.Mathar2007(temperature=30 * u.deg_C, pressure=900 * u.hPa, humidity=20 * u.percent, extrapolate=True)
    with AirControl(bench_of([media.Segment(medium=hot, length=20 * u.m)])) as control:
        assert control.rows["temperature"].slider.max == 40
        assert "; may be extrapolated" in control.text.value


def test_air_that_the_model_does_not_know_is_shown_and_the_last_good_state_stays(array):
    bench = Bench(array, strict=False)
    with ArmsPanel(bench) as panel:
        arms = bench.setup.arms
        panel.air.rows["temperature"].box.value = 30
        assert "temperature 30 deg_C lies outside 10 to 25 deg_C" in panel.status.value
        assert "role='alert'" in panel.status.value
        assert bench.setup.arms is arms
        panel.air.rows["temperature"].box.value = 15
        assert "alert" not in panel.status.value
        assert bench.setup.arms is not arms


# ---------------------------------------------------------------- glass


@pytest.mark.parametrize("balance", [-30.0, -8.0, -2.0, 0.0, 3.25, 14.0])
@pytest.mark.parametrize(("first", "second"), [([8], [6]), ([8], []), ([], [6]), ([], [])])
def test_the_balance_is_what_was_asked_for_and_the_rest_stays(first, second, balance):
    other, kept = plate(2, ZNSE), air(24)
    arms = media.ArmPair(first=[*map(plate, first), other], second=[kept, *map(plate, second)])
    moved = balanced(arms, SILICA, balance * 1e-3)
    assert balance_si(moved, "fused silica") == pytest.approx(balance * 1e-3, abs=1e-12)
    assert balance_si(moved, "ZnSe") == pytest.approx(-2e-3)
    assert other in moved.first
    assert kept in moved.second
    assert min(item.length_si for _, item in moved.signed) >= 0


def test_a_plate_keeps_its_uncertainty():
    arms = media.ArmPair(first=[], second=[plate(6, length_uncertainty=10 * u.um)])
    assert balanced(arms, SILICA, 0.004).second[0].length_uncertainty == 10 * u.um


def test_the_row_moves_the_glass_of_the_arms(bench):
    with GlassControl(bench) as control:
        assert control.choice.value == "fused silica"
        assert control.row.value == -2
        assert control.row.box.description == "second less first [mm]"
        assert "fused silica: 8.0000 mm in the first arm, 6.0000 mm in the second" in control.text.value
        before = bench.results.packet.peak_contrast.value
        control.row.slider.set_state({"value": -1.5})
        assert [item.length.to_value(u.mm) for item in (bench.setup.arms.first[1], bench.setup.arms.second[1])] == [8, 6.5]
        assert bench.results.packet.peak_contrast.value != before


def test_another_glass_is_added_to_what_is_there(bench):
    with GlassControl(bench) as control:
        arms = bench.setup.arms
        control.choice.value = "ZnSe"
        assert control.row.value == 0
        assert bench.setup.arms is arms
        control.row.box.value = -0.45
        assert bench.setup.arms.first[:-1] == arms.first
        assert bench.setup.arms.first[-1].medium is ZNSE
        control.choice.value = "fused silica"
        assert control.row.value == -2


def test_a_glass_of_ones_own_can_be_chosen_and_stays(bare):
    own = media.Glass(name="melt 7", strengths=[1.1], resonances=[0.1] * u.um, low=0.4 * u.um, high=2 * u.um)
    with GlassControl(bare) as control:
        assert control.body.children == (control.text,)
        assert "This setup has no arms" in control.text.value
        bare.update(arms=media.ArmPair(first=[plate(30, own)], second=[]))
        control.choice.value = "melt 7"
        assert control.row.value == -30
        assert control.row.slider.min <= -30
        control.row.value = 0
        control.row.value = 1
        assert bare.setup.arms.second[-1].medium is own


def test_compensating_the_spread_brings_the_zero_points_together(bench):
    with GlassControl(bench) as control:
        assert abs(bench.results.offset.offset.value) > 100 * u.um
        control.choice.value = "CaF2"
        control.aim.value = "group delay spread"
        control.button.click()
        # the thickness is set to 0.1 um, of which a tenth is left in the offset at most
        assert abs(bench.results.offset.offset.value) < 0.01 * u.um
        contrast = bench.results.packet.peak_contrast.value.value
        assert f"CaF2 0.0000 → {control.row.value:.4f} mm; contrast: science 0.8924 → {contrast:.4f}, tracking" in control.result.value
        assert not control.button.disabled
        bench.update(delay=1 * u.um)
        assert control.result.value
        control.row.value = 0
        assert control.result.value == ""


def test_one_band_has_no_spread_to_make_least(bench):
    with GlassControl(bench) as control:
        assert "group delay spread" in control.aim.options
        bench.update(tracking=())
        assert control.aim.options == ("contrast loss", "loss at one delay")


def test_while_it_is_looked_for_the_button_rests_and_says_so(bench, monkeypatch):
    seen = []
    right = glass_module.compensator

    def watched(*arguments, **options):
        seen.append((control.button.disabled, control.result.value, options["minimise"]))
        return right(*arguments, minimise="group delay spread")

    monkeypatch.setattr(glass_module, "compensator", watched)
    with GlassControl(bench) as control:
        control.aim.value = "loss at one delay"
        control.button.click()
    assert [(disabled, aim) for disabled, _, aim in seen] == [(True, "loss at one delay")]
    assert "working" in seen[0][1]


@pytest.mark.parametrize("strict", [True, False])
def test_after_an_error_the_button_works_again(strict):
    bench = bench_of([air(20)], [plate(3)])
    bench.strict = strict
    lamp = spectra.Lines([spectra.Line(wavelength=w * u.nm) for w in (577, 579)])
    bench.update(source=lamp, filters=())
    with GlassControl(bench) as control:
        if strict:
            # a button loses what its callbacks raise; the callback itself does not
            with pytest.raises(InputError, match="a compensator needs bands with a continuum"):
                control._compensate(control.button)
        else:
            control.button.click()
        assert "a compensator needs bands with a continuum" in bench.problem
        assert not control.button.disabled
        assert control.result.value == ""


def test_a_row_kept_by_a_script_says_that_there_are_no_arms(bare):
    with GlassControl(bare) as control, pytest.raises(InputError, match="This setup has no arms: give Setup"):
        control.row.value = 1
