"""Which rows of a sheet are years, and which are totals, footnotes, empty or hidden."""

from __future__ import annotations

from dataclasses import dataclass

from harvest.record.reporting import show
from harvest.record.schema import FIRST_YEAR, LAST_YEAR
from harvest.sheets import catalogue
from harvest.sheets.context import Context
from harvest.sheets.grid import Cell
from harvest.sheets.numbers import holds_number, is_blank, text_of
from harvest.sheets.questions import Kind
from harvest.sheets.roles import is_summary, plain_words
from harvest.sheets.years import SHORT_REMARK, YearCell, read_year

_LEFT_OUT = "left out"
_MOST_LABEL_WORDS = 3


@dataclass(frozen=True)
class YearRow:
    """A row of the sheet (from 0), its year, and what of the year's cell goes into the note."""

    row: int
    year: int
    remark: str = ""


@dataclass(frozen=True)
class Layout:
    """The columns that decide what a row is: the year's, those of numbers, those of notes."""

    year: int
    numbers: tuple[int, ...]
    notes: tuple[int, ...]


def find_rows(context: Context, start: int, layout: Layout) -> tuple[YearRow, ...]:
    """The rows that are years, in the order of the sheet; every row left out is asked about."""
    found: list[YearRow] = []
    empty: list[int] = []
    spread = _spread_years(context, start, layout.year)
    for row in range(start, len(context.view.sheet.cells)):
        if context.view.is_empty(row) and row not in spread:
            empty.append(row)
        elif _is_shown(context, row):
            year_row = _read_row(context, row, layout, spread.get(row), found[-1].year if found else None)
            found += [year_row] if year_row else []
    for row in empty:
        if found and found[0].row < row < found[-1].row:
            context.asking.add(catalogue.EMPTY_ROWS, context.view.row(row), "an empty row", _LEFT_OUT)
    return tuple(found)


def _is_shown(context: Context, row: int) -> bool:
    """Whether a row counts: it is not hidden, or the user takes the hidden ones."""
    if row not in context.view.sheet.hidden_rows:
        return True
    kept = context.asking.choice(catalogue.HIDDEN_ROWS) == "yes"
    context.asking.add(
        catalogue.HIDDEN_ROWS, context.view.row(row), _describe(context, row), "taken over" if kept else _LEFT_OUT
    )
    return kept


def _spread_years(context: Context, start: int, column: int) -> dict[int, Cell]:
    """The year's cell for each further row of a merged year."""
    spread: dict[int, Cell] = {}
    for top, left, bottom, right in context.view.sheet.merged:
        if top >= start and bottom > top and left <= column <= right and read_year(context.view.cell(top, left)).year:
            spread |= dict.fromkeys(
                range(top + 1, min(bottom + 1, len(context.view.sheet.cells))), context.view.cell(top, left)
            )
    return spread


def _read_row(context: Context, row: int, layout: Layout, merged: Cell, above: int | None) -> YearRow | None:
    """The row with its year, or None where it is no year; ``merged`` is the year that stands over it, if any."""
    cell = context.view.cell(row, layout.year)
    if is_blank(cell) and merged is not None:
        cell = merged
        context.asking.add(catalogue.MERGED_YEARS, context.view.place(row, layout.year), "merged", text_of(merged))
    if is_blank(cell) and (row, layout.year) in context.view.sheet.formulas:
        context.refuse_uncomputed(row, layout.year)
        return None
    read = read_year(cell)
    labelled = _has_label(context, row, layout)
    reason = _reason_to_leave_out(context, row, layout, read, labelled)
    if reason is not None:
        context.asking.add(reason, context.view.row(row), _describe(context, row), _LEFT_OUT)
        return None
    if read.kind == "empty":
        return _read_yearless(context, row, layout, above)
    if not read.year:
        rule = f"a year is a whole number from {FIRST_YEAR} to {LAST_YEAR}"
        cure = "Write the year with four digits into this cell of the file."
        context.refuse(row, layout.year, show(text_of(cell)), rule, cure)
        return None
    if labelled:
        context.asking.add(catalogue.LABELLED_TOTALS, context.view.row(row), _describe(context, row), "kept")
    return _settle_year(context, row, layout.year, cell, read)


def _reason_to_leave_out(context: Context, row: int, layout: Layout, read: YearCell, labelled: bool) -> Kind | None:
    """The question under which a row is left out, or None where it is a year."""
    if read.kind == "summary" or (labelled and not read.year):
        return catalogue.TOTALS
    numbers = any(holds_number(context.view.cell(row, column)) for column in layout.numbers)
    if not numbers and (not read.year or len(read.remark) > SHORT_REMARK):
        return catalogue.FOOTNOTES
    if read.kind == "empty" and context.asking.choice(catalogue.NO_YEAR) == "leave out":
        return catalogue.NO_YEAR
    if labelled and context.asking.choice(catalogue.LABELLED_TOTALS) == "leave out":
        return catalogue.LABELLED_TOTALS
    return None


def _read_yearless(context: Context, row: int, layout: Layout, above: int | None) -> YearRow | None:
    """A row with numbers that belongs to the year above it."""
    if above is None:
        rule = "the first row must have a year, for there is none above it"
        context.refuse(row, layout.year, "nothing", rule, "Write the year into this cell of the file.")
        return None
    context.asking.add(catalogue.NO_YEAR, context.view.row(row), _describe(context, row), f"year {above}")
    return YearRow(row, above)


def _settle_year(context: Context, row: int, column: int, cell: Cell, read: YearCell) -> YearRow:
    """The year as the user reads it, where more than the plain year stands in its cell."""
    kind = {
        "date": catalogue.DATES,
        "shown as date": catalogue.SHOWN_AS_DATES,
        "season": catalogue.SEASONS,
        "text": catalogue.YEAR_TEXT,
    }.get(read.kind)
    if kind is None:
        return YearRow(row, read.year)
    year, remark = read.year, ""
    choice = context.asking.choice(kind)
    if choice == "second":
        year += 1
    elif read.kind == "shown as date" and choice == "date":
        year = int(text_of(cell)[:4])
    elif choice == "note":
        remark = read.remark
    context.asking.add(kind, context.view.place(row, column), text_of(cell), str(year))
    return YearRow(row, year, remark)


def _has_label(context: Context, row: int, layout: Layout) -> bool:
    """Whether a cell beside the year, the numbers and the notes labels the row as a total or mean."""
    used = {layout.year, *layout.numbers, *layout.notes}
    return any(
        isinstance(cell, str) and is_summary(cell) and len(plain_words(cell).split()) <= _MOST_LABEL_WORDS
        for column, cell in enumerate(context.view.sheet.cells[row])
        if column not in used
    )


def _describe(context: Context, row: int) -> str:
    """The first filled cells of a row."""
    filled = [text_of(cell) for cell in context.view.sheet.cells[row] if not is_blank(cell)]
    return show(", ".join(filled))
