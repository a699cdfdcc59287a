"""A sheet as it is read, turned where its years run from left to right; cells are named as the user sees them."""

from __future__ import annotations

from dataclasses import dataclass

from harvest.sheets.grid import Cell, Sheet
from harvest.sheets.numbers import is_blank


@dataclass(frozen=True)
class View:
    """A sheet to read from.

    Attributes
    ----------
    sheet : Sheet
        Turned already where ``turned`` is set.
    turned : bool
    """

    sheet: Sheet
    turned: bool = False

    def cell(self, row: int, column: int) -> Cell:
        """What stands in a cell; None outside the sheet."""
        rows, columns = self.sheet.size
        return self.sheet.cells[row][column] if row < rows and column < columns else None

    def place(self, row: int, column: int) -> str:
        """A cell's name in the file, such as "B7"."""
        across, down = (row, column) if self.turned else (column, row)
        return f"{letters(across)}{down + 1}"

    def where(self, row: int, column: int) -> str:
        """A cell as the user would look for it."""
        return f'sheet "{self.sheet.name}", cell {self.place(row, column)}'

    def column(self, column: int) -> str:
        """A column's name in the file; a row's where the sheet is turned."""
        return f"row {column + 1}" if self.turned else f"column {letters(column)}"

    def row(self, row: int) -> str:
        """A row's name in the file; a column's where the sheet is turned."""
        return f"column {letters(row)}" if self.turned else f"row {row + 1}"

    def is_empty(self, row: int) -> bool:
        """Whether nothing stands in a row."""
        return all(is_blank(cell) for cell in self.sheet.cells[row])


def view_of(sheet: Sheet, transposed: bool) -> View:
    """The sheet as it is read."""
    return View(turn(sheet), True) if transposed else View(sheet)


def turn(sheet: Sheet) -> Sheet:
    """The sheet with rows and columns exchanged."""
    return Sheet(
        name=sheet.name,
        cells=tuple(zip(*sheet.cells, strict=True)),
        hidden=sheet.hidden,
        formulas=frozenset((column, row) for row, column in sheet.formulas),
        merged=tuple((left, top, right, bottom) for top, left, bottom, right in sheet.merged),
        hidden_rows=sheet.hidden_columns,
        hidden_columns=sheet.hidden_rows,
    )


def letters(column: int) -> str:
    """A column's letters, "A" for 0 and "AA" for 26."""
    text, rest = "", column + 1
    while rest:
        rest, digit = divmod(rest - 1, 26)
        text = chr(ord("A") + digit) + text
    return text
