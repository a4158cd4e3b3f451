"""Delay lines: positions, speeds and limits of their carriages."""

import astropy.units as u
import numpy as np
import pytest
from astropy.table import QTable, Table, vstack
from hypothesis import given, settings
from hypothesis import strategies as st

from whitefringe.errors import InputError, UnitsError
from whitefringe.parameters import parameters_of
from whitefringe.results import Measured
from whitefringe.sky.delay_lines import CAUTION, PASSES, TRACK_COLUMNS, DelayLine, carriages
from whitefringe.sky.windows import positions_text, windows, windows_text

from .. import contracts
from .tracks import Glass, lines, track, turning

LINE = {"station": "Weir", "stroke": 20 * u.m, "greatest_speed": 20 * u.mm / u.s}
ADDED = ("carriage_1", "carriage_2", "speed_1", "speed_2")

paths = st.floats(-50, 50)
rates = st.floats(-0.1, 0.1)


def line_path(line, position):
    """Path in a delay line [m]: the definition, in the test's own words."""
    return line.offset.to_value(u.m) + line.passes * line.group_index * position


def test_a_delay_line_is_frozen_and_described():
    contracts.is_frozen(DelayLine(**LINE))
    contracts.has_a_docstring(DelayLine)
    assert list(parameters_of(DelayLine)) == ["stroke", "greatest_speed", "offset", "rest"]
    described = parameters_of(DelayLine)
    for which in ("start", "low", "high"):
        values = {name: getattr(item, which) * item.unit for name, item in described.items()}
        assert DelayLine(station="Weir", **values | {"rest": values["rest"] / 2}).reach > 0


def test_path_per_metre():
    assert DelayLine(**LINE).path_per_metre == 2
    assert DelayLine(**LINE, passes=4).reach == 80 * u.m
    glass = DelayLine(**LINE, medium=Glass(), wavelength=1.5 * u.um)
    assert glass.path_per_metre == pytest.approx(2 * 1.47)
    by_frequency = DelayLine(**LINE, medium=Glass(), wavelength=(1.5 * u.um).to(u.THz, equivalencies=u.spectral()))
    assert by_frequency.path_per_metre == pytest.approx(2 * 1.47)
    assert DelayLine(**LINE, rest=1 * u.m).reach == 38 * u.m


def test_any_kind_of_number_is_a_group_index():
    for index in (1.25, 1.25 * u.dimensionless_unscaled, 125 * u.percent, Measured(value=u.Quantity(1.25))):
        medium = type("Medium", (), {"group_index": lambda self, wavelength, found=index: found})()
        assert DelayLine(**LINE, medium=medium, wavelength=1 * u.um).group_index == pytest.approx(1.25)


def test_one_row_by_hand():
    # D = -7 - (0.5 - (-0.5)) = -8 m: carriage 1 stands at 8 / 4; the path grows by 10 mm/s, so it moves back at 10 / 4
    kiln = DelayLine(station="Kiln", stroke=20 * u.m, greatest_speed=20 * u.mm / u.s, passes=4, offset=-50 * u.cm)
    weir = DelayLine(**LINE, offset=50 * u.cm)
    table = carriages(track(-7.0, 0.01, 45.0, sigma=20e-6), [weir, kiln])
    row = table[0]
    assert [row[name].to_value(u.m) for name in ("carriage_1", "carriage_2", "line_difference")] == pytest.approx([2.0, 0.0, -8.0])
    assert [row[name].to_value(u.mm / u.s) for name in ("speed_1", "speed_2")] == pytest.approx([-2.5, 0.0])
    assert row["carriage_uncertainty"].to_value(u.um) == pytest.approx(5.0)
    assert (row["moving"], row["observable"], row["reason"]) == ("Kiln", True, "")
    margins = [row[f"margin_{name}"].value for name in ("altitude", "stroke", "speed")]
    assert margins == pytest.approx([15.0, 18.0, 17.5])
    assert table["carriage_1"].info.description == "carriage of the first station"


def test_the_track_is_kept_and_not_changed():
    given_track = turning(steps=5)
    before = given_track.copy()
    table = carriages(given_track, lines())
    assert given_track.colnames == before.colnames
    for name in before.colnames:
        assert np.all(table[name] == before[name])
    assert len(table) == 5


def test_a_plain_table_with_units_will_do():
    plain = Table(turning(steps=5))
    assert np.all(carriages(plain, lines())["carriage_2"] == carriages(turning(steps=5), lines())["carriage_2"])


