"""Files that were uploaded and not taken over yet, with what was said about them, so that a refresh loses nothing."""

from __future__ import annotations

import hashlib
import json
import re
from contextlib import suppress
from pathlib import Path
from typing import Any

from harvest.errors import SettingsError
from harvest.writing import write_whole

#: Uploaded files that are kept; the oldest go.
KEPT = 20
_ID = re.compile("[0-9a-f]{16}")


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
        if not self._data(file).exists():
            write_whole(self._data(file), data)
            self.say(file, {"name": name})
        self._drop_old()
        return file

    def has(self, file: object) -> bool:
        """Whether there is such a file; False for anything that is no id."""
        return isinstance(file, str) and bool(_ID.fullmatch(file)) and self._said(file).is_file()

    def load(self, file: str) -> tuple[str, bytes]:
        """Name and content.

        Raises
        ------
        SettingsError
            Where there is no such file.
        """
        try:
            return str(self.said(file)["name"]), self._data(file).read_bytes()
        except (OSError, ValueError, KeyError) as error:
            raise SettingsError("the uploaded file is not there any more: upload it again") from error

    def said(self, file: str) -> dict[str, Any]:
        """What was said about a file so far, its name among it."""
        content: dict[str, Any] = json.loads(self._said(file).read_text("utf-8"))
        return content

    def say(self, file: str, content: dict[str, Any]) -> None:
        """Keep what was said about a file."""
        write_whole(self._said(file), json.dumps(content, ensure_ascii=False).encode())

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
