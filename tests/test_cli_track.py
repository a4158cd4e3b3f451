"""`whitefringe track`: the night's table to a file, the windows to the terminal."""

import json

import astropy.units as u
import numpy as np
import pytest
from astropy.table import QTable

from whitefringe.cli import main
from whitefringe.demo_array import ARRAY_TEXT
from whitefringe.setup import Setup
from whitefringe.sky import CAUTION


@pytest.fixture
def array(larkmoor):
    return str(larkmoor / "array.toml")


@pytest.fixture(autouse=True)
def wide(monkeypatch, tmp_path):
    monkeypatch.setenv("COLUMNS", "220")
    monkeypatch.chdir(tmp_path)


def test_windows_are_printed_and_the_table_is_written(array, tmp_path, capsys):
    assert main(["track", "--setup", array, "--date", "2026-12-03"]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    for words in ("night of 2026-12-03", "Ember", "Kiln-Weir", "below the horizon limit", "out of stroke", "too fast", CAUTION):
        assert words in " ".join(out.split())
    table = QTable.read(tmp_path / "track_2026-12-03.ecsv", format="ascii.ecsv")
    night = Setup.read(array).observation
    assert len(table) % (len(night.targets) * len(night.array.baselines)) == 0
    for name in ("opd", "opd_rate", "u", "v", "w", "altitude", "opd_uncertainty", "carriage_1", "speed_2", "observable"):
        assert name in table.colnames
    assert table["opd"].unit == u.m
    assert np.max(np.abs(table["opd"] - table["w"])) < 1e-9 * u.m


def test_fits_holds_the_same_numbers(array, tmp_path, capsys):
    for name in ("t.fits", "t.ecsv"):
        assert main(["track", "--setup", array, "--out", str(tmp_path / name)]) == 0
    fits, text = QTable.read(tmp_path / "t.fits", astropy_native=True), QTable.read(tmp_path / "t.ecsv", format="ascii.ecsv")
    assert np.allclose(fits["opd"].to_value(u.m), text["opd"].to_value(u.m), rtol=0, atol=1e-9)
    assert np.max(np.abs((fits["time"] - text["time"]).to_value(u.s))) < 1e-5


def test_json(array, tmp_path, capsys):
    assert main(["track", "--setup", array, "--out", str(tmp_path / "t.ecsv"), "--json"]) == 0
    answer = json.loads(capsys.readouterr().out)
    assert answer["date"] == "2026-12-01"
    assert answer["caution"] == CAUTION
    ember = next(item for item in answer["windows"] if item["observable"])
    assert (ember["target"], ember["baseline"], ember["middle"]["opd"]["unit"]) == ("Ember", "Kiln-Weir", "m")
    fen = [item for item in answer["windows"] if item["target"] == "Fen"]
    assert fen
    assert not any(item["observable"] for item in fen)
    assert all("below the horizon" in item["reason"] for item in fen)


def test_a_date_far_ahead_is_flagged(array, tmp_path, capsys):
    assert main(["track", "--setup", array, "--date", "2060-03-01"]) == 0
    out, err = capsys.readouterr()
    assert "beyond the table" in out
    assert err == ""


def test_an_existing_table_is_kept(array, tmp_path, capsys):
    place = tmp_path / "t.ecsv"
    place.write_text("mine", encoding="utf-8")
    assert main(["track", "--setup", array, "--out", str(place)]) == 2
    assert "the file exists" in capsys.readouterr().err
    assert place.read_text(encoding="utf-8") == "mine"
    assert main(["track", "--setup", array, "--out", str(place), "--overwrite"]) == 0


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (["--date", "tomorrow"], "date"),
        (["--out", "none/t.ecsv"], "there is no folder"),
        (["--out", "gz.xyz"], "gz.xyz: the name must end in .ecsv, or for a FITS table in one of .fits, .fit, .fts, .fits.gz"),
        (["--out", "."], ".: this is a folder; give the name of a file in it, such as table.ecsv"),
    ],
)
def test_bad_input(array, capsys, arguments, message):
    assert main(["track", "--setup", array, *arguments]) == 2
    err = capsys.readouterr().err
    assert message in err
    assert "Traceback" not in err


