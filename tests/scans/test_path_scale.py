"""One packet, recorded in many ways: the numbers follow the path difference, with its sign."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.scans import reduce_scan
from whitefringe.units import STEP

PATH = np.linspace(-60.0, 60.0, 601)
PATH_PER_STEP_UM = 0.2
NUMBERS = ("contrast", "opd_centre", "packet_width", "packet_width_fringes", "wavelength")


def numbers(result, without=()):
    kept = [name for name in NUMBERS if name not in without]
    return {name: getattr(result, name).value.value for name in kept} | {
        f"{name} error": getattr(result, name).uncertainty.value for name in kept
    }


def assert_same(result, other, rel=1e-9, without=()):
    assert numbers(result, without) == pytest.approx(numbers(other, without), rel=rel, abs=1e-9)


@pytest.fixture(scope="module")
def counts(lamp_counts):
    return lamp_counts(PATH)


@pytest.fixture(scope="module")
def plain(scan_of, counts):
    """Position is the path difference; the packet lies at +3.7 um, off the middle of the scan."""
    return reduce_scan(scan_of(PATH, counts))


def test_the_plain_scan_is_right(plain, truth):
    for name, value in truth.items():
        number = getattr(plain, name)
        assert abs(number.value.value - value) < 4 * number.uncertainty.value, name


@pytest.mark.parametrize("passes", [1, 2, 4])
def test_positions_that_are_lengths_count_once_a_pass(scan_of, counts, plain, passes):
    assert_same(reduce_scan(scan_of(PATH / passes, counts, passes=passes)), plain)


@pytest.mark.parametrize("unit", [u.nm, u.mm, u.m])
def test_the_unit_of_the_position_does_not_matter(scan_of, counts, plain, unit):
    assert_same(reduce_scan(scan_of((PATH * u.um).to_value(unit), counts, unit=unit)), plain)


@pytest.mark.parametrize(
    "layout",
    [
        {"opd_per_step": PATH_PER_STEP_UM * u.um},
        {"stage_per_step": PATH_PER_STEP_UM * u.um},
        {"stage_per_step": PATH_PER_STEP_UM / 2 * u.um, "passes": 2},
        {"stage_per_step": PATH_PER_STEP_UM / 4 * u.um, "passes": 4},
    ],
)
def test_steps_of_known_length(scan_of, counts, plain, layout):
    assert_same(reduce_scan(scan_of(PATH / PATH_PER_STEP_UM, counts, unit=STEP, **layout)), plain)


@pytest.mark.parametrize(
    "layout", [{"opd_per_step": -PATH_PER_STEP_UM * u.um}, {"stage_per_step": -PATH_PER_STEP_UM / 2 * u.um, "passes": 2}]
)
def test_a_negative_step_mirrors_the_centre_only(scan_of, counts, plain, layout):
    mirrored = reduce_scan(scan_of(PATH / PATH_PER_STEP_UM, counts, unit=STEP, **layout))
    assert_same(mirrored, plain, rel=1e-6, without=("opd_centre",))
    assert mirrored.opd_centre.to_value(u.um) == pytest.approx(-plain.opd_centre.to_value(u.um), abs=1e-6)
    assert mirrored.opd_centre.to_value(u.um) == pytest.approx(-3.7, abs=0.05)


def test_a_negative_step_with_falling_steps_is_the_plain_scan(scan_of, counts, plain):
    scan = scan_of(-PATH / PATH_PER_STEP_UM, counts, unit=STEP, opd_per_step=-PATH_PER_STEP_UM * u.um)
    assert_same(reduce_scan(scan), plain)


def test_a_scan_that_runs_backwards_gives_the_same(scan_of, counts, plain):
    assert_same(reduce_scan(scan_of(PATH[::-1], counts[::-1])), plain)


@pytest.mark.parametrize("shift", [-500.0, 12.5, 1e4])
def test_shifting_the_position_shifts_the_centre_only(scan_of, counts, plain, shift):
    shifted = reduce_scan(scan_of(PATH + shift, counts))
    assert_same(shifted, plain, rel=1e-6, without=("opd_centre",))
    assert shifted.opd_centre.to_value(u.um) - shift == pytest.approx(plain.opd_centre.to_value(u.um), abs=1e-6)


@pytest.mark.parametrize("scale", [1e-6, 0.37, 1e6])
def test_the_scale_of_the_counts_does_not_matter(scan_of, counts, plain, scale):
    assert_same(reduce_scan(scan_of(PATH, counts * scale)), plain, rel=1e-7)


def test_a_dark_level_that_the_layout_states_does_not_matter(scan_of, counts, plain):
    assert_same(reduce_scan(scan_of(PATH, counts + 321.0, dark=321.0)), plain)


def test_a_dark_level_that_is_not_stated_lowers_the_contrast(scan_of, counts, plain):
    lowered = reduce_scan(scan_of(PATH, counts + 20_000.0))
    assert float(lowered.contrast.value) == pytest.approx(0.5 * float(plain.contrast.value), rel=5e-3)


def test_stretching_the_path_stretches_every_length(scan_of, counts, plain):
    stretched = reduce_scan(scan_of(1.5 * PATH, counts))
    assert_same(stretched, plain, without=("opd_centre", "packet_width", "wavelength"))
    for name in ("opd_centre", "packet_width", "wavelength", "fringe_period", "coherence_length"):
        assert getattr(stretched, name).value.value == pytest.approx(1.5 * getattr(plain, name).value.value), name


def test_without_a_scale_results_are_in_steps(scan_of, counts, plain):
    result = reduce_scan(scan_of(PATH / PATH_PER_STEP_UM, counts, unit=STEP))
    assert result.wavelength is None
    assert result.packet_width.unit == STEP
    assert result.packet_width.value.value * PATH_PER_STEP_UM == pytest.approx(plain.packet_width.value.value)
    assert result.opd_centre.value.value * PATH_PER_STEP_UM == pytest.approx(plain.opd_centre.value.value)
    assert result.packet_width_fringes.value.value == pytest.approx(plain.packet_width_fringes.value.value)
    assert any("length of a step is not known" in note for note in result.notes)


def test_uneven_steps_are_resampled_and_noted(lamp_scan, truth):
    uneven = PATH + 0.06 * np.sin(2 * np.pi * PATH / 7.3)
    result = reduce_scan(lamp_scan(uneven))
    assert any("resampled to even steps" in note for note in result.notes)
    for name, value in truth.items():
        number = getattr(result, name)
        assert abs(number.value.value - value) < 4 * number.uncertainty.value, name


def test_rows_where_the_stage_stands_are_left_out_and_noted(lamp_counts, scan_of, plain):
    path = np.concatenate([np.full(20, PATH[0]), PATH, np.full(10, PATH[-1])])
    result = reduce_scan(scan_of(path, lamp_counts(path, seed=3)))
    assert "30 rows left out where the stage starts or stops" in result.notes
    assert abs(result.opd_centre.value - 3.7 * u.um) < 4 * result.opd_centre.uncertainty


def test_curves_are_those_of_the_scan(scan_of, counts):
    result = reduce_scan(scan_of(PATH, counts))
    curves = result.curves
    assert curves.unit == u.m
    np.testing.assert_allclose(curves.axis, PATH * 1e-6, atol=1e-12)
    assert curves.signal.mean() == pytest.approx(1.0, abs=0.01)
    top = np.argmax(curves.envelope)
    assert curves.axis[top] * 1e6 == pytest.approx(3.7, abs=0.5)
    assert curves.envelope[top] == pytest.approx(float(result.contrast.value), rel=0.01)
    near = np.abs(PATH - 3.7) < 6
    # what is left of the recorded signal after the fringes is photon noise, 1 / sqrt(20000)
    assert np.std((curves.signal - curves.fringes)[near]) < 2 / np.sqrt(20_000)
