"""The app's server and Debian's Chromium, both started for tests and stopped with them; nothing else may be asked."""

from __future__ import annotations

import contextlib
import os
import shutil
import signal
import socket
import subprocess
import sys
import time
import urllib.request
from dataclasses import dataclass
from pathlib import Path
from urllib.parse import urlencode, urlsplit

import pytest
from playwright.sync_api import Browser, BrowserContext, Playwright

HOST = "127.0.0.1"
#: Chromium makes no request of its own: no updates, no checks, no suggestions.
QUIET = (
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-default-apps",
    "--disable-domain-reliability",
    "--disable-sync",
    "--metrics-recording-only",
    "--no-pings",
)
_STARTING = 60.0


@dataclass(frozen=True)
class Server:
    """A running app: its address and the folder of its records."""

    address: str
    workspace: Path

    def url(self, page: str = "", **query: str) -> str:
        """The address of a page."""
        return f"{self.address}/{page}" + (f"?{urlencode(query)}" if query else "")


def free_port() -> int:
    """A port that nobody uses."""
    with contextlib.closing(socket.socket()) as probe:
        probe.bind((HOST, 0))
        return probe.getsockname()[1]


@contextlib.contextmanager
def serving(folder: Path, *arguments: str, **environment: str):
    """The app as the command starts it, its records in ``folder / "records"``; stopped at the end."""
    port, records = free_port(), folder / "records"
    command = [sys.executable, "-m", "harvest", "app", *arguments, "--port", str(port), "--no-browser"]
    with (folder / "server.log").open("wb") as log:
        process = subprocess.Popen(
            command,
            env={**os.environ, "HARVEST_WORKSPACE": str(records), **environment},
            stdin=subprocess.DEVNULL,
            stdout=log,
            stderr=subprocess.STDOUT,
            start_new_session=True,
        )
    try:
        _wait_until_ready(process, f"http://{HOST}:{port}/_stcore/health", folder / "server.log")
        yield Server(f"http://{HOST}:{port}", records)
    finally:
        os.killpg(process.pid, signal.SIGTERM)
        process.wait(timeout=20)


def _wait_until_ready(process: subprocess.Popen, health: str, log: Path) -> None:
    end = time.monotonic() + _STARTING
    while time.monotonic() < end:
        if process.poll() is not None:
            break
        with contextlib.suppress(OSError), urllib.request.urlopen(health, timeout=1):
            return
        time.sleep(0.05)
    raise RuntimeError(f"the app did not start:\n{log.read_text(errors='replace')}")


def chromium() -> str:
    """Where Chromium is; without it these tests are skipped, on a machine of our own that says CI they fail."""
    found = next(filter(None, map(shutil.which, ("chromium", "chromium-browser", "google-chrome"))), None)
    if found is None:
        told = "NO CHROMIUM: nothing is tested in a real browser; install the package chromium"
        if os.environ.get("CI") == "true":
            pytest.fail(told, pytrace=False)
        pytest.skip(told)
    return found


def start_browser(playwright: Playwright, executable: str) -> Browser:
    """Chromium without a window and without requests of its own."""
    return playwright.chromium.launch(executable_path=executable, args=list(QUIET))


def is_foreign(url: str) -> bool:
    """Whether an address leaves this computer."""
    parts = urlsplit(url)
    return parts.scheme not in ("data", "blob") and parts.hostname not in (HOST, "localhost")


def record_requests(context: BrowserContext) -> list[str]:
    """A list that grows by the address of every request and every websocket of a context."""
    asked: list[str] = []
    context.on("request", lambda request: asked.append(request.url))
    context.on("page", lambda page: page.on("websocket", lambda socket: asked.append(socket.url)))
    return asked
