"""What holds for the visibility of any object."""

import astropy.units as u
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from whitefringe.sky.composite import Binary, Group, WithBackground
from whitefringe.sky.images import Picture
from whitefringe.sky.observables import closure_phase_si
from whitefringe.sky.visibility import DarkenedDisc, GaussianDisc, Point, PowerLawDisc, Ring, UniformDisc

MAS = (1 * u.mas).to_value(u.rad)

angles = st.floats(0, 30).map(lambda value: value * u.mas)
turns = st.floats(-400, 400).map(lambda value: value * u.deg)
parts = st.floats(0, 1, allow_subnormal=False)
rings = st.tuples(angles, parts).map(lambda both: Ring(diameter=both[0], width=both[1] * both[0]))
centred = st.one_of(
    st.just(Point()),
    st.builds(UniformDisc, diameter=angles),
    st.builds(DarkenedDisc, diameter=angles, darkening=parts),
    st.builds(PowerLawDisc, diameter=angles, exponent=st.floats(0, 10)),
    st.builds(GaussianDisc, fwhm=angles),
    rings,
)
pairs = st.builds(Binary, first=centred, second=centred, flux_ratio=st.floats(0, 10), separation=angles, position_angle=turns)
pictures = st.builds(
    Picture,
    image=arrays(float, st.tuples(st.integers(1, 6), st.integers(1, 6)), elements=st.floats(0, 1, allow_subnormal=False)).filter(np.any),
    pixel=st.floats(0.1, 5).map(lambda value: value * u.mas),
)
groups = st.lists(st.one_of(centred, pairs, pictures), min_size=1, max_size=4).flatmap(
    lambda members: st.builds(
        Group,
        objects=st.just(members),
        fluxes=st.lists(st.floats(0.01, 5), min_size=len(members), max_size=len(members)),
        east=arrays(float, len(members), elements=st.floats(-20, 20)).map(lambda value: value * u.mas),
        north=arrays(float, len(members), elements=st.floats(-20, 20)).map(lambda value: value * u.mas),
    )
)
objects = st.one_of(centred, pairs, pictures, groups)
frequencies = st.floats(-3e8, 3e8, allow_subnormal=False)
planes = st.tuples(frequencies, frequencies)

quick = settings(deadline=None, derandomize=True, max_examples=60)


@quick
@given(objects)
def test_one_at_zero_baseline(thing):
    assert abs(thing.visibility_si(0.0, 0.0) - 1) < 1e-12


@quick
@given(objects, planes)
def test_never_above_one(thing, plane):
    assert abs(thing.visibility_si(*plane)) <= 1 + 1e-12


@quick
@given(objects, planes)
def test_the_other_way_round_is_the_conjugate(thing, plane):
    assert abs(thing.visibility_si(-plane[0], -plane[1]) - np.conj(thing.visibility_si(*plane))) < 1e-12


@quick
@given(objects, parts, planes)
def test_a_background_scales(thing, fraction, plane):
    veiled = WithBackground(object=thing, fraction=fraction)
    assert abs(veiled.visibility_si(*plane) - (1 - fraction) * thing.visibility_si(*plane)) < 1e-15


@quick
@given(centred, planes, planes)
def test_closure_phase_of_a_centred_object_is_zero_or_half_a_turn(thing, first, second):
    assert closure_phase_si(thing, *first, *second) in (0.0, np.pi)


@quick
@given(centred, angles, turns, planes, planes)
def test_closure_phase_of_two_equal_objects_is_zero_or_half_a_turn(thing, separation, angle, first, second):
    pair = Binary(first=thing, second=thing, flux_ratio=1, separation=separation, position_angle=angle)
    ends = (first, second, (-first[0] - second[0], -first[1] - second[1]))
    # the phase of a product near zero is rounding
    triple = abs(np.prod([pair.visibility_si(*end) for end in ends]))
    assert triple * abs(np.sin(closure_phase_si(pair, *first, *second))) < 1e-12


@quick
@given(objects, st.floats(-50, 50), st.floats(-50, 50), planes, planes)
def test_closure_phase_does_not_know_the_place(thing, east, north, first, second):
    moved = Group(objects=[thing], east=[east] * u.mas, north=[north] * u.mas)
    ends = (first, second, (-first[0] - second[0], -first[1] - second[1]))
    triple = abs(np.prod([thing.visibility_si(*end) for end in ends]))
    change = closure_phase_si(moved, *first, *second) - closure_phase_si(thing, *first, *second)
    assert triple * abs(np.exp(1j * change) - 1) < 1e-11


@quick
@given(centred, centred, angles, turns, turns, planes)
def test_turning_a_pair_is_turning_the_baseline(first, second, separation, angle, turn, plane):
    pair = {"first": first, "second": second, "flux_ratio": 0.4, "separation": separation}
    # north through east: (east, north) = (sin, cos) of the angle
    sine, cosine = np.sin(turn.to_value(u.rad)), np.cos(turn.to_value(u.rad))
    turned = (cosine * plane[0] + sine * plane[1], -sine * plane[0] + cosine * plane[1])
    there = Binary(**pair, position_angle=angle + turn).visibility_si(*turned)
    assert abs(there - Binary(**pair, position_angle=angle).visibility_si(*plane)) < 1e-11


