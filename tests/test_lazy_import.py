"""Each area imports in a fresh interpreter without the widget libraries, and the package itself without astropy."""

import json
import subprocess
import sys

import pytest

AREAS = (
    "errors",
    "units",
    "results",
    "references",
    "io",
    "spectra",
    "standard_air",
    "coherence",
    "media",
    "sky",
    "fringes",
    "scans",
    "setup",
    "demo",
    "cli",
)

KEPT_OUT = ("ipywidgets", "bqplot", "traitlets", "dask", "IPython", "matplotlib")

IMPORT_ALL = """
import importlib, json, pkgutil, sys
area = importlib.import_module(sys.argv[1])
for found in pkgutil.iter_modules(getattr(area, "__path__", []), area.__name__ + "."):
    importlib.import_module(found.name)
print(json.dumps(sorted(sys.modules)))
"""


def start(name):
    return subprocess.Popen([sys.executable, "-c", IMPORT_ALL, name], stdout=subprocess.PIPE, text=True)


@pytest.fixture(scope="module")
def loaded():
    """Modules that each area loads; the interpreters run side by side."""
    names = [f"whitefringe.{area}" for area in AREAS]
    processes = {name: start(name) for name in names}
    outputs = {name: process.communicate(timeout=60)[0] for name, process in processes.items()}
    assert all(process.returncode == 0 for process in processes.values())
    return {name: set(json.loads(text)) for name, text in outputs.items()}


@pytest.mark.parametrize("area", AREAS)
def test_no_area_of_the_core_loads_a_widget_library(loaded, area):
    modules = loaded[f"whitefringe.{area}"]
    assert f"whitefringe.{area}" in modules
    assert modules.isdisjoint(KEPT_OUT)


def test_the_package_alone_loads_no_astropy():
    code = "import sys, whitefringe; print([name for name in ('astropy', 'numpy', 'scipy') if name in sys.modules])"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_areas_are_loaded_when_first_used():
    code = "import whitefringe as w, sys; w.units; print('astropy' in sys.modules, 'whitefringe.scans' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.split() == ["True", "False"]


def test_a_wrong_area_is_named():
    import whitefringe

    with pytest.raises(AttributeError, match="has no attribute 'colours'; its areas are coherence, demo"):
        _ = whitefringe.colours
    assert set(whitefringe.AREAS) <= set(dir(whitefringe))
