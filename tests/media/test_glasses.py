"""Users' glasses, temperatures of glass, ranges, and every message."""

from dataclasses import replace

import astropy.units as u
import mpmath as mp
import numpy as np
import pytest
from astropy.table import Table

from whitefringe import media
from whitefringe.errors import FileContentError, InputError, UnitsError

ROW = {
    "name": ["Larkmoor crown"],
    "form": ["length"],
    "b1": [1.1],
    "c1": [0.1],
    "b2": [0.9],
    "c2": [10.0],
    "low": [0.4] * u.um,
    "high": [2500.0] * u.nm,
    "temperature": [293.15] * u.K,
    "relative_to": ["vacuum"],
    "source": ["a melt sheet"],
}


@pytest.fixture
def write(tmp_path):
    def put(**changes):
        columns = {name: value for name, value in {**ROW, **changes}.items() if value is not None}
        path = tmp_path / "melts.ecsv"
        Table(columns).write(path)
        return path

    return put


# ---------------------------------------------------------------- a user's glass


def test_one_row_makes_a_glass(write):
    path = write()
    glass = media.Glass.named("larkmoor CROWN", table=path)
    assert glass.name == "Larkmoor crown"
    assert glass == glass  # the arrays inside must not make the comparison fail
    assert glass != media.read_glasses(path)[0]
    expected = np.sqrt(1 + 1.1 / (1 - 0.01) + 0.9 / (1 - 100))
    assert glass.refractive_index(1 * u.um).value == pytest.approx(expected, rel=1e-15)
    assert glass.source == "a melt sheet"
    assert glass.thermal is None


def test_both_forms_are_the_same_formula(write):
    length = media.read_glasses(write())[0]
    squared = media.Glass(name="x", strengths=[1.1, 0.9], resonances=[0.01, 100.0] * u.um**2, low=0.4 * u.um, high=2.5 * u.um)
    where = np.linspace(0.4, 2.5, 20) * u.um
    assert length.group_index(where).value == pytest.approx(squared.group_index(where).value, rel=1e-14)


def test_relative_to_air_is_turned_into_an_absolute_index(write):
    relative = media.read_glasses(write(relative_to=["air"]))[0]
    vacuum = relative.in_catalogue_terms
    air = media.Ciddor1996(temperature=20 * u.deg_C)
    where = 1 * u.um
    index = air.refractive_index(where)
    assert relative.refractive_index(where) == pytest.approx(vacuum.refractive_index(where / index) * index, rel=1e-15)


def test_a_term_without_resonance_is_a_constant():
    """Many crystals are published as n^2 = A + ...: A - 1 is a term with c = 0."""
    glass = media.Glass(name="x", strengths=[0.5, 1.1], resonances=[0.0, 0.1] * u.um, low=0.4 * u.um, high=2 * u.um)
    with mp.workdps(30):
        expected = mp.diff(lambda s: s * mp.sqrt(1.5 + mp.mpf(1.1) / (1 - mp.mpf(0.1) ** 2 * s**2)), 1)
    assert glass.group_index(1 * u.um).value == pytest.approx(float(expected), rel=1e-14)


@pytest.mark.parametrize("name", ["name", "form", "b1", "c1", "low", "high", "temperature", "relative_to", "source"])
def test_a_missing_column(write, name):
    with pytest.raises(FileContentError, match=rf"melts\.ecsv: column '{name}' is missing; a table of glasses has name, form, b1"):
        media.read_glasses(write(**{name: None}))


@pytest.mark.parametrize("name", ["low", "high", "temperature"])
def test_a_column_without_its_unit(write, name):
    with pytest.raises(FileContentError, match=rf"melts\.ecsv: column '{name}' must have a unit such as (um|deg_C); got None"):
        media.read_glasses(write(**{name: [1.0]}))


def test_a_column_with_a_wrong_unit(write):
    with pytest.raises(FileContentError, match="column 'low' must have a unit such as um; got s"):
        media.read_glasses(write(low=[1.0] * u.s))


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"form": ["cauchy"]}, 'data row 1: column form: must be "length" or "length squared"; got \'cauchy\''),
        ({"relative_to": ["water"]}, 'data row 1: Larkmoor crown: relative_to must be "air" or "vacuum"; got \'water\''),
        ({"c2": None}, "data row 1: column b2: there is no column c2 to go with it"),
        ({"low": [3.0] * u.um}, "data row 1: Larkmoor crown: low must be above zero and below high; got 3.0 um and 2500.0 nm"),
        ({"c1": [0.5]}, "data row 1: Larkmoor crown: a resonance lies within 0.4 um to 2500.0 nm, where the formula would have no index"),
        ({"b1": [0.0], "b2": [0.0]}, "strengths and resonances must be two rows of the same length; got shapes \\(0,\\) and \\(0,\\)"),
        ({"b1": [np.nan]}, "strengths must be finite; got"),
    ],
)
def test_a_row_that_is_no_glass(write, change, message):
    with pytest.raises(FileContentError, match=message):
        media.read_glasses(write(**change))


