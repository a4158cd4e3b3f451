"""Earth orientation: where numbers come from, how they are flagged, and that astropy uses exactly these and no network."""

import socket
import warnings
from concurrent.futures import ThreadPoolExecutor

import astropy.units as u
import erfa
import numpy as np
import pytest
from astropy.coordinates import EarthLocation
from astropy.time import Time
from astropy.utils import iers

from whitefringe.errors import FileContentError, InputError, UnitsError
from whitefringe.io.earth_orientation import read_earth_orientation
from whitefringe.sky._orientation_table import sigma_ut1_extrapolated
from whitefringe.sky.delays import track
from whitefringe.sky.orientation import EarthOrientation, as_utc
from whitefringe.sky.stations import Array, Station
from whitefringe.sky.targets import Star

PACKAGED = EarthOrientation.packaged()
LAST = PACKAGED.table.last_measured
END = PACKAGED.table.mjd[-1]


def mjd(*values):
    return Time(values, format="mjd", scale="utc")


def far(text):
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", erfa.ErfaWarning)
        return Time(text, scale="utc")


def astropy_less(orientation, times, ut1_utc):
    """By how many seconds astropy's UT1 differs from UTC + `ut1_utc` (ERFA minds the day that has a leap second)."""
    with orientation.applied(times) as utc, warnings.catch_warnings():
        warnings.simplefilter("ignore", erfa.ErfaWarning)
        ut1 = utc.ut1
        jd1, jd2 = erfa.utcut1(utc.jd1, utc.jd2, ut1_utc)
    return np.abs((ut1.jd1 - jd1) + (ut1.jd2 - jd2)).max() * 86400


def test_measured_values_are_the_tables_own():
    table, source = read_earth_orientation()
    rows = table[[100, 9000, 18000]]
    result = PACKAGED.at(Time(rows["MJD"].value, format="mjd", scale="utc"))
    assert result.ut1_utc.value == pytest.approx(rows["UT1_UTC"].value, abs=1e-12)
    assert result.x.value == pytest.approx(rows["PM_x"].value, abs=1e-12)
    assert result.y.value == pytest.approx(rows["PM_y"].value, abs=1e-12)
    assert result.ut1_utc_uncertainty.value == pytest.approx(np.hypot(rows["e_UT1_UTC_A"].value, 25e-6))
    assert result.x_uncertainty.value == pytest.approx(np.hypot(rows["e_PM_x_A"].value, 0.4e-3))
    assert list(result.status) == ["measured"] * 3
    assert result.source == source
    assert result.notes == ()
    assert result.age.value.max() == 0


def test_status_age_and_notes():
    result = PACKAGED.at(mjd(41000, LAST - 10, LAST, LAST + 30, END + 400))
    assert list(result.status) == ["before the table", "measured", "measured", "predicted", "beyond the table"]
    assert result.age.value == pytest.approx([0, 0, 0, 30, END + 400 - LAST])
    told = " ".join(result.notes)
    assert f"1 of 5 times are predicted, last measured {result.last_measured}" in told
    assert "1 of 5 times are beyond the table" in told
    assert "no leap second is assumed" in told
    assert "1 of 5 times are before the table: UT1-UTC is held, to 1 s" in told
    assert np.all(np.diff(result.ut1_utc_uncertainty.value[1:]) > -1e-4)


def test_a_date_in_2060_is_flagged_with_its_uncertainty():
    time = far("2060-03-01T20:00")
    result = PACKAGED.at(time)
    days = 73519 + 20 / 24 - LAST
    assert list(result.status) == ["beyond the table"]
    assert result.age.value == pytest.approx([days])
    assert result.ut1_utc_uncertainty.value == pytest.approx(sigma_ut1_extrapolated(days))
    assert 10 < result.ut1_utc_uncertainty.value[0] < 20
    assert result.x_uncertainty.value == pytest.approx([0.14])
    assert astropy_less(PACKAGED, time, result.ut1_utc.value) < 1e-8


def test_before_1960_the_uncertainty_is_a_minute():
    assert PACKAGED.at(mjd(30000, 37000)).ut1_utc_uncertainty.value == pytest.approx([60, 1])


