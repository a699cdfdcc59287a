"""The errors that Harvest raises, and the problems of a record.

One root, :class:`HarvestError`, so that a caller can catch everything that is the input's fault.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

CAUTION = "A decision aid, not a permit: local regulators, treaties and licensed practice decide what may be taken."


class HarvestError(Exception):
    """Root of all errors that bad input or impossible settings cause."""


class SettingsError(HarvestError):
    """A setting (number of years, rule, seed, tolerance, ...) that cannot be used."""


class RatesError(HarvestError):
    """The rates cannot be drawn from what the record states (no usable count, impossible ranges, ...)."""


@dataclass(frozen=True)
class Problem:
    """One fault of a record.

    Attributes
    ----------
    severity : {"error", "warning"}
        An error stops the work; a warning is shown and the work goes on.
    file : str
        File name within the record folder.
    where : str
        Key, row or cell, as the user would look for it ("row 7, column removals", "rates.growth_rate").
    found : str
        The value that was found, or "nothing".
    rule : str
        What is allowed.
    cure : str
        What to do.
    """

    severity: str
    file: str
    where: str
    found: str
    rule: str
    cure: str

    def __str__(self) -> str:
        place = f"{self.file}, {self.where}" if self.where else self.file
        return f"{self.severity}: {place}: found {self.found}; {self.rule}. {self.cure}"


class RecordError(HarvestError):
    """A record that cannot be used; holds every problem found in one pass.

    Attributes
    ----------
    problems : tuple of Problem
        All problems, errors and warnings, in the order of the files.
    """

    def __init__(self, problems: Sequence[Problem]):
        self.problems = tuple(problems)
        errors = [p for p in self.problems if p.severity == "error"]
        head = f"the record has {len(errors)} error{'s' if len(errors) != 1 else ''}"
        super().__init__("\n".join([head, *(f"  {p}" for p in self.problems)]))
