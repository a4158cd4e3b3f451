"""Tabulated sources and fractions: what they convert to, where they end, what they refuse."""

import astropy.units as u
import numpy as np
import pytest
from astropy.constants import c, h, k_B

from whitefringe.errors import FileContentError, InputError, UnitsError
from whitefringe.spectra import Flat, Line, Lines, Mirrors, TabulatedSource, Thermal, TopHat, WavelengthTable, detected
from whitefringe.spectra.measures import mean_frequency_si
from whitefringe.units import SPEED_OF_LIGHT as C

BAND = TopHat(centre=1.6 * u.um, width=0.2 * u.um)
WAVELENGTH = np.linspace(1.4, 1.8, 401) * u.um


def source(values, wavelength=WAVELENGTH, **given):
    return TabulatedSource(
        **{"wavelength": wavelength, "values": values, "quantity": "photons", "per": "hertz", "origin": "lamp.csv", **given}
    )


def planck(kind):
    """Planck's law of a body of 2900 K on the wavelengths of the table, in four measures, written out here."""
    x = WAVELENGTH.to_value(u.m)
    radiance = x**-5 / np.expm1(h.value * c.value / (x * k_B.value * 2900))  # power per wavelength
    return {
        ("power", "wavelength"): radiance,
        ("power", "hertz"): radiance * x**2,
        ("photons", "wavelength"): radiance * x,
        ("photons", "hertz"): radiance * x**3,
    }[kind]


@pytest.mark.parametrize("quantity", ["photons", "power"])
@pytest.mark.parametrize("per", ["wavelength", "hertz"])
def test_four_measures_of_a_black_body_are_the_same_light(quantity, per):
    values = planck((quantity, per))
    tabulated = source(values / values.max(), quantity=quantity, per=per)
    found, expected = detected(tabulated, BAND), detected(Thermal(temperature=2900 * u.K), BAND)
    assert mean_frequency_si(found) == pytest.approx(mean_frequency_si(expected), rel=1e-8)
    ratio = found.density / expected.density
    assert ratio == pytest.approx(np.full_like(ratio, ratio[0]), rel=2e-6)


def test_rates_are_scaled_in_the_middle_of_the_table():
    tabulated = source(np.full(401, 3.0), quantity="power", per="wavelength")
    assert float(tabulated.rate_si(C / 1.6e-6)) == pytest.approx(3.0)
    assert float(tabulated.rate_si(C / 1.5e-6)) == pytest.approx(3.0 * (1.5 / 1.6) ** 3)


def test_a_table_that_falls_to_zero_ends_there():
    tabulated = source([0, 1, 0.01], [1.5, 1.6, 1.7] * u.um)
    assert tabulated.support_si == pytest.approx((C / 1.7e-6, C / 1.5e-6))
    assert detected(tabulated).extent_si == pytest.approx(tabulated.support_si)
    assert tabulated.rate_si(C / np.array([1.4e-6, 1.8e-6])).tolist() == [0, 0]


def test_a_table_that_is_cut_off_must_be_limited_by_a_filter():
    cut = source([0, 1, 0.4], [1.5, 1.6, 1.7] * u.um)
    assert cut.support_si == pytest.approx((0.0, C / 1.5e-6))
    message = r"lamp.csv: the table goes from 1.5 to 1.7 um, but light at .* um was asked for; limit the light with a filter, or extend"
    with pytest.raises(InputError, match=message):
        detected(cut)
    with pytest.raises(InputError, match=message):
        detected(cut, TopHat(centre=1.65 * u.um, width=0.12 * u.um))
    # a filter that ends where the table ends is inside it
    assert detected(cut, TopHat(centre=1.65 * u.um, width=0.1 * u.um)).total_rate > 0


@pytest.mark.parametrize(("values", "open_at"), [([0.4, 1, 0], "short"), ([0, 1, 0.4], "long"), ([0.4, 1, 0.4], "both")])
def test_open_ends(values, open_at):
    low, high = source(values, [1.5, 1.6, 1.7] * u.um).support_si
    assert (low == 0) == (open_at in ("long", "both"))
    assert np.isinf(high) == (open_at in ("short", "both"))


def test_frequencies_and_falling_wavelengths_are_the_same_table():
    rising = source([0, 1, 0.5, 0], [1.5, 1.6, 1.7, 1.8] * u.um)
    falling = source([0, 0.5, 1, 0], [1.8, 1.7, 1.6, 1.5] * u.um)
    by_frequency = source([0, 0.5, 1, 0], C / (np.array([1.8, 1.7, 1.6, 1.5]) * 1e-6) * u.Hz)
    at = C / (np.linspace(1.51, 1.79, 40) * 1e-6)
    assert falling.rate_si(at) == pytest.approx(rising.rate_si(at), rel=1e-12)
    assert by_frequency.rate_si(at) == pytest.approx(rising.rate_si(at), rel=1e-12)


