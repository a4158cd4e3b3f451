"""DEVELOPERS.md's formula index: every row leads to a function, a source and a test, and every public function has its row."""

import inspect
import re
from importlib import import_module
from pathlib import Path

import pytest

from whitefringe import coherence, fringes, media, scans, sky, spectra
from whitefringe.references import CITATIONS

ROOT = Path(__file__).resolve().parents[1]
TEXT = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8").split("## Formula index")[1].split("\n## ")[0]
ROWS = [tuple(cell.strip() for cell in line.strip("|").split("|")) for line in TEXT.splitlines() if line.startswith("| ")][2:]
WITHOUT_FORMULA = set(re.findall(r"`([\w.]+)`", TEXT.split("Without a formula:")[1]))


@pytest.mark.parametrize(("quantity", "function", "source", "test"), ROWS, ids=[row[1] for row in ROWS])
def test_a_row_leads_to_function_source_and_test(quantity, function, source, test):
    area, name = function.strip("`").split(".")
    assert inspect.getdoc(getattr(import_module(f"whitefringe.{area}"), name))
    assert quantity
    for key in source.split(", "):
        assert key == "derived" or key in CITATIONS
    path, _, case = test.strip("`").partition("::")
    text = (ROOT / path).read_text(encoding="utf-8")
    assert f"def {case}(" in text if case else "def test_" in text


def test_every_public_function_has_a_row():
    listed = {row[1].strip("`") for row in ROWS} | WITHOUT_FORMULA
    areas = {"coherence": coherence, "fringes": fringes, "media": media, "scans": scans, "sky": sky, "spectra": spectra}
    public = {f"{name}.{item}" for name, area in areas.items() for item in area.__all__ if inspect.isfunction(getattr(area, item))}
    assert public - listed == set()


def test_every_citation_is_used():
    sources = "".join(path.read_text(encoding="utf-8") for path in (ROOT / "src").rglob("*.py") if path.name != "references.py")
    unused = [key for key in CITATIONS if f'"{key}"' not in sources and key not in TEXT]
    assert unused == []
