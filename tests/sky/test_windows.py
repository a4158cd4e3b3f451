"""Observable windows: their edges, ranges, reasons and words."""

import astropy.units as u
import numpy as np
import pytest
from astropy.coordinates import EarthLocation
from astropy.table import Table, vstack
from astropy.time import Time
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from whitefringe.errors import InputError, UnitsError
from whitefringe.sky.delay_lines import DelayLine, carriages
from whitefringe.sky.delays import track as sky_track
from whitefringe.sky.night import night_times
from whitefringe.sky.stations import Array, Station
from whitefringe.sky.targets import LampTarget, Star
from whitefringe.sky.windows import positions_text, windows, windows_text

from .tracks import START, TURN, lines, track, turning


def seconds(times):
    return (times - START).to_value(u.s)


def test_edges_on_straight_lines_are_exact():
    hours = np.arange(0, 3.01, 1 / 4)
    table = windows(carriages(track(4.0 + 16.0 * hours, 16 / 3600, 50.0 - 6.0 * hours, hours=hours), lines(), 35 * u.deg))
    # w reaches 40 m after 2.25 h, the altitude 35 deg after 2.5 h
    assert table["observable"].tolist() == [True, False]
    assert seconds(table["end"])[0] == pytest.approx(2.25 * 3600, abs=1e-3)
    assert table["start"][1] == table["end"][0]
    assert table["duration"].to_value(u.hour) == pytest.approx([2.25, 0.75])
    assert table["carriage_2_least"].to_value(u.m) == pytest.approx([2.0, 20.0])
    assert table["carriage_2_greatest"].to_value(u.m) == pytest.approx([20.0, 26.0])
    assert table["carriage_1_greatest"].to_value(u.m).tolist() == [0.0, 0.0]
    assert table["greatest_speed"].to_value(u.mm / u.s) == pytest.approx([16 / 3.6 / 2] * 2)
    assert table["reason"][0] == "out of stroke: Weir"
    assert table["reason"][1] == (
        "below the horizon limit: altitude 32.0 to 33.5 deg, limit 35 deg; out of stroke: Weir needs 22.000 to 26.000 m, stroke 20 m"
    )


def edges_of(steps, limits, least, **motion):
    table = windows(carriages(turning(steps=steps, **motion), limits, least * u.deg))
    return seconds(table[table["observable"]]["start"]), seconds(table[table["observable"]]["end"])


EDGES = [
    # altitude: 10 + 40 cos = 40 at 41.4 deg from the meridian
    (lines(stroke=100 * u.m), 40.0, lambda angle: 10 + 40 * np.cos(angle) - 40),
    # stroke: w = 10 + 60 sin = -30 and 30
    (lines(stroke=15 * u.m), 0.0, lambda angle: 30 - abs(10 + 60 * np.sin(angle))),
    # speed: 60 Omega cos = 2 * 2 mm/s
    (lines(greatest_speed=2 * u.mm / u.s, stroke=100 * u.m), 0.0, lambda angle: 4e-3 - 60 * TURN * np.cos(angle)),
]


@pytest.mark.parametrize(("limits", "least", "margin"), EDGES)
def test_edges_converge_with_the_square_of_the_step(limits, least, margin):
    last = brentq(lambda t: margin(-1.0 + TURN * t), 3600 * 5, 3600 * 8) if margin(-1.0 + TURN * 3600 * 8) < 0 else None
    first = brentq(lambda t: margin(-1.0 + TURN * t), 0, 3600 * 4)
    errors = []
    for steps in (9, 33, 129):
        start, end = edges_of(steps, limits, least)
        found = np.concatenate([start, end])
        errors.append(np.min(np.abs(found - first)))
        if last is not None:
            errors[-1] = max(errors[-1], np.min(np.abs(found - last)))
    assert errors[1] < 60
    assert errors[2] < errors[1] / 4
    assert errors[2] < 5


