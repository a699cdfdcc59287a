"""Making record workbooks, and turning a record's folder into a workbook and back; nothing is ever overwritten."""

from __future__ import annotations

import os
from pathlib import Path

from harvest.errors import Problem, RecordError, SettingsError
from harvest.record import check_record, demo_folder, read_record, save_record
from harvest.record.model import Record
from harvest.sheets.limits import MAX_BYTES
from harvest.sheets.record_workbook import blank_record_workbook, check_record_workbook, record_workbook
from harvest.writing import write_new

SUFFIX = ".xlsx"
_NEW_NAME = "nothing was changed. Give a new name."


def make_record_workbook(path: Path, demo: str | None = None) -> None:
    """Write a new record as a workbook: the template, or a demonstration record.

    Parameters
    ----------
    path : Path
        A file that does not exist yet.
    demo : str or None
        One of :func:`harvest.record.demo_names`; None for the template.

    Raises
    ------
    SettingsError
        When there is something of that name, it cannot be written, or there is no such demonstration.
    """
    data = blank_record_workbook() if demo is None else record_workbook(read_record(demo_folder(demo)))
    _write(path, data)


def folder_to_workbook(folder: Path, path: Path) -> tuple[Record, tuple[Problem, ...]]:
    """Write the record in a folder as a new workbook; the record and its warnings.

    Raises
    ------
    RecordError
        When the record has an error.
    SettingsError
        When there is something of the workbook's name already, or it cannot be written.
    """
    record, problems = check_record(folder)
    if record is None:
        raise RecordError(problems)
    _write(path, record_workbook(record))
    return record, problems


def workbook_to_folder(path: Path, folder: Path) -> tuple[Record, tuple[Problem, ...]]:
    """Save the record in a workbook as a new folder; the record and its warnings, by sheet and row.

    Raises
    ------
    SheetError
        When the file cannot be opened, or is not the workbook of a record.
    RecordError
        When the record has an error; every problem names its sheet and row.
    SettingsError
        When the file cannot be read, the folder is not new or empty, or cannot be written to.
    """
    checked = check_record_workbook(path.name, read_workbook_file(path))
    if checked.record is None:
        raise RecordError(checked.problems)
    _check_new(folder)
    save_record(checked.record, folder)
    return checked.record, checked.problems


def _check_new(folder: Path) -> None:
    try:
        taken = os.path.lexists(folder) and not (folder.is_dir() and not any(folder.iterdir()))
    except (OSError, ValueError) as error:
        raise SettingsError(f"{str(folder)!r} cannot be made: {_reason(error)}. Check the folder's name.") from error
    if taken:
        raise SettingsError(
            f"{str(folder)!r} is there already and not empty; nothing was changed. Give a new folder's name."
        )


def read_workbook_file(path: Path) -> bytes:
    """The file's bytes; of one that is too large only so many that it is refused."""
    try:
        with path.open("rb") as stream:
            return stream.read(MAX_BYTES + 1)
    except (OSError, ValueError) as error:
        raise SettingsError(
            f"{str(path)!r} cannot be read: {_reason(error)}. Check the file's name and the right to read it."
        ) from error


def _write(path: Path, data: bytes) -> None:
    try:
        if os.path.lexists(path):
            raise SettingsError(f"{str(path)!r} is there already; {_NEW_NAME}")
        path.parent.mkdir(parents=True, exist_ok=True)
        write_new(path, data)
    except FileExistsError as error:
        raise SettingsError(f"{str(path)!r} or a folder on the way to it is there already; {_NEW_NAME}") from error
    except (OSError, ValueError) as error:
        raise SettingsError(
            f"{str(path)!r} cannot be written: {_reason(error)}. Check the folder's name and the right to write there."
        ) from error


def _reason(error: Exception) -> str:
    return getattr(error, "strerror", None) or str(error)
