"""A scan that cannot give numbers is refused, and the message says what is wrong, where, and what to do."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe import spectra
from whitefringe.errors import (
    ConstantSignalError,
    InputError,
    PacketCutOffError,
    SaturatedError,
    ScanError,
    TooFewSamplesError,
    WhitefringeError,
)
from whitefringe.scans import reduce_scan, spectrum_from_scan

PATH = np.linspace(-60.0, 60.0, 601)
ROWS = np.arange(PATH.size)
REFERENCE = {"reference": 1, "reference_wavelength": 633 * u.nm}


@pytest.fixture(scope="module")
def counts(lamp_counts):
    return lamp_counts(PATH)


@pytest.mark.parametrize("per_fringe", [2.5, 3.0, 3.9])
def test_too_coarse_for_the_expected_light(lamp_scan, bench_light, truth, per_fringe):
    scan = lamp_scan(np.arange(-60, 60, truth["wavelength"] / per_fringe))
    with pytest.raises(TooFewSamplesError, match=rf"{per_fringe:.2f} samples per expected fringe; at least 4 are needed: scan more"):
        reduce_scan(scan, bench_light)


@pytest.mark.parametrize("per_fringe", [2.5, 3.0, 3.5])
def test_too_coarse_for_the_fringes_that_are_there(lamp_scan, truth, per_fringe):
    scan = lamp_scan(np.arange(-60, 60, truth["wavelength"] / per_fringe))
    with pytest.raises(TooFewSamplesError, match=r"\d\.\d\d samples per fringe; at least 4 are needed: scan more slowly") as caught:
        reduce_scan(scan)
    assert float(str(caught.value).split()[1]) == pytest.approx(per_fringe, rel=0.01)


def test_just_fine_enough(lamp_scan, bench_light, truth):
    result = reduce_scan(lamp_scan(np.arange(-60, 60, truth["wavelength"] / 4.2)), bench_light)
    assert result.samples_per_fringe == pytest.approx(4.2, rel=0.01)


def test_too_short(lamp_scan):
    with pytest.raises(TooFewSamplesError, match="31 samples are too few; a scan needs at least 32"):
        reduce_scan(lamp_scan(np.linspace(-3, 3, 31)))
    with pytest.raises(TooFewSamplesError, match="31 samples are too few"):
        spectrum_from_scan(lamp_scan(np.linspace(-3, 3, 31)))


def test_declared_saturation(scan_of, counts):
    level = np.sort(counts)[-3]
    first = int(np.flatnonzero(counts >= level)[0]) + 1
    with pytest.raises(SaturatedError, match=rf"3 of 601 samples are at or above the saturation level .* \(first at data row {first}\)"):
        reduce_scan(scan_of(PATH, counts, saturation=level))


def test_saturation_just_above_the_highest_sample_is_fine(scan_of, counts):
    assert reduce_scan(scan_of(PATH, counts, saturation=counts.max() + 1)).verdict is None


@pytest.mark.parametrize("level", [22_000, 24_000, 26_000, 30_000])
def test_undeclared_saturation(scan_of, counts, level):
    # the packet reaches 37 000 counts: eight samples a fringe, so that a clipped crest holds one to three of them
    with pytest.raises(SaturatedError, match=f"stays flat at its maximum {level}, as that of a saturated detector does"):
        reduce_scan(scan_of(PATH, np.minimum(counts, level)))


def test_coarse_digits_are_not_saturation(scan_of, counts):
    assert float(reduce_scan(scan_of(PATH, np.round(counts / 160))).contrast.value) == pytest.approx(0.85, abs=0.02)


def test_constant_signal(scan_of):
    with pytest.raises(ConstantSignalError, match="signal is 812 in every row: is the column right, the shutter open"):
        reduce_scan(scan_of(PATH, np.full(PATH.size, 812.0)))


@pytest.mark.parametrize(
    ("start", "stop", "side"),
    [(start, 60.0, "start") for start in (0.0, 1.0, 2.0, 3.0, 4.0, 6.0)] + [(-60.0, stop, "end") for stop in (8.0, 6.0, 5.0, 4.0, 3.0)],
)
def test_packet_cut_off(lamp_scan, start, stop, side):
    # half contrast is reached at 3.7 - 6.1 and 3.7 + 6.1 um
    message = f"packet is cut off: .* before the {side} of the scan .*um, greatest contrast at .*: move or widen the scan"
    with pytest.raises(PacketCutOffError, match=message):
        reduce_scan(lamp_scan(np.arange(start, stop, 0.2)))


@pytest.mark.parametrize(("start", "stop"), [(-4.0, 60.0), (-8.0, 60.0), (-12.0, 60.0), (-60.0, 11.0), (-60.0, 15.0), (-60.0, 20.0)])
def test_near_an_end_numbers_are_right_or_refused(lamp_scan, truth, start, stop):
    try:
        result = reduce_scan(lamp_scan(np.arange(start, stop, 0.2)))
    except PacketCutOffError:
        return
    for name in ("contrast", "opd_centre", "packet_width"):
        number = getattr(result, name)
        assert abs(number.value.value - truth[name]) < 5 * number.uncertainty.value, name


@pytest.mark.parametrize("missing", [3, 5, 6, 8])
def test_rows_missing_inside_the_packet_give_right_numbers_or_none(scan_of, counts, truth, missing):
    kept = np.delete(ROWS, np.arange(310, 310 + missing))
    try:
        result = reduce_scan(scan_of(PATH[kept], counts[kept]))
    except ScanError:
        return
    for name, value in truth.items():
        number = getattr(result, name)
        assert abs(number.value.value - value) < 5 * number.uncertainty.value, name


def test_a_line_lamp_has_no_packet_to_measure(lamp_scan):
    line = spectra.Spectrum(lines=(spectra.Line(wavelength=1.65 * u.um),))
    with pytest.raises(PacketCutOffError, match="does not fall to half"):
        reduce_scan(lamp_scan(PATH, light=line))


def test_backwards_position(scan_of, counts):
    zigzag = PATH.copy()
    zigzag[[300, 301]] = zigzag[[301, 300]]
    with pytest.raises(ScanError, match=r"runs backwards or stands still at data row 302 \(1 such rows\); record one sweep"):
        reduce_scan(scan_of(zigzag, counts))


def test_standing_position(scan_of, counts):
    standing = np.where(ROWS == 300, PATH[299], PATH)
    with pytest.raises(ScanError, match="runs backwards or stands still at data row 301"):
        reduce_scan(scan_of(standing, counts))


def test_the_row_counts_from_the_files_first_row(scan_of, lamp_counts):
    path = np.concatenate([np.full(20, PATH[0]), PATH])
    path[[320, 321]] = path[[321, 320]]
    with pytest.raises(ScanError, match="at data row 322"):
        reduce_scan(scan_of(path, lamp_counts(path)))


def test_there_and_back_again(scan_of, lamp_counts):
    path = np.concatenate([PATH, PATH[::-1]])
    with pytest.raises(ScanError, match="record one sweep per scan"):
        reduce_scan(scan_of(path, lamp_counts(path)))


def test_stage_that_does_not_move(scan_of, counts):
    with pytest.raises(ScanError, match="stage position does not change; is the position column right"):
        reduce_scan(scan_of(np.full(PATH.size, 1.0), counts))


@pytest.mark.parametrize("value", [np.nan, np.inf, -np.inf])
def test_samples_and_positions_that_are_not_finite(scan_of, counts, value):
    message = "not every sample and position is a finite number; leave such rows out first"
    with pytest.raises(ScanError, match=message):
        reduce_scan(scan_of(PATH, np.where(ROWS == 9, value, counts)))
    with pytest.raises(ScanError, match=message):
        reduce_scan(scan_of(np.where(ROWS == 9, value, PATH), counts))
    reference = np.where(ROWS == 9, value, counts)
    with pytest.raises(ScanError, match=message):
        reduce_scan(scan_of(PATH, counts, second=reference, **REFERENCE))


def test_a_dark_level_above_the_signal(scan_of, counts):
    with pytest.raises(ScanError, match="mean signal is not above the dark level 1e\\+06: contrast has no meaning"):
        reduce_scan(scan_of(PATH, counts, dark=1e6))
    with pytest.raises(ScanError, match="mean signal is not above the dark level: relative amplitudes have no meaning"):
        spectrum_from_scan(scan_of(PATH, counts, dark=1e6))


@pytest.mark.parametrize("dark", [19_000.0, 19_990.0])
def test_a_dark_level_that_makes_contrast_impossible(scan_of, counts, dark):
    # 20 000 counts on average: the packet's contrast would be 17 or more
    with pytest.raises(WhitefringeError, match="dark"):
        reduce_scan(scan_of(PATH, counts, dark=dark))


def test_unknown_definition(scan_of, counts):
    with pytest.raises(InputError, match="definition must be one of bandwidth, power, half, e-fold, first-null; got 'width'"):
        reduce_scan(scan_of(PATH, counts), definition="width")


@pytest.mark.parametrize("contrast", [0.0, -0.5, 1.2, float("nan")])
def test_impossible_expected_contrast(scan_of, counts, bench_light, contrast):
    with pytest.raises(InputError, match="expected_contrast must be above 0 and at most 1"):
        reduce_scan(scan_of(PATH, counts), bench_light, expected_contrast=contrast)