def test_an_unknown_name(write):
    with pytest.raises(InputError, match="no glass is named 'cheese'; there are fused silica, N-BK7, CaF2"):
        media.Glass.named("cheese")
    with pytest.raises(InputError, match="no glass is named 'N-BK7'; there are Larkmoor crown"):
        media.Glass.named("N-BK7", table=write())


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"strengths": [1.0, 2.0]}, r"x: strengths and resonances must be two rows of the same length; got shapes \(2,\) and \(1,\)"),
        ({"resonances": [0.1] * u.s}, r"x: resonances must be lengths or areas, for example \[0\.07, 0\.1, 9\.9\] \* u\.um; got s"),
        ({"relative_to": "nitrogen"}, 'x: relative_to must be "air" or "vacuum"; got \'nitrogen\''),
        ({"now": 30 * u.deg_C}, "x: it has no temperature coefficients, so only its own temperature will do, 20.0 deg_C; got 30.0 deg_C"),
        ({"now": [20, 30] * u.deg_C}, r"now must be one number; got an array of shape \(2,\)"),
    ],
)
def test_messages(changes, message):
    given = {"name": "x", "strengths": [1.0], "resonances": [0.1] * u.um, "low": 0.3 * u.um, "high": 2 * u.um, **changes}
    with pytest.raises(InputError, match=message):
        media.Glass(**given)


# ---------------------------------------------------------------- range and temperature


def test_out_of_range_is_an_error_or_a_flag():
    silica = media.Glass.named("fused silica")
    with pytest.raises(InputError, match=r"fused silica: wavelength 4 um lies outside 0\.21 to 3\.71 um \(Malitson.*extrapolate=True"):
        silica.refractive_index(4 * u.um)
    with pytest.raises(InputError, match=r"wavelength 1 to 4 um lies outside"):
        silica.group_index([1, 4] * u.um)
    bold = replace(silica, extrapolate=True)
    assert "fused silica extrapolated: wavelength 4 um" in bold.refractive_index(4 * u.um).info.description
    assert bold.flags(1 * u.um) == ()
    assert not getattr(silica.refractive_index(1 * u.um).info, "description", None)


def test_the_glass_warms():
    glass = media.Glass.named("N-BK7")
    warm = glass.under(temperature=40 * u.deg_C)
    assert warm.now == 40 * u.deg_C
    assert glass.under() is glass
    assert glass.under(temperature=293.15 * u.K).refractive_index(633 * u.nm) == glass.refractive_index(633 * u.nm)
    # dn/dT and the group index' change go up as the glass warms; the derivatives follow the index
    for quantity in ("group_index", "group_velocity_dispersion"):
        assert getattr(warm, quantity)(633 * u.nm) > getattr(glass, quantity)(633 * u.nm)
    s = 1 / 0.633
    step = 1e-3
    n = warm.refractive_index([1 / (s - step), 1 / s, 1 / (s + step)] * u.um).value
    assert warm.group_index(0.633 * u.um).value == pytest.approx(n[1] + s * (n[2] - n[0]) / (2 * step), rel=1e-8)


def test_temperatures_beyond_the_coefficients():
    glass = media.Glass.named("N-BK7")
    message = r"N-BK7: temperature 200 deg_C lies outside -40 to 80 deg_C \(thermal coefficients\); say extrapolate=True"
    with pytest.raises(InputError, match=message):
        glass.under(temperature=200 * u.deg_C)
    bold = replace(glass, extrapolate=True).under(temperature=200 * u.deg_C)
    assert bold.flags() == ("N-BK7 extrapolated: temperature 200 deg_C lies outside -40 to 80 deg_C (thermal coefficients)",)


def test_a_glass_without_coefficients_does_not_warm():
    with pytest.raises(InputError, match="fused silica: it has no temperature coefficients, so only its own temperature will do"):
        media.Glass.named("fused silica").under(temperature=30 * u.deg_C)


def test_pressure_does_not_act_on_glass():
    with pytest.raises(InputError, match="N-BK7 has no pressure to set here; leave it out"):
        media.Glass.named("N-BK7").under(pressure=1 * u.bar)


def test_bare_numbers_are_refused():
    glass = media.Glass.named("N-BK7")
    with pytest.raises(UnitsError, match="wavelength must carry a unit"):
        glass.refractive_index(0.633)
    with pytest.raises(UnitsError, match="now must carry a unit"):
        glass.under(temperature=30)


def test_shapes_and_order():
    glass = media.Glass.named("N-BK7")
    where = np.linspace(2.2, 0.4, 6).reshape(2, 3) * u.um
    index = glass.group_index(where)
    assert index.shape == (2, 3)
    assert index[1, 2] == glass.group_index(where[1, 2])
    assert glass.group_index(where.to(u.THz, u.spectral())).value == pytest.approx(index.value, rel=1e-15)
    assert glass.group_index([] * u.um).shape == (0,)
    assert glass.refractive_index(np.float32(1.0) * u.um).shape == ()


def test_a_formula_without_a_real_index_is_refused(tmp_path):
    path = tmp_path / "mine.csv"
    head = "name,form,b1,c1,low [um],high [um],temperature [deg_C],relative_to,source\n"
    path.write_text(head + "odd,length,-5,0.1,0.3,3,20,vacuum,invented\n", encoding="utf-8")
    with pytest.raises(FileContentError, match=r"mine\.csv: data row 1: odd: the formula gives no real index at 0\.3 um"):
        media.read_glasses(path)


@pytest.mark.parametrize("name", [5, None])
def test_a_name_is_text(name):
    with pytest.raises(InputError, match="a glass is chosen by its name"):
        media.Glass.named(name)
