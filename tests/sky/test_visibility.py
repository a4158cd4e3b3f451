"""Visibility of stars, discs, rings and doubles against printed digits and against integrals over their brightness."""

import astropy.units as u
import mpmath as mp
import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import brentq
from scipy.special import j0

from whitefringe.sky.composite import OBJECT_SHAPES, Binary, Group, WithBackground
from whitefringe.sky.visibility import DarkenedDisc, GaussianDisc, Point, PowerLawDisc, Ring, UniformDisc, disc_term

from ..published import rows

WIDTHS = ("diameter", "fwhm")
PLACES = ("shape", "baseline", "wavelength", "x")
BY_NAME = {member.shape: member for member in OBJECT_SHAPES}


def built(row, **size):
    """The row's object, of a stated size if the row has none."""
    given = {name: row.quantity(name) if name in WIDTHS else float(text) for name, text in row.inputs.items() if name not in PLACES}
    return BY_NAME[row.inputs["shape"]](**size, **given)


def across(disc, x):
    """Real visibility of an object of size 1/pi rad at x = pi size q; the direction does not matter."""
    value = disc.visibility_si(0.6 * np.asarray(x, dtype=float), 0.8 * np.asarray(x, dtype=float))
    assert np.all(value.imag == 0)
    return value.real


SIZE = 1 / np.pi * u.rad


@pytest.mark.parametrize("row", rows("visibility", "visibility"))
def test_visibility(row):
    value = built(row).visibility(row.quantity("baseline"), 0 * u.m, row.quantity("wavelength"))
    assert value.real == row.approx()
    assert value.imag == 0


@pytest.mark.parametrize("row", rows("visibility", "visibility squared"))
def test_visibility_squared(row):
    value = built(row).visibility(0 * u.m, row.quantity("baseline"), row.quantity("wavelength"))
    assert abs(value) ** 2 == row.approx()


@pytest.mark.parametrize("row", rows("visibility", "visibility at x"))
def test_visibility_at_x(row):
    assert across(built(row, diameter=SIZE), float(row.inputs["x"])) == row.approx()


@pytest.mark.parametrize("row", rows("visibility", "first null"))
def test_first_null(row):
    disc = built(row, diameter=SIZE)
    assert brentq(lambda x: float(across(disc, x)), 2, 6, xtol=1e-14) == row.approx()


@pytest.mark.parametrize("row", rows("visibility", "null of a disc"))
def test_nulls_of_a_disc(row):
    disc, order = UniformDisc(diameter=1 * u.rad), int(row.inputs["order"])
    assert brentq(lambda q: float(across(disc, q)), order - 0.2, order + 0.5, xtol=1e-14) == row.approx()


@pytest.mark.parametrize("row", rows("visibility", "null baseline"))
def test_null_baseline(row):
    disc = built(row)
    found = brentq(lambda metres: disc.visibility(metres * u.m, 0 * u.m, row.quantity("wavelength")).real, 0.7 * row.value, 1.5 * row.value)
    assert found == row.approx()


def curvature(profile):
    """Limit of (1 - V)/x^2 at x = 0, by Richardson's rule from x = h, h/2 and h/4."""
    h = 0.1
    far, near, nearest = (float((1 - profile(x)) / x**2) for x in (h, h / 2, h / 4))
    return (16 * (4 * nearest - near) / 3 - (4 * near - far) / 3) / 15


@pytest.mark.parametrize("row", rows("visibility", "diameter over uniform diameter"))
def test_diameters_that_look_alike_on_short_baselines(row):
    size = {"fwhm" if row.inputs["shape"] == "gaussian-disc" else "diameter": SIZE}
    uniform = curvature(lambda x: across(UniformDisc(diameter=SIZE), x))
    other = curvature(lambda x: across(built(row, **size), x))
    assert np.sqrt(uniform / other) == row.approx()


def pair_of(row):
    numbers = {name: row.quantity(name) for name in ("first", "second")}
    stars = {name: UniformDisc(diameter=size) for name, size in numbers.items()}
    return Binary(**stars, flux_ratio=float(row.inputs["flux_ratio"]), separation=row.quantity("separation"), position_angle=90 * u.deg)


