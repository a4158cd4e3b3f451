"""`Scan` keeps what was recorded, and refuses what does not fit together."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import ScanLayoutError
from whitefringe.scans import Scan, ScanLayout
from whitefringe.units import STEP


def test_arrays_are_copied_and_read_only():
    position, counts = np.arange(40.0) * u.um, np.arange(40.0)
    scan = Scan(position=position, signals={"signal": counts})
    counts[0] = position.value[0] = 99.0
    assert scan.signal[0] == scan.position.value[0] == 0.0
    with pytest.raises(ValueError, match="read-only"):
        scan.signal[0] = 1.0
    with pytest.raises(ValueError, match="read-only"):
        scan.position[0] = 1.0 * u.um
    with pytest.raises(TypeError):
        scan.signals["signal"] = counts


def test_length_and_name():
    scan = Scan(position=np.arange(40) * STEP, signals={"signal": np.arange(40)})
    assert len(scan) == 40
    assert scan.name == "scan"
    named = Scan(position=scan.position, signals=scan.signals, provenance={"path": "some/where/night.csv"})
    assert named.name == "night.csv"


@pytest.mark.parametrize("position", [np.arange(4.0), np.arange(4.0) * u.kg, [0, 1, 2, 3]])
def test_positions_carry_a_length_or_steps(position):
    with pytest.raises(ScanLayoutError, match=r"position must be a Quantity \(a length, or units.STEP"):
        Scan(position=position, signals={"signal": np.arange(4)})


def test_positions_in_seconds_are_refused():
    with pytest.raises(ScanLayoutError, match="position"):
        Scan(position=np.arange(40) * u.s, signals={"signal": np.arange(40)})


def test_a_signal_is_needed():
    with pytest.raises(ScanLayoutError, match='signals must hold "signal"; got detector'):
        Scan(position=np.arange(4) * u.um, signals={"detector": np.arange(4)})
    with pytest.raises(ScanLayoutError, match='signals must hold "signal"; got nothing'):
        Scan(position=np.arange(4) * u.um, signals={})


def test_a_reference_of_the_layout_is_needed():
    layout = ScanLayout(reference=1, reference_wavelength=633 * u.nm)
    with pytest.raises(ScanLayoutError, match='names a reference channel, but signals hold no "reference"'):
        Scan(position=np.arange(4) * STEP, signals={"signal": np.arange(4)}, layout=layout)


@pytest.mark.parametrize(("name", "counts"), [("signal", np.arange(5)), ("other", np.ones((4, 1)))])
def test_one_number_per_position(name, counts):
    signals = {"signal": np.arange(4), name: counts}
    with pytest.raises(ScanLayoutError, match=rf"{name} has shape .* but position has \(4,\)"):
        Scan(position=np.arange(4) * u.um, signals=signals)


def test_time_carries_a_unit():
    with pytest.raises(ScanLayoutError, match="time must be a Quantity"):
        Scan(position=np.arange(4) * u.um, signals={"signal": np.arange(4)}, time=np.arange(4))