@settings(deadline=None)
@given(opd=paths, rate=rates, passes=st.sampled_from([(2, 2), (2, 4), (4, 2)]), offsets=st.tuples(paths, paths), rest=st.floats(0, 5))
def test_the_lines_make_up_the_path_difference(opd, rate, passes, offsets, rest):
    first = DelayLine(station="Kiln", stroke=9 * u.m, greatest_speed=1 * u.m / u.s, passes=passes[0], offset=offsets[0] * u.m)
    second = DelayLine(**LINE, passes=passes[1], offset=offsets[1] * u.m, rest=rest * u.m, medium=Glass(), wavelength=1 * u.um)
    row = carriages(track(opd, rate), [first, second])[0]
    places = [row[f"carriage_{k}"].to_value(u.m) for k in (1, 2)]
    assert line_path(second, places[1]) - line_path(first, places[0]) == pytest.approx(opd, abs=1e-9)
    speeds = [row[f"speed_{k}"].to_value(u.m / u.s) for k in (1, 2)]
    assert second.path_per_metre * speeds[1] - first.path_per_metre * speeds[0] == pytest.approx(rate, abs=1e-12)
    # one of the two rests, and neither goes below its rest
    assert min(places[0] - 0.0, places[1] - rest) == pytest.approx(0.0, abs=1e-12)
    assert 0.0 in speeds


@settings(deadline=None)
@given(opd=paths, rate=rates, passes=st.sampled_from([(2, 4), (2, 2)]), offset=paths)
def test_swapping_the_baseline_swaps_the_carriages(opd, rate, passes, offset):
    pair = [lines(["Kiln"], passes=passes[0])[0], lines(["Weir"], passes=passes[1], offset=offset * u.m)[0]]
    there = carriages(track(opd, rate), pair)[0]
    back = carriages(track(-opd, -rate, baseline="Weir-Kiln"), pair)[0]
    for name, other in (("carriage_1", "carriage_2"), ("speed_1", "speed_2")):
        assert there[name].value == pytest.approx(back[other].value, abs=1e-12)
        assert there[other].value == pytest.approx(back[name].value, abs=1e-12)
    assert there["reason"] == back["reason"]


@settings(deadline=None)
@given(opd=paths, rate=rates)
def test_twice_the_passes_halve_positions_and_speeds(opd, rate):
    two, four = (carriages(track(opd, rate), lines(passes=passes))[0] for passes in PASSES)
    for name in ADDED:
        assert four[name].value == pytest.approx(two[name].value / 2)
    assert four["carriage_uncertainty"].value == pytest.approx(two["carriage_uncertainty"].value / 2)


@settings(deadline=None)
@given(opd=paths, offset=paths)
def test_an_offset_shifts_the_path(opd, offset):
    kiln, weir = lines(["Kiln"])[0], lines(["Weir"], offset=offset * u.m)[0]
    shifted = carriages(track(opd), [kiln, weir])[0]
    plain = carriages(track(opd - offset), lines())[0]
    for name in ADDED:
        assert shifted[name].value == pytest.approx(plain[name].value, abs=1e-12)


@settings(deadline=None)
@given(opd=paths, rate=rates, altitude=st.floats(-90, 90))
def test_observable_means_inside_every_limit(opd, rate, altitude):
    row = carriages(track(opd, rate, altitude), lines(), least_altitude=20 * u.deg)[0]
    inside = [
        all(0 <= row[f"carriage_{k}"].to_value(u.m) <= 20 for k in (1, 2)),
        all(abs(row[f"speed_{k}"].to_value(u.mm / u.s)) <= 20 for k in (1, 2)),
        altitude >= 20,
    ]
    assert row["observable"] == all(inside)
    words = ("out of stroke", "too fast", "below the horizon limit")
    assert [word in row["reason"] for word in words] == [not ok for ok in inside]


def test_a_group_index_shortens_the_carriage():
    air = carriages(track([12.0, -12.0], 0.02), lines(medium=Glass(), wavelength=1 * u.um))
    vacuum = carriages(track([12.0, -12.0], 0.02), lines())
    for name in ADDED:
        assert air[name].value * 1.48 == pytest.approx(vacuum[name].value)


def test_several_baselines_targets_and_hyphens():
    parts = [track(8.0, baseline="Kiln-Weir"), track(-8.0, baseline="Kiln-Tarn-A"), track(6.0, baseline="Weir-Tarn-A", target="Star B")]
    table = carriages(vstack(parts), lines(["Kiln", "Weir", "Tarn-A"]))
    assert table["moving"].tolist() == ["Weir", "Kiln", "Tarn-A"]
    assert table["station_2"].tolist() == ["Weir", "Tarn-A", "Tarn-A"]


