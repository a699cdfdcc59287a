"""Files that were uploaded and not taken over yet, with what was said about them, so that a refresh loses nothing."""

from __future__ import annotations

import hashlib
import json
import re
from collections.abc import Callable
from contextlib import suppress
from pathlib import Path
from typing import Any

from harvest.errors import SettingsError
from harvest.writing import hold_folder, write_whole

#: Uploaded files that are kept; the oldest go.
KEPT = 20
_ID = re.compile("[0-9a-f]{16}")
_GONE = "the uploaded file is not there any more: upload it again"


class Brought:
    """Uploaded files in a folder of the workspace, told apart by their content."""

    def __init__(self, folder: Path):
        self.folder = folder / "brought"

    def keep(self, name: str, data: bytes) -> str:
        """Keep a file; its id, which is the same for the same name and content.

        Raises
        ------
        SettingsError
            Where it cannot be written.
        """
        file = hashlib.sha256(name.encode() + b"\0" + data).hexdigest()[:16]
        if not self.has(file):
            write_whole(self._data(file), data)
            write_whole(self._said(file), json.dumps({"name": name}, ensure_ascii=False).encode())
        self._drop_old()
        return file

    def has(self, file: object) -> bool:
        """Whether there is such a file; False for anything that is no id."""
        if not isinstance(file, str) or not _ID.fullmatch(file) or not self._data(file).is_file():
            return False
        try:
            return isinstance(self.said(file)["name"], str)
        except (SettingsError, KeyError):
            return False

    def load(self, file: str) -> tuple[str, bytes]:
        """Name and content.

        Raises
        ------
        SettingsError
            Where there is no such file.
        """
        try:
            return str(self.said(file)["name"]), self._data(file).read_bytes()
        except (OSError, KeyError) as error:
            raise SettingsError(_GONE) from error

    def said(self, file: str) -> dict[str, Any]:
        """What was said about a file so far, its name among it.

        Raises
        ------
        SettingsError
            Where there is no such file, or what was said cannot be read.
        """
        try:
            content = json.loads(self._said(file).read_text("utf-8"))
        except (OSError, ValueError) as error:
            raise SettingsError(_GONE) from error
        return content if isinstance(content, dict) else {}

    def say(self, file: str, alter: Callable[[dict[str, Any]], dict[str, Any]]) -> dict[str, Any]:
        """Keep what is said about a file: ``alter`` gives it for what was said so far, in whatever window."""
        with hold_folder(self.folder):
            content = alter(self.said(file))
            write_whole(self._said(file), json.dumps(content, ensure_ascii=False).encode())
        return content

    def _data(self, file: str) -> Path:
        return self.folder / f"{file}.data"

    def _said(self, file: str) -> Path:
        return self.folder / f"{file}.json"

    def _drop_old(self) -> None:
        with suppress(OSError):
            old = sorted(self.folder.glob("*.data"), key=lambda p: p.stat().st_mtime, reverse=True)[KEPT:]
            for path in old:
                path.unlink(missing_ok=True)
                path.with_suffix(".json").unlink(missing_ok=True)
