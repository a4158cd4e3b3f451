"""Larkmoor's lamp bench: an invented filter curve, setup and recorded scans to try everything on.

Nothing here was measured. The curve is a formula, the scans come from `fringes.simulate_lamp_scan` with a fixed seed, and every file
says so. ``write_bench(folder)`` makes the files that lie in ``notebooks/larkmoor``.
"""

from __future__ import annotations

from pathlib import Path

import astropy.units as u
import numpy as np

from .demo_array import write_array
from .errors import FileContentError
from .fringes import simulate_lamp_scan
from .io import write_table, write_text
from .scans import Scan, ScanLayout
from .spectra import Filter, Tabulated, Thermal, Tilted, detected

SEED = 20261201
LAMP = Thermal(temperature=2900 * u.K)
CONTRAST = 0.85
TILT = 16 * u.deg
STAGE_HALF_RANGE_UM = 30.0
STAGE_STEP_UM = 0.1

SETUP_TEXT = """# Larkmoor lamp bench (invented): what `whitefringe measure` and the notebook read.
name = "Larkmoor lamp bench"

[source]
shape = "thermal"
temperature = "2900 K"

[[filter]]
shape = "table"
file = "bench_filter.ecsv"

[scan]
signal = "detector"
position = "stage"
passes = 2               # the mirror sends the light back on itself
saturation = 65000       # counts
dark = 200               # counts

[prediction]
contrast = 0.85          # what this bench shows at zero path difference
coherence_length = "bandwidth"

[tolerances]             # measured over predicted
contrast = [0.95, 1.05]
wavelength = [0.995, 1.005]
packet_width = [0.95, 1.05]
"""


def bench_filter() -> Tabulated:
    """Return the bench's invented filter curve: a 1.65 um band with a steep blue and a soft red edge and a ripple on top."""
    wavelength = np.arange(1400.0, 1901.0, 5.0)
    blue = 1 / (1 + np.exp(-(wavelength - 1515.0) / 7.0))
    red = 1 / (1 + np.exp((wavelength - 1775.0) / 13.0))
    ripple = 0.86 + 0.05 * np.cos(2 * np.pi * (wavelength - 1500.0) / 95.0)
    values = np.round(blue * red * ripple, 5)
    return Tabulated(wavelength=wavelength * u.nm, transmission_values=values, origin="Larkmoor bench filter (invented)")


def bench_scan(filter_in_beam: Filter | None = None, *, seed: int = SEED, contrast: float = CONTRAST) -> Scan:
    """Simulate one scan of the bench.

    Parameters
    ----------
    filter_in_beam : Filter, optional
        What really is in the beam; the bench's filter by default.
    seed : int
    contrast : float

    Returns
    -------
    Scan
        With an encoder that reads the stage's true, slightly uneven, positions.
    """
    rng = np.random.default_rng(seed)
    count = round(2 * STAGE_HALF_RANGE_UM / STAGE_STEP_UM) + 1
    even = np.linspace(-STAGE_HALF_RANGE_UM, STAGE_HALF_RANGE_UM, count)
    stage = even + 0.004 * np.sin(2 * np.pi * even / 7.3) + rng.normal(0, 0.0005, count)
    simulated = simulate_lamp_scan(
        detected(LAMP, filter_in_beam or bench_filter()),
        opd=2 * stage * u.um,
        rng=rng,
        photons_per_sample=20_000,
        contrast=contrast,
        opd_centre=3.7 * u.um,
        phase=0.6 * u.rad,
        drift=0.15,
        read_noise=12.0,
        dark=200.0,
    )
    layout = ScanLayout(signal="detector", position="stage", passes=2, saturation=65_000, dark=200)
    return Scan(
        position=stage * u.um,
        signals={"signal": simulated.counts},
        layout=layout,
        provenance={"origin": f"invented; whitefringe.demo.bench_scan, seed {seed}"},
    )


def write_bench(folder: str | Path, *, overwrite: bool = False) -> tuple[Path, ...]:
    """Write the bench's setup, filter curve and two scans (filter upright, filter tilted), and the array's setup, to a folder.

    Raises
    ------
    FileContentError
        The folder is missing, or one of the files exists and `overwrite` is false.
    """
    from astropy.table import Table

    folder = Path(folder)
    if not folder.is_dir():
        raise FileContentError(f"{folder}: no such folder; make it first")
    names = ("bench.toml", "bench_filter.ecsv", "bench_scan.ecsv", "bench_scan_tilted.ecsv", "array.toml")
    paths = tuple(folder / name for name in names)
    for path in paths:
        if path.exists() and not overwrite:
            raise FileContentError(f"{path}: the file exists; say overwrite=True (--overwrite) to replace it")
    curve = bench_filter()
    filter_table = Table(
        {"wavelength": curve.wavelength, "transmission": curve.transmission_values.value},
        meta={"description": "Larkmoor bench filter, invented; vacuum wavelengths; made by whitefringe.demo"},
    )
    write_table(filter_table, paths[1], overwrite=overwrite)
    tilted = Tilted(filter=curve, angle=TILT, effective_index=1.8)
    for path, in_beam, what in ((paths[2], curve, "filter upright"), (paths[3], tilted, f"filter tilted by {TILT}")):
        scan = bench_scan(in_beam)
        table = Table(
            {"stage": np.round(scan.position, 5), "detector": np.round(scan.signal)},
            meta={"description": f"Larkmoor lamp bench, {what}; {scan.provenance['origin']}"},
        )
        write_table(table, path, overwrite=overwrite)
    write_text(SETUP_TEXT, paths[0], overwrite=overwrite)
    write_array(folder, overwrite=overwrite)
    return paths
