"""The table of a packet's predicted numbers."""

import astropy.units as u
import pytest

from whitefringe import coherence, fringes, spectra
from whitefringe.results import Measured

C_UM_THZ = 299.792458


@pytest.fixture(scope="module")
def top_hat():
    return fringes.predict_packet(spectra.detected(spectra.Flat(), spectra.TopHat(centre=180 * u.THz, width=30 * u.THz)))


def test_a_top_hat_by_hand(top_hat):
    assert top_hat["mean wavelength"].to_value(u.um) == pytest.approx(C_UM_THZ / 180)
    assert top_hat["bandwidth, frequency"].to_value(u.THz) == pytest.approx(30)
    assert top_hat["bandwidth, wavelength"].to_value(u.um) == pytest.approx(C_UM_THZ / 165 - C_UM_THZ / 195)
    assert top_hat["equivalent width"].to_value(u.THz) == pytest.approx(30)
    assert top_hat["resolving power"].to_value(u.one) == pytest.approx(6)
    # sinc(x) is one half at x = 0.603355
    width = 2 * 0.6033545644 * C_UM_THZ / 30
    assert top_hat["packet width"].to_value(u.um) == pytest.approx(width)
    assert top_hat["packet width in fringes"].to_value(u.one) == pytest.approx(width * 180 / C_UM_THZ)
    assert top_hat["coherence length (bandwidth)"].to_value(u.um) == pytest.approx(C_UM_THZ / 30)
    assert top_hat["coherence length (power)"].to_value(u.um) == pytest.approx(C_UM_THZ / 30)
    assert top_hat["coherence length (first-null)"].to_value(u.um) == pytest.approx(C_UM_THZ / 30)
    assert top_hat["longest step"].to_value(u.um) == pytest.approx(C_UM_THZ / 180 / 4)


def test_every_number_says_what_it_is(top_hat):
    assert all(value.definition for _, value in top_hat.rows)


def test_the_definition_asked_for_comes_first():
    light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=180 * u.THz, width=30 * u.THz))
    for item in coherence.COHERENCE_DEFINITIONS:
        names = [name for name, _ in fringes.predict_packet(light, item.name).rows if name.startswith("coherence length")]
        assert names[0] == f"coherence length ({item.name})"
        assert len(names) == len(coherence.COHERENCE_DEFINITIONS)


def test_what_a_light_does_not_have_is_a_reason():
    prediction = fringes.predict_packet(spectra.Spectrum(lines=(spectra.Line(wavelength=633 * u.nm),)))
    assert "never loses coherence" in prediction["packet width"]
    assert "no continuum" in prediction["equivalent width"]
    assert isinstance(prediction["mean wavelength"], Measured)


def test_unknown_names_list_the_known_ones(top_hat):
    with pytest.raises(KeyError, match="'colour'; the numbers are mean wavelength, bandwidth"):
        top_hat["colour"]


def test_an_unknown_definition_is_refused():
    light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=180 * u.THz, width=30 * u.THz))
    with pytest.raises(ValueError, match="definition must be one of bandwidth"):
        fringes.predict_packet(light, "width")
