"""Sources and train parts in setup files: what is built, and that faults carry their key."""

import re

import astropy.units as u
import pytest

from whitefringe import spectra
from whitefringe.errors import InputError, SetupError
from whitefringe.setup import Setup, caution_of
from whitefringe.spectra import LASER_CAUTION

BAND = '\n[[filter]]\nshape = "top-hat"\ncentre = "1.6 um"\nwidth = "0.2 um"\n'
THERMAL = '[source]\nshape = "thermal"\ntemperature = "2900 K"\n'
SUM = '[source]\nshape = "sum"\nweights = [1, 1e11]\n[[source.sources]]\nshape = "thermal"\ntemperature = "2900 K"\n[[source.sources]]\n'
TABLE = '[source]\nshape = "table"\nfile = "lamp.csv"\nquantity = "power"\nper = "wavelength"\nwavelength_unit = "nm"\n'


@pytest.fixture
def read(tmp_path):
    (tmp_path / "lamp.csv").write_text("wavelength,flux\n1500,0\n1600,2\n1700,0\n")
    (tmp_path / "grey.csv").write_text("wavelength [um],value\n1.4,0.40\n1.8,0.30\n")

    def reading(text):
        path = tmp_path / "bench.toml"
        path.write_text(text, encoding="utf-8")
        return Setup.read(path)

    return reading


BUILT = {
    "single-mode-laser": (
        'shape = "single-mode-laser"\nwavelength = "633 nm"\nlinewidth = "1 MHz"\nprofile = "gaussian"',
        spectra.SingleModeLaser(wavelength=633 * u.nm, linewidth=1 * u.MHz, profile="gaussian"),
    ),
    "multimode-laser": (
        'shape = "multimode-laser"\nwavelength = "633 nm"\ncavity_length = "15 cm"\ngain_fwhm = "1.5 GHz"\nmodes = 3\nlinewidth = "1 kHz"',
        spectra.MultimodeLaser(wavelength=633 * u.nm, cavity_length=15 * u.cm, gain_fwhm=1.5 * u.GHz, modes=3, linewidth=1 * u.kHz),
    ),
    "lamp": ('shape = "lamp"\nname = "mercury"', spectra.Lamp.named("mercury")),
    "lamp with options": (
        'shape = "lamp"\nname = "sodium"\nonly = ["589.0 nm", "589.6 nm"]\nstrengths = [2, 1]\ntemperature = "500 K"\nlifetime = "16 ns"',
        spectra.Lamp(name="sodium", only=(589.0 * u.nm, 589.6 * u.nm), strengths=(2, 1), temperature=500 * u.K, lifetime=16 * u.ns),
    ),
    "one line": ('shape = "lamp"\nname = "mercury"\nonly = "546.1 nm"', spectra.Lamp(name="mercury", only=546.1 * u.nm)),
    "diode with ripple": (
        'shape = "diode"\ncentre = "1.55 um"\nfwhm = "60 nm"\nripple = 0.1\nripple_period = "0.9 nm"',
        spectra.Diode(centre=1.55 * u.um, fwhm=60 * u.nm, ripple=0.1, ripple_period=0.9 * u.nm),
    ),
}


@pytest.mark.parametrize(("text", "expected"), BUILT.values(), ids=BUILT.keys())
def test_what_is_written_is_built(read, text, expected):
    assert read(f"[source]\n{text}\n").source == expected


def test_the_light_of_a_laser_and_of_a_lamp(read):
    assert len(read("[source]\n" + BUILT["multimode-laser"][0]).light.lines) == 3
    assert len(read("[source]\n" + BUILT["lamp with options"][0]).light.lines) == 2


@pytest.mark.parametrize("name", ["single-mode-laser", "multimode-laser"])
def test_a_laser_brings_its_caution(read, name):
    assert caution_of(read("[source]\n" + BUILT[name][0])) == LASER_CAUTION
    assert caution_of(read("[source]\n" + BUILT["lamp"][0])) == ""


