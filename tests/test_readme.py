"""What the README shows runs as it stands."""

import re
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
TEXT = (ROOT / "README.md").read_text(encoding="utf-8")
BLOCKS = re.findall(r"```(\w+)\n(.*?)```", TEXT, flags=re.DOTALL)
SCRIPTS = [code for kind, code in BLOCKS if kind == "python"]


def test_the_script_runs_and_says_inside():
    done = subprocess.run([sys.executable, "-W", "error", "-c", SCRIPTS[0]], cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.stderr == ""
    assert done.stdout.splitlines()[-1] == "inside"
    lines = [line for line in SCRIPTS[0].splitlines() if line.strip()]
    assert len(lines) <= 11


def test_the_script_of_the_arms_and_the_sky_runs():
    done = subprocess.run([sys.executable, "-W", "error", "-c", SCRIPTS[1]], cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.stderr == ""
    assert "UT1" in done.stdout


def test_the_dashboard_runs(monkeypatch):
    monkeypatch.chdir(ROOT)
    exec(SCRIPTS[2], {})


def test_the_files_that_are_named_exist():
    for name in set(re.findall(r"notebooks/[\w./]+\w", TEXT)) | set(re.findall(r"\]\(([^)#:]+)\)", TEXT)):
        assert (ROOT / name).exists(), name


@pytest.mark.parametrize("word", ["measure", "predict", "light", "track", "demo"])
def test_the_commands_exist(word):
    subprocess.run([sys.executable, "-m", "whitefringe", word, "--help"], check=True, capture_output=True)
