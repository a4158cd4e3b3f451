"""Every fault of a setup file is named by file and key."""

import re

import pytest

from whitefringe.errors import SetupError
from whitefringe.setup import Setup

LAMP = '[source]\nshape = "thermal"\ntemperature = "2900 K"\n'
BAND = '[[filter]]\nshape = "gaussian"\ncentre = "1.65 um"\nfwhm = "100 nm"\n'
GOOD = LAMP + BAND

FAULTS = {
    "nothing": ("", "source: this key is missing"),
    "bad TOML": ("[source\n", r"not valid TOML: .*line 1"),
    "unknown table": (
        GOOD + "[colour]\nx = 1\n",
        "colour: unknown key; the keys here are name, source, filter, tracking, air",
    ),
    "unknown key": (
        GOOD + '[scan]\nsignl = "a"\n',
        "scan.signl: unknown key; the keys here are signal, reference",
    ),
    "unknown filter key": (
        GOOD + "slope = 1\n",
        r"filter\[0\].slope: unknown key; the keys here are centre, fwhm",
    ),
    "missing key": ('[source]\nshape = "thermal"\n' + BAND, "source.temperature: this key is missing"),
    "missing filter key": (
        LAMP + '[[filter]]\nshape = "gaussian"\nfwhm = "1 nm"\n',
        r"filter\[0\].centre: this key is missing",
    ),
    "second filter": (
        GOOD + '[[filter]]\nshape = "top-hat"\ncentre = "1 um"\n',
        r"filter\[1\].width: this key is missing",
    ),
    "bare number": (
        '[source]\nshape = "thermal"\ntemperature = 2900\n' + BAND,
        'source.temperature: must be text with a unit, for example "2900 K"; got 2900',
    ),
    "text without unit": (
        GOOD.replace("2900 K", "2900"),
        "source.temperature: must carry a unit, for example",
    ),
    "no number": (
        GOOD.replace("2900 K", "hot"),
        "source.temperature: must be a number with a unit, .*got 'hot'",
    ),
    "no unit": (GOOD.replace("2900 K", "2900 parsnip"), "source.temperature: must be a number with a unit"),
    "wrong unit": (GOOD.replace("2900 K", "2900 nm"), "source: temperature must be convertible to K"),
    "wrong filter unit": (GOOD.replace("100 nm", "100 s"), r"filter\[0\]: fwhm must be convertible to"),
    "below zero": (GOOD.replace("2900 K", "-3 K"), "source: temperature must be above zero"),
    "not finite": (GOOD.replace("2900 K", "nan K"), "source: temperature must be finite"),
    "unknown source": (
        '[source]\nshape = "candle"\n',
        "source.shape: must be one of flat, thermal, diode, lines, single-mode-laser, .*; got 'candle'",
    ),
    "no shape": ('[source]\ntemperature = "2900 K"\n', "source.shape: must be one of .*; got None"),
    "unknown filter": (
        LAMP + '[[filter]]\nshape = "round"\n',
        r"filter\[0\].shape: must be one of top-hat, gaussian, super-gaussian, trapezoid, .*, table",
    ),
    "one filter as table": (LAMP + '[filter]\nshape = "gaussian"\n', "filter: Input should be a valid list"),
    "source as text": ('source = "lamp"\n', "source: Input should be a valid dictionary"),
    "missing curve": (
        LAMP + '[[filter]]\nshape = "table"\nfile = "none.csv"\n',
        r"filter\[0\].file: .*none.csv: no such file",
    ),
    "curve without file": (LAMP + '[[filter]]\nshape = "table"\n', r"filter\[0\].file: this key is missing"),
    "unknown curve unit": (
        LAMP + '[[filter]]\nshape = "table"\nfile = "c.csv"\nwavelength_unit = "ell"\n',
        r"filter\[0\].wavelength_unit: 'ell' is not a unit that is known here",
    ),
    "wrong type": (GOOD + '[scan]\npasses = "two"\n', "scan.passes: Input should be a valid integer"),
    "wrong passes": (GOOD + "[scan]\npasses = 3\n", "scan: passes must be 1, 2 or 4; got 3"),
    "contradiction": (GOOD + "[scan]\nreference = 1\n", "scan: reference .* go together"),
    "saturation": (GOOD + "[scan]\ndark = 9\nsaturation = 5\n", "scan: saturation .* must lie above dark"),
    "step without unit": (
        GOOD + "[scan]\nopd_per_step = 37\n",
        'scan.opd_per_step: must be text with a unit.*"; got 37',
    ),
    "step in seconds": (
        GOOD + '[scan]\nopd_per_step = "37 s"\n',
        "scan: opd_per_step must be convertible to m",
    ),
    "tolerance order": (
        GOOD + "[tolerances]\ncontrast = [1.1, 0.9]\n",
        r"tolerances: tolerance contrast must be \(low, high\)",
    ),
    "tolerance count": (GOOD + "[tolerances]\nwavelength = [0.9, 1.0, 1.1]\n", "tolerances.wavelength"),
    "tolerance type": (
        GOOD + '[tolerances]\npacket_width = "wide"\n',
        "tolerances.packet_width: Input should be a valid tuple",
    ),
    "unknown tolerance": (GOOD + "[tolerances]\ncolour = [0, 1]\n", "tolerances.colour: unknown key"),
    "contrast above one": (
        GOOD + "[prediction]\ncontrast = 1.2\n",
        "prediction.contrast: Input should be less than or equal to 1",
    ),
    "contrast of zero": (
        GOOD + "[prediction]\ncontrast = 0\n",
        "prediction.contrast: Input should be greater than 0",
    ),
    "contrast not a number": (GOOD + "[prediction]\ncontrast = nan\n", "prediction.contrast"),
    "definition": (
        GOOD + '[prediction]\ncoherence_length = "width"\n',
        "prediction.coherence_length: must be one of bandwidth, power, half, e-fold, first-null; got 'width'",
    ),
    "lines without lines": (
        '[source]\nshape = "lines"\n',
        r"source: a lamp of lines has one or more \[\[source.lines\]\] entries",
    ),
    "lines and more": (
        '[source]\nshape = "lines"\ntemperature = "1 K"\n[[source.lines]]\nwavelength = "1 um"\n',
        "source: a lamp of lines has one or more",
    ),
    "line without wavelength": (
        '[source]\nshape = "lines"\n[[source.lines]]\nstrength = 1\n',
        r"source.lines\[0\].wavelength: this key is missing",
    ),
    "second line": (
        '[source]\nshape = "lines"\n[[source.lines]]\nwavelength = "1 um"\n[[source.lines]]\nwavelength = "1 kg"\n',
        r"source.lines\[1\]: wavelength must be",
    ),
    "dark lines": (
        '[source]\nshape = "lines"\n[[source.lines]]\nwavelength = "1 um"\nstrength = 0\n',
        "source.lines: at least one line needs a strength above zero",
    ),
}


@pytest.mark.parametrize(("text", "message"), FAULTS.values(), ids=FAULTS.keys())
def test_faults_carry_file_and_key(tmp_path, text, message):
    path = tmp_path / "bench.toml"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(SetupError, match=f"^{re.escape(str(path))}: {message}"):
        Setup.read(path)
