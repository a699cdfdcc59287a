"""A spreadsheet file as it was found: sheets of cells, and what a reader must know about them."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date, datetime

from harvest.errors import HarvestError

#: What a cell holds: nothing, a text as typed, a number, a yes or no, a date.
Cell = str | float | int | bool | datetime | date | None


class SheetError(HarvestError):
    """A file that cannot be taken as a spreadsheet; the message tells what was found, what is allowed and the cure."""


@dataclass(frozen=True)
class Sheet:
    """One sheet.

    Attributes
    ----------
    name : str
    cells : tuple of rows, each a tuple of Cell
        A rectangle from the top left; trailing empty rows and columns are cut off. Texts are as typed, with the
        white space around them.
    hidden : bool
    formulas : frozenset of (int, int)
        Cells (row, column, from 0) that hold a formula; their value is the one stored when the file was last saved,
        None where there is none.
    merged : tuple of (int, int, int, int)
        First row, first column, last row, last column of each merged range, from 0, the last ones included; the
        value is in its first cell only.
    hidden_rows, hidden_columns : frozenset of int
        From 0.
    """

    name: str
    cells: tuple[tuple[Cell, ...], ...]
    hidden: bool = False
    formulas: frozenset[tuple[int, int]] = frozenset()
    merged: tuple[tuple[int, int, int, int], ...] = ()
    hidden_rows: frozenset[int] = frozenset()
    hidden_columns: frozenset[int] = frozenset()

    @property
    def size(self) -> tuple[int, int]:
        """Rows and columns."""
        return len(self.cells), len(self.cells[0]) if self.cells else 0


@dataclass(frozen=True)
class Book:
    """A file of sheets; a CSV file has one.

    ``notes`` tells in plain sentences what was found and guessed in opening it (character set, separator, hidden
    sheets, formulas whose stored values are used).
    """

    name: str
    sheets: tuple[Sheet, ...]
    notes: tuple[str, ...] = ()
