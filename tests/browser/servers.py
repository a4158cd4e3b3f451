"""The command lines of the JupyterLab and Voila servers."""

from __future__ import annotations

import socket
from json import JSONDecodeError, dumps, loads
from pathlib import Path

from .server_process import HOST, Server

NO_RATE_LIMITS = (
    "--ZMQChannelsWebsocketConnection.iopub_msg_rate_limit=1000000",
    "--ZMQChannelsWebsocketConnection.iopub_data_rate_limit=1000000000",
)


def start_lab(server: Server) -> None:
    """Start JupyterLab on a port of its own choice, which its runtime file tells."""
    _switch_off_news(server.home)
    server.launch(
        [
            "jupyterlab",
            *("--no-browser", "--allow-root", f"--ServerApp.ip={HOST}", "--ServerApp.port=0"),
            f"--ServerApp.root_dir={server.root}",
            "--LabApp.expose_app_in_browser=True",
            "--LabApp.news_url=None",
            "--LabApp.check_for_updates_class=jupyterlab.NeverCheckForUpdate",
            "--LabApp.extension_manager=readonly",
            *NO_RATE_LIMITS,
        ]
    )
    server.wait_until(lambda: _lab_is_ready(server))


def _switch_off_news(home: Path) -> None:
    """Store the answer to the question whether JupyterLab may fetch its news."""
    folder = home / "settings" / "@jupyterlab" / "apputils-extension"
    folder.mkdir(parents=True)
    settings = {"fetchNews": "false", "checkForUpdates": False, "doNotDisturbMode": True}
    (folder / "notification.jupyterlab-settings").write_text(dumps(settings))


def _lab_is_ready(server: Server) -> bool:
    assert server.process is not None
    try:
        text = (server.home / "runtime" / f"jpserver-{server.process.pid}.json").read_text()
        server.port = int(loads(text)["port"])
        return server.request("GET", "/api/status")[0] == 200
    except (OSError, JSONDecodeError):
        return False


def start_voila(server: Server) -> None:
    """Start Voila on a free port; it takes the token from the environment."""
    with socket.socket() as probe:
        probe.bind((HOST, 0))
        server.port = probe.getsockname()[1]
    server.launch(
        [
            "voila",
            *("--no-browser", f"--Voila.ip={HOST}", f"--port={server.port}", "--Voila.port_retries=0"),
            "--Voila.auto_token=True",
            *NO_RATE_LIMITS,
            str(server.root),
        ]
    )
    server.wait_until(lambda: _voila_is_ready(server))


def _voila_is_ready(server: Server) -> bool:
    try:
        return server.request("GET", "/voila/tree/")[0] == 200
    except OSError:
        return False
