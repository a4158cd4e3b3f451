"""Packet and offset of the arms, each alone on a bench and together in the panel."""

import astropy.units as u
import ipywidgets
import numpy as np
import pytest

from whitefringe import media, spectra
from whitefringe.widgets import AirControl, ArmsPanel, BandOffsetTable, DispersedPacketPlot, GlassControl

from ..conftest import living_widgets
from .conftest import MOST_WIDGETS, TRACKING, ZNSE, air, bench_of, plate

# ---------------------------------------------------------------- packet and offset


def test_curves_are_those_of_the_core(bench):
    with DispersedPacketPlot(bench) as plot:
        packet = bench.results.packet
        opd = (plot.contrast.x * u.um) + packet.zero.value
        assert np.abs(packet.degree(opd)) == pytest.approx(plot.contrast.y, abs=1e-9)
        assert packet.degree(opd).real == pytest.approx(plot.fringes.y, abs=1e-4)
        assert plot.equal.y.max() == pytest.approx(1, abs=1e-6)
        assert plot.contrast.y.max() == pytest.approx(packet.peak_contrast.value.value, abs=1e-3)
        assert plot.contrast.x.size <= 4000


def test_the_line_under_the_plot_says_where_zero_is(bench):
    with DispersedPacketPlot(bench) as plot:
        packet = bench.results.packet
        zero = packet.zero.to_value(u.um)
        # the group path difference of the mean frequency, made up for
        mean = np.average(packet.light.frequency_si, weights=packet.light.density) * u.Hz
        assert zero == pytest.approx(-packet.pair.group_opd(mean).to_value(u.um), abs=1e-3)
        assert f"zero: {zero:.1f} µm of added path difference" in plot.text.value
        assert f"at {packet.position.to_value(u.um) - zero:+.2f} µm from there" in plot.text.value
        assert f"{packet.broadening.value:.3f} times as wide" in plot.text.value
        assert repr(plot).startswith(f"DispersedPacketPlot: zero: {zero:.1f} um")


def test_equal_arms_show_the_undispersed_packet():
    with DispersedPacketPlot(bench_of([plate(5)], [plate(5)])) as plot:
        assert plot.contrast.y == pytest.approx(plot.equal.y, abs=1e-9)


def test_a_plot_without_arms_says_so_and_gets_its_figure_with_them(bare):
    with DispersedPacketPlot(bare) as plot:
        assert "This setup has no arms" in plot.text.value
        assert plot.body.children == (plot.text,)
        assert repr(plot) == "DispersedPacketPlot: no arms"
        bare.update(arms=media.ArmPair(first=[plate(3)], second=[]))
        assert plot.figure in plot.body.children
        drawn = plot.contrast.y
        bare.update(delay=2 * u.um)
        assert plot.contrast.y is drawn


def test_light_that_is_spread_out_of_sight_has_words_instead_of_curves():
    long = media.Segment(medium=ZNSE, length=300 * u.m)
    bench = bench_of([long])
    with DispersedPacketPlot(bench) as plot:
        assert "there is no packet to speak of" in plot.text.value
        assert np.all(np.isnan(plot.contrast.y))
        assert "no dispersed packet" in bench.summary()
        assert "there is no packet to speak of" in repr(plot)


def test_many_fringes_are_left_out_and_contrast_stays():
    with DispersedPacketPlot(bench_of([plate(400)])) as plot:
        assert "the fringes are too many to be drawn" in plot.text.value
        assert np.all(np.isnan(plot.fringes.y))
        assert np.all(np.isfinite(plot.contrast.y))


def test_light_of_lines_has_a_reason_in_words():
    bench = bench_of([plate(3)])
    with DispersedPacketPlot(bench) as plot:
        bench.update(source=spectra.Lines([spectra.Line(wavelength=633 * u.nm)]), filters=())
        assert "monochromatic" in plot.text.value
        assert repr(plot) == "DispersedPacketPlot: a monochromatic line never loses coherence"


def test_the_table_has_the_offset_its_drifts_and_the_flags(bench):
    with BandOffsetTable(bench) as table:
        offset = bench.results.offset
        assert offset.offset.text.removesuffix(" um") in table.html.value
        for item in (offset.per_kelvin, offset.per_hectopascal, offset.per_percent, offset.per_metre):
            assert f">{item.value.value:.4f}<" in table.html.value
        for unit in ("µm / K", "µm / hPa", "µm / %", "µm / m"):
            assert f">{unit}<" in table.html.value
        assert "uncertainty of the offset: lengths 0.055 µm" in table.html.value
        assert "meet at 1.4 um with a step in n" in table.html.value
        assert repr(table) == "BandOffsetTable: science band at 112.09 ± 0.19 um from the tracking band"


