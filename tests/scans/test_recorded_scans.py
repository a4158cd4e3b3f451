"""Two scans recorded on a real bench; their answers are in the README beside them."""

from pathlib import Path

import astropy.units as u
import pytest

from whitefringe.scans import ScanLayout, read_scan, reduce_scan, spectrum_from_scan

DATA = Path(__file__).resolve().parents[3] / "shared" / "data"
pytestmark = pytest.mark.shared_data

# mercury lines in air (handbook); the refractive index of air is the same for both to 1e-7
YELLOW_NM = (576.960, 579.066)
VACUUM_OVER_AIR = 1.000277


def recorded(name):
    path = DATA / name
    if not path.is_file():
        pytest.skip(f"the recorded scan {name} is not beside this repository (shared/data)")
    return path


@pytest.fixture(scope="module")
def mercury():
    layout = ScanLayout(signal=0, reference=1, position=5, reference_wavelength=546.1 * u.nm)
    return spectrum_from_scan(read_scan(recorded("mercury_yellow_two_channels.txt"), layout))


@pytest.fixture(scope="module")
def white():
    return reduce_scan(read_scan(recorded("bandpass_white_light.txt"), ScanLayout(signal=0, position=5)))


def test_mercury_yellow_line_ratio(mercury):
    longer, shorter = (line.wavelength.value for line in mercury.lines[:2])
    assert float(longer / shorter) == pytest.approx(1.003650, abs=2e-5)
    assert YELLOW_NM[1] / YELLOW_NM[0] == pytest.approx(1.003650, abs=1e-6)


def test_mercury_yellow_beat_period(mercury):
    assert mercury.beat_period.to_value(u.um) == pytest.approx(158.6, rel=3e-3)


def test_mercury_yellow_wavelengths_are_those_of_the_handbook_but_for_the_common_shift(mercury):
    # the common shift of -1.1e-4 is that of the two detectors' paths; the reference line is 546.1 nm where 546.227 is in vacuum
    for line, air in zip(mercury.lines, reversed(YELLOW_NM), strict=True):
        assert line.wavelength.to_value(u.nm) == pytest.approx(air * VACUUM_OVER_AIR, rel=5e-4)


def test_no_side_band_of_the_drive_passes_for_a_line(mercury):
    assert len(mercury.lines) == 2


def test_reference_and_run_up_are_noted(mercury):
    assert any("reference channel" in note for note in mercury.notes)


def test_band_pass_packet_width_in_fringes(white):
    assert white.packet_width_fringes.to_value(u.dimensionless_unscaled) == pytest.approx(60.5, abs=0.8)


def test_band_pass_fringe_period_in_steps(white):
    assert white.fringe_period.value.value == pytest.approx(14_640, rel=0.01)
    assert white.wavelength is None


def test_band_pass_contrast_is_possible(white):
    assert 0 < white.contrast.value < 1