def test_the_carriage_about_to_leave_counts_where_nothing_is_to_make_up():
    table = carriages(track(0.0, [0.03, -0.03]), lines())
    assert table["moving"].tolist() == ["Weir", "Kiln"]
    assert table["speed_1"].to_value(u.mm / u.s).tolist() == [0.0, 15.0]
    assert table["speed_2"].to_value(u.mm / u.s).tolist() == [15.0, 0.0]


@pytest.mark.parametrize(
    ("opd", "rate", "altitude", "reason"),
    [
        (4.0, 0.01, 45.0, ""),
        (40.0, 0.04, 30.0, ""),
        (4.0, 0.01, 12.345, "below the horizon limit: altitude 12.3 deg, limit 30 deg"),
        (46.8, 0.01, 45.0, "out of stroke: Weir needs 23.400 m, stroke 20 m"),
        (-46.8, 0.01, 45.0, "out of stroke: Kiln needs 23.400 m, stroke 20 m"),
        (4.0, -0.064, 45.0, "too fast: Weir 32.0 mm/s, limit 20 mm/s"),
        (
            -46.8,
            0.064,
            -3.0,
            "below the horizon limit: altitude -3.0 deg, limit 30 deg; out of stroke: Kiln needs 23.400 m, stroke 20 m; "
            "too fast: Kiln 32.0 mm/s, limit 20 mm/s",
        ),
    ],
)
def test_reasons(opd, rate, altitude, reason):
    row = carriages(track(opd, rate, altitude), lines())[0]
    assert row["reason"] == reason
    assert row["observable"] == (reason == "")


def test_a_lamp_has_no_horizon():
    table = carriages(track(4.0, 0.0, [np.nan, 10.0]), lines())
    assert table["observable"].tolist() == [True, False]
    masked = track(4.0, 0.0, [20.0, 10.0])
    masked = QTable(masked, masked=True)
    masked["altitude"].mask = [True, False]
    assert carriages(masked, lines())["observable"].tolist() == [True, False]


def test_it_is_kept_in_files(tmp_path):
    table = carriages(turning(steps=9), lines())
    # astropy_native: FITS has times as two numbers, which become a Time again
    for name, how in (("plan.ecsv", {}), ("plan.fits", {"astropy_native": True})):
        table.write(tmp_path / name)
        back = QTable.read(tmp_path / name, **how)
        for column in ADDED:
            assert back[column].to_value(table[column].unit) == pytest.approx(table[column].value, rel=1e-14)
        # FITS marks an empty text as missing
        reasons = back["reason"].filled("") if hasattr(back["reason"], "filled") else back["reason"]
        assert reasons.tolist() == table["reason"].tolist()
        assert np.array_equal(back["observable"], table["observable"])
        assert windows_text(windows(back)) == windows_text(windows(table))
        assert positions_text(back) == positions_text(table)


def test_the_caution_names_who_decides():
    for words in ("moves nothing", "interlock", "the site's own", "local safety officer"):
        assert words in CAUTION


class NoIndex:
    def group_index(self, wavelength):
        return 0.9


def change(**changes):
    return lambda: DelayLine(**LINE | changes)


def plan(table=None, pair=None, **limits):
    return lambda: carriages(track(1.0) if table is None else table, lines() if pair is None else pair, **limits)


