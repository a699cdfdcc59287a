"""The server listens on this computer only, tells nobody, and bounds what is uploaded."""

from __future__ import annotations

import socket
import subprocess
import sys
from pathlib import Path

import pytest

from harvest.desk import launch
from harvest.desk.launch import FIRST_PORT, HOST, free_port, server_command
from harvest.errors import SettingsError


def test_the_servers_command() -> None:
    command = server_command(8611)
    assert command[:4] == [sys.executable, "-m", "streamlit", "run"]
    assert Path(command[4]).is_file()
    assert Path(command[4]).name == "app.py"
    assert {
        "--server.address=127.0.0.1",
        "--server.port=8611",
        "--server.headless=true",
        "--server.maxUploadSize=20",
        "--server.enableXsrfProtection=true",
        "--browser.gatherUsageStats=false",
        "--client.showErrorDetails=none",
        "--server.fileWatcherType=none",
    } <= set(command[5:])
    assert all(option.startswith("--") and "=" in option for option in command[5:])


def test_every_option_is_one_that_the_server_knows() -> None:
    from streamlit import config

    known = config.get_config_options()
    assert set(launch.OPTIONS) <= set(known)


def test_a_port_that_is_asked_for_and_free() -> None:
    with socket.socket() as probe:
        probe.bind((HOST, 0))
        port = probe.getsockname()[1]
    assert free_port(port) == port


def test_a_port_that_is_taken_is_told() -> None:
    with socket.socket() as taken:
        taken.bind((HOST, 0))
        taken.listen()
        port = taken.getsockname()[1]
        with pytest.raises(SettingsError, match=f"port {port} is taken: give another, or none"):
            free_port(port)


def test_the_next_port_is_taken_where_one_is_not_free(monkeypatch: pytest.MonkeyPatch) -> None:
    first = free_port(None)
    assert FIRST_PORT <= first < FIRST_PORT + launch.PORTS_TRIED
    with socket.socket() as taken:
        taken.bind((HOST, first))
        taken.listen()
        assert free_port(None) > first
        monkeypatch.setattr(launch, "FIRST_PORT", first)
        monkeypatch.setattr(launch, "PORTS_TRIED", 1)
        with pytest.raises(SettingsError, match="no free port was found"):
            free_port(None)


class Server:
    """A server that ends as it is told."""

    def __init__(self, code: int | None):
        self.code = code
        self.ended = False

    def wait(self) -> int:
        if self.code is None and not self.ended:
            raise KeyboardInterrupt
        return self.code or 0

    def terminate(self) -> None:
        self.ended = True


def started(monkeypatch: pytest.MonkeyPatch, server: Server, record: str | None) -> list[str]:
    told: list[str] = []
    monkeypatch.setattr(subprocess, "Popen", lambda command: server)
    monkeypatch.setattr(launch, "free_port", lambda port: 8611)
    launch.launch(record, None, False, told.append)
    return told


def test_the_address_is_told_and_names_the_record(monkeypatch: pytest.MonkeyPatch) -> None:
    told = started(monkeypatch, Server(0), "abcd1234")
    assert told == [
        "Harvest runs at http://127.0.0.1:8611/?record=abcd1234 on this computer only. Stop it here with Ctrl-C."
    ]


def test_ctrl_c_ends_the_server(monkeypatch: pytest.MonkeyPatch) -> None:
    server = Server(None)
    started(monkeypatch, server, None)
    assert server.ended


def test_a_server_that_fails_is_told(monkeypatch: pytest.MonkeyPatch) -> None:
    with pytest.raises(SettingsError, match="ended with status 3"):
        started(monkeypatch, Server(3), None)