def test_a_laser_in_a_sum_brings_its_caution(read):
    setup = read(SUM + 'shape = "single-mode-laser"\nwavelength = "1.55 um"\nlinewidth = "1 MHz"\n' + BAND)
    assert caution_of(setup) == LASER_CAUTION
    assert [source.shape for source in setup.source.sources] == ["thermal", "single-mode-laser"]
    assert setup.source.weights == (1.0, 1e11)
    assert setup.light.lines[0].strength == 1e11


def test_a_sum_without_weights_and_of_sums(read):
    inner = '[[source.sources.sources]]\nshape = "flat"\n[[source.sources.sources]]\nshape = "lines"\n'
    line = '[[source.sources.sources.lines]]\nwavelength = "1.6 um"\n'
    setup = read('[source]\nshape = "sum"\n[[source.sources]]\nshape = "sum"\n' + inner + line)
    assert setup.source.weights == (1.0,)
    assert [source.shape for source in setup.source.sources[0].sources] == ["flat", "lines"]


def test_a_tabulated_source_lies_beside_the_setup(read):
    source = read(TABLE + 'medium = "vacuum"\n').source
    assert (source.quantity, source.per) == ("power", "wavelength")
    assert source.points[1].tolist() == [0, 2, 0]


def test_an_emissivity_lies_beside_the_setup(read):
    setup = read(THERMAL + 'emissivity = { file = "grey.csv" }\n' + BAND)
    assert float(setup.source.emissivity.at(1.6 * u.um)) == pytest.approx(0.35)
    assert setup.light.total_rate > 0


def test_train_parts_are_filters(read):
    train = (
        '[[filter]]\nshape = "mirrors"\nreflectivity = 0.97\ncount = 11\n'
        '[[filter]]\nshape = "windows"\nthroughput = 0.92\n'
        '[[filter]]\nshape = "detector"\nefficiency = { file = "grey.csv", value_column = "value" }\n'
    )
    setup = read(THERMAL + BAND + train)
    assert [item.shape for item in setup.filters] == ["top-hat", "mirrors", "windows", "detector"]
    assert setup.filters[1:3] == (spectra.Mirrors(reflectivity=0.97, count=11), spectra.Windows(throughput=0.92))
    assert float(setup.filters[3].transmission(1.6 * u.um)) == pytest.approx(0.35)
    assert setup.light.total_rate > 0


def test_an_emissivity_that_ends_within_the_light(read):
    setup = read(THERMAL + 'emissivity = { file = "grey.csv" }\n' + BAND.replace("1.6 um", "1.75 um"))
    with pytest.raises(InputError, match=r"grey.csv: the table goes from 1.4 to 1.8 um, but light at 1\.84\d+ um was asked for"):
        _ = setup.light


LASER = '[source]\nshape = "multimode-laser"\nwavelength = "633 nm"\ngain_fwhm = "1.5 GHz"\n'
MIRRORS = THERMAL + BAND + '[[filter]]\nshape = "mirrors"\n'

