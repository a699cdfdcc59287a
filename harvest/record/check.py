"""Checking a record: every problem in one pass."""

from __future__ import annotations

import os
from collections.abc import Callable
from pathlib import Path

from harvest.errors import Problem
from harvest.record.build import build_record
from harvest.record.curves import check_correlations, check_curves
from harvest.record.evidence import check_counts, check_quota_year, warn_of_abundance, warn_of_history
from harvest.record.files import read_text
from harvest.record.history import Table, Wanted, check_history
from harvest.record.model import Record
from harvest.record.relations import (
    check_noise,
    check_objectives,
    check_private,
    check_rule,
    check_season,
    check_surveys,
)
from harvest.record.reporting import Report
from harvest.record.schema import HISTORY_FILE, MAX_HISTORY_BYTES, MAX_RECORD_BYTES, RECORD_FILE
from harvest.record.tables import Values, check_format, check_tables, get, parse_toml

Checked = tuple[Record | None, tuple[Problem, ...]]
#: Gives the text of the history with this name, or None with the reason in the report.
ReadHistory = Callable[[str, Report], str | None]

_RELATIONS = (
    check_season,
    check_surveys,
    check_curves,
    check_correlations,
    check_objectives,
    check_noise,
    check_rule,
    check_private,
)
_ATTEMPTS = 20


def check_record(folder: str | os.PathLike[str]) -> Checked:
    """Find every problem of the record in a folder.

    Parameters
    ----------
    folder : path
        The record's folder, with ``record.toml`` and the history that it names.

    Returns
    -------
    record : Record or None
        None where there is any error.
    problems : tuple of Problem
        Errors and warnings, in the order of the files. Whatever the files hold, nothing is raised.
    """
    checked: Checked = None, ()
    for _ in range(_ATTEMPTS):  # again, if the record was saved anew between the reading of its two files
        before = _stamp(folder)
        checked = _check_folder(Path(folder))
        if _stamp(folder) == before:
            break
    return checked


def check_texts(record_text: str, history_text: str) -> Checked:
    """Find every problem of a record in the text of its two files; see :func:`check_record`."""
    return _check(record_text, Report(RECORD_FILE), lambda name, report: history_text)


def _stamp(folder: str | os.PathLike[str]) -> tuple[int, int, int] | None:
    try:
        status = (Path(folder) / RECORD_FILE).stat()
    except (OSError, ValueError):
        return None
    return status.st_ino, status.st_mtime_ns, status.st_size


def _check_folder(folder: Path) -> Checked:
    report = Report(RECORD_FILE)
    text = read_text(folder, RECORD_FILE, MAX_RECORD_BYTES, report)
    return _check(text, report, lambda name, found: read_text(folder, name, MAX_HISTORY_BYTES, found))


def _check(text: str | None, report: Report, read_history: ReadHistory) -> Checked:
    document = None if text is None else parse_toml(text, report)
    if document is not None and not check_format(document, report):
        return None, tuple(report.problems)
    values = None if document is None else check_tables(document, report)
    if values is not None:
        for check in _RELATIONS:
            check(values, report)
    name = HISTORY_FILE if values is None else get(values[""], "history")
    if values is not None and "history" not in values[""]:
        name = HISTORY_FILE
    history = Report(name or HISTORY_FILE)
    table = _check_history(name, values, history, read_history)
    record = None
    if values is not None and table is not None:
        check_counts(values, table, history)
        check_quota_year(values, table, report)
        warn_of_history(values, table, history)
        if not report.faulty and not history.faulty:
            record = build_record(values, table)
            warn_of_abundance(record, report, history)
    return record, (*report.problems, *history.problems)


def _check_history(name: str | None, values: Values | None, report: Report, read_history: ReadHistory) -> Table | None:
    """The history, as far as it can be read; without a sound ``record.toml`` only its years and removals."""
    if name is None:
        return None
    quiet = Report(report.file)
    text = read_history(name, quiet)
    if text is not None or values is not None:
        report.problems.extend(quiet.problems)
    if text is None:
        return None
    return check_history(text, _wanted(values), report)


def _wanted(values: Values | None) -> Wanted:
    if values is None:
        return Wanted(known=False)
    columns = [
        [name for survey in values["survey"] if (name := get(survey, key)) is not None]
        for key in ("column", "cv_column")
    ]
    return Wanted(tuple(columns[0]), tuple(columns[1]))
