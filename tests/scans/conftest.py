"""Simulated scans with known truth, shared by the tests of this folder."""

from collections.abc import Callable
from typing import Any

import astropy.units as u
import numpy as np
import pytest

from whitefringe import coherence, demo, fringes, spectra
from whitefringe.scans import Scan, ScanLayout
from whitefringe.spectra import Spectrum

CENTRE_UM = 3.7
CONTRAST = 0.85
PATH_UM = np.linspace(-60.0, 60.0, 601)


@pytest.fixture(scope="session")
def bench_light() -> Spectrum:
    """The light of the invented bench."""
    return spectra.detected(demo.LAMP, demo.bench_filter())


@pytest.fixture(scope="session")
def truth(bench_light: Spectrum) -> dict[str, float]:
    """What went into the bench's scans, by the names of `ScanResult`, in um."""
    width = coherence.packet_width(bench_light).to_value(u.um)
    wavelength = spectra.mean_wavelength(bench_light).to_value(u.um)
    return {
        "opd_centre": CENTRE_UM,
        "contrast": CONTRAST,
        "packet_width": width,
        "packet_width_fringes": width / wavelength,
        "wavelength": wavelength,
    }


@pytest.fixture(scope="session")
def lamp_counts(bench_light: Spectrum) -> Callable[..., Any]:
    """Counts of one scan of the bench's light on a path axis [um]."""

    def counts(path_um: Any = PATH_UM, *, seed: int = 0, light: Spectrum | None = None, **options: Any) -> Any:
        settings = {"contrast": CONTRAST, "opd_centre": CENTRE_UM * u.um, "phase": 0.6 * u.rad, **options}
        rng = np.random.default_rng(seed)
        return fringes.simulate_lamp_scan(light or bench_light, opd=path_um * u.um, rng=rng, **settings).counts

    return counts


@pytest.fixture(scope="session")
def scan_of() -> Callable[..., Scan]:
    """A `Scan` from bare arrays: position [um by default], counts, layout settings."""

    def build(position: Any, counts: Any, *, unit: Any = u.um, second: Any = None, **layout: Any) -> Scan:
        signals = {"signal": counts} if second is None else {"signal": counts, "reference": second}
        return Scan(position=np.asarray(position) * unit, signals=signals, layout=ScanLayout(**layout))

    return build


@pytest.fixture(scope="session")
def lamp_scan(lamp_counts: Callable[..., Any], scan_of: Callable[..., Scan]) -> Callable[..., Scan]:
    """A scan whose position is the path difference itself."""
    return lambda path_um=PATH_UM, **options: scan_of(path_um, lamp_counts(path_um, **options))


@pytest.fixture(scope="session")
def noise_scan(scan_of: Callable[..., Scan]) -> Callable[[int], Scan]:
    """White light without a fringe: photon noise only, 20 000 photons a sample."""
    return lambda seed: scan_of(PATH_UM, np.random.default_rng(seed).poisson(20_000, PATH_UM.size))
