"""Reading the sheet of the yearly history as the rows of its file."""

from __future__ import annotations

from harvest.record.history import guard_note
from harvest.record.reporting import show
from harvest.record.schema import NOTE, YEAR
from harvest.sheets.grid import Cell, Sheet
from harvest.sheets.record_workbook_found import Reading
from harvest.sheets.record_workbook_values import tidy, unquote


def read_history(sheet: Sheet, reading: Reading) -> None:
    """Keep the rows from the headings on; what stands above them is the form's own."""
    start = next((i for i, row in enumerate(sheet.cells) if YEAR in map(_as_text, row)), None)
    if start is None:
        rule = f"a row of headings begins the table, with the heading {YEAR}"
        reading.add("error", f"sheet {show(sheet.name)}", f"no heading {show(YEAR)}", rule, f"Name the column {YEAR}.")
        start = next((i for i, row in enumerate(sheet.cells) if sum(cell is not None for cell in row) > 1), 0)
    header = [_as_text(cell) for cell in sheet.cells[start]] if sheet.cells else []
    notes = {column for column, name in enumerate(header) if name == NOTE}
    rows = [[_note(cell) if c in notes else _as_text(cell) for c, cell in enumerate(row)] for row in sheet.cells]
    reading.history = [header, *rows[start + 1 :]] if header else []
    reading.history_place = (sheet.name, start + 1)
    reading.tell_formulas(sheet, [place for place in sheet.formulas if place[0] >= start])


def _as_text(cell: Cell) -> str:
    """A cell of the history as its file holds it; numbers have a point and all their digits."""
    return "" if cell is None else str(tidy(cell))


def _note(cell: Cell) -> str:
    return guard_note(unquote(_as_text(cell)))
