"""`Spectrum`: its cells, its lines, what it refuses, and light through filters."""

import dataclasses

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import InputError, UnitsError
from whitefringe.spectra import Flat, Line, Spectrum, TopHat, detected
from whitefringe.spectra._cells import cell_means

GRID = {"start": 180 * u.THz, "step": 2 * u.THz}
SODIUM = Line(wavelength=589.158 * u.nm, fwhm=2 * u.GHz)


def ramp(cells=20, **others):
    return Spectrum(**GRID, density=np.arange(1.0, cells + 1), **others)


def test_cells_and_axes():
    light = ramp()
    assert light.frequency_si[[0, -1]] == pytest.approx([181e12, 219e12])
    assert light.frequency[0].unit == u.Hz
    assert light.wavelength[0].to_value(u.m) == pytest.approx(299792458 / 181e12)
    assert light.extent_si == pytest.approx((180e12, 220e12))
    assert light.total_rate == light.continuum_rate == pytest.approx(210 * 2e12)


def test_arrays_are_copies_that_cannot_be_written():
    values = np.ones(5)
    light = Spectrum(**GRID, density=values)
    values[0] = 7.0
    assert light.density[0] == 1.0
    for array in (light.density, light.frequency_si, light.slopes):
        with pytest.raises(ValueError, match="read-only"):
            array[0] = 1.0
    with pytest.raises(dataclasses.FrozenInstanceError):
        light.density = values


def test_density_is_linear_inside_cells_and_zero_outside():
    light = ramp()
    at = np.array([179.9, 180.0, 181.0, 182.0, 200.0, 219.0, 220.1]) * u.THz
    assert light.density_at(at) == pytest.approx([0, 0.5, 1, 1.5, 10.5, 20, 0])
    assert light.density_at((299792458 / 200e12) * u.m) == pytest.approx(10.5)


def test_lines_add_to_the_rate():
    light = Spectrum(lines=(SODIUM, dataclasses.replace(SODIUM, strength=3.0)))
    assert light.total_rate == 4.0
    assert light.density_at(200 * u.THz) == 0.0
    assert light.extent_si == (SODIUM.frequency_si, SODIUM.frequency_si)


def test_power_weight_multiplies_by_frequency():
    light = ramp(lines=(Line(wavelength=200 * u.THz), Line(wavelength=100 * u.THz)))
    power = light.power_weighted()
    assert power.weight == "power"
    ratio = power.density / light.density / light.frequency_si
    assert ratio == pytest.approx(ratio[0])
    assert [line.strength for line in power.lines] == pytest.approx([200e12 * ratio[0], 100e12 * ratio[0]])
    assert power.power_weighted() is power


@pytest.mark.parametrize(
    ("given", "message"),
    [
        (
            {"density": [1, 2, 3]},
            r"density must be one row of at least 4 cells \(or none\); got shape \(3,\)",
        ),
        ({"density": np.ones((4, 4))}, r"got shape \(4, 4\)"),
        ({"density": [1, 2, np.nan, 1]}, "density must be finite and nowhere below zero"),
        ({"density": [1, 2, -1, 1]}, "density must be finite and nowhere below zero"),
        ({"density": [0, 0, 0, 0]}, "no light: the continuum and the lines are all zero"),
        ({}, "no light: the continuum and the lines are all zero"),
        ({"density": np.ones(4), "weight": "energy"}, 'weight must be "photon" or "power"; got \'energy\''),
        ({"density": np.ones(4), "start": 0 * u.Hz}, "start must be above zero; got 0.0 Hz"),
        ({"density": np.ones(4), "step": 0 * u.Hz}, "step must be above zero; got 0.0 Hz"),
    ],
)
def test_what_a_spectrum_refuses(given, message):
    with pytest.raises(InputError, match=message):
        Spectrum(**{**GRID, **given})


