"""binder/ agrees with pyproject.toml, as repo2docker reads both: with a binder folder, it does not read requires-python."""

import os
import tomllib
from pathlib import Path

import pytest
from packaging.requirements import Requirement
from packaging.specifiers import SpecifierSet

ROOT = Path(__file__).resolve().parents[1]
BINDER = ROOT / "binder"


@pytest.fixture(scope="module")
def project():
    return tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]


def test_runtime_is_a_python_that_the_project_supports(project):
    kind, version = (BINDER / "runtime.txt").read_text(encoding="utf-8").strip().split("-")
    assert kind == "python"
    assert SpecifierSet(project["requires-python"]).contains(version + ".0")


def test_requirements_install_this_repository_with_its_lab_extra(project):
    lines = [line.split("#")[0].strip() for line in (BINDER / "requirements.txt").read_text(encoding="utf-8").splitlines()]
    lines = [line for line in lines if line]
    assert ".[lab]" in lines
    known = {Requirement(text).name: Requirement(text) for text in project["dependencies"] + project["optional-dependencies"]["lab"]}
    for line in lines:
        if line != ".[lab]":
            pin = Requirement(line)
            assert all(known[pin.name].specifier.contains(s.version) for s in pin.specifier), f"{line} is outside pyproject's range"


def test_there_is_one_list_of_dependencies():
    assert not (BINDER / "environment.yml").exists()
    assert not (ROOT / "environment.yml").exists()
    assert not (ROOT / "requirements.txt").exists()


def test_post_build_stops_at_the_first_error():
    script = BINDER / "postBuild"
    assert os.access(script, os.X_OK)
    assert "set -e" in script.read_text(encoding="utf-8")
