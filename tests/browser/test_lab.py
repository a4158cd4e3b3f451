"""The bench-scan notebook in JupyterLab, driven from the keyboard."""

import json
import re
from pathlib import Path

import pytest
from playwright.sync_api import Page, expect

from .pages import (
    NOTEBOOK,
    QUICK,
    curves_at_rest,
    number_in_text,
    press_right,
    run_all_cells,
    save_pictures,
    set_lab_theme,
    wait_for_new_curve,
    wait_for_panel,
)
from .server_process import Server


def cells_with_code(notebook: Path) -> int:
    cells = json.loads(notebook.read_text(encoding="utf-8"))["cells"]
    return sum(cell["cell_type"] == "code" and bool("".join(cell["source"]).strip()) for cell in cells)


@pytest.mark.browser
def test_three_steps_of_the_delay_reach_the_plot_and_the_read_out(lab_server: Server, page: Page, artefacts: Path) -> None:
    page.goto(lab_server.address(f"doc/tree/{NOTEBOOK}", reset=""))
    run_all_cells(page, cells_with_code(lab_server.root / NOTEBOOK))
    panel = wait_for_panel(page)
    control, readout = panel.locator(".wf-delay-control"), panel.locator(".wf-readout").first
    box = control.locator("input[type=number], input[type=text]").first
    expect(box).to_have_accessible_name(re.compile(r"\w"))
    step = float(box.get_attribute("step") or "nan")
    wanted = float(box.input_value()) + 3 * step
    curves = curves_at_rest(page)
    expect(readout).not_to_contain_text(number_in_text(wanted))

    press_right(control.locator(".noUi-handle").first, times=3)

    expect(box).to_have_value(number_in_text(wanted), timeout=QUICK)
    expect(readout).to_contain_text(number_in_text(wanted), timeout=QUICK)
    wait_for_new_curve(page, curves)
    for theme, name in (("JupyterLab Light", "lab-light"), ("JupyterLab Dark", "lab-dark")):
        set_lab_theme(page, theme)
        save_pictures(page, panel, artefacts, name)
