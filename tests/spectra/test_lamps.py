"""Packaged line lists against standard air and handbook wavelengths, widths of their lines, and what lamps refuse."""

from importlib.resources import files

import astropy.units as u
import numpy as np
import pytest

from whitefringe.coherence import fringe_contrast
from whitefringe.errors import InputError, UnitsError
from whitefringe.io import read_packaged
from whitefringe.spectra import LAMPS, Lamp, Line, TopHat, detected, doppler_fwhm, natural_fwhm
from whitefringe.units import SPEED_OF_LIGHT as C

HANDBOOK = {
    "mercury": [404.656, 435.833, 546.075, 576.961, 579.067],
    "sodium": [588.9950, 589.5924],
    "cadmium": [467.815, 479.991, 508.582, 643.847],
    "neon": [585.249, 614.306, 632.816, 640.225, 650.653, 659.895, 671.704, 692.947, 703.241],
    "krypton": [557.029, 587.092, 605.612],
}
"""Air wavelengths [nm] as handbooks print them (memory; the sodium pair seen), independent of the packaged files."""


def standard_air(vacuum_nm):
    """Index of dry air at 15 C, 101325 Pa, 450 ppm carbon dioxide (Ciddor 1996), from its printed coefficients."""
    s2 = (1e3 / vacuum_nm) ** 2
    return 1 + 1e-8 * (5792105 / (238.0185 - s2) + 167917 / (57.362 - s2))


@pytest.mark.parametrize("name", LAMPS)
def test_air_and_vacuum_columns_agree(name):
    table = read_packaged(f"lamp_{name}.ecsv")
    vacuum, air = np.asarray(table["vacuum"]), np.asarray(table["air"])
    # the columns are printed to 1e-6, 1e-5 or 1e-3 nm
    digits = np.array([1e-3 if round(value, 3) == value else 1e-5 for value in vacuum])
    assert np.all(np.abs(vacuum / standard_air(vacuum) - air) < 0.6 * digits)


@pytest.mark.parametrize("name", LAMPS)
def test_lists_are_complete_and_say_where_they_are_from(name):
    table = read_packaged(f"lamp_{name}.ecsv")
    assert table.colnames == ["air", "vacuum", "strength", "source", "tag"]
    assert (table["air"].unit, table["vacuum"].unit) == (u.nm, u.nm)
    assert "nominal" in table["strength"].description
    assert set(table["tag"]) <= {"seen", "memory"}
    assert all(len(source) > 20 for source in table["source"])
    assert np.all(np.diff(table["vacuum"]) > 0)
    assert np.all(np.asarray(table["strength"]) > 0)


@pytest.mark.parametrize("name", LAMPS)
def test_handbook_wavelengths_are_there(name):
    air = np.asarray(Lamp.named(name).table["air"])
    for printed in HANDBOOK[name]:
        assert np.min(np.abs(air - printed)) < 1e-3, printed


def test_krypton_standard_line():
    # 1960 definition of the metre: 1 650 763.73 wavelengths in vacuum
    line = Lamp.named("krypton", only=605.78 * u.nm).lines[0]
    assert C / line.frequency_si == pytest.approx(1 / 1650763.73, rel=1e-9)


def test_the_index_lists_every_packaged_table():
    index = read_packaged("INDEX.ecsv")
    folder = files("whitefringe") / "data"
    tables = {item.name for item in folder.iterdir() if item.name.endswith(".ecsv")} - {"INDEX.ecsv"}
    assert set(index["file"]) == tables
    assert tuple(sorted(row["element"] for row in index if row["file"].startswith("lamp_"))) == LAMPS
    assert index["mass"].unit == u.u
    assert set(index["tag"]) <= {"seen", "memory"}


def test_packaged_tables_go_into_the_wheel(repository):
    import tomllib

    build = tomllib.loads((repository / "pyproject.toml").read_text(encoding="utf-8"))["tool"]["hatch"]["build"]["targets"]
    assert build["wheel"]["packages"] == ["src/whitefringe"]
    assert "exclude" not in build["wheel"]
    assert "src" in build["sdist"]["include"]
    assert (files("whitefringe") / "data" / "INDEX.ecsv").is_file()


def test_lines_without_a_width_are_monochromatic():
    lamp = Lamp.named("mercury")
    assert {line.profile for line in lamp.lines} == {"monochromatic"}
    assert lamp == Lamp(name="mercury")
    assert lamp.support_si == (0.0, 0.0)
    assert not hasattr(lamp, "caution")


GREEN = {"name": "mercury", "only": 546.1 * u.nm}


def test_a_hot_gas_has_gaussian_lines_of_its_doppler_width():
    lamp = Lamp(**GREEN, temperature=300 * u.K, mass=197.96677 * u.u)
    (line,) = lamp.lines
    assert line.profile == "gaussian"
    # references 3.4: Hg-198 green at 300 K
    assert line.fwhm_si == pytest.approx(483.912e6, rel=1e-5)


@pytest.mark.parametrize("name", LAMPS)
def test_the_mean_atomic_mass_is_the_default(name):
    # conventional standard atomic weights (memory)
    mass = {"mercury": 200.592, "sodium": 22.98977, "cadmium": 112.414, "neon": 20.1797, "krypton": 83.798}[name]
    line = Lamp(name=name, temperature=400 * u.K).lines[0]
    assert line.fwhm_si == pytest.approx(doppler_fwhm(line.wavelength, 400 * u.K, mass * u.u).to_value(u.Hz), rel=1e-6)


