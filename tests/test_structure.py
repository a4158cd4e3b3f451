"""The house rules that a machine can check: sizes, top level, and who may open files or print."""

import ast
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
SOURCES = sorted((ROOT / "src").rglob("*.py"))
TOP = {"pyproject.toml", "README.md", "DEVELOPERS.md", "src", "tests", "notebooks", "binder", "artefacts"}


def names(path):
    return str(path.relative_to(ROOT / "src" / "whitefringe"))


def test_top_level_holds_nothing_else():
    assert {path.name for path in ROOT.iterdir() if not path.name.startswith(".")} - TOP == set()


@pytest.mark.parametrize("path", SOURCES, ids=names)
def test_files_and_functions_are_short(path):
    text = path.read_text(encoding="utf-8")
    assert len(text.splitlines()) <= 500
    for node in ast.walk(ast.parse(text)):
        if isinstance(node, ast.FunctionDef):
            first = node.body[1] if ast.get_docstring(node) and len(node.body) > 1 else node.body[0]
            assert node.end_lineno - first.lineno < 60, f"{node.name} is too long"


@pytest.mark.parametrize("path", SOURCES, ids=names)
def test_only_io_reads_files_and_only_the_command_line_prints(path):
    calls = {
        node.func.id if isinstance(node.func, ast.Name) else node.func.attr
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8")))
        if isinstance(node, ast.Call) and isinstance(node.func, (ast.Name, ast.Attribute))
    }
    if path.parent.name != "io":
        assert not calls & {"open", "read_text", "read_bytes", "loadtxt"}
    if not path.name.startswith("cli"):
        assert "print" not in calls
