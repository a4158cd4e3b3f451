"""Servers and a browser for the tests that look at the panels as a person does.

The servers live for the whole session. The browser lives for one test: its driver
keeps an event loop running in the main thread, which no other test may meet.
"""

from __future__ import annotations

import re
import shutil
from collections.abc import Callable, Generator, Iterator
from pathlib import Path

import pytest
from playwright.sync_api import BrowserContext, Page, WebSocket

from .browser import chromium, find_browser
from .server_process import Server
from .servers import start_lab, start_voila

REPOSITORY = Path(__file__).resolve().parents[2]
NOTEBOOKS = REPOSITORY / "notebooks"
KERNEL_SOCKET = re.compile(r":(?P<port>\d+)/api/kernels/(?P<kernel>[\w-]+)/channels")
OUTCOME = pytest.StashKey[pytest.TestReport]()


@pytest.hookimpl(wrapper=True, tryfirst=True)
def pytest_runtest_makereport(item: pytest.Item) -> Generator[None, pytest.TestReport, pytest.TestReport]:
    """Let the fixtures see whether the test that they serve has failed."""
    report = yield
    if report.when == "call":
        item.stash[OUTCOME] = report
    return report


@pytest.fixture(scope="session")
def browser_path() -> str:
    """Find the browser, or skip."""
    return find_browser()


@pytest.fixture
def chromium_context(browser_path: str, tmp_path_factory: pytest.TempPathFactory) -> Iterator[BrowserContext]:
    """Open a Chromium with a new profile."""
    with chromium(browser_path, tmp_path_factory.mktemp("profile")) as context:
        yield context


@pytest.fixture(scope="session")
def servers() -> dict[int, Server]:
    """The running servers by port."""
    return {}


def _serve(start: Callable[[Server], None], folder: Path, servers: dict[int, Server]) -> Iterator[Server]:
    """Serve a copy of the notebooks until the session ends."""
    root = folder / "notebooks"
    shutil.copytree(NOTEBOOKS, root, ignore=shutil.ignore_patterns(".ipynb_checkpoints"))
    server = Server(home=folder, root=root)
    try:
        start(server)
        servers[server.port] = server
        yield server
    finally:
        server.stop()


@pytest.fixture(scope="session")
def lab_server(browser_path: str, servers: dict[int, Server], tmp_path_factory: pytest.TempPathFactory) -> Iterator[Server]:
    """JupyterLab over a copy of the notebooks; it asks for the browser so as to skip early."""
    yield from _serve(start_lab, tmp_path_factory.mktemp("lab"), servers)


@pytest.fixture(scope="session")
def voila_server(browser_path: str, servers: dict[int, Server], tmp_path_factory: pytest.TempPathFactory) -> Iterator[Server]:
    """Voila over a copy of the notebooks."""
    yield from _serve(start_voila, tmp_path_factory.mktemp("voila"), servers)


@pytest.fixture
def kernels(servers: dict[int, Server]) -> Iterator[set[tuple[int, str]]]:
    """The kernels (port, id) that the pages of one test talk to; they end with the test."""
    used: set[tuple[int, str]] = set()
    yield used
    for port, kernel in used:
        servers[port].request("DELETE", f"/api/kernels/{kernel}")


@pytest.fixture
def artefacts() -> Path:
    """The folder for the pictures, which git ignores."""
    return REPOSITORY / "artefacts"


@pytest.fixture
def page(
    request: pytest.FixtureRequest,
    chromium_context: BrowserContext,
    kernels: set[tuple[int, str]],
    artefacts: Path,
) -> Iterator[Page]:
    """A new page; a failed test leaves its picture and its console behind."""
    console: list[str] = []

    def note_kernel(socket: WebSocket) -> None:
        if found := KERNEL_SOCKET.search(socket.url):
            kernels.add((int(found["port"]), found["kernel"]))

    page = chromium_context.new_page()
    page.on("websocket", note_kernel)
    page.on("console", lambda message: console.append(f"{message.type}: {message.text}"))
    page.on("pageerror", lambda error: console.append(f"uncaught: {error}"))
    yield page
    outcome = request.node.stash.get(OUTCOME, None)
    if outcome is not None and outcome.failed:
        name = f"failed-{request.node.name}"
        artefacts.mkdir(parents=True, exist_ok=True)
        (artefacts / f"{name}.console.txt").write_text("\n".join(console), encoding="utf-8")
        page.screenshot(path=artefacts / f"{name}.png", full_page=True)
        print(f"see {name}.png and {name}.console.txt in {artefacts}")
    page.close()
