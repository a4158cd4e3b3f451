"""The panel and its parts in plain Python: driven as a script does (`value =`) and as a browser does (`set_state`)."""

import threading

import astropy.units as u
import ipywidgets
import numpy as np
import pytest

from whitefringe import coherence, spectra
from whitefringe.errors import WhitefringeError
from whitefringe.widgets import Bench, BenchPanel, DelayControl, FilterControl, PacketPlot, Readout, ScanPlot, SourceControl

from .conftest import living_widgets


def test_summary_is_the_text_of_the_panel(panel):
    text = panel._repr_mimebundle_()["text/plain"] if panel.comm else repr(panel)
    assert text == repr(panel)
    assert text == ("BenchPanel: wavelength 1.6393 um, packet width 12.274 um, delay 0.00 um, contrast there 1.0000, verdict inside")


def test_a_slider_move_updates_everything_in_step(panel, bench):
    before = panel.packet.cursor.x.copy()
    panel.delay.row.slider.set_state({"value": 5.0})
    assert panel.delay.row.box.value == 5.0
    assert bench.setup.delay == 5 * u.um
    assert np.all(panel.packet.cursor.x == 5.0)
    assert not np.array_equal(before, panel.packet.cursor.x)
    contrast = abs(coherence.self_coherence(bench.setup.light, 5 * u.um))
    assert f"{contrast:.4f}" in panel.readout.html.value
    assert "5.000 µm" in panel.readout.html.value


def test_a_filter_shape_starts_like_the_light_and_moves_all_plots(panel, bench):
    curves = [mark.y.copy() for mark in (panel.packet.contrast, panel.scan.predicted[0], panel.scan.fitted[0])]
    panel.filter.choice.set_state({"index": panel.filter.choice.options.index("top-hat")})
    shape = bench.setup.filters[0]
    assert isinstance(shape, spectra.TopHat)
    assert shape.width.to_value(u.nm) == pytest.approx(258, abs=5)
    panel.filter.row("width").box.value = 200
    assert bench.setup.filters[0].width == 200 * u.nm
    moved = (panel.packet.contrast.y, panel.scan.predicted[0].y, panel.scan.fitted[0].y)
    assert [np.array_equal(a, b) for a, b in zip(curves, moved, strict=True)] == [False, False, True]
    assert "outside" in panel.readout.html.value


def test_the_table_comes_back_with_its_file(panel, bench):
    table = bench.setup.filters[0]
    panel.filter.choice.value = "gaussian"
    panel.filter.choice.value = "table"
    assert bench.setup.filters[0] is table
    assert panel.filter.file in panel.filter.parameters.children


def test_box_holds_values_between_the_slider_steps(panel, bench):
    panel.source.row("temperature").box.value = 2733
    assert bench.setup.source.temperature == 2733 * u.K
    assert panel.source.row("temperature").value == 2733
    assert panel.source.row("temperature").slider.value == 2750


def test_the_browsers_rounding_is_not_a_change(panel, bench):
    calls = []
    bench.listen(lambda: calls.append(1))
    panel.source.row("temperature").slider.set_state({"value": 2900.0000000000005})
    assert calls == []
    panel.delay.row.slider.set_state({"value": 0.30000000000000426})
    assert bench.setup.delay.value == 0.3


def test_two_panels_on_one_bench_stay_in_step(panel, bench):
    with BenchPanel(bench) as other:
        other.source.row("temperature").box.value = 2000
        assert panel.source.row("temperature").value == 2000
        assert panel.readout.html.value == other.readout.html.value
        assert np.array_equal(panel.packet.contrast.y, other.packet.contrast.y)


def test_a_dashboard_of_single_controls(setup):
    bench = Bench(setup)
    parts = [SourceControl(bench), FilterControl(bench), DelayControl(bench), PacketPlot(bench), ScanPlot(bench), Readout(bench)]
    box = ipywidgets.VBox(parts)
    parts[2].row.value = 2
    assert "2.000 µm" in parts[-1].html.value
    assert "No scan is loaded" in parts[4].children[0].value
    assert len(box.children) == 6


def test_errors_show_and_the_last_good_state_stays(setup, scan, tmp_path):
    with BenchPanel(Bench(setup, scan, strict=False)) as panel:
        light = panel.bench.results.light
        panel.filter.file.value = str(tmp_path / "missing.csv")
        assert "role='alert'" in panel.status.value
        assert "no such file" in panel.status.value
        assert panel.bench.results.light is light
        assert "problem" in repr(panel)
        panel.delay.row.value = 1.0
        assert "alert" not in panel.status.value


def test_a_markup_in_a_message_is_shown_as_text(setup, tmp_path):
    with BenchPanel(Bench(setup, strict=False)) as panel:
        panel.filter.file.value = str(tmp_path / "<b>x</b>.csv")
        assert "<b>x</b>" not in panel.status.value


def test_strict_raises_what_a_user_would_be_shown(panel, tmp_path):
    with pytest.raises(WhitefringeError, match="no such file"):
        panel.filter.file.value = str(tmp_path / "missing.csv")


def test_not_finite_numbers_are_refused(panel):
    with pytest.raises(Exception, match="must be a finite number"):
        panel.delay.row.value = float("nan")


def test_a_new_curve_file_is_read(panel, bench, larkmoor):
    path = str(larkmoor / "." / "bench_filter.ecsv")
    panel.filter.file.value = path
    assert bench.setup.filters[0].origin == path


def test_closing_frees_every_widget_and_listener(setup, scan):
    bench, before = Bench(setup, scan), living_widgets()
    panel = BenchPanel(bench)
    panel.filter.choice.value = "gaussian"
    made = living_widgets() - before
    panel.close()
    panel.close()
    assert living_widgets() == before
    assert bench._listeners == []
    assert made <= 140
    assert repr(panel).startswith("BenchPanel")
    bench.update(delay=1 * u.um)


def test_events_from_two_threads_lose_nothing(panel, bench):
    def move(row, values):
        for value in values:
            row.box.set_state({"value": float(value)})

    threads = [
        threading.Thread(target=move, args=(panel.delay.row, range(1, 21))),
        threading.Thread(target=move, args=(panel.source.row("temperature"), range(2000, 2020))),
    ]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert bench.setup.delay == 20 * u.um
    assert bench.setup.source.temperature == 2019 * u.K
    assert f"{abs(bench.results.gamma):.4f}" in panel.readout.html.value
    assert coherence.self_coherence(bench.setup.light, 20 * u.um) == bench.results.gamma


def test_one_move_sends_few_messages_and_short_lines(panel):
    sent = []
    for mark in (panel.packet.fringes, panel.packet.contrast, panel.scan.signal, panel.scan.predicted[0]):
        mark.send_state = lambda key=None, mark=mark: sent.append((mark, key))
        assert mark.x.size <= 10_000
    panel.source.row("temperature").slider.value = 3500
    assert [set(key) for mark, key in sent if mark is panel.packet.contrast] == [{"y"}] or len(sent) <= 4
    assert not [mark for mark, _ in sent if mark is panel.scan.signal]


def test_units_of_shapes_given_in_frequency_are_shown_in_display_units(setup):
    band = spectra.Gaussian(centre=180 * u.THz, fwhm=20 * u.THz)
    bench = Bench(setup)
    bench.update(filters=(band,))
    with FilterControl(bench) as control:
        assert control.row("centre").value == pytest.approx(1.665514, abs=1e-6)
        assert control.row("fwhm").value == pytest.approx(185.06, abs=0.1)
        assert bench.setup.filters[0] is band
