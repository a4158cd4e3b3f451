"""The stored notebooks hold outputs that nbval can compare: it passes over cells that were never run."""

import json
from pathlib import Path

import pytest

NOTEBOOKS = sorted((Path(__file__).resolve().parents[1] / "notebooks").rglob("*.ipynb"))


@pytest.mark.parametrize("path", NOTEBOOKS, ids=lambda path: path.stem)
def test_stored_outputs_can_be_compared(path):
    assert path.stat().st_size < 1_000_000
    notebook = json.loads(path.read_text(encoding="utf-8"))
    assert notebook["metadata"]["kernelspec"]["name"] == "python3"
    cells = [cell for cell in notebook["cells"] if cell["cell_type"] == "code"]
    assert cells
    assert [cell["execution_count"] for cell in cells] == list(range(1, len(cells) + 1)), "run all cells, in order"
    for cell in cells:
        outputs = cell["outputs"]
        assert not [o for o in outputs if o["output_type"] == "error"]
        assert not [o for o in outputs if o.get("name") == "stderr"]


def test_there_are_notebooks():
    assert NOTEBOOKS