@given(steps=st.integers(60, 200), phase=st.floats(-1.5, 0.0), stroke=st.floats(5, 60), mean=st.floats(-30, 30))
@settings(max_examples=30, deadline=None)
def test_stretches_cover_the_night_and_keep_inside(steps, phase, stroke, mean):
    plan = carriages(turning(steps=steps, phase=phase, mean=mean), lines(stroke=stroke * u.m, greatest_speed=2 * u.mm / u.s))
    table = windows(plan)
    assert np.all(seconds(table["start"])[1:] == seconds(table["end"])[:-1])
    assert (seconds(table["start"])[0], seconds(table["end"])[-1]) == pytest.approx((0.0, 8 * 3600), abs=1e-3)
    assert np.all(np.diff(table["observable"].astype(int)) != 0)
    for row in table[table["observable"]]:
        for k in (1, 2):
            assert row[f"carriage_{k}_least"].to_value(u.m) >= 0
            assert row[f"carriage_{k}_greatest"].to_value(u.m) <= stroke + 1e-9
        assert row["greatest_speed"].to_value(u.mm / u.s) <= 2 + 1e-9
    at = seconds(plan["time"])
    for row in table:
        inside = (at > seconds(row["start"]) + 1e-3) & (at < seconds(row["end"]) - 1e-3)
        assert np.all(plan["observable"][inside] == row["observable"])


@given(opd=st.tuples(st.floats(-38, -1), st.floats(41, 80)), shift=st.floats(0, 30))
@settings(max_examples=30, deadline=None)
def test_edges_hold_where_the_carriages_change_roles(opd, shift):
    # both roles and the end of the stroke within one step: on a straight line the edge is still exact
    table = windows(carriages(track(opd, 0.01, hours=[0, 1]), lines()))
    exact = 3600 * (40 - opd[0]) / (opd[1] - opd[0])
    assert seconds(table["end"])[0] == pytest.approx(exact, abs=1e-3)
    assert table["carriage_2_greatest"][0].to_value(u.m) == pytest.approx(20.0)
    assert table["carriage_1_greatest"][0].to_value(u.m) == pytest.approx(-opd[0] / 2)
    assert table["carriage_1_least"].to_value(u.m) == pytest.approx([0.0, 0.0])
    slow = [lines(["Kiln"])[0], lines(["Weir"], greatest_speed=2 * u.mm / u.s)[0]]
    # the second carriage is too slow: observable until the roles change, also when time runs the other way
    table = windows(carriages(track([opd[0], 9.0], 0.01, hours=[0, 1]), slow))
    assert seconds(table["end"])[0] == pytest.approx(3600 * -opd[0] / (9 - opd[0]), abs=1e-3)
    assert table["reason"][0] == "too fast: Weir"
    table = windows(carriages(track([9.0, opd[0]], -0.01, hours=[0, 1]), slow))
    assert table["observable"].tolist() == [False, True]
    assert seconds(table["end"])[0] == pytest.approx(3600 * 9 / (9 - opd[0]), abs=1e-3)


def test_the_first_limit_to_fail_ends_the_window():
    # altitude crosses 30 deg a quarter into the step, the stroke ends at half of it
    table = windows(carriages(track([38.0, 42.0], 0.001, [31.0, 27.0], hours=[0, 1]), lines()))
    assert table["reason"][0] == "below the horizon limit"
    assert seconds(table["end"])[0] == pytest.approx(900.0, abs=1e-3)


def test_a_target_that_is_never_observable_has_one_row_with_all_reasons():
    table = windows(carriages(track([-50.0, 50.0], 0.05, [5.0, 25.0]), lines()))
    assert len(table) == 1
    assert not table["observable"][0]
    assert table["reason"][0] == (
        "below the horizon limit: altitude 5.0 to 25.0 deg, limit 30 deg; out of stroke: Kiln needs 25.000 m, stroke 20 m; "
        "out of stroke: Weir needs 25.000 m, stroke 20 m; too fast: Kiln 25.0 mm/s, limit 20 mm/s; too fast: Weir 25.0 mm/s, limit 20 mm/s"
    )


