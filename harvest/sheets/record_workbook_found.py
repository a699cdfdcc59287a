"""What a record's workbook was found to say, and the problems on the way."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import Any

from harvest.errors import Problem
from harvest.record.reporting import listed, show
from harvest.sheets.grid import Sheet
from harvest.sheets.limits import cell_name
from harvest.sheets.record_workbook_form import HISTORY

_CELLS_NAMED = 10


@dataclass
class Reading:
    """What a workbook says.

    Attributes
    ----------
    file : str
        The workbook's name.
    document : dict
        As ``record.toml`` would hold it.
    history : list of list of str
        The rows of the history.
    places : dict of str to (str, int)
        Sheet and row (from 1) of each key and table, by the name that the check of a record gives it.
    history_place : (str, int)
        Sheet, and row (from 1) of the history's heading.
    problems : list of Problem
        What the two texts cannot carry.
    """

    file: str
    document: dict[str, Any] = field(default_factory=dict)
    history: list[list[str]] = field(default_factory=list)
    places: dict[str, tuple[str, int]] = field(default_factory=dict)
    history_place: tuple[str, int] = (HISTORY, 1)
    problems: list[Problem] = field(default_factory=list)

    def add(self, severity: str, where: str, found: str, rule: str, cure: str) -> None:
        """Note a problem."""
        self.problems.append(Problem(severity, self.file, where, found, rule, cure))

    def tell_formulas(self, sheet: Sheet, places: Iterable[tuple[int, int]]) -> None:
        """Formulas in cells that are read: values as last saved; one without such a value is an error."""
        without = {place for place in places if sheet.cells[place[0]][place[1]] is None}
        for severity, some, rule in (
            ("warning", set(places) - without, "the values stored when the file was last saved are used"),
            ("error", without, "a formula needs a stored value"),
        ):
            if some:
                cells = listed((cell_name(*place) for place in sorted(some)), _CELLS_NAMED)
                cure = "Write the numbers, or open and save the file in the spreadsheet program."
                self.add(severity, f"sheet {show(sheet.name)}", f"formulas in {cells}", rule, cure)
