"""Path differences: their geometry, their rates, their uncertainties, and the table of them."""

import warnings

import astropy.units as u
import erfa
import numpy as np
import pytest
from astropy.coordinates import EarthLocation, SkyCoord
from astropy.table import QTable
from astropy.time import Time
from hypothesis import given, settings
from hypothesis import strategies as st

from whitefringe.errors import InputError, UnitsError
from whitefringe.sky._geometry import EARTH_ROTATION
from whitefringe.sky.delays import hour_angle_delays, hour_angle_delays_si, opd_text, path_differences, track
from whitefringe.sky.orientation import EarthOrientation
from whitefringe.sky.stations import Array, Station
from whitefringe.sky.targets import FixedDirection, LampTarget, Star

LATITUDE, LONGITUDE = 35.0, -15.0
PLACE = EarthLocation.from_geodetic(lon=LONGITUDE * u.deg, lat=LATITUDE * u.deg, height=1000 * u.m)
POSITIONS = {"Kiln": (0, 0, 0), "Weir": (80, 60, 0.5), "Tarn": (-45, 120, -2)}
NIGHT = Time("2026-03-01T20:00") + np.linspace(0, 9, 10) * u.h
FIXED = EarthOrientation.fixed(0.02 * u.s, 0.1 * u.arcsec, 0.3 * u.arcsec)
PARTS = ("ut1", "target", "stations", "pole")


def larkmoor(order=("Kiln", "Weir", "Tarn"), uncertainty=0 * u.m):
    enu = {name: [value * u.m for value in POSITIONS[name]] for name in order}
    stations = [Station(name=name, east=e, north=n, up=z, uncertainty=uncertainty) for name, (e, n, z) in enu.items()]
    return Array(name="Larkmoor", location=PLACE, stations=stations)


def star(name="A", ra=150, dec=25, **more):
    return Star.at(name=name, ra=ra * u.deg, dec=dec * u.deg, **more)


LOW = star("low", 60, -70)
PLACES = SkyCoord(ra=[60, 150] * u.deg, dec=[25, 25] * u.deg)


def test_swapping_the_stations_changes_the_sign():
    one = path_differences(larkmoor(("Kiln", "Weir")), star(), NIGHT, FIXED)
    other = path_differences(larkmoor(("Weir", "Kiln")), star(), NIGHT, FIXED)
    for name in ("opd", "opd_rate", "opd_acceleration", "u", "v", "w"):
        assert getattr(one, name).value == pytest.approx(-getattr(other, name).value, abs=1e-12)


def test_the_path_differences_of_a_triangle_close():
    result = path_differences(larkmoor(), [star(), star("B", 200, -10)], NIGHT, FIXED)
    opd = result.opd.value
    assert opd.shape == (2, 3, 10)
    assert opd[:, 0] + opd[:, 2] == pytest.approx(opd[:, 1], abs=1e-12)


def test_u_v_w_have_the_baselines_length():
    array = larkmoor()
    result = path_differences(array, [star(), FixedDirection(name="mast", azimuth=1 * u.rad, altitude=0.3 * u.rad)], NIGHT, FIXED)
    length = np.sqrt(result.u**2 + result.v**2 + result.w**2)
    expected = [baseline.length.value for baseline in array.baselines]
    assert length.value == pytest.approx(np.broadcast_to(np.array(expected)[:, None], length.shape))


def test_station_2_nearer_the_object_is_positive():
    east = FixedDirection(name="east", azimuth=90 * u.deg, altitude=0 * u.deg)
    up = FixedDirection(name="up", azimuth=0 * u.deg, altitude=90 * u.deg)
    opd = path_differences(larkmoor(), [east, up], NIGHT[0], FIXED).opd[:, 0, 0]
    assert opd.value == pytest.approx([80, 0.5])


@given(st.floats(0, 360), st.floats(-90, 90), st.floats(0, 1))
@settings(max_examples=30, deadline=None)
def test_rate_and_acceleration_are_the_derivatives(ra, dec, part):
    step = 60.0
    times = NIGHT[0] + (part * 24 * 3600 + step * np.arange(-1, 2)) * u.s
    result = path_differences(larkmoor(), star(ra=ra, dec=dec), times, FIXED)
    before, at, after = np.moveaxis(result.opd.value[0], -1, 0)
    rate, acceleration = result.opd_rate.value[0, :, 1], result.opd_acceleration.value[0, :, 1]
    # the differences themselves are good to a few parts in a million; the neglected wander of the axis is of that order too
    assert (after - before) / (2 * step) == pytest.approx(rate - rate * (EARTH_ROTATION * step) ** 2 / 6, abs=5e-8)
    assert (after - 2 * at + before) / step**2 == pytest.approx(acceleration, abs=5e-11)


