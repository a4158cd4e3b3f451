"""JSON of the command line says the same as the library, and says it on errors too."""

import json

import astropy.units as u
import pytest

import whitefringe
from whitefringe.fringes import predict_packet
from whitefringe.scans import read_scan, reduce_scan
from whitefringe.setup import Setup

from . import bench_folder


@pytest.fixture(scope="module")
def bench(tmp_path_factory):
    return bench_folder.make(tmp_path_factory.mktemp("bench"))


@pytest.fixture
def run(bench, capsys):
    return bench_folder.runner(bench, capsys)


@pytest.mark.parametrize(
    ("scan", "verdict", "expected"),
    [("bench_scan.ecsv", "inside", 0), ("bench_scan_tilted.ecsv", "outside", 1)],
)
def test_json_is_the_result_of_the_library(run, bench, scan, verdict, expected):
    status, out, err = run("measure", scan, "--json")
    assert (status, err) == (expected, "")
    report = json.loads(out)
    setup = Setup.read(bench / "bench.toml")
    recorded = read_scan(bench / scan, setup.layout)
    result = reduce_scan(recorded, setup.light, tolerances=setup.tolerances, expected_contrast=setup.expected_contrast)
    assert report["verdict"] == verdict == str(result.verdict)
    assert report["whitefringe"] == whitefringe.__version__
    assert report["setup"] == setup.origin
    assert report["scan"] == dict(recorded.provenance)
    assert report["notes"] == list(result.notes)
    assert report["signal_to_noise"] == result.signal_to_noise
    assert report["samples_per_fringe"] == result.samples_per_fringe
    assert list(report["results"]) == [name for name, _ in result.rows]
    for name, number in result.rows:
        entry = report["results"][name]
        assert entry["value"] == float(number.value.value)
        assert entry["uncertainty"] == float(number.uncertainty.value)
        assert u.Unit(entry["unit"]) == number.unit
        assert (entry["definition"], entry["method"]) == (number.definition, number.method)
    for entry, item in zip(report["comparisons"], result.comparisons, strict=True):
        assert (entry["name"], entry["outcome"], entry["reason"]) == (
            item.name,
            None if item.outcome is None else str(item.outcome),
            item.reason,
        )
        assert entry["ratio"]["value"] == float(item.ratio.value)
        assert entry["predicted"]["value"] == float(item.predicted.value.value)
        assert (entry["tolerance"] and tuple(entry["tolerance"])) == item.tolerance


@pytest.mark.parametrize(("scan", "name", "message"), bench_folder.UNMEASURED)
def test_json_of_a_refusal(run, scan, name, message):
    status, out, err = run("measure", scan, "--json")
    report = json.loads(out)
    assert status == 3
    assert (report["verdict"], report["error"]) == ("not measured", name)
    assert message in report["reason"]
    assert message in err


@pytest.mark.parametrize(("scan", "setup", "message"), bench_folder.BAD_INPUT)
def test_json_of_bad_input(run, scan, setup, message):
    status, out, _ = run("measure", scan, "--json", setup=setup)
    report = json.loads(out)
    assert status == 2
    assert report["verdict"] == "bad input"
    assert message in report["reason"]


def test_json_of_a_refusal_holds_the_upper_limit(run):
    _, out, _ = run("measure", "noise.ecsv", "--json")
    assert 0 < json.loads(out)["upper_limit"] < 1


def test_predict(run, bench):
    prediction = predict_packet(Setup.read(bench / "bench.toml").light)
    status, out, err = run("predict")
    assert (status, err) == (0, "")
    assert "predicted packet: Larkmoor lamp bench" in out
    for _, number in prediction.rows:
        assert number.text in out
    status, out, _ = run("predict", "--json")
    report = json.loads(out)
    assert (status, report["setup"]) == (0, "Larkmoor lamp bench")
    assert {name: entry["value"] for name, entry in report["prediction"].items()} == {
        name: float(number.value.value) for name, number in prediction.rows
    }


def test_predict_says_why_a_number_is_missing(run, bench):
    (bench / "laser.toml").write_text('[source]\nshape = "lines"\n[[source.lines]]\nwavelength = "633 nm"\n', encoding="utf-8")
    status, out, _ = run("predict", "--json", setup="laser.toml")
    entry = json.loads(out)["prediction"]["packet width"]
    assert status == 0
    assert entry["value"] is None
    assert "never loses coherence" in entry["reason"]
