"""Stopping an action at any of its system calls: by an error, or by killing the process."""

from __future__ import annotations

import os
import signal
from collections.abc import Callable
from contextlib import suppress
from typing import Any

import pytest

SYSTEM_CALLS = ("mkdir", "open", "fdopen", "fsync", "replace", "unlink", "close")


def count_calls(action: Callable[[], None]) -> list[str]:
    """The system calls of an action, in order."""
    calls: list[str] = []
    with pytest.MonkeyPatch.context() as patch:
        for name in SYSTEM_CALLS:
            real = getattr(os, name)

            def spy(*args: Any, _name: str = name, _real: Any = real, **kwargs: Any) -> Any:
                calls.append(_name)
                return _real(*args, **kwargs)

            patch.setattr(os, name, spy)
        action()
    return calls


def interrupt(patch: pytest.MonkeyPatch, target: int, strike: Callable[[str, Any, tuple[Any, ...]], Any]) -> None:
    """Have ``strike`` stand in for the system call number ``target``."""
    seen = 0
    for name in SYSTEM_CALLS:
        real = getattr(os, name)

        def stand_in(*args: Any, _name: str = name, _real: Any = real, **kwargs: Any) -> Any:
            nonlocal seen
            seen += 1
            return strike(_name, _real, args) if seen == target + 1 else _real(*args, **kwargs)

        patch.setattr(os, name, stand_in)


def die(after: bool) -> Callable[[str, Any, tuple[Any, ...]], Any]:
    """Kill this process before or after a call; a file that is opened for writing gets half its text."""

    def strike(name: str, real: Any, args: tuple[Any, ...]) -> Any:
        if name == "fdopen" and after:
            stream = real(*args)
            stream.write(b"year,remov")
            stream.flush()
        elif after:
            with suppress(OSError):
                real(*args)
        os.kill(os.getpid(), signal.SIGKILL)

    return strike
