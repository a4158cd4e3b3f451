"""The night's notebook as a Voila page: a longer baseline, by keyboard, reaches tracks, windows and visibility."""

import re
from pathlib import Path

import pytest
from playwright.sync_api import Page, expect

from .pages import QUICK, SLOW, press_right
from .server_process import Server

NOTEBOOK = "tonight_on_the_sky.ipynb"


@pytest.mark.browser
def test_a_longer_baseline_reaches_tracks_windows_and_visibility(voila_server: Server, page: Page, artefacts: Path) -> None:
    page.goto(voila_server.address(f"voila/render/{NOTEBOOK}", theme="light"), timeout=SLOW)
    panel = page.locator(".wf-night-panel").first
    expect(panel).to_be_visible(timeout=SLOW)
    drawn = re.compile(r"L")
    curves = [panel.locator(f"{plot} path.line") for plot in (".wf-track-plot", ".wf-uv-plot", ".wf-visibility-plot")]
    for curve in curves:
        expect(curve.first).to_have_attribute("d", drawn, timeout=SLOW)
    before = [curve.evaluate_all("all => all.map(p => p.getAttribute('d')).join('|')") for curve in curves]
    words, table = panel.locator(".wf-status").inner_text(), panel.locator(".wf-windows-table table").inner_text()
    expect(panel.locator(".wf-windows-table [role=note]")).to_contain_text("moves nothing")
    length = panel.locator(".wf-baseline-control input[type=number]").first
    expect(length).to_have_value("100")

    press_right(panel.locator(".wf-baseline-control .noUi-handle").first, times=4)

    expect(length).to_have_value("102", timeout=QUICK)
    expect(panel.locator(".wf-baseline-control")).to_contain_text("Weir moved by 2.000 m", timeout=QUICK)
    expect(panel.locator(".wf-status")).not_to_have_text(words, timeout=QUICK)
    expect(panel.locator(".wf-windows-table table")).not_to_have_text(table, timeout=QUICK)
    for curve, old in zip(curves, before, strict=True):
        expect(curve).not_to_have_count(0)
        now = curve.evaluate_all("all => all.map(p => p.getAttribute('d')).join('|')")
        assert now != old
    panel.get_by_role("button", name="put the stations back").click()
    expect(length).to_have_value("100", timeout=QUICK)
    expect(panel.locator(".wf-status")).to_have_text(words, timeout=QUICK)
    panel.get_by_role("button", name="carriages").click()
    expect(panel.locator(".wf-track-plot")).to_contain_text("end of stroke", timeout=QUICK)
    panel.get_by_role("button", name="uncertainty").click()
    page.set_viewport_size({"width": 1280, "height": 2400})  # the whole panel fits
    for theme in ("light", "dark"):
        if theme == "dark":
            page.goto(voila_server.address(f"voila/render/{NOTEBOOK}", theme=theme), timeout=SLOW)
        expect(panel).to_be_visible(timeout=SLOW)
        for curve in curves:
            expect(curve.first).to_have_attribute("d", drawn, timeout=SLOW)
        page.wait_for_timeout(500)
        artefacts.mkdir(parents=True, exist_ok=True)
        panel.scroll_into_view_if_needed()
        panel.screenshot(path=artefacts / f"voila-night-{theme}.png")
