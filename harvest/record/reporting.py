"""Collecting problems, and showing found values safely."""

from __future__ import annotations

import difflib
from collections.abc import Iterable

from harvest.errors import Problem

#: Characters of a found value that a message shows.
SHOWN = 60


class Report:
    """The problems found so far in one file.

    Parameters
    ----------
    file : str
        Name of the file within the record folder.
    """

    def __init__(self, file: str):
        self.file = file
        self.problems: list[Problem] = []

    def error(self, where: str, found: str, rule: str, cure: str) -> None:
        """Note a fault that stops the work."""
        self.problems.append(Problem("error", self.file, where, found, rule, cure))

    def warning(self, where: str, found: str, rule: str, cure: str) -> None:
        """Note something unusual."""
        self.problems.append(Problem("warning", self.file, where, found, rule, cure))

    @property
    def faulty(self) -> bool:
        """Whether there is any error."""
        return any(p.severity == "error" for p in self.problems)


def show(value: object) -> str:
    """A found value in a few plain words; never fails, whatever the value."""
    if value is None:
        return "nothing"
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return f'"{_printable(value)}"' if value else "an empty text"
    if isinstance(value, int):
        return str(value) if abs(value) < 10**18 else "a whole number of more than 18 digits"
    if isinstance(value, float):
        return f"{value:.15g}"
    if isinstance(value, dict):
        return "a table" if value else "an empty table"
    if isinstance(value, list | tuple):
        return f"a list of {len(value)}" if value else "an empty list"
    return f"{type(value).__name__} {_printable(str(value))}"


def _printable(text: str) -> str:
    short = text if len(text) <= SHOWN else text[: SHOWN - 1] + "…"
    return "".join(c if c.isprintable() else c.encode("unicode_escape").decode() for c in short)


def nearest(word: str, known: Iterable[str]) -> str | None:
    """The known word that looks most like ``word``, or None."""
    names = {k.lower(): k for k in known}
    short = word[:SHOWN].strip().lower().replace(" ", "_").replace("-", "_")
    found = difflib.get_close_matches(short, names, n=1) or difflib.get_close_matches(
        word[:SHOWN].strip().lower(), names, n=1
    )
    return names[found[0]] if found else None


def listed(words: Iterable[str], most: int = 20) -> str:
    """Words as a list for a sentence, cut off after ``most``."""
    names = list(words)
    shown = ", ".join(_printable(n) for n in names[:most])
    return f"{shown} and {len(names) - most:,} more" if len(names) > most else shown