def test_repairs_are_made_and_noted():
    mended = source([0, 0.5, 1.0, -0.02, 0], [1.5, 1.7, 1.6, 1.8, 1.9] * u.um, repair=("sort", "clip-negative"))
    assert mended.notes == ("sort: 5 rows put in order", "clip-negative: 1 values set to zero, the lowest -0.02")
    assert mended.points[1].tolist() == [0, 1.0, 0.5, 0, 0]
    assert source([0, 1, 0.9, 0], [1.5, 1.6, 1.6, 1.7] * u.um, repair="merge-duplicates").points[1].tolist() == [0, 0.95, 0]


def test_arrays_are_copies_that_cannot_be_written():
    values = np.array([0.0, 1.0, 0.0])
    tabulated = source(values, [1.5, 1.6, 1.7] * u.um)
    values[1] = 5
    assert tabulated.points[1][1] == 1.0
    for array in (tabulated.values, tabulated.wavelength, *tabulated.points):
        with pytest.raises(ValueError, match="read-only"):
            array[0] = array[1]


def test_numbers_with_units():
    energy = np.array([0.0, 1, 0]) * u.erg / u.s / u.cm**2 / u.AA
    assert source(energy, [1.5, 1.6, 1.7] * u.um, quantity="power", per="wavelength").points[1].tolist() == [0, 1, 0]
    counts = np.array([0.0, 1, 0]) * u.photon / u.s / u.nm
    assert source(counts, [1.5, 1.6, 1.7] * u.um, per="wavelength").points[1].tolist() == [0, 1, 0]


THREE = [1.5, 1.6, 1.7] * u.um


@pytest.mark.parametrize(
    ("values", "given", "error", "message"),
    [
        ([0, 1, 0], {"quantity": "light"}, InputError, 'quantity must be "photons" or "power"; got \'light\''),
        ([0, 1, 0], {"per": "metre"}, InputError, 'per must be "wavelength" or "hertz"; got \'metre\''),
        ([0, 1, 0] * u.W / u.nm, {}, UnitsError, r"values in W / nm are power, not photons; correct quantity="),
        ([0, 1, 0] * u.photon / u.s, {"quantity": "power"}, UnitsError, r"values in ph / s are photons, not power; correct quantity="),
        ([0, 1], {}, InputError, r"two columns of one length, two rows or more; got \(3,\) and \(2,\)"),
        ([0, -1, 0], {}, InputError, r'data row 2: value -1 at 1.6 um is below zero \(1 such rows\); .*repair=\("clip-negative",\)'),
        ([0, np.nan, 0], {}, InputError, "data row 2: not a finite number"),
        ([0, 0, 0], {}, InputError, "a table needs two rows or more, wavelengths above zero and some value above zero"),
        ([0, 1, 0], {"wavelength": [0, 1, 2] * u.um}, InputError, "wavelengths above zero"),
        ([0, 1, 0], {"wavelength": [1.5, 1.7, 1.6] * u.um}, InputError, "data row 3: the wavelengths are neither rising nor falling"),
        ([0, 1, 0], {"wavelength": [1.5, 1.6, 1.6] * u.um}, InputError, "wavelength 1.6 um stands in the table more than once"),
        ([0, 1, 0], {"wavelength": [1.5, 1.6, 1.7]}, UnitsError, "wavelength must be a Quantity"),
        ([0, 1, 0], {"wavelength": [1.5, 1.6, 1.7] * u.s}, UnitsError, "wavelength must be a length or a frequency; got s"),
        ([0, 1, 0], {"repair": "smooth"}, InputError, "repair: unknown name 'smooth'; the repairs are sort"),
    ],
)
def test_what_a_tabulated_source_refuses(values, given, error, message):
    with pytest.raises(error, match=rf"^(lamp\.csv: )?{message}" if message.startswith("repair") else rf"^lamp\.csv: .*{message}"):
        source(values, **{"wavelength": THREE, **given})


def test_a_source_from_a_file(tmp_path):
    path = tmp_path / "lamp.csv"
    path.write_text("wavelength [nm],flux [W / nm],other\n1500,0,1\n1600,2,2\n1700,0,3\n")
    read = TabulatedSource.read(path, quantity="power", per="wavelength", medium="vacuum")
    assert read.points[1].tolist() == [0, 2, 0]
    assert read.origin == str(path)
    assert TabulatedSource.read(path, quantity="photons", per="hertz", value_column="other").points[1].tolist() == [1, 2, 3]
    with pytest.raises(UnitsError, match=r"lamp\.csv: the values are in W / nm by the header, but value_unit=W / Hz was stated"):
        TabulatedSource.read(path, quantity="power", per="hertz", value_unit=u.W / u.Hz)
    with pytest.raises(FileContentError, match="no column 'flx'; the columns are"):
        TabulatedSource.read(path, quantity="power", per="hertz", value_column="flx")


