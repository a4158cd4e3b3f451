"""A Jupyter server process that is shut off from the files and settings of the user."""

from __future__ import annotations

import http.client
import os
import secrets
import signal
import site
import subprocess
import sys
import time
from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path

HOST = "127.0.0.1"
START_SECONDS = 90.0
STOP_SECONDS = 15.0


@dataclass
class Server:
    """A server process that leads its own process group, with private folders."""

    home: Path
    root: Path
    token: str = field(default_factory=lambda: secrets.token_hex(16))
    port: int = 0
    process: subprocess.Popen[bytes] | None = None

    @property
    def log(self) -> Path:
        """The file that receives everything the server prints."""
        return self.home / "server.log"

    def address(self, path: str, **query: str) -> str:
        """Return the URL of a page of this server, with the token."""
        pairs = {"token": self.token, **query}
        return f"http://{HOST}:{self.port}/{path}?" + "&".join(f"{k}={v}" for k, v in pairs.items())

    def request(self, method: str, path: str) -> tuple[int, bytes]:
        """Send one request to the REST interface; return the status and the body."""
        connection = http.client.HTTPConnection(HOST, self.port, timeout=30)
        try:
            connection.request(method, path, headers={"Authorization": f"token {self.token}"})
            response = connection.getresponse()
            return response.status, response.read()
        finally:
            connection.close()

    def launch(self, arguments: list[str]) -> None:
        """Start ``python -m ARGUMENTS`` with the interpreter that runs the tests."""
        command = [sys.executable, "-m", *arguments]
        with self.log.open("ab") as log:
            self.process = subprocess.Popen(
                command,
                stdin=subprocess.DEVNULL,
                stdout=log,
                stderr=subprocess.STDOUT,
                cwd=self.root,
                env=private_environment(self.home, self.token),
                start_new_session=True,
            )

    def wait_until(self, ready: Callable[[], bool]) -> None:
        """Wait for the server to answer; raise with the end of its log if it does not."""
        assert self.process is not None
        deadline = time.monotonic() + START_SECONDS
        while time.monotonic() < deadline and self.process.poll() is None:
            if ready():
                return
            time.sleep(0.1)
        tail = self.log.read_text(errors="replace")[-3000:]
        raise RuntimeError(f"the server did not start (exit status {self.process.poll()}):\n{tail}")

    def stop(self) -> None:
        """End the process group of this server, and no other process."""
        if self.process is None:
            return
        for sign in (signal.SIGTERM, signal.SIGKILL):
            if self.process.poll() is None:
                os.killpg(self.process.pid, sign)
            try:
                self.process.wait(STOP_SECONDS)
                return
            except subprocess.TimeoutExpired:
                continue


def private_environment(home: Path, token: str) -> dict[str, str]:
    """Return an environment in which no file of the user is read or written."""
    foreign = ("JUPYTER", "IPYTHON", "XDG_", "VOILA")
    kept = {name: value for name, value in os.environ.items() if not name.startswith(foreign)}
    folders = {
        "HOME": "home",
        "XDG_CONFIG_HOME": "home/config",
        "XDG_CACHE_HOME": "home/cache",
        "XDG_DATA_HOME": "home/share",
        "IPYTHONDIR": "ipython",
        "JUPYTER_CONFIG_DIR": "config",
        "JUPYTER_DATA_DIR": "data",
        "JUPYTER_RUNTIME_DIR": "runtime",
        "JUPYTERLAB_SETTINGS_DIR": "settings",
        "JUPYTERLAB_WORKSPACES_DIR": "workspaces",
    }
    for name, folder in folders.items():
        (home / folder).mkdir(parents=True, exist_ok=True)
        kept[name] = str(home / folder)
    kept.setdefault("PYTHONUSERBASE", site.getuserbase())
    return {**kept, "JUPYTER_TOKEN": token}
