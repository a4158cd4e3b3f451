"""Setup files: what they say is what is built."""

from pathlib import Path

import astropy.units as u
import pytest

from whitefringe import demo, spectra
from whitefringe.errors import CurveEndsWarning, InputError, SetupError
from whitefringe.scans import ScanLayout, Tolerances
from whitefringe.setup import Setup

LAMP = '[source]\nshape = "thermal"\ntemperature = "2900 K"\n'
BAND = '[[filter]]\nshape = "gaussian"\ncentre = "1.65 um"\nfwhm = "100 nm"\n'
GOOD = LAMP + BAND


@pytest.fixture
def write(tmp_path):
    def written(text, name="bench.toml"):
        path = tmp_path / name
        path.write_text(text, encoding="utf-8")
        return path

    return written


def test_the_demo_setup(tmp_path):
    setup = Setup.read(demo.write_bench(tmp_path)[0])
    assert setup.name == "Larkmoor lamp bench"
    assert setup.source == demo.LAMP
    assert setup.layout == ScanLayout(signal="detector", position="stage", passes=2, saturation=65_000, dark=200)
    assert setup.tolerances == Tolerances(contrast=(0.95, 1.05), wavelength=(0.995, 1.005), packet_width=(0.95, 1.05))
    assert setup.expected_contrast == demo.CONTRAST
    assert setup.definition == "bandwidth"
    assert setup.origin == str(tmp_path / "bench.toml")
    expected = spectra.detected(demo.LAMP, demo.bench_filter())
    assert spectra.mean_wavelength(setup.light).value == spectra.mean_wavelength(expected).value


def test_defaults(write):
    setup = Setup.read(write(GOOD))
    assert setup.filters == (spectra.Gaussian(centre=1.65 * u.um, fwhm=100 * u.nm),)
    assert (setup.name, setup.expected_contrast, setup.definition) == ("bench", 1.0, "bandwidth")
    assert (setup.layout, setup.tolerances) == (ScanLayout(), Tolerances())


def test_light_is_made_once(write):
    setup = Setup.read(write(GOOD))
    assert setup.light is setup.light


def test_filters_multiply(write):
    second = '[[filter]]\nshape = "top-hat"\ncentre = "1.65 um"\nwidth = "0.2 um"\n'
    setup = Setup.read(write(GOOD + second))
    assert [item.shape for item in setup.filters] == ["gaussian", "top-hat"]
    low, high = setup.light.extent_si
    assert (low, high) == pytest.approx(spectra.TopHat(centre=1.65 * u.um, width=0.2 * u.um).support_si)


def test_scan_lengths_are_read(write):
    text = '[scan]\nsignal = 0\nreference = 1\nposition = "stage"\nreference_wavelength = "632.8 nm"\n'
    layout = Setup.read(write(GOOD + text)).layout
    assert layout == ScanLayout(signal=0, reference=1, position="stage", reference_wavelength=632.8 * u.nm)
    steps = Setup.read(write(GOOD + '[scan]\nstage_per_step = "-37 pm"\npasses = 2\n')).layout
    assert steps.opd_per_step_si == pytest.approx(-74e-12)


def test_lines(write):
    text = """
    [source]
    shape = "lines"
    [[source.lines]]
    wavelength = "577.12 nm"
    strength = 0.7
    [[source.lines]]
    wavelength = "579.23 nm"
    fwhm = "1 GHz"
    profile = "lorentzian"
    """
    first, second = Setup.read(write(text)).light.lines
    assert first == spectra.Line(wavelength=577.12 * u.nm, strength=0.7)
    assert second == spectra.Line(wavelength=579.23 * u.nm, fwhm=1 * u.GHz, profile="lorentzian")


def test_a_curve_lies_beside_the_setup(write):
    write("wavelength,throughput\n1500,0\n1600,80\n1700,80\n1800,0\n", "curve.csv")
    text = LAMP + '[[filter]]\nshape = "table"\nfile = "curve.csv"\nwavelength_unit = "nm"\ntransmission_unit = "percent"\n'
    curve = Setup.read(write(text)).filters[0]
    assert float(curve.transmission(1650 * u.nm)) == pytest.approx(0.8)


def test_a_curve_that_ends_high_warns(write):
    write("wavelength [nm],throughput\n1500,0.8\n1600,0.8\n1700,0.8\n", "curve.csv")
    with pytest.warns(CurveEndsWarning, match="may be missing there"):
        Setup.read(write(LAMP + '[[filter]]\nshape = "table"\nfile = "curve.csv"\n'))


def test_light_without_end_is_refused(write):
    setup = Setup.read(write('[source]\nshape = "flat"\n'))
    with pytest.raises(InputError, match="nothing bounds the light: give at least one filter"):
        _ = setup.light


def test_files_that_cannot_be_read(tmp_path, write):
    with pytest.raises(SetupError, match=r"none.toml: no such setup file"):
        Setup.read(tmp_path / "none.toml")
    with pytest.raises(SetupError, match="cannot be read"):
        Setup.read(tmp_path)
    path = tmp_path / "latin.toml"
    path.write_bytes('name = "été"'.encode("latin-1"))
    with pytest.raises(SetupError, match=r"latin.toml: cannot be read"):
        Setup.read(path)


def test_any_alphabet(write):
    assert Setup.read(write('name = "Prüfstand 干涉"\n' + GOOD, "Prüfstand.toml")).name == "Prüfstand 干涉"


@pytest.mark.parametrize("contrast", [0.0, 1.1, float("nan")])
def test_a_setup_in_code_is_checked_as_well(contrast):
    with pytest.raises(InputError, match="expected_contrast must be above 0 and at most 1"):
        Setup(source=demo.LAMP, expected_contrast=contrast)


def test_an_unknown_definition_in_code():
    with pytest.raises(InputError, match=r"definition must be one of bandwidth, .*; got 'width'"):
        Setup(source=demo.LAMP, definition="width")


def test_the_setup_in_the_documentation(tmp_path):
    from whitefringe import setup

    demo.write_bench(tmp_path)
    text = "\n".join(line[4:] for line in setup.__doc__.splitlines() if line.startswith("    "))
    path = Path(tmp_path, "documented.toml")
    path.write_text(text, encoding="utf-8")
    assert Setup.read(path).name == "lamp bench"