@given(st.floats(-89, 89), st.floats(-180, 180), st.floats(-90, 90), st.lists(st.floats(-300, 300), min_size=3, max_size=3))
def test_closed_form_is_the_dot_product(latitude, hour_angle, declination, baseline):
    phi, hour, dec = np.radians([latitude, hour_angle, declination])
    azimuth, altitude = erfa.hd2ae(hour, dec, phi)
    east, north, up = baseline
    dot = np.cos(altitude) * (east * np.sin(azimuth) + north * np.cos(azimuth)) + up * np.sin(altitude)
    across, along, w, rate, acceleration = hour_angle_delays_si(east, north, up, phi, hour, dec)
    assert w == pytest.approx(dot, abs=1e-10)
    assert np.sqrt(across**2 + along**2 + w**2) == pytest.approx(np.linalg.norm(baseline), abs=1e-10)
    step = 1e-4
    later, sooner = (hour_angle_delays_si(east, north, up, phi, hour + turn, dec)[2] for turn in (step, -step))
    assert rate / EARTH_ROTATION == pytest.approx((later - sooner) / (2 * step), abs=1e-5)
    assert acceleration / EARTH_ROTATION**2 == pytest.approx((later - 2 * w + sooner) / step**2, abs=1e-3)


def test_path_differences_are_the_closed_form_of_the_observed_place():
    result = path_differences(larkmoor(), star(), NIGHT, FIXED)
    hour, dec = result.hour_angle[0], result.declination[0]
    closed = hour_angle_delays(80 * u.m, 60 * u.m, 0.5 * u.m, latitude=LATITUDE * u.deg, hour_angle=hour, declination=dec)
    for ours, theirs in (("u", "u"), ("v", "v"), ("opd", "w"), ("opd_rate", "rate"), ("opd_acceleration", "acceleration")):
        assert getattr(result, ours)[0, 0].value == pytest.approx(getattr(closed, theirs).value, rel=1e-9, abs=1e-11)


def test_the_lamp_and_a_fixed_direction_do_not_move():
    mast = FixedDirection(name="mast", azimuth=30 * u.deg, altitude=60 * u.deg, uncertainty=1 * u.arcsec)
    orientation = EarthOrientation.fixed(uncertainty=1 * u.ms, pole_uncertainty=1 * u.arcsec)
    result = path_differences(larkmoor(uncertainty=10 * u.um), [LampTarget(), mast], NIGHT, orientation)
    assert not np.any(result.opd_rate.value)
    assert not np.any(result.opd_acceleration.value)
    for name in ("opd", "u", "v", "opd_uncertainty"):
        assert not np.any(getattr(result, name)[0].value)
    assert not np.any(result.opd_uncertainty_ut1.value)
    assert not np.any(result.opd_uncertainty_pole.value)
    assert np.isnan(result.altitude[0]).all()
    across = np.hypot(result.u[1], result.v[1]).to_value(u.um) / 206264.806
    assert result.opd_uncertainty_target[1].to_value(u.um) == pytest.approx(across)


def test_polar_motion_and_ut1_move_the_packet_as_their_uncertainties_say():
    """The change of opd with UT1, x and y by differencing the full transformation."""
    array, target = larkmoor(), [star(), star("B", 20, 70)]

    def opd(**given_values):
        return path_differences(array, target, NIGHT, EarthOrientation.fixed(**given_values)).opd.value

    angle, time = 2 * u.arcsec, 10 * u.ms
    by_pole = np.hypot(opd(x=angle) - opd(x=-angle), opd(y=angle) - opd(y=-angle)) / 2
    by_ut1 = np.abs(opd(ut1_utc=time) - opd(ut1_utc=-time)) / 2
    result = path_differences(array, target, NIGHT, EarthOrientation.fixed(uncertainty=time, pole_uncertainty=angle))
    assert result.opd_uncertainty_pole.value == pytest.approx(by_pole, rel=2e-4, abs=1e-8)
    assert result.opd_uncertainty_ut1.value == pytest.approx(by_ut1, rel=1e-4, abs=1e-9)