# 2016-12-31 ends with a leap second
@pytest.mark.parametrize("start", [41684, 57753, LAST - 1, LAST, END - 1, END, END + 100, 36000])
def test_astropy_uses_exactly_these_values(start):
    times = mjd(*(start + np.array([0, 0.25, 0.9999, 1, 1.5])))
    expected = PACKAGED.at(times)
    assert astropy_less(PACKAGED, times, expected.ut1_utc.value) < 1e-8
    x, y = PACKAGED.table_for(times).pm_xy(times)
    assert x.to_value(u.arcsec) == pytest.approx(expected.x.value, abs=0.15 if start >= END - 1 else 1e-9)
    assert y.to_value(u.arcsec) == pytest.approx(expected.y.value, abs=0.15 if start >= END - 1 else 1e-9)


def test_within_a_leap_second():
    last = Time("2016-12-31T23:59:60.5")
    assert PACKAGED.at(last).ut1_utc.value == pytest.approx(-0.4084, abs=2e-3)
    assert astropy_less(PACKAGED, last, PACKAGED.at(last).ut1_utc.value) < 1e-8


def test_times_far_apart_need_few_rows():
    assert len(PACKAGED.table_for(mjd(45000, 60000, 73000))) == 12


def test_a_cached_ut1_utc_is_not_used():
    times = Time(["2020-06-01", "2020-06-02"])
    times.delta_ut1_utc = [0.5, 0.5]
    given = EarthOrientation.fixed(-0.25 * u.s)
    assert astropy_less(given, times, -0.25) < 1e-8
    assert times.delta_ut1_utc == pytest.approx([0.5, 0.5])


@pytest.mark.parametrize("scale", ["tai", "tt", "tdb", "ut1"])
def test_other_time_scales(scale):
    utc = Time("2020-06-01T12:00")
    with PACKAGED.applied(utc) as clean:
        other = getattr(clean, scale)
    bare = Time(other.jd1, other.jd2, format="jd", scale=scale)
    assert abs((as_utc(bare, PACKAGED) - utc).sec[0]) < 1e-6


def test_fixed_values():
    given = EarthOrientation.fixed(0.2 * u.s, 100 * u.mas, 300 * u.mas, uncertainty=14 * u.us, pole_uncertainty=1 * u.mas)
    result = given.at(far(["1900-01-01", "2100-01-01"]))
    assert list(result.status) == ["given", "given"]
    assert result.ut1_utc.value == pytest.approx([0.2, 0.2])
    assert result.ut1_utc_uncertainty.to_value(u.us) == pytest.approx([14, 14])
    assert result.x.value == pytest.approx([0.1, 0.1])
    assert result.y.value == pytest.approx([0.3, 0.3])
    assert result.y_uncertainty.to_value(u.mas) == pytest.approx([1, 1])
    assert result.source == "given values"
    assert result.last_measured == ""


def refuse(*args, **kwargs):
    raise AssertionError("the network was asked")


@pytest.mark.parametrize("auto_download", [True, False])
def test_no_network_whatever_astropys_settings(monkeypatch, auto_download):
    monkeypatch.setattr(socket, "socket", refuse)
    monkeypatch.setattr(socket, "create_connection", refuse)
    place = EarthLocation.from_geodetic(lon=-15 * u.deg, lat=35 * u.deg)
    stations = [Station(name=name, east=east * u.m, north=0 * u.m, up=0 * u.m) for name, east in (("Kiln", 0), ("Weir", 100))]
    star = Star.at(name="A", ra=60 * u.deg, dec=25 * u.deg)
    with iers.conf.set_temp("auto_download", auto_download), iers.conf.set_temp("auto_max_age", 10):
        before = iers.earth_orientation_table._value
        table = track(Array(location=place, stations=stations), star, mjd(LAST + 100, END + 3000))
        assert iers.earth_orientation_table._value is before
        assert iers.conf.auto_download is auto_download
    assert list(table["orientation"]) == ["predicted", "beyond the table"]


