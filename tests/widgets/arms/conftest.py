"""Arms of plates and air, and benches that have them or not."""

import astropy.units as u
import pytest

from whitefringe import media, spectra
from whitefringe.setup import Setup
from whitefringe.widgets import Bench

SILICA, ZNSE = media.Glass.named("fused silica"), media.Glass.named("ZnSe")
AIR = media.Ciddor1996(temperature=12 * u.deg_C, pressure=850 * u.hPa, humidity=30 * u.percent)
SCIENCE = spectra.TopHat(centre=1.5 * u.um, width=0.2 * u.um)
TRACKING = spectra.TopHat(centre=0.8 * u.um, width=0.06 * u.um)
MOST_WIDGETS = 150


def plate(length, medium=SILICA, **more):
    return media.Segment(medium=medium, length=length * u.mm, **more)


def air(length, **more):
    return media.Segment(medium=AIR, length=length * u.m, **more)


def bench_of(first=(), second=(), **more):
    return Bench(Setup(source=spectra.Flat(), filters=(SCIENCE,), arms=media.ArmPair(first=first, second=second), **more))


@pytest.fixture(scope="module")
def array(larkmoor):
    return Setup.read(larkmoor / "array.toml")


@pytest.fixture
def bench(array):
    return Bench(array)


@pytest.fixture
def bare():
    return Bench(Setup(source=spectra.Flat(), filters=(SCIENCE,)))