def test_a_bench_has_no_night(larkmoor, capsys):
    assert main(["track", "--setup", str(larkmoor / "bench.toml")]) == 2
    assert "there is no [array] in this setup" in capsys.readouterr().err


def test_without_delay_lines(tmp_path, capsys):
    text = "\n".join(line for line in ARRAY_TEXT.splitlines() if not line.startswith("line ="))
    (tmp_path / "bare.toml").write_text(text, encoding="utf-8")
    assert main(["track", "--setup", str(tmp_path / "bare.toml"), "--out", str(tmp_path / "t.ecsv")]) == 0
    out = capsys.readouterr().out
    assert "not observable" not in out
    assert "no delay lines in the setup" in " ".join(out.split())
    assert CAUTION not in out


def test_it_can_be_read_in_a_narrow_terminal(array, tmp_path, capsys, monkeypatch):
    """In 80 columns, and in a pipe, which has as many."""
    monkeypatch.setenv("COLUMNS", "80")
    assert main(["track", "--setup", array, "--out", str(tmp_path / "t.ecsv")]) == 0
    lines = capsys.readouterr().out.splitlines()
    assert len(lines) < 80
    assert not any("\N{HORIZONTAL ELLIPSIS}" in line for line in lines)
    start = lines.index(next(line for line in lines if line.startswith("windows")))
    end = next(k for k, line in enumerate(lines) if line.startswith("not observable"))
    assert max(len(line) for line in lines[start:end]) <= 80
    night = Setup.read(array).observation
    shown = " ".join(" ".join(lines[start:end]).split())
    for row in night.windows[night.windows["observable"]]:
        assert f"{row['target']} {row['baseline']}" in shown
        for k in (1, 2):
            assert any(line[17:].startswith(f"{row[f'station_{k}']} ") for line in lines[start:end])
    # every stretch that is not in a window stands below, with numbers only where there is no window at all
    below = [line for line in lines if line.startswith("not observable")]
    closed = night.windows[~night.windows["observable"]]
    assert len(below) == len({(row["target"], row["baseline"]) for row in closed})
    assert sum(line.count("-", len("not observable: ")) for line in below) >= len(closed)
    ember = next(line for line in below if "Ember Kiln-Weir" in line)
    assert ember.startswith("not observable: Ember Kiln-Weir 18:47-20:04: below the horizon limit, out of stroke; ")
    fen = next(line for line in below if "Fen Kiln-Weir" in line)
    assert "below the horizon limit: altitude -56.8 to -2.9 deg, limit 30 deg" in fen


def test_long_names_are_folded_not_cut(array, tmp_path, capsys, monkeypatch):
    monkeypatch.setenv("COLUMNS", "80")
    name = "EmberOfTheNorthernMoorWithAVeryLongName"
    path = tmp_path / "long.toml"
    path.write_text(ARRAY_TEXT.replace('name = "Ember"', f'name = "{name}"'), encoding="utf-8")
    assert main(["track", "--setup", str(path), "--out", str(tmp_path / "t.ecsv")]) == 0
    out = capsys.readouterr().out
    assert "\N{HORIZONTAL ELLIPSIS}" not in out
    first = [line.split()[0] for line in out.split("not observable")[0].splitlines() if line[:1].strip()]
    assert name in "".join(first)


def test_a_night_that_is_never_dark_names_file_and_key(tmp_path, capsys):
    path = tmp_path / "north.toml"
    text = ARRAY_TEXT.replace('latitude = "35 deg"', 'latitude = "65 deg"').replace('date = "2026-12-01"', 'date = "2026-06-21"')
    path.write_text(text, encoding="utf-8")
    assert main(["track", "--setup", str(path)]) == 2
    assert f"{path}: night: the sun sinks no lower than" in capsys.readouterr().err
    # with another date the file's own does not matter
    assert main(["track", "--setup", str(path), "--date", "2026-12-01"]) == 0
