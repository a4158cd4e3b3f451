"""The filter notebook as a Voila page: the tilt slider reaches spectrum, packet and table."""

import re
from pathlib import Path

import pytest
from playwright.sync_api import Page, expect

from .pages import QUICK, SLOW, press_right
from .server_process import Server

NOTEBOOK = "choose_a_filter.ipynb"


@pytest.mark.browser
def test_a_tilt_reaches_spectrum_packet_and_table(voila_server: Server, page: Page, artefacts: Path) -> None:
    page.goto(voila_server.address(f"voila/render/{NOTEBOOK}", theme="light"), timeout=SLOW)
    dashboard = page.locator(".wf-filter-dashboard").first
    expect(dashboard).to_be_visible(timeout=SLOW)
    curve = dashboard.locator(".wf-spectrum-plot path.line").first
    expect(curve).to_have_attribute("d", re.compile(r"L"), timeout=SLOW)
    table = dashboard.locator(".wf-false-packets table")
    expect(table).to_be_visible()
    before, words = curve.get_attribute("d"), table.inner_text()
    box = dashboard.locator(".wf-beam-control input[type=number]").first
    expect(box).to_have_value("8")

    press_right(dashboard.locator(".wf-beam-control .noUi-handle").first, times=2)

    expect(box).to_have_value("9", timeout=QUICK)
    expect(curve).not_to_have_attribute("d", before or "", timeout=QUICK)
    expect(table).not_to_have_text(words, timeout=QUICK)
    for theme in ("light", "dark"):
        page.goto(voila_server.address(f"voila/render/{NOTEBOOK}", theme=theme), timeout=SLOW)
        expect(dashboard).to_be_visible(timeout=SLOW)
        expect(curve).to_have_attribute("d", re.compile(r"L"), timeout=SLOW)
        page.wait_for_timeout(500)
        artefacts.mkdir(parents=True, exist_ok=True)
        dashboard.scroll_into_view_if_needed()
        dashboard.screenshot(path=artefacts / f"voila-filter-{theme}.png")
