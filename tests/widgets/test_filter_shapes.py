"""The filter control draws every shape of the family from its field descriptions."""

import astropy.units as u
import pytest

from whitefringe import spectra
from whitefringe.setup import Setup
from whitefringe.widgets import Bench, FilterControl

LAMP = spectra.Thermal(temperature=2900 * u.K)
SHAPES = [member for member in spectra.FILTER_SHAPES if member is not spectra.Tabulated]


@pytest.fixture
def control():
    setup = Setup(source=LAMP, filters=(spectra.TopHat(centre=1.65 * u.um, width=0.2 * u.um),))
    with FilterControl(Bench(setup)) as made:
        yield made


@pytest.mark.parametrize("member", SHAPES, ids=lambda member: member.shape)
def test_every_shape_can_be_chosen_and_moved(control, member):
    control.choice.value = member.shape
    assert type(control.current()) is member
    for name, row in control.rows_of(member.shape).items():
        before = getattr(control.current(), name)
        row.slider.value = row.slider.value + row.slider.step
        assert getattr(control.current(), name) != before


def test_whole_numbers_step_by_one_and_stay_whole(control):
    control.choice.value = "multi-cavity"
    row = control.row("cavities")
    assert row.slider.step == 1
    assert row.box.description == "cavities"
    row.slider.value = 5.0
    assert control.current().cavities == 5
    assert type(control.current().cavities) is int


@pytest.mark.parametrize(
    "shape",
    [
        spectra.LongPass(edge=180 * u.THz, rise=2 * u.THz, end=130 * u.THz),
        spectra.Trapezoid(centre=180 * u.THz, fwhm=20 * u.THz, edge=2 * u.THz),
        spectra.MultiCavity(centre=180 * u.THz, fwhm=20 * u.THz, cavities=2),
    ],
    ids=lambda shape: shape.shape,
)
def test_shapes_in_frequency_are_shown_in_wavelength(shape):
    bench = Bench(Setup(source=LAMP, filters=(shape,)))
    with FilterControl(bench) as control:
        place = control.row("edge" if shape.shape == "long-pass" else "centre")
        assert place.value == pytest.approx(1.665514, abs=1e-6)
        width = control.row("rise" if shape.shape == "long-pass" else "fwhm")
        # d lambda = lambda / nu d nu
        of = 2 if shape.shape == "long-pass" else 20
        assert width.value == pytest.approx(1665.514 * of / 180, abs=0.01)
        assert bench.setup.filters[0] is shape
