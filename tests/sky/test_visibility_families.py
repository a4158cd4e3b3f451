"""Every object shape keeps the contract of its family, and refuses what it cannot be."""

import re

import astropy.units as u
import numpy as np
import pytest

from whitefringe.errors import InputError, UnitsError
from whitefringe.parameters import parameters_of
from whitefringe.sky._object import SkyObject
from whitefringe.sky.composite import OBJECT_SHAPES, Binary, Group, WithBackground
from whitefringe.sky.images import Picture
from whitefringe.sky.visibility import DarkenedDisc, GaussianDisc, Point, PowerLawDisc, Ring, UniformDisc

from .. import contracts

WITHOUT_PARAMETERS = {
    Group: {"objects": [Point(), UniformDisc(diameter=1 * u.mas)], "fluxes": [1, 2], "east": [0, 3] * u.mas},
    Picture: {"image": [[0, 1, 2], [3, 4, 5]], "pixel": 1 * u.mas},
}
"""Arguments of the members that no slider can describe."""


def built(member):
    if member in WITHOUT_PARAMETERS:
        return member(**WITHOUT_PARAMETERS[member])
    return member(**{name: item.start * item.unit for name, item in parameters_of(member).items()})


@pytest.mark.parametrize("member", OBJECT_SHAPES, ids=lambda member: member.shape)
def test_names_words_and_parameters(member):
    contracts.has_a_name(member)
    contracts.has_a_docstring(member)
    contracts.parameters_make_sense(member)
    if member is not Point:
        contracts.is_frozen(built(member))


@pytest.mark.parametrize("member", OBJECT_SHAPES, ids=lambda member: member.shape)
def test_the_public_twin_agrees_with_the_inner_one(member):
    thing = built(member)
    assert isinstance(thing, SkyObject)
    east, north = np.linspace(-80, 120, 12).reshape(3, 4), np.linspace(30, -90, 4)
    inner = thing.visibility_si(east / 1.65e-6, north / 1.65e-6)
    assert inner.shape == (3, 4)
    assert inner.dtype == complex
    assert thing.visibility(east * u.m, north * u.m, 1650 * u.nm) == pytest.approx(inner, abs=1e-12)
    assert np.shape(thing.visibility(80 * u.m, 1 * u.m, 1.65 * u.um)) == ()


def test_shape_names_differ():
    names = [member.shape for member in OBJECT_SHAPES]
    assert len(set(names)) == len(names)


def test_objects_of_equal_parameters_are_equal():
    assert UniformDisc(diameter=1 * u.mas) == UniformDisc(diameter=1000 * u.uas)
    assert Binary(flux_ratio=1, separation=1 * u.mas, position_angle=0 * u.deg) != Binary(
        flux_ratio=0.9, separation=1 * u.mas, position_angle=0 * u.deg
    )


def test_arrays_are_copies_that_cannot_be_written_to():
    image, east = np.ones((2, 3)), np.array([1.0, 2.0])
    picture, group = Picture(image=image, pixel=1 * u.mas), Group(objects=[Point(), Point()], east=east * u.mas)
    image[0, 0] = east[0] = 7.0
    assert picture.image[0, 0] == 1
    assert group.east[0] == 1 * u.mas
    with pytest.raises(ValueError, match="read-only"):
        picture.image[0, 0] = 2
    with pytest.raises(ValueError, match="read-only"):
        group.east[0] = 2 * u.mas


ANGLES = [(UniformDisc, "diameter", {}), (DarkenedDisc, "diameter", {"darkening": 0.3}), (PowerLawDisc, "diameter", {"exponent": 0.3})]
ANGLES += [(GaussianDisc, "fwhm", {}), (Ring, "diameter", {}), (Ring, "width", {"diameter": 1 * u.mas})]
ANGLES += [(Binary, "separation", {"flux_ratio": 1, "position_angle": 0 * u.deg})]


@pytest.mark.parametrize(("member", "name", "others"), ANGLES, ids=lambda value: getattr(value, "shape", ""))
@pytest.mark.parametrize(
    ("value", "message"),
    [
        (1.0, "must carry a unit (for example 1 mas); got 1.0 without one"),
        (1 * u.m, "must be convertible to rad (for example 1 mas); got m"),
        (-1 * u.mas, "must be zero or more; got -1.0 mas"),
        (np.nan * u.mas, "must be finite"),
        ([1, 2] * u.mas, "must be one angle; got an array of shape (2,)"),
    ],
)
def test_angles_that_are_refused(member, name, others, value, message):
    with pytest.raises(InputError, match=re.escape(f"{name} {message}")):
        member(**{name: value}, **others)


PAIR = {"flux_ratio": 1.0, "separation": 1 * u.mas, "position_angle": 0 * u.deg}


