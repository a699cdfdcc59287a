"""What is asked before anything in a manager's sheet is read other than it stands there."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, replace

from harvest.record.reporting import SHOWN, Report

#: The answer by which the user mends the file instead.
STOP = "no"
_MOST_EXAMPLES = 5
_CELL = re.compile("[A-Z]+[0-9]+")
_STOP_LABEL = "Stop: I mend the file"


@dataclass(frozen=True)
class Question:
    """One repair, or one doubt, that needs the user's word.

    Attributes
    ----------
    id : str
        The same for the same file at every reading; one that concerns a single column ends with its name.
    text : str
    examples : tuple of str
        At most five: the cell, what was found and what it becomes.
    count : int
        How many cells, rows or years are concerned.
    options : tuple of (str, str)
        Value and label of each answer; the first is what the preview shows until there is an answer.
    answer : str or None
    """

    id: str
    text: str
    examples: tuple[str, ...]
    count: int
    options: tuple[tuple[str, str], ...]
    answer: str | None


@dataclass(frozen=True)
class Kind:
    """A question without its cases: its words, the answers besides "no", and the cure that "no" calls for."""

    id: str
    text: str
    options: tuple[tuple[str, str], ...]
    cure: str

    def about(self, name: str) -> Kind:
        """The question for one column or survey, so that another may be answered otherwise."""
        return replace(self, id=f"{self.id}: {name}", text=f"{self.text} ({name})")

    def offering(self, option: tuple[str, str]) -> Kind:
        """The question with one more answer."""
        return replace(self, options=(*self.options, option))

    def preferring(self, value: str) -> Kind:
        """The question with this answer as the proposal."""
        first = [option for option in self.options if option[0] == value]
        return replace(self, options=(*first, *(option for option in self.options if option[0] != value)))


class Asking:
    """The questions so far and their answers.

    Parameters
    ----------
    answers : mapping of str to str
        Value chosen by question id; an unknown value counts as no answer.
    """

    def __init__(self, answers: Mapping[str, str]):
        self._answers = answers
        self._cases: dict[str, list[tuple[str, str, str]]] = {}
        self._kinds: dict[str, Kind] = {}

    def choice(self, kind: Kind) -> str:
        """The answer in effect: the user's, or the proposal where there is none or where it is to stop."""
        answer = self._answer(kind)
        return kind.options[0][0] if answer in (None, STOP) else str(answer)

    def add(self, kind: Kind, where: str, found: str, becomes: str) -> None:
        """Note a case: its place in the file, what stands there, and what it becomes."""
        self._kinds.setdefault(kind.id, kind)
        self._cases.setdefault(kind.id, []).append((where, found, becomes))

    def questions(self) -> tuple[Question, ...]:
        """All questions, in the order in which they came up."""
        return tuple(
            Question(
                id=kind.id,
                text=kind.text,
                examples=tuple(_example(*case) for case in self._cases[kind.id][:_MOST_EXAMPLES]),
                count=len(self._cases[kind.id]),
                options=(*kind.options, (STOP, _STOP_LABEL)),
                answer=self._answer(kind),
            )
            for kind in self._kinds.values()
        )

    def report_stops(self, sheet: str, report: Report) -> None:
        """Report an error for each question that was answered with "no"."""
        for kind in self._kinds.values():
            if self._answer(kind) == STOP:
                where, found, _ = self._cases[kind.id][0]
                more = len(self._cases[kind.id]) - 1
                others = f" and {more:,} more" if more else ""
                rule = f"you chose to mend this in the file ({kind.text})"
                cell = "cell " if _CELL.fullmatch(where) else ""
                report.error(f'sheet "{sheet}", {cell}{where}{others}', _shorten(found), rule, kind.cure)

    def _answer(self, kind: Kind) -> str | None:
        answer = self._answers.get(kind.id)
        return answer if answer == STOP or answer in dict(kind.options) else None


def _example(where: str, found: str, becomes: str) -> str:
    return f"{where}: {_shorten(found)} → {becomes}"


def _shorten(found: str) -> str:
    """What was found, on one line and not longer than messages show."""
    line = " ".join("".join(c if c.isprintable() else " " for c in found).split())
    return line if len(line) <= SHOWN else f"{line[: SHOWN - 1]}…"


def yes(label: str) -> tuple[tuple[str, str], ...]:
    """The one answer of a question that is answered with yes or no."""
    return (("yes", label),)
