"""The coherence length of a measured packet is that of its light, by every definition."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe import coherence, demo, spectra
from whitefringe.errors import PacketCutOffError, UndefinedWidthError
from whitefringe.scans import reduce_scan
from whitefringe.scans._coherence import DEFINITIONS_MEASURED

DEFINITIONS = [item.name for item in coherence.COHERENCE_DEFINITIONS]


@pytest.mark.parametrize("definition", DEFINITIONS)
@pytest.mark.parametrize("seed", [demo.SEED, 1, 2, 3])
def test_agrees_with_the_light(bench_light, definition, seed):
    true = coherence.coherence_length(bench_light, definition).value
    measured = reduce_scan(demo.bench_scan(seed=seed), definition=definition).coherence_length
    assert abs(measured.value - true) < 3 * measured.uncertainty
    assert measured.uncertainty < 0.05 * true
    assert measured.definition.startswith(f"{definition}: ")


@pytest.mark.parametrize("definition", ["power", "half", "e-fold", "first-null"])
def test_error_bars_are_neither_small_nor_idle(bench_light, definition):
    true = coherence.coherence_length(bench_light, definition).value
    results = [reduce_scan(demo.bench_scan(seed=seed), definition=definition).coherence_length for seed in range(64)]
    pulls = np.array([float((result.value - true) / result.uncertainty) for result in results])
    assert abs(pulls.mean()) < 4 * pulls.std(ddof=1) / 8 if definition != "power" else abs(pulls.mean()) < 1
    # by power the error holds a bound for the tails beyond the scan, not only noise
    assert (0.2 if definition == "power" else 0.75) < pulls.std(ddof=1) < 1.25


@pytest.mark.parametrize("definition", DEFINITIONS)
def test_nothing_else_depends_on_the_definition(definition):
    scan = demo.bench_scan()
    one, other = reduce_scan(scan), reduce_scan(scan, definition=definition)
    for name in ("contrast", "opd_centre", "packet_width", "wavelength"):
        assert getattr(one, name) == getattr(other, name)


@pytest.mark.parametrize("definition", ["bandwidth", "power", "half", "e-fold"])
def test_a_gaussian_light(lamp_scan, definition):
    light = spectra.detected(spectra.Flat(), spectra.Gaussian(centre=1.65 * u.um, fwhm=12 * u.THz))
    true = coherence.coherence_length(light, definition).value
    path = np.linspace(-120, 120, 1201)
    measured = reduce_scan(lamp_scan(path, light=light), definition=definition).coherence_length
    assert abs(measured.value - true) < 3 * measured.uncertainty
    assert measured.uncertainty < 0.05 * true


def test_a_gaussian_light_has_no_null(lamp_scan):
    light = spectra.detected(spectra.Flat(), spectra.Gaussian(centre=1.65 * u.um, fwhm=12 * u.THz))
    scan = lamp_scan(np.linspace(-120, 120, 1201), light=light)
    result = reduce_scan(scan, definition="first-null")
    assert "no null with a side lobe beyond it above the noise; use another definition" in result.coherence_length
    assert dict(result.rows)["coherence length"] == result.coherence_length
    assert result.contrast == reduce_scan(scan).contrast


def test_a_packet_that_does_not_fall_to_1_over_e(lamp_scan):
    # half contrast lies inside this scan, 1/e (3.7 + 7.1 um) beyond it
    scan = lamp_scan(np.arange(-60, 10.4, 0.2))
    with pytest.raises((UndefinedWidthError, PacketCutOffError), match=r"does not fall to (0.368 of its peak|half)"):
        reduce_scan(scan, definition="e-fold")


def test_measured_and_predicted_definitions_have_the_same_names():
    assert list(DEFINITIONS_MEASURED) == [item.name for item in coherence.COHERENCE_DEFINITIONS]
