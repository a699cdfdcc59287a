"""Records in work on disk: each change a new version, written whole; a pointer says which one holds.

A version is a folder with the two files of a record, so that the command line reads it too. A change is written
beside the others and only then pointed to; a process that is killed leaves the old version in force.
"""

from __future__ import annotations

import json
import os
import re
import secrets
import shutil
from collections.abc import Callable
from contextlib import suppress
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

from harvest.errors import SettingsError
from harvest.record.schema import HISTORY_FILE, RECORD_FILE
from harvest.workspace.draft import Draft
from harvest.writing import flush_folder, hold_folder, write_new, write_whole

#: Versions of one record that are kept; older ones go.
KEPT = 200
_ID = re.compile("[a-z0-9]{8}")
_ABOUT, _CURRENT, _REMOVED = "about.json", "current", "removed"


@dataclass(frozen=True)
class Entry:
    """One record of the workspace.

    ``origin`` tells in words where it came from, ``source`` names it for finding it again; ``changed`` is the
    time of the latest change (ISO 8601, UTC); ``what`` says what was changed, ``before`` whether there is an
    earlier version and ``after`` whether one was undone.
    """

    id: str
    name: str
    origin: str
    source: str
    changed: str
    version: int
    what: str
    before: bool
    after: bool


def default_folder() -> Path:
    """``HARVEST_WORKSPACE`` if set, else the user's data folder."""
    import platformdirs

    stated = os.environ.get("HARVEST_WORKSPACE")
    return Path(stated) if stated else Path(platformdirs.user_data_dir("harvest", appauthor=False)) / "records"


