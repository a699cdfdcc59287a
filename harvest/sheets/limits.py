"""How large a spreadsheet may be, and how its cells are cut and named."""

from __future__ import annotations

from collections.abc import Sequence

from openpyxl.utils import get_column_letter

from harvest.record.reporting import show
from harvest.sheets.grid import Cell, SheetError

#: Of the file as it is.
MAX_BYTES = 20_000_000
#: Of all parts of a workbook together, once unpacked.
MAX_UNPACKED = 200_000_000
MAX_ROWS, MAX_COLUMNS, MAX_CELLS = 100_000, 500, 2_000_000


def in_megabytes(size: int) -> str:
    """A number of bytes in words."""
    return f"{size / 1e6:,.1f} megabytes" if size < 1e7 else f"{size / 1e6:,.0f} megabytes"


def cell_name(row: int, column: int) -> str:
    """A cell as a spreadsheet names it, from 0: (6, 1) is B7."""
    return f"{get_column_letter(column + 1)}{row + 1}"


def check_size(title: str, rows: int, columns: int) -> None:
    """Refuse a sheet with too much content.

    Raises
    ------
    SheetError
        ``title`` names the file and the sheet.
    """
    if rows > MAX_ROWS or columns > MAX_COLUMNS or rows * columns > MAX_CELLS:
        raise SheetError(
            f"{title} has content in {rows:,} rows and {columns:,} columns; at most {MAX_ROWS:,} rows, "
            f"{MAX_COLUMNS:,} columns and {MAX_CELLS:,} cells are read. Copy the rows and columns of the yearly "
            "history into a new file, and choose that one."
        )


def as_rectangle(
    rows: Sequence[Sequence[Cell]], keep: frozenset[tuple[int, int]] = frozenset()
) -> tuple[tuple[Cell, ...], ...]:
    """Rows of equal length, without the empty rows and columns at the end.

    Parameters
    ----------
    rows : sequence of sequences of Cell
        Of any lengths.
    keep : frozenset of (int, int)
        Cells that are not cut off although they are empty.
    """
    height = max((row + 1 for row, _ in keep), default=0)
    width = max((column + 1 for _, column in keep), default=0)
    for number, row in enumerate(rows, start=1):
        filled = next((n for n in range(len(row), 0, -1) if row[n - 1] is not None), 0)
        if filled:
            height, width = max(height, number), max(width, filled)
    return tuple((*row[:width], *(None,) * (width - len(row))) for row in rows[:height])


def name_sheet(file: str, sheet: str) -> str:
    """A sheet for the beginning of a message."""
    return f"the sheet {show(sheet)} of {show(file)}"