REFUSED = [
    (change(station=""), InputError, "station must be the name of a station, for example 'Weir'; got ''"),
    (change(stroke=20), UnitsError, "stroke of the delay line of Weir must carry a unit .*1 m"),
    (change(stroke=20 * u.deg), UnitsError, "stroke of the delay line of Weir must be convertible to m .*got deg"),
    (change(stroke=0 * u.m), InputError, r"stroke of the delay line of Weir must be above zero; got 0.0 m"),
    (change(stroke=[1, 2] * u.m), InputError, "stroke of the delay line of Weir must be one number"),
    (change(greatest_speed=20 * u.mm), UnitsError, "greatest_speed of the delay line of Weir must be convertible to m / s .*1 mm / s"),
    (change(greatest_speed=-1 * u.mm / u.s), InputError, "greatest_speed of the delay line of Weir must be above zero"),
    (change(passes=3), InputError, r"delay line of Weir: passes must be 2 or 4 \(there and back, once or twice\); got 3"),
    (change(passes=True), InputError, "passes must be 2 or 4"),
    (change(offset=3), UnitsError, "offset of the delay line of Weir must carry a unit"),
    (change(offset=[1, 2] * u.m), InputError, "offset of the delay line of Weir must be one number; got an array"),
    (change(rest=-1 * u.m), InputError, "rest must be from 0 to below the stroke of 20 m; got -1.0 m"),
    (change(rest=20 * u.m), InputError, "rest must be from 0 to below the stroke of 20 m; got 20.0 m: a carriage works from its rest"),
    (change(medium=1.0003, wavelength=1 * u.um), InputError, r"medium of the delay line of Weir must have group_index\(wavelength\)"),
    (change(medium=Glass()), InputError, r"medium of the delay line of Weir needs a wavelength, for example wavelength=1\.65"),
    (change(medium=Glass(), wavelength=1.0), UnitsError, "wavelength of the delay line of Weir must carry a unit"),
    (change(medium=NoIndex(), wavelength=1 * u.um), InputError, r"has a group index of 0\.9 at 1\.0 um; expected 1 to 4"),
    (plan(table=[1, 2]), InputError, "track must be an astropy table; got list; sky.track gives them all"),
    (plan(table=track(1.0)["target", "time", "opd"]), InputError, "track has no column baseline, opd_uncertainty, opd_rate, altitude"),
    (plan(table=track(1.0)[:0]), InputError, "track has no rows; give at least one target"),
    (change(passes="2"), InputError, "passes must be 2 or 4 .* got '2'"),
    (change(passes=np.array([2])), InputError, "passes must be 2 or 4"),
    (change(wavelength=1.65), UnitsError, "wavelength of the delay line of Weir must carry a unit"),
    (lambda: carriages(track(1.0), None), InputError, r"lines must be a sequence of sky\.DelayLine, one for each station; got None"),
    (lambda: carriages(track(1.0), lines()[0]), InputError, "baseline 'Kiln-Weir' lacks a delay line: lines are given for Kiln; add"),
    (plan(pair=["Kiln"]), InputError, r"lines must be a sequence of sky\.DelayLine, one for each station"),
    (plan(pair=lines(["Kiln", "Kiln", "Weir"])), InputError, "station 'Kiln' has more than one delay line; give one line for each"),
    (plan(pair=lines(["Kiln", "Tarn"])), InputError, "baseline 'Kiln-Weir' lacks a delay line: lines are given for Kiln, Tarn; add"),
    (plan(pair=[]), InputError, "lines are given for no station"),
    (plan(least_altitude=30), UnitsError, "least_altitude must carry a unit .*1 deg"),
    (plan(least_altitude=95 * u.deg), InputError, r"least_altitude must be one angle from 0 to 90 deg; got 95\.0 deg"),
    (plan(least_altitude=[20, 30] * u.deg), InputError, "least_altitude must be one angle"),
    (plan(table=track(np.nan)), InputError, "column opd must be finite; 1 of 1 values are not"),
]


@pytest.mark.parametrize(("call", "error", "message"), REFUSED)
def test_what_is_refused(call, error, message):
    with pytest.raises(error, match=message):
        call()


@pytest.mark.parametrize(("name", "unit"), [("opd", u.s), ("altitude", u.m)])
def test_columns_of_the_wrong_unit_are_refused(name, unit):
    wrong = track(1.0)
    wrong[name] = [1.0] * unit
    with pytest.raises(UnitsError, match=f"column {name} must be convertible to .*; got {unit}"):
        carriages(wrong, lines())


@pytest.mark.parametrize("passes", [2.0, np.int64(2), np.float64(4.0)])
def test_passes_may_be_any_whole_number(passes):
    line = DelayLine(**LINE | {"passes": passes})
    assert (line.passes, type(line.passes)) == (int(passes), int)


class Stretched(Glass):
    """A medium that is used outside its range."""

    def flags(self, wavelength):
        return (f"glass extrapolated at {wavelength}",)


def test_what_a_medium_extrapolates_is_noted():
    pair = lines(medium=Stretched(), wavelength=3 * u.um)
    flown = track([1.0, 2.0])
    flown.meta["NOTE1"] = "a note of the track"
    plan = carriages(flown, pair)
    notes = [plan.meta[f"NOTE{k}"] for k in (1, 2, 3)]
    assert notes == ["a note of the track", *(f"delay line of {name}: glass extrapolated at 3.0 um" for name in ("Kiln", "Weir"))]
    assert flown.meta == {"NOTE1": "a note of the track"}
    assert carriages(plan[TRACK_COLUMNS], pair).meta == plan.meta
    for text in (positions_text(plan), windows_text(windows(plan))):
        assert text.splitlines()[1:] == [f"note: {words}" for words in notes[1:]]
    assert not any(key.startswith("NOTE") for key in carriages(track(1.0), lines(medium=Glass(), wavelength=1 * u.um)).meta)
