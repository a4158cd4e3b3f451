"""Layouts that contradict themselves are refused, each with its reason."""

import astropy.units as u
import pytest

from whitefringe.errors import ScanLayoutError, UnitsError
from whitefringe.scans import ScanLayout

PM, NM = u.pm, u.nm


@pytest.mark.parametrize(
    ("settings", "message"),
    [
        ({"reference": 1}, "reference .* and reference_wavelength .* go together; only one is given"),
        ({"reference_wavelength": 633 * NM}, "go together; only one is given"),
        ({"opd_per_step": 37 * PM, "stage_per_step": 18 * PM}, "give opd_per_step or stage_per_step, not both"),
        (
            {"reference": 1, "reference_wavelength": 633 * NM, "opd_per_step": 37 * PM},
            "path comes from the reference channel: leave out opd_per_step",
        ),
        (
            {"reference": 1, "reference_wavelength": 633 * NM, "stage_per_step": 37 * PM},
            "path comes from the reference channel: leave out opd_per_step and stage_per_step",
        ),
        ({"passes": 3}, "passes must be 1, 2 or 4; got 3"),
        ({"passes": 0}, "passes must be 1, 2 or 4; got 0"),
        ({"passes": 2, "opd_per_step": 37 * PM}, "opd_per_step is path difference already: leave passes and index at 1"),
        ({"saturation": 100.0, "dark": 200.0}, r"saturation \(100\) must lie above dark \(200\)"),
        ({"saturation": 0.0}, r"saturation \(0\) must lie above dark \(0\)"),
        ({"saturation": float("nan")}, "dark and saturation must be finite numbers of counts"),
        ({"dark": float("nan")}, "dark"),
        ({"dark": float("-inf")}, "dark"),
    ],
)
def test_contradictions(settings, message):
    with pytest.raises(ScanLayoutError, match=message):
        ScanLayout(**settings)


@pytest.mark.parametrize(
    ("settings", "message"),
    [
        ({"opd_per_step": 37}, "opd_per_step must carry a unit"),
        ({"stage_per_step": 37.0}, "stage_per_step must carry a unit"),
        ({"opd_per_step": 37 * u.s}, "opd_per_step must be convertible to m"),
        ({"reference": 1, "reference_wavelength": 633}, "reference_wavelength must carry a unit"),
        ({"reference": 1, "reference_wavelength": 633 * u.kg}, "reference_wavelength must be convertible to m"),
    ],
)
def test_lengths_need_their_unit(settings, message):
    with pytest.raises(UnitsError, match=message):
        ScanLayout(**settings)


@pytest.mark.parametrize("name", ["opd_per_step", "stage_per_step"])
def test_a_step_has_a_length(name):
    with pytest.raises(ValueError, match=f"{name} must be above zero"):
        ScanLayout(**{name: 0 * PM})


@pytest.mark.parametrize("wavelength", [0 * NM, -633 * NM])
def test_the_reference_wavelength_is_above_zero(wavelength):
    with pytest.raises(ValueError, match="reference_wavelength must be above zero"):
        ScanLayout(reference=1, reference_wavelength=wavelength)


def test_path_per_step_counts_the_passes_of_the_stage_only():
    assert ScanLayout(opd_per_step=-37 * PM).opd_per_step_si == pytest.approx(-37e-12)
    assert ScanLayout(stage_per_step=37 * PM, passes=4).opd_per_step_si == pytest.approx(148e-12)
    assert ScanLayout(stage_per_step=-37 * PM, passes=2).opd_per_step_si == pytest.approx(-74e-12)
    assert ScanLayout().opd_per_step_si is None


def test_a_layout_cannot_be_changed():
    with pytest.raises(AttributeError):
        ScanLayout().passes = 2