@pytest.mark.parametrize("row", rows("visibility", "binary squared"))
def test_binary(row):
    value = pair_of(row).visibility(row.quantity("baseline"), 0 * u.m, row.quantity("wavelength"))
    assert abs(value) ** 2 == row.approx()


@pytest.mark.parametrize("row", rows("visibility", "binary phase"))
def test_phase_of_the_second_star(row):
    east = Binary(flux_ratio=1e15, separation=row.quantity("separation"), position_angle=90 * u.deg)
    phase = -np.angle(east.visibility(row.quantity("baseline"), 0 * u.m, row.quantity("wavelength")))
    assert np.mod(phase - row.value, 2 * np.pi) == pytest.approx(0, abs=1e-10) or np.mod(row.value - phase, 2 * np.pi) < 1e-10


@pytest.mark.parametrize("row", rows("visibility", "least visibility of two points"))
def test_least_visibility_of_two_points(row):
    pair = Binary(flux_ratio=float(row.inputs["flux_ratio"]), separation=1 * u.rad, position_angle=0 * u.deg)
    assert abs(pair.visibility_si(0.0, 0.5)) == row.approx()


@pytest.mark.parametrize("order", [1.0, 1.15, 1.5, 3.0, 6.0])
def test_the_bessel_form_from_the_smallest_to_the_largest_x(order):
    x = np.concatenate([[0.0, 1e-300, 1e-150], np.geomspace(1e-10, 1e4, 43)])
    expected = [float(mp.hyp0f1(order + 1, -(mp.mpf(float(at)) ** 2) / 4)) for at in x]
    assert disc_term(order, x) == pytest.approx(np.array(expected), abs=1e-13)


PROFILES = {
    "uniform": (UniformDisc(diameter=2 * u.rad), lambda mu: 1.0),
    "linear": (DarkenedDisc(diameter=2 * u.rad, darkening=0.45), lambda mu: 1 - 0.45 * (1 - mu)),
    "power law": (PowerLawDisc(diameter=2 * u.rad, exponent=0.7), lambda mu: mu**0.7),
}


@pytest.mark.parametrize("name", PROFILES)
def test_discs_are_the_hankel_transforms_of_their_brightness(name):
    disc, brightness = PROFILES[name]

    # r = sin t, mu = cos t takes the steep limb out of the integrals
    def integral(q):
        kernel = lambda t: brightness(np.cos(t)) * j0(2 * np.pi * q * np.sin(t)) * np.sin(t) * np.cos(t)  # noqa: E731
        return quad(kernel, 0, np.pi / 2, epsabs=1e-13, epsrel=1e-12)[0]

    for q in (0.05, 0.4, 1.1, 2.3):
        assert float(disc.visibility_si(q, 0.0).real) == pytest.approx(integral(q) / integral(0.0), abs=1e-12)


@pytest.mark.parametrize("width", [0.02, 0.3, 1.0])
def test_a_ring_is_the_mean_of_thin_rings(width):
    ring = Ring(diameter=1 * u.rad, width=width * u.rad)
    for q in (0.1, 0.77, 3.0, 11.0):
        mean = quad(lambda d, q=q: d * j0(np.pi * q * d), 1 - width, 1 + width, epsabs=1e-13, limit=200)[0] / (2 * width)
        assert float(ring.visibility_si(0.0, q).real) == pytest.approx(mean, abs=1e-12)


def test_ring_between_thin_and_filled():
    x = np.concatenate([[0.0], np.geomspace(1e-9, 3e4, 300)])
    thin = across(Ring(diameter=SIZE), x)
    assert thin == pytest.approx(j0(x), abs=1e-13)
    near = x < 1e3
    assert across(Ring(diameter=SIZE, width=1e-12 * SIZE), x)[near] == pytest.approx(thin[near], abs=1e-12)
    assert across(Ring(diameter=SIZE, width=SIZE), x) == pytest.approx(across(UniformDisc(diameter=2 * SIZE), x), abs=1e-13)