@pytest.mark.parametrize(
    ("member", "given", "message"),
    [
        (DarkenedDisc, {"diameter": 1 * u.mas, "darkening": 1.2}, "darkening must be at least 0 and at most 1; got 1.2"),
        (DarkenedDisc, {"diameter": 1 * u.mas, "darkening": -0.1}, "darkening must be at least 0 and at most 1; got -0.1"),
        (DarkenedDisc, {"diameter": 1 * u.mas, "darkening": "dark"}, "darkening must be one number without a unit; got 'dark'"),
        (PowerLawDisc, {"diameter": 1 * u.mas, "exponent": -0.1}, "exponent must be at least 0 and at most 10; got -0.1"),
        (Ring, {"diameter": 1 * u.mas, "width": 2 * u.mas}, "width must be at most the ring's diameter, 1.0 mas; got 2.0 mas: a filled"),
        (Binary, PAIR | {"flux_ratio": -1}, "flux_ratio must be at least 0; got -1"),
        (Binary, PAIR | {"first": 3}, "first must be an object such as sky.UniformDisc(diameter=1 * u.mas); got 3"),
        (Binary, PAIR | {"second": Point}, "second must be an object such as sky.UniformDisc"),
        (Binary, PAIR | {"position_angle": 45}, "position_angle must carry a unit (for example 1 deg)"),
        (Binary, PAIR | {"position_angle": [1, 2] * u.deg}, "position_angle must be one angle; got an array of shape (2,)"),
        (WithBackground, {"fraction": 1.5}, "fraction must be at least 0 and at most 1; got 1.5"),
        (WithBackground, {"fraction": 0.5, "object": "star"}, "object must be an object such as sky.UniformDisc"),
        (Group, {"objects": []}, "objects must be one or more objects such as"),
        (Group, {"objects": Point()}, "objects must be one or more objects such as"),
        (Group, {"objects": [Point(), 2]}, "objects: number 2 must be an object such as"),
        (Group, {"objects": [Point()], "fluxes": [1, 2]}, "fluxes must be one per object; got 2 for 1 objects"),
        (Group, {"objects": [Point(), Point()], "fluxes": 2.0}, "fluxes must be one per object; got 1 for 2 objects"),
        (Group, {"objects": [Point()], "fluxes": ["bright"]}, "fluxes must be one number without a unit"),
        (Group, {"objects": [Point()], "fluxes": [-1]}, "fluxes must be at least 0; got -1"),
        (Group, {"objects": [Point()], "fluxes": [0]}, "fluxes must not all be zero: there would be no light"),
        (Group, {"objects": [Point()], "east": [1, 2] * u.mas}, "east must have one angle per object; got shape (2,) for 1 objects"),
        (Group, {"objects": [Point()], "north": [1]}, "north must carry a unit (for example 1 mas)"),
        (Picture, {"image": [[1]], "pixel": 0 * u.mas}, "pixel must be above zero; got 0.0 mas"),
        (Picture, {"image": [[1]], "pixel": 1.0}, "pixel must carry a unit (for example 1 mas)"),
        (Picture, {"image": [[1], [2, 3]], "pixel": 1 * u.mas}, "image must be rows of numbers without a unit, all of one length"),
        (Picture, {"image": [["a"]], "pixel": 1 * u.mas}, "image must be rows of numbers without a unit, all of one length"),
        (Picture, {"image": [1, 2], "pixel": 1 * u.mas}, "image must have rows and columns, at least one of each; got shape (2,)"),
        (Picture, {"image": [[]], "pixel": 1 * u.mas}, "image must have rows and columns, at least one of each; got shape (1, 0)"),
        (Picture, {"image": [[0, 1], [np.nan, 2]], "pixel": 1 * u.mas}, "row 1, column 0 (from zero) is nan, not finite (1 such pixels)"),
        (Picture, {"image": [[0, -1], [-3, 2]], "pixel": 1 * u.mas}, "row 0, column 1 (from zero) is -1, below zero (2 such pixels)"),
        (Picture, {"image": [[0, 0]], "pixel": 1 * u.mas}, "image must have some light; every pixel is zero"),
    ],
)
def test_what_is_refused(member, given, message):
    with pytest.raises(InputError, match=re.escape(message)):
        member(**given)


def test_bare_baselines_and_wavelengths_are_refused():
    disc = UniformDisc(diameter=1 * u.mas)
    with pytest.raises(UnitsError, match="u must carry a unit"):
        disc.visibility(100.0, 0 * u.m, 1.65 * u.um)
    with pytest.raises(UnitsError, match="v must be convertible to m"):
        disc.visibility(100 * u.m, 0 * u.s, 1.65 * u.um)
    with pytest.raises(UnitsError, match="wavelength must carry a unit"):
        disc.visibility(100 * u.m, 0 * u.m, 1.65)
    with pytest.raises(InputError, match="wavelength must be positive"):
        disc.visibility(100 * u.m, 0 * u.m, 0 * u.um)


def test_shapes_that_do_not_broadcast_are_refused():
    with pytest.raises(InputError, match=r"u, v, wavelength must have shapes that broadcast; got \(2,\), \(3,\), \(\): give equal"):
        Point().visibility([1, 2] * u.m, [1, 2, 3] * u.m, 1 * u.um)