def test_units_stated_for_a_file_without_them(tmp_path):
    path = tmp_path / "grey.csv"
    path.write_text("wavelength,emissivity\n1000,40\n2000,30\n")
    with pytest.raises(UnitsError, match=r"column 'wavelength' has no unit in the header; state it"):
        WavelengthTable.read(path)
    table = WavelengthTable.read(path, wavelength_unit=u.nm, value_unit=u.percent)
    assert table.at([1, 1.5, 2] * u.um) == pytest.approx([0.4, 0.35, 0.3])
    assert table.origin == str(path)


GREY = WavelengthTable(wavelength=[1.0, 1.5, 2.0] * u.um, values=[0.45, 0.4, 0.3], origin="tungsten.csv")


def test_a_fraction_is_linear_in_wavelength():
    assert GREY.at([1.0, 1.25, 1.75, 2.0] * u.um) == pytest.approx([0.45, 0.425, 0.35, 0.3])
    assert float(GREY.at(C / 1.75e-6 * u.Hz)) == pytest.approx(0.35)
    percent = WavelengthTable(wavelength=[1.0, 2.0] * u.um, values=[40, 30] * u.percent)
    assert float(percent.at(1.5 * u.um)) == pytest.approx(0.35)


@pytest.mark.parametrize("micron", [0.99, 2.01])
def test_a_fraction_is_never_extrapolated(micron):
    message = (
        rf"tungsten.csv: the table goes from 1 to 2 um, but light at {micron} um was asked for; limit the light with a filter, or extend"
    )
    with pytest.raises(InputError, match=message):
        GREY.at(micron * u.um)


@pytest.mark.parametrize(
    ("values", "error", "message"),
    [
        ([0.4, 1.2], InputError, "value 1.2 at 2 um is above 1; give fractions, or a Quantity in percent"),
        ([0.4, -0.1], InputError, r"data row 2: value -0.1 at 2 um is below zero \(1 such rows\)"),
        ([0.4, 0.2] * u.W, UnitsError, "values must be fractions or percent; got W"),
        ([0.0, 0.0], InputError, "some value above zero"),
        ([0.4], InputError, r"two columns of one length, two rows or more; got \(2,\) and \(1,\)"),
    ],
)
def test_what_is_no_fraction(values, error, message):
    with pytest.raises(error, match=rf"grey\.csv: .*{message}"):
        WavelengthTable(wavelength=[1, 2] * u.um, values=values, origin="grey.csv")


def test_a_thermal_source_with_an_emissivity():
    body, grey = Thermal(temperature=2900 * u.K), Thermal(temperature=2900 * u.K, emissivity=GREY)
    light = detected(grey, BAND)
    at = light.frequency_si[::500]
    # linear in wavelength, 0.4 at 1.5 um and 0.3 at 2 um
    expected = body.rate_si(at) * (0.4 - 0.2 * (C / at * 1e6 - 1.5))
    assert light.density_si(at) == pytest.approx(expected, rel=1e-7)
    assert mean_frequency_si(light) > mean_frequency_si(detected(body, BAND))
    assert grey.breakpoints_si == pytest.approx(C / np.array([2.0e-6, 1.5e-6, 1.0e-6]))


def test_an_emissivity_must_cover_the_light():
    grey = Thermal(temperature=2900 * u.K, emissivity=GREY)
    for filters in ((), (TopHat(centre=2 * u.um, width=0.2 * u.um),)):
        with pytest.raises(InputError, match=r"tungsten.csv: the table goes from 1 to 2 um, but light at .* was asked for"):
            detected(grey, *filters)


def test_an_emissivity_is_a_table():
    with pytest.raises(InputError, match=r"emissivity must be a spectra.WavelengthTable; got 0.4"):
        Thermal(temperature=2900 * u.K, emissivity=0.4)


def test_a_table_need_not_reach_lines_that_another_filter_stops():
    lamp = Lines([Line(wavelength=0.8 * u.um), Line(wavelength=1.6 * u.um)])
    mirror = Mirrors(reflectivity=GREY)
    for filters in ((BAND, mirror), (mirror, BAND)):
        (line,) = detected(lamp, *filters).lines
        assert line.strength == pytest.approx(0.38)
    with pytest.raises(InputError, match=r"but light at 0.8 um was asked for"):
        detected(lamp, mirror)


def test_flat_light_through_a_table_alone_has_no_end():
    with pytest.raises(InputError, match="nothing bounds the light"):
        detected(Flat(), Mirrors(reflectivity=GREY))
