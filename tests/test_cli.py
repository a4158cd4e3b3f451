"""The command line: exit status, text, and never a traceback."""

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

import whitefringe
from whitefringe.cli import main
from whitefringe.scans import read_scan, reduce_scan
from whitefringe.setup import Setup

from . import bench_folder


@pytest.fixture(scope="module")
def bench(tmp_path_factory):
    return bench_folder.make(tmp_path_factory.mktemp("bench"))


@pytest.fixture
def run(bench, capsys):
    return bench_folder.runner(bench, capsys)


def test_a_good_scan_is_inside(run):
    status, out, err = run("measure", "bench_scan.ecsv")
    assert (status, err) == (0, "")
    assert "bench_scan.ecsv with Larkmoor lamp bench" in out
    assert "verdict: inside" in out
    assert "note: resampled to even steps" in out


def test_text_shows_the_numbers_of_the_library(run, bench):
    _, out, _ = run("measure", "bench_scan.ecsv")
    setup = Setup.read(bench / "bench.toml")
    result = reduce_scan(read_scan(bench / "bench_scan.ecsv", setup.layout), setup.light)
    for _, number in result.rows:
        assert number.text in out


def test_a_tilted_filter_is_outside(run):
    status, out, err = run("measure", "bench_scan_tilted.ecsv")
    assert (status, err) == (1, "")
    assert "verdict: outside" in out


@pytest.mark.parametrize(("scan", "setup", "message"), bench_folder.BAD_INPUT)
def test_bad_input(run, scan, setup, message):
    status, out, err = run("measure", scan, setup=setup)
    assert (status, out) == (2, "")
    assert err.startswith("error: ")
    assert message in err


@pytest.mark.parametrize(("scan", "_name", "message"), bench_folder.UNMEASURED)
def test_not_measured(run, scan, _name, message):
    status, out, err = run("measure", scan)
    assert (status, out) == (3, "")
    assert err.startswith(f"not measured: {scan}: ")
    assert message in err


def test_a_tolerance_at_the_measured_ratio_decides_nothing(run, bench):
    _, out, _ = run("measure", "bench_scan.ecsv", "--json")
    ratio = json.loads(out)["comparisons"][0]["ratio"]["value"]
    bench_folder.variant(bench, "edge.toml", "contrast = [0.95, 1.05]", f"contrast = [{ratio!r}, 1.3]")
    status, out, _ = run("measure", "bench_scan.ecsv", setup="edge.toml")
    assert status == 3
    assert "verdict: undecided" in out


def test_names_are_shown_as_they_are(run, bench):
    bench_folder.variant(bench, "brackets.toml", 'name = "Larkmoor lamp bench"', 'name = "arm [2] [/b] :x:"')
    (bench / "run [b] 3.ecsv").write_bytes((bench / "bench_scan.ecsv").read_bytes())
    status, out, _ = run("measure", "run [b] 3.ecsv", setup="brackets.toml")
    assert status == 0
    assert "run [b] 3.ecsv with arm [2] [/b] :x:" in out


def test_a_warning_becomes_a_note(run, bench):
    (bench / "ends.csv").write_text("w [nm],t\n1500,0.8\n1600,0.9\n1700,0.8\n", encoding="utf-8")
    bench_folder.variant(bench, "ends.toml", "bench_filter.ecsv", "ends.csv")
    status, _, err = run("predict", setup="ends.toml")
    assert status == 0
    assert err.count("note: ") == 2
    assert "may be missing there" in err


def test_demo(tmp_path, run):
    status, out, err = run("demo", str(tmp_path), setup=None)
    assert (status, err) == (0, "")
    assert [Path(line).name for line in out.split("\n")[:-1]] == [
        "bench.toml",
        "bench_filter.ecsv",
        "bench_scan.ecsv",
        "bench_scan_tilted.ecsv",
        "array.toml",
    ]
    status, out, err = run("demo", str(tmp_path), setup=None)
    assert (status, out) == (2, "")
    assert "the file exists" in err
    assert run("demo", str(tmp_path), "--overwrite", setup=None)[0] == 0
    assert run("demo", str(tmp_path / "none"), setup=None)[0] == 2


@pytest.mark.parametrize(
    "arguments",
    [
        [],
        ["weigh"],
        ["measure"],
        ["measure", "a.csv"],
        ["measure", "--setup"],
        ["predict"],
        ["demo"],
        ["predict", "--setup", "a", "--colour"],
    ],
)
def test_bad_usage(arguments, capsys):
    with pytest.raises(SystemExit) as caught:
        main(arguments)
    assert caught.value.code == 2
    assert capsys.readouterr().err.startswith("usage: whitefringe")


@pytest.mark.parametrize("option", ["--help", "--version"])
def test_help_and_version(option, capsys):
    with pytest.raises(SystemExit) as caught:
        main([option])
    assert caught.value.code == 0
    assert ("Exit status" if option == "--help" else whitefringe.__version__) in capsys.readouterr().out


def test_the_installed_command(bench):
    command = Path(sys.executable).with_name("whitefringe")
    arguments = [
        "measure",
        str(bench / "bench_scan_tilted.ecsv"),
        "--setup",
        str(bench / "bench.toml"),
        "--json",
    ]
    finished = subprocess.run([command, *arguments], capture_output=True, text=True, timeout=60, check=False)
    assert finished.returncode == 1
    assert finished.stderr == ""
    assert json.loads(finished.stdout)["verdict"] == "outside"


def test_a_plain_terminal_is_enough(bench):
    command = [Path(sys.executable).with_name("whitefringe"), "measure", "bench_scan.ecsv", "--setup", "bench.toml"]
    environment = {**os.environ, "PYTHONIOENCODING": "ascii"}
    finished = subprocess.run(command, capture_output=True, text=True, timeout=60, check=False, env=environment, cwd=bench)
    assert "Traceback" not in finished.stderr
    assert finished.returncode == 0
