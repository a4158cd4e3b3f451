"""Filters of a setup file: every shape of the family, and what happens to it in the beam."""

import re

import astropy.units as u
import numpy as np
import pytest

from whitefringe import spectra
from whitefringe.errors import SetupError
from whitefringe.setup import Setup

LAMP = '[source]\nshape = "thermal"\ntemperature = "2900 K"\n[[filter]]\n'
BAND = 'shape = "gaussian"\ncentre = "1.65 um"\nfwhm = "100 nm"\n'
GAUSSIAN = spectra.Gaussian(centre=1.65 * u.um, fwhm=100 * u.nm)


@pytest.fixture
def read(tmp_path):
    def reading(text):
        path = tmp_path / "bench.toml"
        path.write_text(LAMP + text, encoding="utf-8")
        return Setup.read(path).filters[0]

    return reading


def line(name, value, item):
    return f'{name} = "{value} {item.unit}"\n' if item.unit != u.dimensionless_unscaled else f"{name} = {value:g}\n"


SHAPES = [member for member in spectra.FILTER_SHAPES if member is not spectra.Tabulated]


@pytest.mark.parametrize("member", SHAPES, ids=lambda member: member.shape)
def test_every_shape(read, member):
    described = spectra.parameters_of(member)
    found = read(f'shape = "{member.shape}"\n' + "".join(line(name, item.start, item) for name, item in described.items()))
    assert found == member(**{name: item.start * item.unit for name, item in described.items()})


def test_what_need_not_be_stated(read):
    given = 'centre = "1.65 um"\nfwhm = "10 nm"\n'
    assert read(f'shape = "lorentzian"\n{given}').reach == 50
    found = read(f'shape = "multi-cavity"\n{given}cavities = 3\n')
    assert (found.cavities, found.reach) == (3, 50)
    assert type(found.cavities) is int
    assert read('shape = "long-pass"\nedge = "1.5 um"\nrise = "10 nm"\n').end.to_value(u.um) == pytest.approx(15)


ALL = """tilt = "4 deg"
effective_index = 2.0
f_number = 5
obstruction = 0.3
warmed_by = "-10 K"
drift = "0.02 nm/K"
leak = 1e-4
leak_low = "1 um"
leak_high = "2.5 um"
"""


def test_all_that_happens_in_the_beam(read):
    found = read(BAND + ALL)
    expected = spectra.in_beam(
        GAUSSIAN,
        tilt=4 * u.deg,
        effective_index=2.0,
        f_number=5,
        obstruction=0.3,
        warmed_by=-10 * u.K,
        drift=0.02 * u.nm / u.K,
        leak=1e-4,
        leak_low=1 * u.um,
        leak_high=2.5 * u.um,
    )
    at = np.linspace(0.9, 2.6, 50) * u.um
    assert np.array_equal(found.transmission(at), expected.transmission(at))
    assert spectra.bare_of(found) == GAUSSIAN


def test_a_table_in_the_beam_and_in_air(tmp_path, read):
    (tmp_path / "h.csv").write_text("wavelength [nm],T\n1500,0\n1600,0.9\n1689,0\n")
    found = read('shape = "table"\nfile = "h.csv"\nmedium = "air"\ntilt = "4 deg"\neffective_index = 2.0\n')
    assert isinstance(found, spectra.Tilted)
    # n - 1 of standard air at 1.6 um is 2.7322e-4 (Ciddor)
    assert found.filter.curve.wavelength_si[1] * 1e9 == pytest.approx(1600 * 1.00027322, abs=1e-4)


FAULTS = {
    "tilt without index": ('tilt = "4 deg"\n', r"filter\[0\]: effective_index belongs to tilt or f_number"),
    "index alone": ("effective_index = 2.0\n", r"filter\[0\]: effective_index belongs to tilt or f_number"),
    "obstruction alone": ("obstruction = 0.2\n", r"filter\[0\]: obstruction belongs to f_number"),
    "leak without band": ("leak = 1e-4\n", r"filter\[0\]: leak, leak_low, leak_high go together; not stated: leak_low, leak_high"),
    "warmth without drift": ('warmed_by = "5 K"\n', r"filter\[0\]: warmed_by, drift go together; not stated: drift"),
    "bare angle": ("tilt = 4\neffective_index = 2.0\n", r'filter\[0\].tilt: must be text with a unit, .*"; got 4'),
    "wrong angle": ('tilt = "4 nm"\neffective_index = 2.0\n', r"filter\[0\]: angle must be convertible to rad"),
    "fast cone": ("f_number = 0.3\neffective_index = 2.0\n", r"filter\[0\]: f_number must be at least 0\.5; got 0\.3"),
    "word for a cone": ('f_number = "fast"\neffective_index = 2.0\n', r"filter\[0\].f_number: Input should be a valid number"),
    "unknown": ("colour = 1\n", r"filter\[0\].colour: unknown key; the keys here are centre, fwhm"),
}


@pytest.mark.parametrize(("text", "message"), FAULTS.values(), ids=FAULTS.keys())
def test_faults_carry_file_and_key(tmp_path, read, text, message):
    with pytest.raises(SetupError, match=f"^{re.escape(str(tmp_path / 'bench.toml'))}: {message}"):
        read(BAND + text)


def test_cavities_are_whole(read):
    given = 'shape = "multi-cavity"\ncentre = "1.65 um"\nfwhm = "10 nm"\n'
    with pytest.raises(SetupError, match=r"filter\[0\].cavities: Input should be a valid integer"):
        read(given + "cavities = 2.5\n")
    with pytest.raises(SetupError, match=r"filter\[0\].cavities: this key is missing"):
        read(given)
    with pytest.raises(SetupError, match=r"filter\[0\]: cavities must be at least 1 and at most 20; got 30"):
        read(given + "cavities = 30\n")