def test_nights_apart_are_not_joined():
    hours = np.array([0, 0.5, 1.0, 24.0, 24.5])
    plan = carriages(track(4.0, hours=hours), lines())
    assert windows(plan)["duration"].to_value(u.hour) == pytest.approx([1.0, 0.5])
    assert windows(plan, gap=30 * u.hour)["duration"].to_value(u.hour) == pytest.approx([24.5])
    assert windows(plan, gap=0.5 * u.hour)["duration"].to_value(u.hour) == pytest.approx([1.0, 0.5])
    assert windows(plan, gap=10 * u.min)["duration"].to_value(u.hour) == pytest.approx([0.0] * 5)


def test_the_order_of_rows_does_not_matter():
    parts = [turning(steps=33), turning(steps=33, mean=-20, target="Star B"), turning(steps=33, mean=5, baseline="Weir-Tarn")]
    plan = carriages(vstack(parts), lines(["Kiln", "Weir", "Tarn"]))
    table = windows(plan)
    shuffled = np.random.default_rng(3).permutation(len(plan))
    assert dict.fromkeys(table["target"].tolist()) == {"Star A": None, "Star B": None}
    other = windows(plan[shuffled])
    for name in ("target", "baseline", "reason"):
        assert sorted(other[name].tolist()) == sorted(table[name].tolist())
    # times innermost or outermost: the same windows in the same order
    outermost = np.arange(len(plan)).reshape(3, -1).T.ravel()
    again = windows(plan[outermost])
    assert again["reason"].tolist() == table["reason"].tolist()
    assert seconds(again["start"]) == pytest.approx(seconds(table["start"]), abs=1e-3)


def test_times_far_ahead_give_no_warning():
    late = turning(steps=33)
    late["time"] = Time(2475287.0, np.linspace(0, 1 / 3, 33), format="jd", scale="utc")
    table = windows(carriages(late, lines()))
    assert "2065-01-" in windows_text(table)


def test_windows_as_text():
    plan = carriages(
        vstack([turning(), turning(mean=90, target="Star B"), turning(target="A lamp", low=np.nan)]), lines(stroke=17 * u.m), 35 * u.deg
    )
    never = "below the horizon limit: altitude 28.1 to 34.8 deg, limit 35 deg; out of stroke: Weir needs 19.756 to 71.738 m, stroke 17 m"
    places = "Kiln 0.000 to 17.000 m, Weir 0.000 to 17.000 m  fastest 2.2 mm/s"
    # Kiln's 34 m end 2424 s after the start: 10 + 60 sin(-1 + Omega t) = -34, as it is on paper; Weir's end at 34 m
    assert windows_text(windows(plan)).splitlines() == [
        f"Star A  Kiln-Weir  2026-03-14 20:40 to 01:23 UTC  {places}  then out of stroke: Weir",
        f"Star B  Kiln-Weir  not observable: {never}",
        f"A lamp  Kiln-Weir  2026-03-14 20:40 to 01:23 UTC  {places}  then out of stroke: Weir",
    ]
    places = "Kiln 0.000 to 16.586 m, Weir 0.000 to 16.685 m  fastest 2.2 mm/s"
    assert positions_text(plan).splitlines() == [
        f"Star A  Kiln-Weir  56 of 97 times  {places}",
        f"Star B  Kiln-Weir  0 of 97 times  not observable: {never}",
        f"A lamp  Kiln-Weir  56 of 97 times  {places}",
    ]


def test_times_must_be_times():
    plan = carriages(track(1.0), lines())
    plan["time"] = plan["time"].jd
    with pytest.raises(
        InputError, match="column time of the table of carriages must be an astropy Time; read a FITS table with astropy_nat"
    ):
        windows(plan)


