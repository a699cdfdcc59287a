"""The record as an Excel workbook: written without loss, read back, and checked with sheet and row in each problem."""

from __future__ import annotations

import re
from dataclasses import dataclass, replace

from harvest.errors import Problem
from harvest.record.check import check_texts
from harvest.record.document import render_document
from harvest.record.model import Record
from harvest.record.reporting import show
from harvest.record.schema import HISTORY_FILE, RECORD_FILE
from harvest.record.template import blank_record_files
from harvest.record.write import record_to_files
from harvest.sheets.grid import SheetError
from harvest.sheets.opening import open_book
from harvest.sheets.record_workbook_found import Reading
from harvest.sheets.record_workbook_reading import find_format, read_workbook
from harvest.sheets.record_workbook_texts import history_text
from harvest.sheets.record_workbook_words import without_toml
from harvest.sheets.record_workbook_writing import write_workbook

_HEAD = "# A record taken from a workbook.\n"
_ROW = re.compile(r"row (\d+)")
_NAMED = re.compile(r" \([^)]*\)")


@dataclass(frozen=True)
class CheckedWorkbook:
    """What a record's workbook holds.

    Attributes
    ----------
    record : Record or None
        None where there is any error.
    problems : tuple of Problem
        Their ``file`` is the workbook, and ``where`` names the sheet and the row.
    record_text, history_text : str
        The two files that the workbook stands for, right or wrong.
    beyond : tuple of Problem
        Those of the problems that these texts do not show: formulas, rows that stand twice, cells that are not used.
    """

    record: Record | None
    problems: tuple[Problem, ...]
    record_text: str
    history_text: str
    beyond: tuple[Problem, ...]


def record_workbook(record: Record) -> bytes:
    """A record as the bytes of an .xlsx file; reading it gives the record back, to the last digit.

    Raises
    ------
    RecordError
        When the record breaks a rule of the format.
    """
    return write_workbook(*record_to_files(record))


def blank_record_workbook() -> bytes:
    """A workbook to start from: invented examples, marked as such, that pass every check."""
    return write_workbook(*blank_record_files(), invented=True)


def is_record_workbook(data: bytes) -> bool:
    """Whether a file is the workbook of a record, sound or not, of any version of the format."""
    try:
        return find_format(open_book("the workbook", data)) is not None
    except SheetError:
        return False


def check_record_workbook(name: str, data: bytes) -> CheckedWorkbook:
    """Read a record's workbook and find every problem in it.

    Parameters
    ----------
    name : str
        The workbook's file name, for messages.
    data : bytes
        Its content.

    Raises
    ------
    SheetError
        When it cannot be opened, or is not the workbook of a record.
    """
    reading = read_workbook(open_book(name, data))
    texts = render_document(reading.document, _HEAD), history_text(reading.history)
    record, found = check_texts(*texts)
    problems = (*reading.problems, *(_in_workbook(problem, reading) for problem in found))
    usable = not any(problem.severity == "error" for problem in problems)
    return CheckedWorkbook(record if usable else None, problems, *texts, tuple(reading.problems))


def _in_workbook(problem: Problem, reading: Reading) -> Problem:
    """The same problem, with the place where a manager finds it."""
    where, section = problem.where, ""
    if problem.file == HISTORY_FILE:
        sheet, first = reading.history_place
        where = _ROW.sub(lambda match: f"row {int(match[1]) + first - 1}", where, count=1)
        where = f"sheet {show(sheet)}" + (f", {where}" if where else "")
    elif problem.file == RECORD_FILE:
        section = re.split("[ .,]", where)[0]
        where = _find_place(where, reading)
    rule, cure = without_toml(problem.rule, section), without_toml(problem.cure, section)
    return replace(problem, file=reading.file, where=where, rule=rule, cure=cure)


def _find_place(where: str, reading: Reading) -> str:
    """The row of the key that a place in ``record.toml`` names, else that of its table."""
    path = _NAMED.sub("", where)
    ends = [index for index, letter in enumerate(path) if letter in ".,"]
    for end in (len(path), *reversed(ends)):
        if path and path[:end] in reading.places:
            sheet, row = reading.places[path[:end]]
            return f"sheet {show(sheet)}, row {row} ({where})"
    return where