def test_unequal_errors_of_the_pole_go_where_they_belong():
    """Packaged errors differ in x and y; with one of them zero, only that one's direction is left."""
    result = path_differences(larkmoor(), star(), NIGHT, EarthOrientation.fixed())
    angle = (1 * u.arcsec).to_value(u.rad)
    for axis, keyword in ((0, "x"), (1, "y")):
        sigma = np.zeros((2, NIGHT.size))
        sigma[axis] = angle
        object.__setattr__(result._values, "pole_sigma", sigma)
        result.__dict__.pop("_uncertainties", None)
        moved = path_differences(larkmoor(), star(), NIGHT, EarthOrientation.fixed(**{keyword: 1 * u.arcsec})).opd - result.opd
        assert result.opd_uncertainty_pole.value == pytest.approx(np.abs(moved.value), rel=1e-3, abs=2e-8)


def test_uncertainties_are_those_of_ten_thousand_draws():
    """UT1, the pole, the star and the stations are drawn, and each draw goes through bare ERFA calls."""
    generator, n, time = np.random.default_rng(3), 10_000, NIGHT[4]
    sigma_place, sigma_ut1, sigma_pole = np.array([2.0, 1.0]) * u.mas, 20 * u.us, 3 * u.mas
    sigma_station = np.array([20.0, 10.0, 30.0]) * u.um
    dec = 25.0
    drawn = {
        "target": generator.normal(size=(2, n)) * sigma_place.to_value(u.rad)[:, None],
        "ut1": generator.normal(size=n) * sigma_ut1.to_value(u.s),
        "pole": generator.normal(size=(2, n)) * sigma_pole.to_value(u.rad),
        "stations": generator.normal(size=(2, 3, n)) * sigma_station.to_value(u.m)[:, None],
    }

    def draws(*varied):
        right, north, ut1, x, y = np.zeros((5, n))
        enu = np.array(POSITIONS["Weir"], dtype=float)[:, None] * np.ones(n)
        if "target" in varied:
            right, north = drawn["target"]
        if "ut1" in varied:
            ut1 = drawn["ut1"]
        if "pole" in varied:
            x, y = drawn["pole"]
        if "stations" in varied:
            enu = enu + drawn["stations"][1] - drawn["stations"][0]
        site = np.radians([LONGITUDE, LATITUDE])
        place = np.radians(150) + right / np.cos(np.radians(dec)), np.radians(dec) + north
        azimuth, zenith, *_ = erfa.atco13(*place, 0, 0, 0, 0, time.jd1, time.jd2, ut1, *site, 1000, x, y, 0, 0, 0, 0.5)
        unit = np.array([np.sin(zenith) * np.sin(azimuth), np.sin(zenith) * np.cos(azimuth), np.cos(zenith)])
        return np.std(np.sum(enu * unit, axis=0))

    orientation = EarthOrientation.fixed(uncertainty=sigma_ut1, pole_uncertainty=sigma_pole)
    array = larkmoor(("Kiln", "Weir"), uncertainty=sigma_station)
    result = path_differences(array, star(dec=dec, uncertainty=sigma_place), time, orientation)
    for name in PARTS:
        assert getattr(result, f"opd_uncertainty_{name}").value.item() == pytest.approx(draws(name), rel=0.03)
    assert result.opd_uncertainty.value.item() == pytest.approx(draws(*PARTS), rel=0.03)


def test_a_track_has_a_row_for_every_target_baseline_and_time():
    targets = [star(), star("B", 200, -10), LampTarget()]
    result, table = path_differences(larkmoor(), targets, NIGHT, FIXED), track(larkmoor(), targets, NIGHT, FIXED)
    assert len(table) == 3 * 3 * 10
    assert list(table["target"][[0, 30, 60]]) == ["A", "B", "lamp"]
    assert list(table["baseline"][[0, 10, 20]]) == ["Kiln-Weir", "Kiln-Tarn", "Weir-Tarn"]
    assert np.abs((table["time"][:10] - NIGHT).sec).max() < 1e-6
    row = 1 * 30 + 2 * 10 + 7
    assert table["opd"][row] == result.opd[1, 2, 7]
    assert table["azimuth"][row] == result.azimuth[1, 7]
    assert table["opd_rate"].unit == u.m / u.s
    assert table["parallactic_angle"].unit == u.deg
    assert all(table[name].info.description for name in table.colnames[2:])