def test_lorentzian_widths_add():
    lamp = Lamp(**GREEN, lifetime=8 * u.ns, pressure_width=10 * u.MHz)
    (line,) = lamp.lines
    assert line.profile == "lorentzian"
    assert line.fwhm_si == pytest.approx(natural_fwhm(8 * u.ns).to_value(u.Hz) + 1e7)


def test_both_kinds_of_width_make_a_voigt_line():
    lamp = Lamp(name="sodium", temperature=500 * u.K, lifetime=16.249 * u.ns)
    line = next(line for line in lamp.lines if abs(C / line.frequency_si - 589.158e-9) < 1e-12)
    assert line.profile == "voigt"
    assert line.widths_si == pytest.approx((1699.654e6, 9.794753e6), rel=1e-5)


def test_lines_are_chosen_by_the_nearest_wavelength_in_air_or_vacuum():
    pair = Lamp(name="mercury", only=[579.066, 577.12] * u.nm)
    assert list(pair.table["vacuum"]) == [577.12101, 579.22757]
    assert [line.strength for line in pair.lines] == [1000, 900]
    by_frequency = Lamp(name="mercury", only=(C / 577.121e-9 * u.Hz, 579.2 * u.nm))
    assert by_frequency.lines == pair.lines


def test_strengths_are_given_in_order_of_wavelength():
    lamp = Lamp(name="mercury", only=[579.066, 577.12] * u.nm, strengths=[3, 1])
    assert lamp.lines == (Line(wavelength=577.12101 * u.nm, strength=3.0), Line(wavelength=579.22757 * u.nm, strength=1.0))
    assert lamp.strengths == (3.0, 1.0)


def test_the_table_is_a_copy():
    lamp = Lamp.named("mercury")
    lamp.table["vacuum"][0] = 1.0
    assert lamp.table["vacuum"][0] == 404.77081
    assert Lamp.named("mercury").lines[0].wavelength == 404.77081 * u.nm


def test_the_sodium_lamp_beats():
    """The lamp's own pair, with more digits than the rounded one of `test_published_sources`: 515.5202 GHz (memory), 581.534 um."""
    light = detected(Lamp(name="sodium", only=[588.995, 589.592] * u.nm))
    first, second = (C / line.frequency_si for line in light.lines)
    beat = first * second / (second - first)
    assert beat * 1e6 == pytest.approx(581.534, rel=2e-6)
    assert beat * 1e6 == pytest.approx(581.542, rel=2e-5)
    assert fringe_contrast(light, [beat / 2, beat] * u.m) == pytest.approx([1 / 3, 1], abs=1e-9)


def test_a_filter_chooses_lines():
    light = detected(Lamp.named("mercury"), TopHat(centre=578 * u.nm, width=10 * u.nm))
    assert [round(C / line.frequency_si * 1e9, 2) for line in light.lines] == [577.12, 579.23]


@pytest.mark.parametrize(
    ("given", "error", "message"),
    [
        ({"name": "xenon"}, InputError, "name must be one of cadmium, krypton, mercury, neon, sodium; got 'xenon'; for other lamps use"),
        (
            {"name": "sodium", "only": 632.8 * u.nm},
            InputError,
            r"only: the sodium list has no line within 0.3 nm of 632.8 nm; it has 568.42, .* nm \(vacuum\)",
        ),
        ({**GREEN, "only": [546.07, 546.23] * u.nm}, InputError, "only: the mercury line at 546.227 nm is asked for twice"),
        ({**GREEN, "only": ()}, InputError, "only: give at least one wavelength, or leave it out for all lines"),
        ({**GREEN, "only": 546.1}, UnitsError, "only must be one or more wavelengths with a unit"),
        ({**GREEN, "only": (546.1,)}, UnitsError, "only must be one or more wavelengths with a unit"),
        ({**GREEN, "only": 546.1 * u.kg}, UnitsError, "only must be a vacuum wavelength or a frequency"),
        ({**GREEN, "strengths": (1, 2)}, InputError, "strengths must be one per line; got 2 for 1 lines"),
        ({**GREEN, "strengths": (0,)}, InputError, "at least one line needs a strength above zero"),
        ({**GREEN, "strengths": (-1,)}, InputError, "at least one line needs a strength above zero"),
        ({"name": "sodium", "strengths": (-1, 1, 1, 1, 1, 1)}, InputError, "strength must be zero or more; got -1.0"),
        ({**GREEN, "mass": 198 * u.u}, InputError, "mass is for the Doppler width, which needs a temperature as well"),
        ({**GREEN, "temperature": 0 * u.K}, InputError, "temperature must be above zero"),
        ({**GREEN, "temperature": 300 * u.K, "mass": 198}, UnitsError, "mass must carry a unit"),
        ({**GREEN, "lifetime": 0 * u.s}, InputError, "lifetime must be above zero"),
        ({**GREEN, "pressure_width": 0 * u.Hz}, InputError, "pressure_width must be above zero"),
    ],
)
def test_what_a_lamp_refuses(given, error, message):
    with pytest.raises(error, match=message):
        Lamp(**given)
