"""The notebook of the arms as a Voila page: a warmer arm moves packet and offset, seen in light and in dark."""

import re
from pathlib import Path

import pytest
from playwright.sync_api import Page, expect

from .pages import QUICK, SLOW, press_right
from .server_process import Server

NOTEBOOK = "where_is_zero.ipynb"


@pytest.mark.browser
def test_warmer_air_reaches_packet_and_offset(voila_server: Server, page: Page, artefacts: Path) -> None:
    page.goto(voila_server.address(f"voila/render/{NOTEBOOK}", theme="light"), timeout=2 * SLOW)
    panel = page.locator(".wf-arms-panel").first
    expect(panel).to_be_visible(timeout=SLOW)
    curve = panel.locator(".wf-dispersed-plot path.line").first
    expect(curve).to_have_attribute("d", re.compile(r"L"), timeout=SLOW)
    words, table = panel.locator(".wf-dispersed-plot"), panel.locator(".wf-band-offset table")
    expect(words).to_contain_text("µm of added path difference")
    box = panel.locator(".wf-air-control input[type=number]").first
    expect(box).to_have_value("12")
    before, text, numbers = curve.get_attribute("d"), words.inner_text(), table.inner_text()

    press_right(panel.locator(".wf-air-control .noUi-handle").first, times=3)

    expect(box).to_have_value("12.3", timeout=QUICK)
    expect(table).not_to_have_text(numbers, timeout=QUICK)
    expect(words).not_to_have_text(text, timeout=QUICK)
    expect(curve).not_to_have_attribute("d", before or "", timeout=QUICK)
    glass = panel.locator(".wf-glass-control")
    glass.locator("select").nth(1).select_option("group delay spread")
    glass.get_by_role("button", name="compensate").click()
    expect(glass).to_contain_text(re.compile(r"ZnSe -0\.4500 → -\d\.\d{4} mm; contrast: science"), timeout=SLOW)
    expect(glass.get_by_role("button", name="compensate")).to_be_enabled()
    expect(panel.locator("[role=alert]")).to_have_count(0)
    artefacts.mkdir(parents=True, exist_ok=True)
    panel.screenshot(path=artefacts / "voila-arms-compensated.png")
    for theme in ("light", "dark"):
        page.goto(voila_server.address(f"voila/render/{NOTEBOOK}", theme=theme), timeout=2 * SLOW)
        expect(panel).to_be_visible(timeout=SLOW)
        expect(curve).to_have_attribute("d", re.compile(r"L"), timeout=SLOW)
        page.wait_for_timeout(500)
        panel.scroll_into_view_if_needed()
        panel.screenshot(path=artefacts / f"voila-arms-{theme}.png")