def test_a_window_that_never_opens_as_text():
    plan = carriages(track([-46.8, -46.8], 0.001, [35.0, 12.0]), lines())
    words = "not observable: below the horizon limit: altitude 12.0 deg, limit 30 deg; out of stroke: Kiln needs 23.400 m, stroke 20 m"
    assert windows_text(windows(plan)) == f"Star A  Kiln-Weir  {words}"
    assert positions_text(plan) == f"Star A  Kiln-Weir  0 of 2 times  {words}"


@pytest.mark.parametrize(
    ("call", "error", "message"),
    [
        (lambda: windows(track(1.0)), InputError, "the table of carriages has no column station_1, .*; sky.carriages gives it"),
        (lambda: windows(3), InputError, "the table of carriages must be an astropy table; got int"),
        (lambda: windows(carriages(track(1.0), lines())[:0]), InputError, "the table of carriages has no rows"),
        (lambda: windows(carriages(track(1.0), lines()), gap=1), UnitsError, "gap must carry a unit .*1 hour"),
        (lambda: windows(carriages(track(1.0), lines()), gap=0 * u.s), InputError, "gap must be above zero"),
        (lambda: positions_text(track(1.0)), InputError, "the table of carriages has no column"),
        (lambda: windows_text(carriages(track(1.0), lines())), InputError, "the table of windows has no column start, .*sky.windows gives"),
        (lambda: windows_text(Table()), InputError, "the table of windows has no column target"),
    ],
)
def test_what_is_refused(call, error, message):
    with pytest.raises(error, match=message):
        call()


def test_unlike_lines():
    # 12 m made by a line of four passes and one of two
    kiln = DelayLine(station="Kiln", stroke=4 * u.m, greatest_speed=5 * u.mm / u.s, passes=4)
    table = windows(carriages(track([-12.0, 12.0], 0.003, hours=[0, 1]), [kiln, *lines(["Weir"])]))
    assert [table[f"carriage_{k}_greatest"][0].to_value(u.m) for k in (1, 2)] == pytest.approx([3.0, 6.0])


def test_a_night_of_an_array():
    place = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg, height=1000 * u.m)
    spots = {"Kiln": (0.0, 0.0, 0.0), "Weir": (40.0, 10.0, 0.2), "Tarn": (-20.0, 60.0, -0.5)}
    stations = [Station(name=name, **dict(zip(("east", "north", "up"), spot * u.m, strict=True))) for name, spot in spots.items()]
    larkmoor = Array(name="Larkmoor", location=place, stations=stations)
    targets = [
        Star.at(name="Star A", ra=190 * u.deg, dec=20 * u.deg, uncertainty=1 * u.mas),
        Star.at(name="Star B", ra=100 * u.deg, dec=-60 * u.deg),
        LampTarget(name="Lamp"),
    ]
    pair = lines(list(spots), stroke=12 * u.m)
    coarse, fine = (
        windows(carriages(sky_track(larkmoor, targets, night_times(place, "2026-03-14", step=step)), pair))
        for step in (10 * u.min, 1 * u.min)
    )
    for table in (coarse, fine):
        names = ["target", "baseline"]
        assert len({tuple(row) for row in table[names].iterrows()}) == 9
        assert table[table["target"] == "Lamp"]["observable"].tolist() == [True] * 3
        assert not np.any(table[table["target"] == "Star B"]["observable"])
        assert np.any(table[table["target"] == "Star A"]["observable"])
    assert coarse["observable"].tolist() == fine["observable"].tolist()
    assert seconds(coarse["end"]) == pytest.approx(seconds(fine["end"]), abs=20)
    # the metre that the carriages make is the path difference of the track
    plan = carriages(sky_track(larkmoor, targets, night_times(place, "2026-03-14", step=1 * u.hour)), pair)
    assert 2 * (plan["carriage_2"] - plan["carriage_1"]).to_value(u.m) == pytest.approx(plan["opd"].to_value(u.m), abs=1e-12)
