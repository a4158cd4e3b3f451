"""Measured over predicted: outcomes that respect both the tolerance and the uncertainty."""

from dataclasses import replace

import astropy.units as u
import numpy as np
import pytest

from whitefringe import demo, spectra
from whitefringe.errors import InputError
from whitefringe.results import Measured
from whitefringe.scans import Comparison, Outcome, ScanLayout, Tolerances, compared, judged, overall, reduce_scan
from whitefringe.scans.scan import Scan
from whitefringe.units import STEP

INSIDE, OUTSIDE, UNDECIDED, NOT_MEASURED = Outcome.INSIDE, Outcome.OUTSIDE, Outcome.UNDECIDED, Outcome.NOT_MEASURED
TIGHT = Tolerances(contrast=(0.95, 1.05), wavelength=(0.995, 1.005), packet_width=(0.95, 1.05))


@pytest.mark.parametrize(
    ("value", "sigma", "outcome"),
    [
        (1.0, 0.0, INSIDE),
        (0.9, 0.0, INSIDE),
        (1.1, 0.0, INSIDE),
        (1.0, 0.0499, INSIDE),
        (1.0, 0.051, UNDECIDED),
        (1.09, 0.01, UNDECIDED),
        (1.11, 0.01, UNDECIDED),
        (1.13, 0.01, OUTSIDE),
        (0.87, 0.01, OUTSIDE),
        (0.88, 0.02, UNDECIDED),
        (5.0, 100.0, UNDECIDED),
        (np.nan, 0.01, NOT_MEASURED),
        (1.0, np.inf, NOT_MEASURED),
        (1.0, np.nan, NOT_MEASURED),
    ],
)
def test_judged(value, sigma, outcome):
    assert judged(value, sigma, (0.9, 1.1)) is outcome


@pytest.mark.parametrize(
    ("outcomes", "result"),
    [
        ([INSIDE, INSIDE], INSIDE),
        ([INSIDE, None], INSIDE),
        ([INSIDE, UNDECIDED], UNDECIDED),
        ([UNDECIDED, NOT_MEASURED], NOT_MEASURED),
        ([INSIDE, UNDECIDED, NOT_MEASURED, OUTSIDE], OUTSIDE),
        ([None, None], NOT_MEASURED),
        ([], NOT_MEASURED),
    ],
)
def test_overall(outcomes, result):
    assert overall(outcomes) is result
    assert overall(iter(reversed(outcomes))) is result


@pytest.mark.parametrize("name", ["contrast", "wavelength", "packet_width"])
@pytest.mark.parametrize("limits", [(1.1, 0.9), (1.0, 1.0), (-0.1, 1.0), (0.9,), (0.9, 1.0, 1.1), (np.nan, 1.0), (0.9, np.nan)])
def test_tolerances_are_low_and_high(name, limits):
    with pytest.raises(InputError, match=rf"tolerance {name} must be \(low, high\) with 0 <= low < high; got"):
        Tolerances(**{name: limits})


def test_a_tolerance_may_be_left_out():
    assert Tolerances(contrast=None).contrast is None


def comparison(value, sigma, tolerance=(0.9, 1.1)):
    measured = None if value is None else Measured(value=value * u.um, uncertainty=None if sigma is None else sigma * u.um)
    return Comparison(name="packet width", measured=measured, predicted=Measured(value=2000 * u.nm), tolerance=tolerance)


def test_ratio_has_no_unit_and_carries_the_relative_error():
    ratio = comparison(2.1, 0.02).ratio
    assert ratio.value.unit == u.dimensionless_unscaled
    assert float(ratio.value) == pytest.approx(1.05)
    assert float(ratio.uncertainty) == pytest.approx(0.01)
    assert ratio.definition == "packet width, measured over predicted"


def test_outcome_of_a_comparison():
    assert comparison(2.1, 0.02).outcome is INSIDE
    assert comparison(2.1, 0.06).outcome is UNDECIDED
    assert comparison(2.3, None).outcome is OUTSIDE
    assert comparison(None, None).outcome is NOT_MEASURED
    assert comparison(None, None).ratio is None
    assert comparison(2.1, 0.02, tolerance=None).outcome is None


@pytest.fixture(scope="module")
def upright(bench_light):
    return reduce_scan(demo.bench_scan(), bench_light, tolerances=TIGHT, expected_contrast=demo.CONTRAST)


def test_the_bench_scan_is_inside(upright):
    assert upright.verdict is INSIDE
    assert [item.name for item in upright.comparisons] == ["contrast", "wavelength", "packet width", "coherence length"]
    assert all(float(item.ratio.value) == pytest.approx(1, abs=4 * float(item.ratio.uncertainty)) for item in upright.comparisons)


def test_a_tilted_filter_is_outside_in_wavelength(bench_light):
    tilted = spectra.Tilted(filter=demo.bench_filter(), angle=demo.TILT, effective_index=1.8)
    result = reduce_scan(demo.bench_scan(tilted), bench_light, tolerances=TIGHT, expected_contrast=demo.CONTRAST)
    wavelength = result.comparisons[1]
    assert result.verdict is OUTSIDE
    assert wavelength.outcome is OUTSIDE
    # the lamp's slope across the band adds a little to the filter's own shift
    assert float(wavelength.ratio.value) == pytest.approx(tilted.factor, abs=2e-3)


def test_compared_says_the_same_as_reduce_scan(bench_light, upright):
    bare = reduce_scan(demo.bench_scan())
    assert bare.verdict is None
    assert bare.comparisons == ()
    again = compared(bare, bench_light, TIGHT, demo.CONTRAST)
    assert again.verdict is upright.verdict
    assert again.comparisons == upright.comparisons
    with pytest.raises(InputError, match="expected_contrast must be above 0"):
        compared(bare, bench_light, TIGHT, 0.0)


def test_a_bench_that_should_do_better_is_outside(bench_light):
    result = reduce_scan(demo.bench_scan(), bench_light, tolerances=TIGHT, expected_contrast=1.0)
    assert result.comparisons[0].outcome is OUTSIDE
    assert float(result.comparisons[0].ratio.value) == pytest.approx(0.85, abs=0.01)


def test_without_a_path_scale_the_width_is_compared_in_fringes(bench_light, truth):
    bench = demo.bench_scan()
    even = Scan(position=bench.position.to_value(u.um) * 10 * STEP, signals=bench.signals, layout=ScanLayout(dark=200, saturation=65_000))
    result = reduce_scan(even, bench_light, tolerances=TIGHT, expected_contrast=demo.CONTRAST)
    _, wavelength, width, length = result.comparisons
    assert result.wavelength is None
    assert wavelength.measured is None
    assert wavelength.outcome is NOT_MEASURED
    assert wavelength.reason.startswith("the scan has no path scale: give opd_per_step, or stage_per_step and passes")
    assert length.measured is None
    assert length.outcome is None
    assert width.measured == result.packet_width_fringes
    assert float(width.predicted.value) == pytest.approx(truth["packet_width_fringes"])
    assert width.outcome is INSIDE
    assert result.verdict is NOT_MEASURED
    free = replace(TIGHT, wavelength=None)
    assert compared(result, bench_light, free, demo.CONTRAST).verdict is INSIDE


def test_no_tolerance_at_all_decides_nothing(bench_light):
    none = Tolerances(contrast=None, wavelength=None, packet_width=None)
    assert reduce_scan(demo.bench_scan(), bench_light, tolerances=none).verdict is NOT_MEASURED