def test_a_star_below_the_horizon_keeps_its_rows():
    table = track(larkmoor(), LOW, NIGHT, FIXED)
    assert len(table) == 30
    assert np.all(table["altitude"] < 0)


def test_a_track_says_where_its_earth_orientation_is_from():
    packaged = EarthOrientation.packaged()
    table = track(larkmoor(), star(), NIGHT)
    assert table.meta["ORIENT"] == packaged.source
    assert table.meta["LASTMEAS"] == packaged.at(NIGHT).last_measured
    assert table.meta["N_MEAS"] + table.meta["N_PRED"] + table.meta["N_BEYOND"] == 10
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", erfa.ErfaWarning)
        far = Time("2060-03-01T20:00")
    late = track(larkmoor(), star(), far)
    assert late.meta["N_BEYOND"] == 1
    assert "UT1 is extrapolated to" in late.meta["NOTE1"]
    assert list(late["orientation"]) == ["beyond the table"] * 3
    expected = np.abs(late["opd_rate"]) * packaged.at(far).ut1_utc_uncertainty
    assert late["opd_uncertainty_ut1"].to_value(u.m) == pytest.approx(expected.to_value(u.m))
    assert "73519.8" in str(late["time"][0])


@pytest.mark.parametrize(("ending", "options"), [("ecsv", {}), ("fits", {"astropy_native": True})])
def test_a_track_can_be_written_and_read_again(tmp_path, ending, options):
    table = track(larkmoor(), [star(uncertainty=1 * u.mas), LampTarget()], NIGHT)
    path = tmp_path / f"track.{ending}"
    table.write(path)
    again = QTable.read(path, **options)
    assert again.colnames == table.colnames
    assert np.abs((again["time"] - table["time"]).sec).max() < 1e-6
    assert again["time"].scale == "utc"
    for name in table.colnames[3:-1]:
        assert again[name].unit == table[name].unit
        assert np.array_equal(again[name].value, table[name].value, equal_nan=True)
        assert again[name].info.description == table[name].info.description
    for name in ("target", "baseline", "orientation"):
        assert list(again[name]) == list(table[name])
    assert {key: again.meta[key] for key in table.meta} == table.meta


def test_a_row_in_words():
    row = {"opd": 12.345678 * u.m, "opd_uncertainty": 18 * u.um, "opd_uncertainty_ut1": 14 * u.um}
    row |= {"opd_uncertainty_target": 9 * u.um, "opd_uncertainty_stations": 6 * u.um, "opd_uncertainty_pole": 1.7 * u.um}
    assert opd_text(row) == "12.345678 m ± 18 um (UT1 14, target 9, stations 6)"
    assert opd_text(row | {"opd_uncertainty_pole": 1.9 * u.um}) == "12.345678 m ± 18 um (UT1 14, target 9, stations 6, pole 2)"
    assert opd_text(track(larkmoor(), LampTarget(), NIGHT)[0]) == "0.000000 m ± 0 um (UT1 0, target 0, stations 0)"


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"array": "Larkmoor"}, "array must be an Array; got str"),
        ({"targets": "A"}, "a target must be one of Star, FixedDirection, LampTarget; got str"),
        ({"targets": [star(), 3]}, "a target must be one of Star, FixedDirection, LampTarget; got int"),
        ({"targets": 3}, "a target must be one of Star, FixedDirection, LampTarget; got int"),
        ({"targets": []}, "no targets: targets must be one or more of Star, FixedDirection, LampTarget; give at least one"),
        ({"targets": [PLACES[0]]}, r"got a SkyCoord: give each place a name, as in \[Star\(name=f.target \{k\}., coordinates=place\)"),
        ({"targets": PLACES}, "got a SkyCoord: give each place a name"),
        ({"baselines": ["Kiln-Weir"]}, r"baselines must be one or more of the array's, for example array.baseline\(.*\); got 'Kiln-Weir'"),
        ({"baselines": []}, "baselines must be one or more of the array's, .*; got none"),
        ({"baselines": 3}, "baselines must be one or more of the array's, .*; got 3"),
        (
            {"times": Time(1e12, format="jd", scale="tdb")},
            r"times must lie in the years 1000 to 3000; got Julian dates 1e\+12: check their",
        ),
        ({"times": Time([2e6, 2451545], format="jd")}, "got Julian dates 2000000 to 2451545"),
        ({"times": "2026-03-01"}, "times must be an astropy Time"),
        ({"times": NIGHT[:0]}, "times must be one time or a row of times"),
        ({"orientation": 0.1}, r"orientation must be an EarthOrientation, for example EarthOrientation.packaged\(\); got float"),
    ],
)
def test_what_cannot_be_computed(change, message):
    with pytest.raises(InputError, match=message):
        path_differences(**{"array": larkmoor(), "targets": star(), "times": NIGHT} | change)


