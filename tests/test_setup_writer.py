"""A setup that is written is the same setup when it is read again."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe import demo, spectra
from whitefringe.coherence import self_coherence_si
from whitefringe.errors import SetupError
from whitefringe.scans import ScanLayout, Tolerances
from whitefringe.setup import Setup

BAND = spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um)
TAU = np.linspace(0, 3e-13, 50)
CASES = {
    "demo": Setup(source=demo.LAMP, filters=(demo.bench_filter(),)),
    "everything in the beam": Setup(
        source=spectra.Diode(centre=1.6 * u.um, fwhm=90 * u.nm),
        filters=(
            BAND.warmed(by=10 * u.K, drift=0.02 * u.nm / u.K)
            .tilted(angle=4 * u.deg, effective_index=2.0)
            .in_cone(f_number=5, effective_index=2.0, obstruction=0.2)
            .with_leak(1e-3, low=1.2 * u.um, high=2.0 * u.um),
        ),
    ),
    "two filters": Setup(source=spectra.Flat(), filters=(spectra.MultiCavity(centre=1.6 * u.um, fwhm=20 * u.nm, cavities=3), BAND)),
    "lines": Setup(
        source=spectra.Lines([spectra.Line(wavelength=589.158 * u.nm, fwhm=1 * u.GHz, strength=2), spectra.Line(wavelength=589.756 * u.nm)])
    ),
    "lamp": Setup(
        source=spectra.Lamp.named("sodium", temperature=500 * u.K), filters=(spectra.TopHat(centre=590 * u.nm, width=20 * u.nm),)
    ),
    "laser": Setup(source=spectra.SingleModeLaser(wavelength=633 * u.nm, linewidth=1 * u.MHz)),
    "layout": Setup(
        source=demo.LAMP,
        filters=(BAND,),
        layout=ScanLayout(signal=0, reference=1, position=5, reference_wavelength=546.1 * u.nm, dark=12.5),
        tolerances=Tolerances(contrast=None, coherence_length=(0.9, 1.1)),
        expected_contrast=0.8,
        definition="half",
        channels=7,
        name='a "bench"',
    ),
}


@pytest.mark.parametrize("case", CASES)
def test_what_is_written_is_read_again(case, tmp_path):
    setup = CASES[case]
    files = setup.write(tmp_path / "made.toml")
    again = Setup.read(files[0])
    assert np.max(np.abs(self_coherence_si(setup.light, TAU) - self_coherence_si(again.light, TAU))) < 1e-11
    for name in ("layout", "tolerances", "expected_contrast", "definition", "channels", "name"):
        assert getattr(again, name) == getattr(setup, name)
    assert sorted(tmp_path.iterdir()) == sorted(files)


def test_files_are_kept_unless_told(tmp_path):
    setup = CASES["demo"]
    setup.write(tmp_path / "made.toml")
    (tmp_path / "made.toml").unlink()
    with pytest.raises(SetupError, match=r"made_filter1\.ecsv: the file exists; say overwrite=True"):
        setup.write(tmp_path / "made.toml")
    assert not (tmp_path / "made.toml").exists()
    assert len(setup.write(tmp_path / "made.toml", overwrite=True)) == 2


def test_what_no_file_can_hold(tmp_path):
    both = spectra.Together(sources=(demo.LAMP, spectra.Diode(centre=1.6 * u.um, fwhm=50 * u.nm)))
    with pytest.raises(SetupError, match="source: a sum is not written to setup files"):
        Setup(source=both, filters=(BAND,)).write(tmp_path / "sum.toml")
    odd = BAND.in_cone(f_number=5, effective_index=2.0).tilted(angle=4 * u.deg, effective_index=1.8)
    with pytest.raises(SetupError, match=r"filter\[0\]: its effects in the beam are in an order"):
        Setup(source=demo.LAMP, filters=(odd,)).write(tmp_path / "odd.toml")
    assert list(tmp_path.iterdir()) == []