@pytest.fixture
def newer(tmp_path):
    """The last years of the packaged file, as a user's own."""
    with open(iers.IERS_A_FILE, encoding="ascii") as file:
        lines = file.readlines()
    path = tmp_path / "finals2000A.all"
    path.write_text("".join(lines[-4000:]), encoding="ascii")
    return path


def test_a_local_file(newer):
    own = EarthOrientation.read(newer)
    assert own.source == "finals2000A from finals2000A.all"
    times = mjd(LAST - 50.25, LAST + 50.25)
    assert own.at(times).ut1_utc.value == pytest.approx(PACKAGED.at(times).ut1_utc.value, abs=1e-12)
    assert list(own.at(mjd(50000)).status) == ["before the table"]


def test_a_leap_second_that_the_installed_list_lacks(tmp_path):
    with open(iers.IERS_A_FILE, encoding="ascii") as file:
        lines = file.readlines()
    path = tmp_path / "finals2000A.all"
    path.write_text("".join(lines[15000:]), encoding="ascii")
    known = erfa.leap_seconds.get()
    try:
        erfa.leap_seconds.set(known[:-1])
        with pytest.raises(FileContentError, match="UT1-UTC jumps by a leap second on 2017-01-01 that the installed package"):
            EarthOrientation.read(path)
    finally:
        erfa.leap_seconds.set(known)


def test_files_that_cannot_be_read(tmp_path):
    with pytest.raises(FileContentError, match=r"nothing\.all: no such file; give the path of a local copy"):
        EarthOrientation.read(tmp_path / "nothing.all")
    wrong = tmp_path / "wrong.all"
    wrong.write_text("mjd,ut1\n60000,0.1\n", encoding="ascii")
    with pytest.raises(FileContentError, match=r"wrong\.all: not a table in the format finals2000A"):
        EarthOrientation.read(wrong)


@pytest.mark.parametrize(
    ("times", "message"),
    [
        ("2026-03-01", "times must be an astropy Time.*got str"),
        (Time([], format="mjd"), r"times must be one time or a row of times; got an array of shape \(0,\)"),
        (Time([[60000.0, 60001.0]], format="mjd"), r"a row of times; got an array of shape \(1, 2\)"),
        (Time("2026-03-01", scale="local"), 'times in the scale "local" have no relation'),
    ],
)
def test_times_that_cannot_be_used(times, message):
    with pytest.raises(InputError, match=message):
        PACKAGED.at(times)


def test_masked_times_cannot_be_used():
    times = mjd(60000.0, 60001.0)
    times[1] = np.ma.masked
    with pytest.raises(InputError, match="times must be finite; some are masked"):
        PACKAGED.at(times)


@pytest.mark.parametrize(
    ("arguments", "kind", "message"),
    [
        ({"ut1_utc": 0.1}, UnitsError, "ut1_utc must carry a unit"),
        ({"ut1_utc": 0.1 * u.m}, UnitsError, "ut1_utc must be convertible to s"),
        ({"x": 0.1 * u.s}, UnitsError, "x must be convertible to rad"),
        ({"ut1_utc": [0.1, 0.2] * u.s}, InputError, r"ut1_utc must be one number; got an array of shape \(2,\)"),
        ({"uncertainty": -1 * u.s}, InputError, "uncertainty must not be below 0; got -1.0 s"),
        ({"pole_uncertainty": -1 * u.mas}, InputError, "pole_uncertainty must not be below 0"),
    ],
)
def test_given_values_that_cannot_be_used(arguments, kind, message):
    with pytest.raises(kind, match=message):
        EarthOrientation.fixed(**arguments)


def test_two_threads_do_not_take_each_others_values():
    times = mjd(*np.linspace(60000, 60001, 50))

    def wrong(ut1_utc):
        given = EarthOrientation.fixed(ut1_utc * u.s)
        return max(astropy_less(given, times, ut1_utc) for _ in range(20))

    with ThreadPoolExecutor(4) as threads:
        assert max(threads.map(wrong, [-0.4, -0.1, 0.2, 0.5])) < 1e-8
