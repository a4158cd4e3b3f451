"""A folder with the demo's files, and with scans and setups that end in other ways; and a way to run the command on it."""

from pathlib import Path

import astropy.units as u
import numpy as np
from astropy.table import Table

from whitefringe import demo
from whitefringe.cli import main

BAD_INPUT = [
    ("none.ecsv", "bench.toml", "no such file"),
    ("bench_scan.ecsv", "none.toml", "no such setup file"),
    ("bench_scan.ecsv", "broken.toml", "not valid TOML"),
    ("bench_scan.ecsv", "column.toml", "signal column 'counts' is not there"),
]
"""Scan, setup and what the message holds."""

UNMEASURED = [
    ("noise.ecsv", "NoFringeError", "no fringes above the noise"),
    ("saturated.ecsv", "SaturatedError", "at or above the saturation level"),
    ("constant.ecsv", "ConstantSignalError", "the signal is 300 in every row"),
]
"""Scan, error and what the message holds."""


def make(folder):
    """Fill a folder."""
    demo.write_bench(folder)
    stage = np.linspace(-30, 30, 601)
    rng = np.random.default_rng(2)
    tables = {
        "noise.ecsv": rng.poisson(20_000, 601) + 200.0,
        "saturated.ecsv": np.where(np.arange(601) == 300, 65_535.0, 20_000.0 + rng.normal(0, 140, 601)),
        "constant.ecsv": np.full(601, 300.0),
    }
    for name, counts in tables.items():
        Table({"stage": stage * u.um, "detector": counts}).write(folder / name)
    Path(folder, "broken.toml").write_text("[source\n", encoding="utf-8")
    variant(folder, "column.toml", 'signal = "detector"', 'signal = "counts"')
    return folder


def variant(folder, name, old, new):
    """Write the demo's setup with one text changed."""
    assert old in demo.SETUP_TEXT
    Path(folder, name).write_text(demo.SETUP_TEXT.replace(old, new), encoding="utf-8")


def runner(folder, capsys):
    """A function that runs `whitefringe` there and returns status, output and messages."""

    def call(*arguments, setup="bench.toml"):
        command, *rest = arguments
        options = [] if setup is None else ["--setup", str(folder / setup)]
        status = main([command, *(str(folder / item) if item.endswith(".ecsv") else item for item in rest), *options])
        out, err = capsys.readouterr()
        assert "Traceback" not in out + err
        return status, out, err

    return call