@quick
@given(centred, centred, st.floats(0, 10), angles, turns, planes)
def test_a_pair_is_a_group_of_two(first, second, ratio, separation, angle, plane):
    pair = Binary(first=first, second=second, flux_ratio=ratio, separation=separation, position_angle=angle)
    east, north = ([0, size] for size in pair.offset_si)
    group = Group(objects=[first, second], fluxes=[1, ratio], east=east * u.rad, north=north * u.rad)
    assert abs(group.visibility_si(*plane) - pair.visibility_si(*plane)) < 1e-12


@quick
@given(angles, planes)
def test_members_of_the_darkened_family_meet(diameter, plane):
    at = [
        disc.visibility_si(*plane)
        for disc in (
            UniformDisc(diameter=diameter),
            DarkenedDisc(diameter=diameter, darkening=0),
            PowerLawDisc(diameter=diameter, exponent=0),
            DarkenedDisc(diameter=diameter, darkening=1),
            PowerLawDisc(diameter=diameter, exponent=1),
        )
    ]
    assert abs(at[1] - at[0]) < 1e-14
    assert abs(at[2] - at[0]) < 1e-14
    assert abs(at[4] - at[3]) < 1e-14


@quick
@given(pictures, planes)
def test_a_picture_is_a_group_of_its_pixels(picture, plane):
    rows, columns = picture.image.shape
    north, east = np.meshgrid(np.arange(rows) - (rows - 1) / 2, np.arange(columns) - (columns - 1) / 2, indexing="ij")
    points = Group(
        objects=[Point()] * picture.image.size,
        fluxes=picture.image.ravel().tolist(),
        east=east.ravel() * picture.pixel,
        north=north.ravel() * picture.pixel,
    )
    side = picture.pixel_si
    pixel = np.sinc(plane[0] * side) * np.sinc(plane[1] * side)
    assert abs(picture.visibility_si(*plane) - pixel * points.visibility_si(*plane)) < 1e-12


def sampled(brightness, size, pixels, fine=8):
    """Mean brightness in pixels of a square of `size`, from `fine` by `fine` points in each."""
    along = ((np.arange(pixels * fine) + 0.5) / (pixels * fine) - 0.5) * size
    values = brightness(np.hypot(along, along[:, None]))
    return values.reshape(pixels, fine, pixels, fine).mean(axis=(1, 3))


@pytest.mark.parametrize("pixels", [40, 41])
def test_a_picture_of_a_disc_is_the_disc_to_the_pixels_accuracy(pixels):
    picture = Picture(image=sampled(lambda r: (r < 1.0).astype(float), 2.2, pixels), pixel=2.2 / pixels * u.mas)
    disc = UniformDisc(diameter=2 * u.mas)
    q = np.linspace(0, 2, 41) / (2 * MAS)
    for east, north in ((1, 0), (0, 1), (0.6, -0.8)):
        assert picture.visibility_si(east * q, north * q) == pytest.approx(disc.visibility_si(east * q, north * q), abs=2e-3)


def test_a_picture_of_a_gaussian_converges_with_the_square_of_the_pixel():
    errors = []
    for pixels in (24, 48, 96):
        image = sampled(lambda r: np.exp(-4 * np.log(2) * r**2), 6.0, pixels)
        picture = Picture(image=image, pixel=6.0 / pixels * u.mas)
        q = np.linspace(0, 1, 21) / MAS
        errors.append(np.max(np.abs(picture.visibility_si(q, 0.0) - GaussianDisc(fwhm=1 * u.mas).visibility_si(q, 0.0))))
    assert errors[0] / errors[1] == pytest.approx(4, rel=0.1)
    assert errors[1] / errors[2] == pytest.approx(4, rel=0.1)


def test_orientation_and_centre_of_a_picture():
    image = np.zeros((3, 5))
    image[2, 3] = 1.0  # one row north and one column east of the middle
    picture = Picture(image=image, pixel=1 * u.mas)
    there = Group(objects=[Point()], east=[1] * u.mas, north=[1] * u.mas)
    u_east, v_north = 3e7, 8e7
    pixel = np.sinc(u_east * MAS) * np.sinc(v_north * MAS)
    assert picture.visibility_si(u_east, v_north) == pytest.approx(pixel * there.visibility_si(u_east, v_north), abs=1e-12)


def test_a_picture_is_transformed_in_blocks_like_at_once():
    picture = Picture(image=np.arange(1.0, 40001.0).reshape(200, 200), pixel=0.01 * u.mas)
    east = np.linspace(-1e8, 1e8, 6001)
    whole = picture.visibility_si(east, 2e7)
    assert whole[::1000] == pytest.approx(np.array([picture.visibility_si(at, 2e7) for at in east[::1000]]), abs=1e-13)


def test_very_bright_pixels_do_not_overflow():
    picture = Picture(image=np.full((2, 2), 1e308), pixel=1 * u.mas)
    assert picture.visibility_si(0.0, 0.0) == 1