class Workspace:
    """The records in one folder; made where there is none.

    Every method raises SettingsError where the disk refuses or there is no such record.
    """

    def __init__(self, folder: Path):
        self.folder = folder

    def entries(self) -> list[Entry]:
        """Every record that can be read, the latest changed first."""
        try:
            names = sorted(p.name for p in self.folder.iterdir() if _ID.fullmatch(p.name))
        except FileNotFoundError:
            return []
        except OSError as error:
            raise _refusal(self.folder, error) from error
        found = []
        for name in names:
            with suppress(SettingsError):
                found.append(self.entry(name))
        return sorted(found, key=lambda e: (e.changed, e.id), reverse=True)

    def has(self, record: object) -> bool:
        """Whether there is a record of this name; False for anything that is no name."""
        if not isinstance(record, str) or not _ID.fullmatch(record):
            return False
        return (self.folder / record / _CURRENT).is_file()

    def entry(self, record: str) -> Entry:
        """What is known about a record without its content."""
        home = self._home(record)
        try:
            version = self._version(home)
            about, change = _read_json(home / _ABOUT), _read_json(_place(home, version) / _ABOUT)
            newer = any(
                _read_json(_place(home, v) / _ABOUT)["parent"] == version for v in _versions(home) if v > version
            )
            earlier = change["parent"] is not None and _place(home, change["parent"]).is_dir()
        except (OSError, ValueError, KeyError) as error:
            raise _refusal(home, error) from error
        return Entry(
            id=record,
            name=str(change["name"]),
            origin=str(about["origin"]),
            source=str(about["source"]),
            changed=str(change["time"]),
            version=version,
            what=str(change["what"]),
            before=earlier,
            after=newer,
        )

    def load(self, record: str) -> Draft:
        """The draft in force."""
        home = self._home(record)
        try:
            return _read_draft(_place(home, self._version(home)))
        except (OSError, ValueError) as error:
            raise _refusal(home, error) from error

    def add(self, draft: Draft, origin: str, source: str = "") -> str:
        """A new record; its id."""
        record = secrets.token_hex(4)
        home = self.folder / record
        try:
            home.mkdir(parents=True)
            about = {"origin": origin, "source": source}
            write_whole(home / _ABOUT, json.dumps(about, ensure_ascii=False).encode())
            self._write(home, draft, None, origin)
        except (OSError, ValueError) as error:
            raise _refusal(home, error) from error
        return record

    def change(self, record: str, alter: Callable[[Draft], Draft], what: str) -> tuple[int, int]:
        """Alter the draft in force; the versions in force before and then, the same where nothing changed.

        Parameters
        ----------
        alter : callable
            Gives the new draft for the one on disk, so that two windows on one record do not undo each other.
        what : str
            What was changed, in a few words.
        """
        home = self._home(record)
        try:
            with hold_folder(home):
                version = self._version(home)
                old = _read_draft(_place(home, version))
                new = alter(old)
                return version, version if new == old else self._write(home, new, version, what)
        except (OSError, ValueError) as error:
            raise _refusal(home, error) from error

    def undo(self, record: str) -> bool:
        """Go back to the version before; False where there is none."""
        return self._move(record, back=True)

    def redo(self, record: str) -> bool:
        """Go forward again to the version that was left last; False where there is none."""
        return self._move(record, back=False)

    def remove(self, record: str) -> Path:
        """Take a record off the list; its folder is moved aside, not deleted. The new place."""
        home = self._home(record)
        aside = self.folder / _REMOVED / f"{record}-{secrets.token_hex(2)}"
        try:
            aside.parent.mkdir(parents=True, exist_ok=True)
            home.rename(aside)
        except OSError as error:
            raise _refusal(home, error) from error
        return aside

    def find(self, source: str, draft: Draft) -> str | None:
        """The record that came from a source, where its first version was this very draft."""
        for entry in self.entries():
            home = self.folder / entry.id
            with suppress(OSError, ValueError):
                if entry.source == source and _read_draft(_place(home, 1)) == draft:
                    return entry.id
        return None

    def _home(self, record: str) -> Path:
        if not self.has(record):
            raise SettingsError(f"there is no record {record!r} in {str(self.folder)!r}: open one from the list")
        return self.folder / record

    def _version(self, home: Path) -> int:
        return int((home / _CURRENT).read_text("ascii"))

    def _move(self, record: str, *, back: bool) -> bool:
        home = self._home(record)
        try:
            with hold_folder(home):
                version = self._version(home)
                if back:
                    there = [_read_json(_place(home, version) / _ABOUT)["parent"]]
                else:
                    later = (v for v in _versions(home) if v > version)
                    there = [v for v in later if _read_json(_place(home, v) / _ABOUT)["parent"] == version]
                if not there or there[-1] is None or not _place(home, there[-1]).is_dir():
                    return False
                write_whole(home / _CURRENT, str(there[-1]).encode())
                return True
        except (OSError, ValueError, KeyError) as error:
            raise _refusal(home, error) from error

    def _write(self, home: Path, draft: Draft, parent: int | None, what: str) -> int:
        version = max(_versions(home), default=0) + 1
        unfinished = home / f".{secrets.token_hex(4)}"
        time = datetime.now(UTC).isoformat(timespec="milliseconds")
        about = {"parent": parent, "name": draft.name, "what": what, "time": time}
        unfinished.mkdir()
        try:
            write_new(unfinished / HISTORY_FILE, draft.history_text.encode())
            write_new(unfinished / _ABOUT, json.dumps(about, ensure_ascii=False).encode())
            write_new(unfinished / RECORD_FILE, draft.record_text.encode())
            flush_folder(unfinished)
            unfinished.rename(_place(home, version))
        except BaseException:
            shutil.rmtree(unfinished, ignore_errors=True)
            raise
        write_whole(home / _CURRENT, str(version).encode())
        for old in set(_versions(home)) - self._worth_keeping(home, version):
            shutil.rmtree(_place(home, old), ignore_errors=True)
        return version

    def _worth_keeping(self, home: Path, version: int) -> set[int]:
        """The first version, which is what was brought, the latest ones, and those that undo leads back to."""
        there = _versions(home)
        kept = {there[0], *there[-KEPT:]}
        older: int | None = version
        for _ in range(KEPT):
            if older is None or not _place(home, older).is_dir():
                break
            kept.add(older)
            older = _read_json(_place(home, older) / _ABOUT)["parent"]
        return kept


def _place(home: Path, version: int) -> Path:
    return home / f"version-{version:06d}"


def _versions(home: Path) -> list[int]:
    return sorted(int(p.name[8:]) for p in home.glob("version-*") if p.name[8:].isdecimal())


def _read_draft(place: Path) -> Draft:
    record, history = (_read(place / name) for name in (RECORD_FILE, HISTORY_FILE))
    return Draft(record, history)


def _read(path: Path) -> str:
    return path.read_bytes().decode("utf-8")


def _read_json(path: Path) -> dict[str, Any]:
    content: dict[str, Any] = json.loads(_read(path))
    return content


def _refusal(place: Path, error: Exception) -> SettingsError:
    reason = getattr(error, "strerror", None) or str(error)
    return SettingsError(
        f"the work in {str(place)!r} cannot be read or saved: {reason}. Check the right to read and write there "
        "and the free space; what was saved before is still there."
    )
