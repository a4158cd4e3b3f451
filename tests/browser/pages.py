"""What a person does on a page: run a notebook, move a slider, read the result."""

from __future__ import annotations

import re
from pathlib import Path

from playwright.sync_api import Locator, Page, expect

NOTEBOOK = "bench_scan_check.ipynb"
SLOW = 60_000.0
"""Milliseconds for the steps that start a kernel or import the package."""
QUICK = 20_000.0
"""Milliseconds for the steps that wait for one answer of the kernel."""

_CURVES = ".wf-panel .wf-packet-plot path.line"
_READ_CURVES = f"() => [...document.querySelectorAll('{_CURVES}')].map(p => p.getAttribute('d') || '')"
_CURVES_AT_REST = f"""() => new Promise(answer => {{
    const read = {_READ_CURVES};
    let last = '', since = performance.now();
    const look = () => {{
        const now = read().join('|');
        if (now !== last || !now.length) {{ last = now; since = performance.now(); }}
        if (performance.now() - since > 400) answer(read()); else requestAnimationFrame(look);
    }};
    look();
}})"""


def run_all_cells(page: Page, cells_with_code: int) -> None:
    """Run every cell of the notebook that is open in JupyterLab, from a clean state."""
    page.wait_for_function("() => window.jupyterapp !== undefined", timeout=SLOW)
    page.evaluate("async () => { await window.jupyterapp.restored; }")
    page.wait_for_function("() => window.jupyterapp.shell.currentWidget?.sessionContext", timeout=SLOW)
    page.wait_for_function(
        "() => window.jupyterapp.shell.currentWidget.sessionContext.session?.kernel?.status === 'idle'",
        timeout=SLOW,
    )
    numbered = page.locator(".jp-CodeCell .jp-InputPrompt").filter(has_text=re.compile(r"\[\d+\]"))
    page.evaluate("() => window.jupyterapp.commands.execute('notebook:clear-all-cell-outputs')")
    expect(numbered).to_have_count(0)
    answer = page.evaluate(
        """limit => Promise.race([
            window.jupyterapp.commands.execute('notebook:run-all-cells'),
            new Promise(late => setTimeout(() => late('too late'), limit)),
        ])""",
        SLOW,
    )
    assert answer is True, f"running all cells ended with {answer}"
    expect(numbered).to_have_count(cells_with_code)


def wait_for_panel(page: Page) -> Locator:
    """Wait until the panel is on the page and its plot has curves; return the panel."""
    panel = page.locator(".wf-panel").first
    expect(panel).to_be_visible(timeout=SLOW)
    panel.scroll_into_view_if_needed()
    expect(page.locator(_CURVES).first).to_be_attached(timeout=SLOW)
    expect(page.locator(".wf-readout").first).to_contain_text(re.compile(r"\d"), timeout=SLOW)
    return panel


def curves_at_rest(page: Page) -> list[str]:
    """Return the ``d`` attributes of the plotted lines, once they stand still."""
    curves: list[str] = page.evaluate(_CURVES_AT_REST)
    assert any(curves), "the plot has no line"
    return curves


def wait_for_new_curve(page: Page, before: list[str], *, longest: bool = False) -> None:
    """Wait until a line differs from ``before``; with ``longest``, the one with the most points."""
    lengths = [len(curve) for curve in before]
    which = [lengths.index(max(lengths))] if longest else list(range(len(before)))
    page.wait_for_function(
        f"([before, which]) => {{ const now = ({_READ_CURVES})(); return which.some(i => now[i] && now[i] !== before[i]); }}",
        arg=[before, which],
        timeout=QUICK,
    )


def press_right(handle: Locator, times: int) -> None:
    """Move a slider with the keyboard, as somebody who does not use a mouse."""
    handle.focus()
    expect(handle).to_be_focused()
    for _ in range(times):
        handle.press("ArrowRight")


def number_in_text(value: float) -> re.Pattern[str]:
    """Match ``value`` as a whole number in a text, with any number of closing zeros.

    >>> number_in_text(5.5).search("delay 5.50 µm") is not None
    True
    >>> number_in_text(5.5).search("delay -5.5 µm") or number_in_text(5.5).search("15.5, 5.51")
    >>> number_in_text(-4.0).search("delay −4.00 µm") is not None
    True
    """
    digits = f"{abs(value):.10f}".rstrip("0").rstrip(".")
    zeros = "0*" if "." in digits else r"(\.0+)?"
    before = r"[-−]\s?" if value < 0 else r"(?<![\d.\-−])"
    return re.compile(before + re.escape(digits) + zeros + r"(?![\d]|\.\d)")


def set_lab_theme(page: Page, theme: str) -> None:
    """Change the theme of JupyterLab by its own command and wait for the colours."""
    page.evaluate("t => window.jupyterapp.commands.execute('apputils:change-theme', {theme: t})", theme)
    expect(page.locator("body")).to_have_attribute("data-jp-theme-name", theme, timeout=QUICK)


def save_pictures(page: Page, panel: Locator, folder: Path, name: str) -> None:
    """Save the panel as ``NAME.png`` and the whole page as ``NAME-page.png``."""
    curves_at_rest(page)
    folder.mkdir(parents=True, exist_ok=True)
    page.screenshot(path=folder / f"{name}-page.png", full_page=True)
    panel.screenshot(path=folder / f"{name}.png")