FAULTS = {
    "laser without a cavity": (LASER, "source.cavity_length: this key is missing"),
    "cavity of no length": (LASER + 'cavity_length = "0 cm"\n', "source: cavity_length must be above zero"),
    "cavity without unit": (LASER + "cavity_length = 15\n", "source.cavity_length: must be text with a unit, .*; got 15"),
    "modes in part": (LASER + 'cavity_length = "15 cm"\nmodes = 2.5\n', "source.modes: Input should be a valid integer"),
    "no mode": (LASER + 'cavity_length = "15 cm"\nmodes = 0\n', "source: modes must be at least 1"),
    "profile": (
        '[source]\nshape = "single-mode-laser"\nwavelength = "633 nm"\nlinewidth = "1 MHz"\nprofile = "round"\n',
        "source: profile must be one of lorentzian, gaussian, voigt; got 'round'",
    ),
    "lamp without a name": ('[source]\nshape = "lamp"\n', "source.name: this key is missing"),
    "unknown lamp": ('[source]\nshape = "lamp"\nname = "xenon"\n', "source: name must be one of cadmium, .*; got 'xenon'"),
    "line without unit": (
        '[source]\nshape = "lamp"\nname = "sodium"\nonly = ["589 nm", 589.6]\n',
        "source.only: must be text with a unit, .*; got 589.6",
    ),
    "line that is not there": (
        '[source]\nshape = "lamp"\nname = "sodium"\nonly = "633 nm"\n',
        "source: only: the sodium list has no line within 0.3 nm of 633 nm",
    ),
    "ripple alone": (
        '[source]\nshape = "diode"\ncentre = "1.55 um"\nfwhm = "60 nm"\nripple = 0.1\n',
        "source: ripple and ripple_period go together",
    ),
    "table without a measure": (TABLE.replace('per = "wavelength"\n', ""), "source.per: this key is missing"),
    "table of light": (TABLE.replace('"power"', '"light"'), "source.quantity: Input should be 'photons' or 'power'"),
    "table that is missing": (TABLE.replace("lamp.csv", "none.csv"), r"source.file: .*none.csv: no such file"),
    "table without unit": (TABLE.replace('wavelength_unit = "nm"\n', ""), "source.file: .*lamp.csv: column 'wavelength' has no unit"),
    "sum of nothing": ('[source]\nshape = "sum"\n', "source.sources: this key is missing"),
    "sum of an empty list": ('[source]\nshape = "sum"\nsources = []\n', "source.sources: List should have at least 1 item"),
    "sum of an unknown source": (SUM + 'shape = "candle"\n', r"source.sources\[1\].shape: must be one of flat, .*; got 'candle'"),
    "fault in a sum": (SUM + 'shape = "thermal"\ntemperature = "-3 K"\n', r"source.sources\[1\]: temperature must be above zero"),
    "key missing in a sum": (SUM + 'shape = "thermal"\n', r"source.sources\[1\].temperature: this key is missing"),
    "lines in a sum": (
        SUM + 'shape = "lines"\n',
        r"source.sources\[1\]: a lamp of lines has one or more \[\[source.sources\[1\].lines\]\]",
    ),
    "weights in a sum": (
        SUM.replace("[1, 1e11]", "[1]") + 'shape = "flat"\n',
        "source: weights must be one per source; got 1 for 2 sources",
    ),
    "emissivity as a number": (THERMAL + "emissivity = 0.4\n", "source: emissivity must be a spectra.WavelengthTable; got 0.4"),
    "emissivity as text": (
        THERMAL + 'emissivity = "grey.csv"\n',
        r'source.emissivity: must be a number, or a table such as \{ file = "curve.csv" \}; got \'grey.csv\'',
    ),
    "emissivity file missing": (THERMAL + 'emissivity = { file = "none.csv" }\n', r"source.emissivity.file: .*none.csv: no such file"),
    "emissivity key": (
        THERMAL + 'emissivity = { file = "grey.csv", colour = 1 }\n',
        "source.emissivity.colour: unknown key; the keys here are file, wavelength_unit, value_unit",
    ),
    "emissivity without file": (THERMAL + "emissivity = { }\n", "source.emissivity.file: this key is missing"),
    "mirrors without reflectivity": (MIRRORS, r"filter\[1\].reflectivity: this key is missing"),
    "mirrors that shine": (MIRRORS + "reflectivity = 1.2\n", r"filter\[1\]: reflectivity must be above 0 and at most 1"),
    "mirrors by name": (MIRRORS + 'reflectivity = "silver"\n', r"filter\[1\].reflectivity: must be a number, or a table such as"),
    "mirror file": (MIRRORS + 'reflectivity = { file = "none.csv" }\n', r"filter\[1\].reflectivity.file: .*none.csv: no such file"),
    "count": (MIRRORS + "reflectivity = 0.9\ncount = -1\n", r"filter\[1\]: count must be at least 0"),
}


@pytest.mark.parametrize(("text", "message"), FAULTS.values(), ids=FAULTS.keys())
def test_faults_carry_file_and_key(read, tmp_path, text, message):
    with pytest.raises(SetupError, match=f"^{re.escape(str(tmp_path / 'bench.toml'))}: {message}"):
        read(text)
