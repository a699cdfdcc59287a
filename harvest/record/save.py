"""Saving a record so that the old or the new one is whole at every moment, whatever happens.

The new history is written under a fresh name, then ``record.toml``, which names it, is replaced in one step;
only then the old history goes. A process killed in between can leave a history that no record names: it does
no harm and may be deleted.
"""

from __future__ import annotations

import os
from contextlib import suppress
from itertools import chain, count
from pathlib import Path

from harvest.errors import SettingsError
from harvest.record.fields import field_at
from harvest.record.files import read_text
from harvest.record.model import FORMAT, Record
from harvest.record.reporting import Report
from harvest.record.schema import HISTORY_FILE, MAX_RECORD_BYTES, RECORD_FILE
from harvest.record.tables import parse_toml
from harvest.record.values import FAULTY, check_value
from harvest.record.write import record_to_files
from harvest.writing import flush_folder, hold_folder, write_new

_UNFINISHED = ".record.toml.unfinished"


def save_record(record: Record, folder: str | os.PathLike[str]) -> None:
    """Save a record in a folder, which is made where there is none.

    Only ``record.toml`` and the history that it names are ever replaced; comments in them are lost.

    Parameters
    ----------
    record : Record
    folder : path

    Raises
    ------
    RecordError
        When the record breaks a rule of the format; nothing is written.
    SettingsError
        When the folder cannot be written to, or holds a ``record.toml`` that is not a record of this or an
        earlier format; nothing is changed.
    """
    record_text, history_text = record_to_files(record)
    place = Path(folder)
    try:
        place.mkdir(parents=True, exist_ok=True)
        with hold_folder(place):
            old = _check_old(place)
            name = _write_history(place, old, history_text.encode())
            if name != HISTORY_FILE:
                record_text, _ = record_to_files(record, name)
            _replace_record(place, name, record_text.encode())
            if old is not None and old != name:
                with suppress(OSError):  # the new record is whole by now; a left-over history does no harm
                    (place / old).unlink(missing_ok=True)
                flush_folder(place)
    except (OSError, ValueError, RuntimeError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise SettingsError(
            f"the record cannot be saved in {str(place)!r}: {reason}. "
            "Check the folder's name, the right to write there and the free space; nothing was changed."
        ) from error


def _check_old(folder: Path) -> str | None:
    """The history that the folder's record names; None where there is no record yet."""
    if not os.path.lexists(folder / RECORD_FILE):
        return None
    known, name = _find_history(folder)
    if not known:
        raise SettingsError(
            f"the folder {str(folder)!r} holds a {RECORD_FILE} that is not a record which this program can read. "
            "Move it away or save in another folder; nothing was changed."
        )
    return name


def _find_history(folder: Path) -> tuple[bool, str | None]:
    """Whether ``record.toml`` is a record of a known format, and the sound name of its history."""
    report = Report(RECORD_FILE)
    text = read_text(folder, RECORD_FILE, MAX_RECORD_BYTES, report)
    document = None if text is None or report.faulty else parse_toml(text, report)
    version = None if document is None else document.get("format")
    known = isinstance(version, int) and not isinstance(version, bool) and 1 <= version <= FORMAT
    if document is None or not known:
        return False, None
    name = check_value(field_at("history"), document.get("history", HISTORY_FILE), "history", report)
    return True, None if name is FAULTY else name


def _write_history(folder: Path, old: str | None, data: bytes) -> str:
    """The name of a file that holds the new history: the old one where nothing changed, else a fresh one."""
    if old is not None and _holds(folder / old, data):
        return old
    stem, suffix = HISTORY_FILE.rsplit(".", 1)
    names = chain([HISTORY_FILE], (f"{stem}-{number}.{suffix}" for number in count(2)))
    name = next(name for name in names if not os.path.lexists(folder / name))
    write_new(folder / name, data)  # where somebody else was quicker, it is theirs
    return name


def _holds(path: Path, data: bytes) -> bool:
    try:
        return path.is_file() and path.stat().st_size == len(data) and path.read_bytes() == data
    except OSError:
        return False


def _replace_record(folder: Path, history: str, data: bytes) -> None:
    unfinished = folder / _UNFINISHED
    try:
        unfinished.unlink(missing_ok=True)  # of a process that was killed
        write_new(unfinished, data)
        flush_folder(folder)
        os.replace(unfinished, folder / RECORD_FILE)  # noqa: PTH105 (one named step, which the tests interrupt)
    except BaseException:
        unfinished.unlink(missing_ok=True)
        if _find_history(folder)[1] != history:
            (folder / history).unlink(missing_ok=True)
        raise
    flush_folder(folder)