def test_without_air_the_drifts_have_a_reason():
    bench = bench_of([plate(3)], tracking=(TRACKING,))
    with BandOffsetTable(bench) as table:
        assert table.html.value.count("there is no air in the arms") == 4
        assert f">{bench.results.offset.offset.value.value:.3f}<" in table.html.value
        assert "uncertainty" not in table.html.value


def test_without_a_tracking_band_the_table_says_how_to_add_one(bare):
    with BandOffsetTable(bare) as table:
        assert "This setup has no arms" in table.html.value
        assert repr(table) == "BandOffsetTable: no arms"
        bare.update(arms=media.ArmPair(first=[plate(3)], second=[]))
        assert "a [[tracking]] entry in the setup file" in table.html.value
        assert repr(table) == "BandOffsetTable: no tracking band"
        bare.update(tracking=(TRACKING,))
        assert "<table" in table.html.value


# ---------------------------------------------------------------- panel and bench


def test_summary_has_contrast_place_and_offset(bench):
    packet, offset = bench.results.packet, bench.results.offset
    assert bench.summary().endswith(
        f"verdict no scan, dispersed contrast {packet.peak_contrast.value:.4f} at {packet.position.value.value:.2f} um, "
        f"offset from tracking {offset.offset.value.value:.2f} um"
    )
    bench.update(tracking=())
    assert bench.summary().endswith(" um")
    assert "offset" not in bench.summary()
    bench.update(arms=None)
    assert bench.summary().endswith("verdict no scan")


def test_a_move_in_the_panel_reaches_plot_and_table(bench):
    with ArmsPanel(bench) as panel:
        text, table, curve = panel.packet.text.value, panel.offset.html.value, panel.packet.contrast.y.copy()
        panel.air.rows["temperature"].slider.set_state({"value": 16.0})
        assert panel.packet.text.value != text
        assert panel.offset.html.value != table
        panel.filter.row("fwhm").value = 200
        assert panel.packet.contrast.y.shape != curve.shape or not np.array_equal(panel.packet.contrast.y, curve)
        assert repr(panel) == f"ArmsPanel: {bench.summary()}"


def test_code_makes_the_same_numbers(bench):
    with ArmsPanel(bench) as panel:
        panel.air.rows["pressure"].value = 905
        panel.glass.choice.value = "N-BK7"
        panel.glass.row.value = 1.25
        names: dict[str, object] = {}
        exec(panel.as_code(), names)
    assert names["packet"].peak_contrast.value == pytest.approx(bench.results.packet.peak_contrast.value, rel=1e-9)
    assert names["offset"].offset.value.value == pytest.approx(bench.results.offset.offset.value.value, abs=1e-6)
    assert names["offset"].offset.uncertainty.value == pytest.approx(bench.results.offset.offset.uncertainty.value, rel=1e-6)


@pytest.mark.parametrize(
    ("first", "second"),
    [
        ([], []),
        ([plate(3, media.Glass.named("N-BK7"), temperature=25 * u.deg_C)], []),
        ([plate(3, media.Glass.named("N-BK7").under(temperature=25 * u.deg_C))], [air(2, humidity=400 * u.Pa)]),
    ],
)
def test_code_of_other_arms_runs(first, second):
    bench, names = bench_of(first, second), {}
    exec(bench.as_code(), names)
    assert names["packet"].zero.value.value == pytest.approx(bench.results.packet.zero.value.value, abs=1e-6)
    assert "offset" not in names


def test_closing_frees_every_widget_and_listener(bench):
    before = living_widgets()
    panel = ArmsPanel(bench)
    panel.glass.choice.value = "ZnSe"
    bench.update(arms=None)
    bench.update(arms=media.ArmPair(first=[plate(3)], second=[]))
    panel.filter.choice.value = "gaussian"
    made = living_widgets() - before
    panel.close()
    panel.close()
    assert living_widgets() == before
    assert bench._listeners == []
    assert made <= MOST_WIDGETS
    bench.update(delay=1 * u.um)


@pytest.mark.parametrize("view", [AirControl, GlassControl, DispersedPacketPlot, BandOffsetTable])
def test_each_part_alone_frees_its_widgets_also_without_arms(bare, view):
    before = living_widgets()
    view(bare).close()
    assert living_widgets() == before
    assert bare._listeners == []


def test_a_panel_can_be_made_from_a_setup_and_shares_a_page_with_others(array):
    with ArmsPanel(array) as panel, ArmsPanel(panel.bench) as other:
        other.air.rows["humidity"].value = 20
        assert panel.air.rows["humidity"].value == 20
        assert panel.offset.html.value == other.offset.html.value
        assert isinstance(panel, ipywidgets.VBox)
