"""Atomic writing of files: the old or the new one is whole at every moment."""

from __future__ import annotations

import os
import secrets
import sys
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path

from harvest.errors import SettingsError

if sys.platform != "win32":
    import fcntl


def write_new(path: Path, data: bytes) -> None:
    """Write a file that must not exist yet, down to the disk; where that fails nothing is left of it.

    A process that is killed meanwhile can leave a part of it: write under a name that nobody reads, and rename.

    Raises
    ------
    FileExistsError
        When something of that name is there already; it stays as it is.
    OSError
        When it cannot be written.
    """
    handle = os.open(path, os.O_WRONLY | os.O_CREAT | os.O_EXCL | getattr(os, "O_BINARY", 0), 0o666)
    try:
        with os.fdopen(handle, "wb") as stream:
            stream.write(data)
            stream.flush()
            os.fsync(stream.fileno())
    except BaseException:
        with suppress(OSError):
            path.unlink(missing_ok=True)
        raise


def flush_folder(folder: Path) -> None:
    """Write the folder's list of names down to the disk, where the system can."""
    if sys.platform == "win32":
        return
    with suppress(OSError):  # some network drives cannot
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)


@contextmanager
def hold_folder(folder: Path) -> Iterator[None]:
    """Let only one process (or thread) at a time work in a folder, where the system can lock one."""
    if sys.platform == "win32":
        yield
        return
    handle = os.open(folder, os.O_RDONLY)
    try:
        with suppress(OSError):  # some network drives know no locks
            fcntl.flock(handle, fcntl.LOCK_EX)
        yield
    finally:
        os.close(handle)


def write_whole(path: Path, data: bytes) -> None:
    """Write a file in one step: to a temporary file beside it, flushed to disk, then renamed over it.

    Raises
    ------
    SettingsError
        When it cannot be written; what was there stays.
    """
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        unfinished = path.parent / f".{secrets.token_hex(8)}.unfinished"
        write_new(unfinished, data)
        try:
            os.replace(unfinished, path)  # noqa: PTH105 (one named step, which the tests interrupt)
        except BaseException:
            with suppress(OSError):
                unfinished.unlink(missing_ok=True)
            raise
        flush_folder(path.parent)
    except (OSError, ValueError) as error:
        raise _refusal(path, error) from error


def check_writable(path: Path) -> None:
    """Find out, before long work for its sake, whether a file can be written; its folder is made.

    Raises
    ------
    SettingsError
        When it cannot.
    """
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=path.parent):
            pass
    except (OSError, ValueError) as error:
        raise _refusal(path, error) from error


def _refusal(path: Path, error: Exception) -> SettingsError:
    reason = getattr(error, "strerror", None) or str(error)
    return SettingsError(
        f"{str(path)!r} cannot be written: {reason}. Check the folder's name and the right "
        "to write there; nothing was changed."
    )
