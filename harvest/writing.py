"""Atomic writing of files: the old or the new one is whole at every moment."""

from __future__ import annotations

import os
import tempfile
from contextlib import suppress
from pathlib import Path

from harvest.errors import SettingsError


def write_whole(path: Path, data: bytes) -> None:
    """Write a file in one step: to a temporary file beside it, flushed to disk, then renamed over it.

    Raises
    ------
    SettingsError
        When it cannot be written; what was there stays.
    """
    handle, unfinished = -1, ""
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        handle, unfinished = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}.")
        with os.fdopen(handle, "wb") as stream:
            stream.write(data)
            stream.flush()
            os.fsync(stream.fileno())
        mask = os.umask(0)
        os.umask(mask)
        Path(unfinished).chmod(0o666 & ~mask)
        Path(unfinished).replace(path)
    except OSError as error:
        if unfinished:
            with suppress(OSError):
                Path(unfinished).unlink(missing_ok=True)
        raise SettingsError(
            f"{str(path)!r} cannot be written: {error.strerror or error}. Check the folder's name and the right "
            "to write there; nothing was changed."
        ) from error
