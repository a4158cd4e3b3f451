"""A reference channel of known wavelength measures the path, drive errors and all."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe import fringes, spectra
from whitefringe.errors import ReferenceLostError, UnitsError
from whitefringe.scans import ScanLayout, reduce_scan
from whitefringe.units import STEP

LASER_UM = 0.6328
HALF_UM, STEP_UM = 40.0, 0.08
LAYOUT = {"reference": 1, "reference_wavelength": LASER_UM * u.um}


def drive(step=STEP_UM):
    """Nominal and true path [um]: rate errors of 4 % rms that put side-bands at +-14 %, and a scale that drifts by 1 %."""
    nominal = np.arange(-HALF_UM, HALF_UM + step / 2, step)
    wave = 2 * np.pi * 0.14 / LASER_UM
    true = nominal + 0.01 * (nominal + HALF_UM) ** 2 / (4 * HALF_UM) + 0.04 * np.sqrt(2) / wave * np.sin(wave * nominal)
    return nominal, true


@pytest.fixture(scope="module")
def record(lamp_counts):
    """Nominal path, signal and reference of one scan."""
    laser = spectra.Spectrum(lines=(spectra.Line(wavelength=LASER_UM * u.um),))

    def recorded(seed=0, **options):
        nominal, true = drive(**options)
        rng = np.random.default_rng(seed + 1000)
        reference = fringes.simulate_lamp_scan(laser, opd=true * u.um, rng=rng, contrast=0.6).counts
        return nominal, lamp_counts(true, seed=seed), reference

    return recorded


@pytest.mark.parametrize("seed", range(5))
@pytest.mark.parametrize("name", ["wavelength", "packet_width", "packet_width_fringes", "contrast"])
def test_the_reference_takes_out_the_drive_errors(record, scan_of, truth, name, seed):
    nominal, signal, reference = record(seed)
    number = getattr(reduce_scan(scan_of(nominal, signal, second=reference, **LAYOUT)), name)
    error = abs(number.value.value - truth[name])
    assert error < max(4 * number.uncertainty.value, 1e-3 * truth[name])


def test_without_the_reference_the_scale_is_wrong(record, scan_of, truth):
    nominal, signal, _ = record()
    wavelength = reduce_scan(scan_of(nominal, signal)).wavelength
    assert abs(wavelength.value.value - truth["wavelength"]) > 5 * wavelength.uncertainty.value


@pytest.mark.parametrize("seed", range(5))
def test_the_centre_is_right_within_its_uncertainty(record, scan_of, truth, seed):
    # the packet's place is counted from the position's zero, which the reference alone does not give
    nominal, signal, reference = record(seed)
    nearest = np.argmin(np.abs(drive()[1] - truth["opd_centre"]))
    centre = reduce_scan(scan_of(nominal, signal, second=reference, **LAYOUT)).opd_centre
    slack = abs(drive()[1] - nominal)[nearest]  # true minus nominal path at the packet: either may be meant
    assert abs(centre.value.value - truth["opd_centre"]) < 4 * centre.uncertainty.value + slack


def test_direction_comes_from_the_position(record, scan_of):
    nominal, signal, reference = record()
    there = reduce_scan(scan_of(nominal, signal, second=reference, **LAYOUT))
    back = reduce_scan(scan_of(nominal[::-1], signal[::-1], second=reference[::-1], **LAYOUT))
    mirrored = reduce_scan(scan_of(-nominal, signal, second=reference, **LAYOUT))
    assert there.opd_centre.value.value == pytest.approx(3.7, abs=0.5)
    assert back.opd_centre.value.value == pytest.approx(there.opd_centre.value.value, abs=1e-3)
    assert mirrored.opd_centre.value.value == pytest.approx(-there.opd_centre.value.value, abs=1e-3)
    assert back.wavelength.value.value == pytest.approx(there.wavelength.value.value, rel=1e-5)


def test_positions_may_be_bare_steps(record, scan_of):
    nominal, signal, reference = record()
    lengths = reduce_scan(scan_of(nominal, signal, second=reference, **LAYOUT))
    steps = reduce_scan(scan_of(nominal / STEP_UM, signal, unit=STEP, second=reference, **LAYOUT))
    assert steps.wavelength.value.value == pytest.approx(lengths.wavelength.value.value, rel=1e-9)
    assert steps.packet_width.unit == u.um
    assert "path rebuilt from the phase of the reference channel" in steps.notes


def test_a_drop_out_is_refused_and_its_row_named(record, scan_of):
    nominal, signal, reference = record()
    dark = reference.copy()
    dark[400:460] = np.random.default_rng(5).poisson(20_000, 60)
    scan = scan_of(nominal, signal, second=dark, **LAYOUT)
    with pytest.raises(ReferenceLostError, match=r"fade to \d% of their usual amplitude at data row 4[0-5]\d \(\d+ such rows\)"):
        reduce_scan(scan)


def test_a_constant_reference_is_refused(record, scan_of):
    nominal, signal, reference = record()
    scan = scan_of(nominal, signal, second=np.full(reference.size, 7.0), **LAYOUT)
    with pytest.raises(ReferenceLostError, match="reference channel is constant; is the column right, the lamp on"):
        reduce_scan(scan)


def test_a_reference_of_noise_is_refused(record, scan_of):
    nominal, signal, reference = record()
    noise = np.random.default_rng(6).poisson(20_000, reference.size)
    scan = scan_of(nominal, signal, second=noise, **LAYOUT)
    with pytest.raises(ReferenceLostError, match="reference channel shows no fringes above its noise"):
        reduce_scan(scan)


def test_a_reference_that_is_too_coarse_is_refused(record, scan_of):
    nominal, signal, reference = record(step=0.17)
    scan = scan_of(nominal, signal, second=reference, **LAYOUT)
    with pytest.raises(ReferenceLostError, match=r"reference has 3\.\d samples per fringe; at least 4 are needed"):
        reduce_scan(scan)


def test_the_reference_wavelength_needs_its_unit():
    with pytest.raises(UnitsError, match="reference_wavelength must carry a unit"):
        ScanLayout(reference=1, reference_wavelength=0.6328)