@pytest.mark.parametrize(
    ("change", "kind", "message"),
    [
        ({"declination": 91 * u.deg}, InputError, r"declination must lie between -90 and 90 deg; got 91\.0 deg"),
        ({"latitude": -91 * u.deg}, InputError, r"latitude must lie between -90 and 90 deg; got -91\.0 deg"),
        ({"latitude": [1, 2] * u.deg}, InputError, r"latitude must be one number; got an array of shape \(2,\)"),
        ({"hour_angle": 1}, UnitsError, "hour_angle must carry a unit"),
        ({"north": 3 * u.deg}, UnitsError, "north must be convertible to m"),
    ],
)
def test_angles_that_cannot_be_used(change, kind, message):
    good = {"east": 1 * u.m, "north": 2 * u.m, "up": 3 * u.m, "latitude": 1 * u.deg, "hour_angle": 1 * u.deg, "declination": 1 * u.deg}
    with pytest.raises(kind, match=message):
        hour_angle_delays(**good | change)


def test_results_cannot_be_written_to():
    result = path_differences(larkmoor(), star(), NIGHT, FIXED)
    for name in ("opd", "u", "opd_rate", "opd_acceleration", "opd_uncertainty", "altitude"):
        with pytest.raises(ValueError, match="read-only"):
            getattr(result, name)[0] = 0


def test_a_target_below_the_horizon_is_flagged_in_its_rows():
    table = track(larkmoor(), [star("south", 15, -80), LampTarget()], NIGHT, FIXED)
    south, lamp = (table[table["target"] == name] for name in ("south", "lamp"))
    assert np.all(south["altitude"] < 0 * u.deg)
    assert not np.any(south["above_horizon"])
    assert np.all(lamp["above_horizon"])


def test_one_place_is_a_star_named_target():
    table = track(larkmoor(), PLACES[1], NIGHT[:2], FIXED)
    assert set(table["target"]) == {"target"}
    assert np.array_equal(table["opd"], track(larkmoor(), star(), NIGHT[:2], FIXED)["opd"])


def test_targets_may_come_in_anything_that_lists_them():
    stars = [star("A"), LOW]
    for several in (tuple(stars), iter(stars), np.array(stars, dtype=object), {"one": stars[0], "two": LOW}.values()):
        assert path_differences(larkmoor(), several, NIGHT[0], FIXED).targets == ("A", "low")


def test_one_baseline_stands_for_itself():
    array = larkmoor()
    result = path_differences(array, star(), NIGHT[0], FIXED, baselines=array.baseline("Weir", "Kiln"))
    assert [baseline.name for baseline in result.baselines] == ["Weir-Kiln"]


@pytest.mark.parametrize("year", [1001, 1850, 2150, 2999])
def test_years_outside_the_ephemeris_are_noted_and_give_no_warning(year):
    times = Time(2451545 + (year - 2000) * 365.25, format="jd", scale="tdb")
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        table = track(larkmoor(), star(), times)
    notes = [words for key, words in table.meta.items() if key.startswith("NOTE")]
    assert any("1 of 1 times are outside the years 1900 to 2100 of the solar-system ephemeris" in words for words in notes)
    assert not any("ephemeris" in words for words in path_differences(larkmoor(), star(), NIGHT).orientation.notes)


@pytest.mark.parametrize(
    ("row", "kind", "message"),
    [
        ({}, InputError, r"row must be a row of a table from track, with the columns opd, opd_uncertainty, .*; got \{\}"),
        (None, InputError, "row must be a row of a table from track"),
        (
            {"opd": 1} | {f"opd_uncertainty{name}": 1 * u.um for name in ("", *(f"_{k}" for k in PARTS))},
            UnitsError,
            "opd must carry a unit",
        ),
        (track(larkmoor(), star(), NIGHT[:2], FIXED), InputError, r"opd must be one number; got an array of shape \(6,\)"),
    ],
    ids=["empty", "none", "no unit", "table"],
)
def test_words_need_a_row(row, kind, message):
    with pytest.raises(kind, match=message):
        opd_text(row)
