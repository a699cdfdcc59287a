"""Opening an Excel workbook: values as stored, formulas never computed, links never followed."""

from __future__ import annotations

import io
import re
import warnings
import zipfile
from collections.abc import Iterable
from datetime import date, datetime, time, timedelta
from typing import Any

from openpyxl import load_workbook

from harvest.record.reporting import listed, show
from harvest.sheets.archive import check_archive
from harvest.sheets.grid import Book, Cell, Sheet, SheetError
from harvest.sheets.layout_scan import Scan, scan_layout
from harvest.sheets.limits import as_rectangle, cell_name, check_size, name_sheet

_CELLS_NAMED = 10
#: In the file "_x0041_" means a character by its code; a text that reads so by itself has its first mark written as
#: "_x005F_". A carriage return before a line break is dropped.
_ESCAPED = re.compile(r"_x005F_(?=x[0-9A-Fa-f]{4}_)|_x000D_")


def open_excel(name: str, data: bytes) -> Book:
    """The sheets of a workbook, cut down to their content.

    Raises
    ------
    SheetError
        When it is no workbook, or encrypted, damaged, too large, with macros, or made to harm.
    """
    check_archive(name, data)
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # about styles and extensions, which do not matter here
            return _open(name, data)
    except SheetError:
        raise
    except Exception as error:  # a damaged workbook makes its reader raise nearly everything
        raise SheetError(
            f"{show(name)} is damaged, or not a workbook that can be read. Open it in the spreadsheet program, save "
            "it again as .xlsx, and choose that file."
        ) from error


def _open(name: str, data: bytes) -> Book:
    book = load_workbook(io.BytesIO(data), read_only=True, data_only=True, keep_links=False)
    sheets: list[Sheet] = []
    notes: list[str] = []
    with zipfile.ZipFile(io.BytesIO(data)) as archive:
        for page in book.worksheets:
            with archive.open(page._worksheet_path) as stream:
                scan = scan_layout(stream)
            check_size(name_sheet(name, page.title), scan.rows, scan.columns)
            sheet = _read_sheet(page, scan)
            sheets.append(sheet)
            notes += _notes_on(sheet, scan)
    book.close()
    if not any(sheet.cells for sheet in sheets):
        raise SheetError(f"{show(name)} has only empty sheets. Fill one in, save it, and choose it again.")
    return Book(name, tuple(sheets), tuple(notes))


def _read_sheet(page: Any, scan: Scan) -> Sheet:
    rows: list[list[Cell]] = []
    if scan.rows and scan.columns:
        found = page.iter_rows(1, scan.rows, 1, scan.columns, values_only=True)
        rows = [[_plain(value) for value in row] for row in found]
    without = frozenset(place for place in scan.formulas if _lacks_value(place, rows, scan))
    cells = as_rectangle(rows, keep=without)
    height, width = len(cells), len(cells[0]) if cells else 0
    return Sheet(
        name=page.title,
        cells=cells,
        hidden=page.sheet_state != "visible",
        formulas=frozenset((r, c) for r, c in scan.formulas if r < height and c < width),
        merged=tuple(_cut(scan.merged, height, width)),
        hidden_rows=frozenset(row for row in scan.hidden_rows if row < height),
        hidden_columns=frozenset(c for first, last in scan.hidden_spans for c in range(first, min(last + 1, width))),
    )


def _lacks_value(place: tuple[int, int], rows: list[list[Cell]], scan: Scan) -> bool:
    """Whether a formula has no stored value; an empty text is one."""
    row, column = place
    value = rows[row][column] if row < len(rows) and column < len(rows[row]) else None
    return value is None and place not in scan.texts


def _plain(value: object) -> Cell:
    if value is None or value == "":
        return None
    if isinstance(value, str):
        return _ESCAPED.sub(lambda match: "_" if match[0] == "_x005F_" else "", value)
    if isinstance(value, bool | int | float | datetime | date):
        return value
    if isinstance(value, time):
        return value.isoformat()
    if isinstance(value, timedelta):
        return value / timedelta(days=1)
    return str(value)


def _cut(merged: Iterable[tuple[int, int, int, int]], height: int, width: int) -> Iterable[tuple[int, int, int, int]]:
    """The merged ranges as far as they lie within the content."""
    for top, left, bottom, right in merged:
        if top < height and left < width:
            yield top, left, min(bottom, height - 1), min(right, width - 1)


def _notes_on(sheet: Sheet, scan: Scan) -> list[str]:
    notes = []
    title = show(sheet.name)
    if sheet.hidden:
        notes.append(f"The sheet {title} is hidden in the file.")
    if sheet.formulas:
        several = len(sheet.formulas) > 1
        notes.append(
            f"{len(sheet.formulas):,} cell{'s' if several else ''} of the sheet {title} "
            f"hold{'' if several else 's'} formulas: the values stored when the file was last saved are used; save "
            "the file in the spreadsheet program first if it was changed by another program."
        )
    empty = sorted(p for p in sheet.formulas if sheet.cells[p[0]][p[1]] is None and p not in scan.texts)
    if empty:
        names = listed((cell_name(*place) for place in empty), _CELLS_NAMED)
        notes.append(f"Formulas without a stored value on the sheet {title} are taken as empty cells: {names}.")
    return notes
