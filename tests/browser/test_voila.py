"""The bench-scan notebook as a Voila page, driven from the keyboard."""

from pathlib import Path

import pytest
from playwright.sync_api import Page, expect

from .pages import (
    NOTEBOOK,
    QUICK,
    SLOW,
    curves_at_rest,
    press_right,
    save_pictures,
    wait_for_new_curve,
    wait_for_panel,
)
from .server_process import Server


@pytest.mark.browser
def test_a_new_filter_reaches_the_plot_and_the_read_out(voila_server: Server, page: Page, artefacts: Path) -> None:
    page.goto(voila_server.address(f"voila/render/{NOTEBOOK}", theme="light"), timeout=SLOW)
    panel = wait_for_panel(page)
    readout, control = panel.locator(".wf-readout").first, panel.locator(".wf-filter-control")
    table = readout.inner_text()
    # a shape starts with the width of the light, and the browser's drawing of the slider does not change it
    control.locator("select").select_option("top-hat")
    expect(readout).not_to_have_text(table, timeout=QUICK)
    curves_at_rest(page)
    expect(control.locator("input[type=number]").nth(1)).to_have_value("258.4")
    table = readout.inner_text()
    control.locator("select").select_option("gaussian")
    expect(readout).not_to_have_text(table, timeout=QUICK)
    curves = curves_at_rest(page)
    text = readout.inner_text()

    press_right(control.locator(".noUi-handle").first, times=3)

    expect(readout).not_to_have_text(text, timeout=QUICK)
    wait_for_new_curve(page, curves, longest=True)
    save_pictures(page, panel, artefacts, "voila-light")
    page.goto(voila_server.address(f"voila/render/{NOTEBOOK}", theme="dark"), timeout=SLOW)
    save_pictures(page, wait_for_panel(page), artefacts, "voila-dark")
