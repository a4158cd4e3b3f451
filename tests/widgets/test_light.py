"""Spectrum plot, channel control and false-packet table, each alone on a bench."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe import coherence, spectra
from whitefringe.errors import InputError, UndefinedWidthError
from whitefringe.widgets import Bench, ChannelControl, FalsePacketTable, FilterControl, SourceControl, SpectrumPlot

from .conftest import living_widgets

DOUBLET = spectra.Lines([spectra.Line(wavelength=w * u.nm, strength=s) for w, s in ((589.15833, 2), (589.75581, 1))])


@pytest.fixture
def light_bench(setup):
    return Bench(setup)


def test_spectrum_is_that_of_the_bench(light_bench):
    with SpectrumPlot(light_bench) as plot:
        assert plot.continuum.y.max() == pytest.approx(1, abs=1e-3)
        before = plot.continuum.y.copy()
        light_bench.update(source=spectra.Thermal(temperature=1000 * u.K))
        assert not np.array_equal(before, plot.continuum.y)
        assert np.all(np.diff(plot.continuum.x) > 0)


def test_lines_are_stems_of_their_relative_strength(light_bench):
    with SpectrumPlot(light_bench) as plot:
        light_bench.update(source=DOUBLET, filters=())
        assert sorted(set(plot.stems.y[np.isfinite(plot.stems.y)])) == [0.0, 0.5, 1.0]
        assert np.all(np.isnan(plot.continuum.y))
        assert plot.x.min < 0.58916 < 0.58975 < plot.x.max


def test_channels_reach_setup_plot_and_words(light_bench):
    with SpectrumPlot(light_bench) as plot, ChannelControl(light_bench) as control:
        assert "no channels" in control.text.value
        control.count.value = 5
        assert light_bench.setup.channels == 5
        assert np.unique(plot.edges.x[np.isfinite(plot.edges.x)]).size == 6
        ambiguity = spectra.split(light_bench.results.light, 5).ambiguity.value
        assert f"{ambiguity.value:.4g} µm" in control.text.value
        light_bench.update(channels=0)
        assert control.count.value == 0
        assert np.all(np.isnan(plot.edges.x))


def test_lines_have_no_channels_but_the_control_says_so(light_bench):
    with ChannelControl(light_bench) as control:
        light_bench.update(source=DOUBLET, filters=(), channels=4)
        assert "light of lines only" in control.text.value


@pytest.mark.parametrize("count", [-1, 201, 2.5, True])
def test_impossible_numbers_of_channels(light_bench, count):
    with pytest.raises(InputError, match="channels must be a whole number from 0 to 200"):
        light_bench.update(channels=count)


def test_false_packets_are_those_of_the_core(light_bench):
    with FalsePacketTable(light_bench) as table:
        reach = table.reach.value * u.um
        assert table.found == coherence.false_packets(light_bench.results.light, reach, 0.05)
        assert f"{table.found[0].height:.4f}" in table.html.value
        table.above.value = 0.9
        assert "no false packet" in table.html.value
        assert repr(table).endswith("none")


def test_beats_of_a_doublet_are_listed_highest_first(light_bench):
    light_bench.update(source=DOUBLET, filters=(), definition="power")
    with FalsePacketTable(light_bench, delay_range=20 * u.mm, above=0.5) as table:
        assert len(table.found) == 34
        assert "the 12 highest of 34" in table.html.value
        assert repr(table).startswith("FalsePacketTable: false packets up to 20000 um: 34, the highest at")
        table.reach.value = 1e9
        assert "too long for this light" in table.html.value


def test_closing_frees_all(light_bench):
    before = living_widgets()
    for view in (SpectrumPlot(light_bench), ChannelControl(light_bench), FalsePacketTable(light_bench)):
        view.close()
    assert living_widgets() == before
    assert light_bench._listeners == []


def test_a_laser_brings_its_caution_and_a_lamp_its_element(light_bench):
    light_bench.update(filters=())
    with SourceControl(light_bench) as control:
        control.choice.value = "multimode-laser"
        assert control.caution in control.parameters.children
        assert "IEC 60825-1" in control.caution.value
        control.row("cavity_length").value = 20
        assert light_bench.setup.source.cavity_length == 20 * u.cm
        control.choice.value = "lamp"
        assert control.caution not in control.parameters.children
        control.element.value = "sodium"
        assert light_bench.setup.source.name == "sodium"


@pytest.mark.parametrize("definition", [item.name for item in coherence.COHERENCE_DEFINITIONS])
@pytest.mark.parametrize("shape", [cls.shape for cls in spectra.FILTER_SHAPES if spectra.parameters_of(cls)])
def test_every_filter_shape_has_its_coherence_length_or_a_reason(light_bench, shape, definition):
    with FilterControl(light_bench) as control:
        control.choice.value = shape
        assert light_bench.setup.filters[0].shape == shape
        try:
            answer = coherence.coherence_length(light_bench.results.light, definition)
        except UndefinedWidthError as reason:
            answer = str(reason)
        if isinstance(answer, str):
            assert definition == "first-null"
            assert "use another definition" in answer
        else:
            assert answer.value > 0
