"""`whitefringe light`."""

import json

import astropy.units as u
import pytest

from whitefringe import coherence
from whitefringe.cli import main
from whitefringe.setup import Setup

LINES = """
name = "two lines"
[source]
shape = "lines"
[[source.lines]]
wavelength = "589.15833 nm"
strength = 2.0
[[source.lines]]
wavelength = "589.75581 nm"
"""


@pytest.fixture
def bench(larkmoor):
    return str(larkmoor / "bench.toml")


def test_text_lists_measures_definitions_and_false_packets(bench, capsys):
    assert main(["light", "--setup", bench]) == 0
    out = capsys.readouterr().out
    for words in ("pivot wavelength", "coherence length (first-null)", "contrast 0.8 held to", "false packets up to 61.3686 um"):
        assert words in out
    assert "0.1765" in out


def test_json_holds_the_numbers_of_the_core(bench, capsys):
    assert main(["light", "--setup", bench, "--json", "--range", "0.1 mm", "--above", "0.04"]) == 0
    answer = json.loads(capsys.readouterr().out)
    expected = coherence.false_packets(Setup.read(bench).light, 0.1 * u.mm, 0.04)
    assert [p["contrast"] for p in answer["false_packets"]] == [p.height for p in expected]
    assert answer["light"]["packet width"]["unit"] == "um"
    assert answer["caution"] == ""


def test_lines_say_what_they_do_not_have(tmp_path, capsys):
    (tmp_path / "pair.toml").write_text(LINES, encoding="utf-8")
    assert main(["light", "--setup", str(tmp_path / "pair.toml"), "--range", "20 mm", "--above", "0.5"]) == 0
    out = capsys.readouterr().out
    assert "no meaning for several lines" in " ".join(out.replace("│", " ").split())
    assert "the 20 highest of 34" in " ".join(out.split())


@pytest.mark.parametrize("ending", ["png", "svg"])
def test_a_picture_is_drawn(bench, tmp_path, ending):
    path = tmp_path / f"light.{ending}"
    assert main(["light", "--setup", bench, "--plot", str(path)]) == 0
    assert path.stat().st_size > 10_000


@pytest.mark.parametrize(
    ("options", "message"),
    [
        (["--range", "long"], "--range must be a length such as \"1 m\"; got 'long'"),
        (["--range", "3 s"], '--range must be a length such as "1 m"'),
        (["--above", "2"], "above must be between 0 and 1"),
        (["--plot", "light.doc"], "a picture's name must end in .png, .svg, .pdf"),
    ],
)
def test_faults_end_with_two(bench, capsys, options, message):
    assert main(["light", "--setup", bench, *options]) == 2
    assert message in capsys.readouterr().err


LASER = """
[source]
shape = "multimode-laser"
wavelength = "633 nm"
cavity_length = "15 cm"
gain_fwhm = "1.5 GHz"
"""


@pytest.mark.parametrize("command", [["light", "--range", "1 m"], ["predict"]])
def test_a_laser_brings_one_caution_line(tmp_path, capsys, command):
    (tmp_path / "laser.toml").write_text(LASER, encoding="utf-8")
    assert main([*command, "--setup", str(tmp_path / "laser.toml")]) == 0
    out = capsys.readouterr().out
    assert out.count("IEC 60825-1") == 1
    assert "local laser safety officer decides" in out
    assert "infrared beams give no warning" in out