@pytest.mark.parametrize("ratio", [1e-6, 1e-4, 1e-2, 0.5])
def test_both_forms_of_a_ring_meet(ratio):
    ring = Ring(diameter=SIZE, width=ratio * SIZE)
    below, above = 8 / ratio * (1 - 1e-14), 8 / ratio * (1 + 1e-14)
    assert across(ring, below) == pytest.approx(across(ring, above), abs=1e-11)


ROUND = [
    UniformDisc(diameter=SIZE),
    DarkenedDisc(diameter=SIZE, darkening=1.0),
    PowerLawDisc(diameter=SIZE, exponent=0.3),
    GaussianDisc(fwhm=SIZE),
    Ring(diameter=SIZE),
    Ring(diameter=SIZE, width=0.5 * SIZE),
]


@pytest.mark.parametrize("disc", ROUND, ids=lambda disc: disc.shape)
def test_towards_zero_baseline(disc):
    x = np.geomspace(1e-200, 1e-4, 100)
    second_order = curvature(lambda at: across(disc, at)) * x**2
    assert across(disc, 0.0) == 1
    assert across(disc, x) == pytest.approx(1 - second_order, abs=1e-15)


@pytest.mark.parametrize("member", [UniformDisc, Ring])
def test_no_size_is_a_point(member):
    assert member(diameter=0 * u.mas).visibility(1e5 * u.m, 3 * u.m, 0.5 * u.um) == 1
    assert GaussianDisc(fwhm=0 * u.mas).visibility(1e5 * u.m, 3 * u.m, 0.5 * u.um) == 1


def test_sign_of_the_phase_and_sense_of_the_angles():
    # exp(-2 pi i (u alpha + v delta)/lambda): the second star a quarter fringe to the east and alone in light has -90 degrees
    baseline, wavelength = 100 * u.m, 2 * u.um
    quarter = (wavelength / baseline / 4).to_value(u.dimensionless_unscaled) * u.rad
    east = Binary(flux_ratio=1e15, separation=quarter, position_angle=90 * u.deg)
    assert east.visibility(baseline, 0 * u.m, wavelength) == pytest.approx(-1j, abs=1e-12)
    assert east.visibility(0 * u.m, baseline, wavelength) == pytest.approx(1, abs=1e-12)
    north = Binary(flux_ratio=1e15, separation=quarter, position_angle=0 * u.deg)
    assert north.visibility(0 * u.m, baseline, wavelength) == pytest.approx(-1j, abs=1e-12)


def test_wavelength_or_frequency_and_shapes():
    disc = UniformDisc(diameter=2 * u.mas)
    baseline = np.array([10.0, 50.0, 90.0]) * u.m
    by_wavelength = disc.visibility(baseline, baseline[:, None], 1.65 * u.um)
    by_frequency = disc.visibility(baseline, baseline[:, None], (1.65 * u.um).to(u.THz, u.spectral()))
    assert by_wavelength.shape == (3, 3)
    assert by_wavelength.dtype == complex
    assert by_frequency == pytest.approx(by_wavelength, abs=1e-14)
    single = disc.visibility(50 * u.m, 10 * u.m, [1.2, 1.65] * u.um)
    assert single[1] == pytest.approx(by_wavelength[0, 1], abs=1e-15)


def test_a_background_is_dark_on_every_baseline():
    star = WithBackground(object=UniformDisc(diameter=2.5 * u.mas), fraction=0.2)
    assert WithBackground(fraction=0.3).visibility(0 * u.m, 0 * u.m, 1 * u.um) == 0.7
    assert star.visibility(200 * u.m, 0 * u.m, 1.65 * u.um) == pytest.approx(0.8 * -0.11276247335802, abs=1e-12)
    # the background as what it is: a Gaussian much wider than lambda / B
    wide = Group(objects=[UniformDisc(diameter=2.5 * u.mas), GaussianDisc(fwhm=1 * u.arcsec)], fluxes=[0.8, 0.2])
    assert wide.visibility(200 * u.m, 0 * u.m, 1.65 * u.um) == pytest.approx(star.visibility(200 * u.m, 0 * u.m, 1.65 * u.um), abs=1e-12)


def test_a_point_is_one_everywhere():
    assert np.all(Point().visibility([0, 1e3] * u.m, 0 * u.m, 1 * u.um) == 1)
