"""Find an installed Chromium and open it with a profile of its own."""

from __future__ import annotations

import os
import shutil
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

import pytest
from playwright.sync_api import BrowserContext, sync_playwright

NAMES = ("chromium", "chromium-browser", "google-chrome")
FLAGS = (
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
    "--disable-background-timer-throttling",
    "--disable-renderer-backgrounding",
    "--disable-backgrounding-occluded-windows",
)


def find_browser() -> str:
    """Return the path of the browser; without one, skip where people work and fail under ``CI=true``."""
    for name in NAMES:
        if path := shutil.which(name):
            return path
    reason = f"no browser on PATH (looked for {', '.join(NAMES)})"
    if os.environ.get("CI", "").lower() == "true":
        pytest.fail(f"{reason}; with CI=true the browser tests must run", pytrace=False)
    pytest.skip(reason)


@contextmanager
def chromium(path: str, profile: Path) -> Iterator[BrowserContext]:
    """Open a Chromium that keeps its profile in the folder ``profile``."""
    with sync_playwright() as playwright:
        context = playwright.chromium.launch_persistent_context(
            profile,
            executable_path=path,
            args=list(FLAGS),
            viewport={"width": 1280, "height": 1600},
            color_scheme="light",
            locale="en-GB",
        )
        try:
            yield context
        finally:
            context.close()