def test_a_bare_grid_is_refused():
    with pytest.raises(UnitsError, match="start must carry a unit"):
        Spectrum(start=180e12, step=1 * u.THz, density=np.ones(4))
    with pytest.raises(UnitsError, match="step must carry a unit"):
        Spectrum(start=180 * u.THz, step=1e12, density=np.ones(4))


def test_from_samples_puts_cells_around_the_points():
    light = Spectrum.from_samples(np.linspace(181, 219, 20) * u.THz, np.arange(1.0, 21.0))
    assert light.start_si == pytest.approx(180e12)
    assert light.step_si == pytest.approx(2e12)
    assert np.array_equal(light.density, ramp().density)


@pytest.mark.parametrize(
    ("terahertz", "message"),
    [
        ([1, 2, 3], "one row of at least 4 rising values"),
        ([4, 3, 2, 1], "one row of at least 4 rising values"),
        ([1, 2, 2, 3], "one row of at least 4 rising values"),
        (5, "one row of at least 4 rising values"),
        ([1, 2, 3, 4.1], r"equally spaced; use spectra\.Tabulated"),
    ],
)
def test_from_samples_needs_an_even_grid(terahertz, message):
    with pytest.raises(InputError, match=f"frequency must be {message}"):
        Spectrum.from_samples(terahertz * u.THz, np.ones(np.size(terahertz)))


def test_from_samples_needs_as_many_densities_as_frequencies():
    with pytest.raises(InputError, match="density"):
        Spectrum.from_samples(np.arange(100, 200) * u.THz, np.ones(50))


def test_from_function_needs_four_cells():
    with pytest.raises(InputError, match="samples must be at least 4; got 3"):
        Spectrum.from_function(np.ones_like, (1e14, 2e14), samples=3)


def test_cell_means_are_exact_for_cubics_and_across_kinks():
    edges = np.linspace(-1.0, 2.0, 8)
    cubic = cell_means(lambda x: x**3, -1.0, 2.0, 7, np.array([0.3, 9.0]))
    assert cubic == pytest.approx(np.diff(edges**4 / 4) / np.diff(edges), abs=1e-14)
    kink = cell_means(lambda x: np.abs(x - 0.3), -1.0, 2.0, 7, np.array([0.3, 0.3]))
    area = np.diff((edges - 0.3) * np.abs(edges - 0.3) / 2)
    assert kink == pytest.approx(area / np.diff(edges), abs=1e-14)


def test_through_ends_where_the_filters_end():
    light = ramp().through(TopHat(centre=200 * u.THz, width=10 * u.THz))
    assert light.extent_si == pytest.approx((195e12, 205e12))
    assert light.density.size == 20
    assert light.density_at([196, 200, 204] * u.THz) == pytest.approx([8.5, 10.5, 12.5])


def test_through_is_the_same_as_detecting_with_all_filters():
    first, second = TopHat(centre=200 * u.THz, width=20 * u.THz), TopHat(centre=205 * u.THz, width=20 * u.THz)
    both = detected(Flat(per="wavelength"), first, second)
    chain = detected(Flat(per="wavelength"), first).through(second)
    assert chain.extent_si == pytest.approx(both.extent_si)
    assert chain.density == pytest.approx(both.density, rel=1e-6)


def test_through_keeps_the_weight_and_the_lines_that_pass():
    light = ramp(lines=(Line(wavelength=200 * u.THz, strength=2.0), Line(wavelength=100 * u.THz)))
    left = light.power_weighted().through(TopHat(centre=200 * u.THz, width=10 * u.THz))
    assert left.weight == "power"
    assert [line.frequency_si for line in left.lines] == [200e12]


def test_a_line_beside_the_continuum_passes_alone():
    light = ramp(lines=(Line(wavelength=300 * u.THz),))
    left = light.through(TopHat(centre=300 * u.THz, width=10 * u.THz))
    assert left.total_rate == 1.0
    assert len(left.lines) == 1
