"""Starting the app: a server on this computer only, without telemetry, in our own colours; and the browser."""

from __future__ import annotations

import contextlib
import signal
import socket
import subprocess
import sys
import threading
import time
import urllib.request
import webbrowser
from collections.abc import Callable
from pathlib import Path

from harvest.errors import SettingsError

HOST, FIRST_PORT, PORTS_TRIED = "127.0.0.1", 8600, 100
#: Megabytes that an uploaded file may have; what it unpacks to is bounded where it is read.
LARGEST_UPLOAD = 20
OPTIONS = {
    "server.address": HOST,
    "server.headless": "true",
    "server.maxUploadSize": str(LARGEST_UPLOAD),
    "server.fileWatcherType": "none",
    "server.runOnSave": "false",
    "server.enableXsrfProtection": "true",
    "browser.gatherUsageStats": "false",
    "client.toolbarMode": "minimal",
    "client.showErrorDetails": "none",
    "client.showSidebarNavigation": "true",
    "theme.base": "light",
    "theme.primaryColor": "#1B6B72",
    "theme.backgroundColor": "#FCFBF8",
    "theme.secondaryBackgroundColor": "#F1EEE6",
    "theme.textColor": "#22292D",
    "theme.linkColor": "#1B6B72",
    "theme.borderColor": "#D9D4C7",
    "theme.showWidgetBorder": "true",
    "theme.baseRadius": "0.35rem",
    "theme.font": "sans-serif",
}
_STARTING = 60.0


def server_command(port: int) -> list[str]:
    """The command that runs the server."""
    app = Path(__file__).resolve().parents[1] / "app.py"
    options = [f"--{name}={value}" for name, value in {**OPTIONS, "server.port": str(port)}.items()]
    return [sys.executable, "-m", "streamlit", "run", str(app), *options]


def free_port(asked: int | None) -> int:
    """The port asked for, else the first free one from :data:`FIRST_PORT`.

    Raises
    ------
    SettingsError
        Where it is taken.
    """
    for port in [asked] if asked is not None else range(FIRST_PORT, FIRST_PORT + PORTS_TRIED):
        with contextlib.closing(socket.socket()) as probe:
            if sys.platform != "win32":
                probe.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
            try:
                probe.bind((HOST, port))
            except OSError:
                continue
            return port
    raise SettingsError(
        f"port {asked} is taken: give another, or none" if asked is not None else "no free port was found: give one"
    )


def launch(record: str | None, port: int | None, browser: bool, tell: Callable[[str], None]) -> None:
    """Run the server until it is stopped (Ctrl-C).

    Parameters
    ----------
    record : str or None
        Id of a record in the workspace to show.
    browser : bool
        Whether to open the browser once the server answers.

    Raises
    ------
    SettingsError
        Where the port is taken or the server ends with an error.
    """
    chosen = free_port(port)
    address = f"http://{HOST}:{chosen}/" + (f"?record={record}" if record else "")
    tell(f"Harvest runs at {address} on this computer only. Stop it here with Ctrl-C.")
    server = subprocess.Popen(server_command(chosen))
    if browser:
        threading.Thread(target=_open_when_ready, args=(address, chosen), daemon=True).start()
    signal.signal(signal.SIGTERM, lambda *_: sys.exit(0))  # the server must not outlive the command
    try:
        code = server.wait()
    except KeyboardInterrupt:
        return
    finally:
        server.terminate()
        server.wait()
    if code:
        raise SettingsError(f"the app's server ended with status {code}; its message stands above")


def _open_when_ready(address: str, port: int) -> None:
    ready = f"http://{HOST}:{port}/_stcore/health"
    end = time.monotonic() + _STARTING
    while time.monotonic() < end:
        with contextlib.suppress(OSError), urllib.request.urlopen(ready, timeout=1):
            webbrowser.open(address)
            return
        time.sleep(0.1)
