"""What is taken over from a sheet: the table of the history, and all that must be settled before it is used."""

from __future__ import annotations

import csv
import io
import re
import unicodedata
from collections.abc import Collection
from dataclasses import dataclass

from harvest.errors import Problem
from harvest.record.history import guard_note
from harvest.record.schema import NOTE, REMOVALS, YEAR
from harvest.sheets.questions import Question

_LONGEST_NAME = 60


@dataclass(frozen=True)
class TakenSurvey:
    """A survey, its column in the history, and the column of its CVs (None where there is none)."""

    name: str
    column: str
    cv_column: str | None


@dataclass(frozen=True)
class Taken:
    """A sheet as a history.

    Attributes
    ----------
    header : tuple of str
        "year", "removals", for each survey its column and that of its CVs, and "note" where there are notes.
    rows : tuple of tuples of str
        One a year; numbers with a decimal point, "" for what is not known. Where a question has no answer yet (or
        was answered with "no"), its first option is shown.
    surveys : tuple of TakenSurvey
    questions : tuple of Question
    problems : tuple of Problem
        Their file is the book's name, their place a sheet and a cell.
    """

    header: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    surveys: tuple[TakenSurvey, ...]
    questions: tuple[Question, ...]
    problems: tuple[Problem, ...]

    @property
    def ready(self) -> bool:
        """Whether every question is answered and there is no error."""
        answered = all(question.answer is not None for question in self.questions)
        return answered and not any(problem.severity == "error" for problem in self.problems)

    @property
    def history_text(self) -> str:
        """The table as the text of ``history.csv``; notes are guarded against being run as formulas."""
        text = io.StringIO(newline="")
        writer = csv.writer(text, lineterminator="\n")
        writer.writerow(self.header)
        note = self.header.index(NOTE) if NOTE in self.header else None
        for row in self.rows:
            writer.writerow([guard_note(cell) if index == note else cell for index, cell in enumerate(row)])
        return text.getvalue()


def name_column(text: str, taken: Collection[str]) -> str:
    """A column's name for the history: letters, digits and underscores, unlike those that are taken."""
    words = re.findall(r"[^\W_]+", unicodedata.normalize("NFKC", text).lower())
    bare = "_".join(words)[:_LONGEST_NAME].strip("_") or "count"
    if bare in (YEAR, REMOVALS, NOTE):
        bare += "_count"
    name, number = bare, 1
    while name in taken:
        number += 1
        name = f"{bare}_{number}"
    return name
