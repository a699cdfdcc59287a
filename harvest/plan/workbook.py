"""The quota table as a formatted Excel workbook: values only, text never a formula."""

from __future__ import annotations

import io
from datetime import UTC, datetime

from openpyxl import Workbook
from openpyxl.cell import Cell
from openpyxl.styles import Alignment, Border, Font, PatternFill, Side
from openpyxl.utils import get_column_letter
from openpyxl.worksheet.worksheet import Worksheet

from harvest.errors import CAUTION
from harvest.plan import words
from harvest.plan.assumptions import Pairs, assumptions, provenance, public, record_pairs
from harvest.plan.cells import is_risky
from harvest.plan.layout import Part, Value, parts
from harvest.plan.sentences import findings, headline
from harvest.plan.table import QuotaTable
from harvest.record.private import PRIVATE, is_private

INK, MUTED, RULE, ABUNDANCE, RISK = "22292D", "5C656A", "D9D4C7", "1B6B72", "7A2E5D"
_LINE = Border(bottom=Side(style="thin", color=RULE))
#: Excel formats by kind of number: probabilities are never shown as 0% or 100%.
_KIND_FORMATS = {
    "year": "0",
    "probability": '[<0.001]"<0.1%";[>0.999]">99.9%";0.0%',
    "error": "0.00%",
    "share": "0.0%",
    "index": "General",  # as entered
}
_WIDTHS = {"share": 11.0, "index": 13.0, "text": 26.0, "year": 9.0, "amount": 13.0, "probability": 13.0, "error": 11.0}


def _formats(unit: str, value: float) -> str:
    if unit == "animals" or value == 0.0:
        return "#,##0"
    shown = words.number(value, unit)
    digits = len(shown.partition(".")[2])
    return "#,##0" + ("." + "0" * digits if digits else "")


def _put(cell: Cell, value: Value | int, kind: str, unit: str) -> None:
    """Write one value: numbers as numbers, text as text whatever it begins with."""
    cell.font = Font(color=INK)
    left = kind == "text"
    cell.alignment = Alignment(vertical="top", wrap_text=True, horizontal="left" if left else "right", indent=int(left))
    if value is None:
        value = "and above"
    if isinstance(value, str):
        cell.value = value
        cell.data_type = "s"
        cell.quotePrefix = is_risky(value)
        return
    cell.value = int(value) if kind == "year" else float(value)
    cell.number_format = _KIND_FORMATS.get(kind) or _formats(unit, float(value))


def _heading(sheet: Worksheet, row: int, headings: tuple[str, ...]) -> None:
    for column, text in enumerate(headings, start=1):
        cell = sheet.cell(row, column)
        _put(cell, text, "text", "animals")
        cell.font = Font(bold=True, color="FFFFFF")
        cell.fill = PatternFill("solid", fgColor=ABUNDANCE)
        cell.alignment = Alignment(wrap_text=True, vertical="center", horizontal="center")
    sheet.row_dimensions[row].height = 46 if max(map(len, headings)) > 14 else 22


def _line(sheet: Worksheet, row: int, text: str, font: Font, columns: int, per_line: int) -> None:
    """A line of text across the table, wrapped."""
    sheet.merge_cells(start_row=row, start_column=1, end_row=row, end_column=columns)
    cell = sheet.cell(row, 1)
    _put(cell, text, "text", "animals")
    cell.font = font
    cell.alignment = Alignment(vertical="top", wrap_text=True)
    sheet.row_dimensions[row].height = font.size * 1.4 * max(1, -(-len(text) // per_line))


def _write_part(sheet: Worksheet, part: Part, unit: str, row: int) -> int:
    """Write heading and rows from ``row`` on; the row after the last."""
    _heading(sheet, row, part.headings)
    for values in part.rows:
        row += 1
        longest = 1
        for column, (value, kind) in enumerate(zip(values, part.kinds, strict=True), start=1):
            cell = sheet.cell(row, column)
            _put(cell, value, kind, unit)
            cell.border = _LINE
            if isinstance(value, str):
                width = sheet.column_dimensions[get_column_letter(column)].width
                longest = max(longest, -(-len(value) // max(1, int(width))))
        sheet.row_dimensions[row].height = 15.0 * longest
    return row + 1


def _set_page(sheet: Worksheet) -> None:
    sheet.sheet_view.showGridLines = False
    sheet.page_setup.orientation = "landscape"
    sheet.page_setup.paperSize = sheet.PAPERSIZE_A4
    sheet.page_setup.fitToWidth, sheet.page_setup.fitToHeight = 1, 0
    sheet.sheet_properties.pageSetUpPr.fitToPage = True
    sheet.oddFooter.left.text = CAUTION.replace("&", "&&")
    sheet.oddFooter.left.size = 8


def _part_sheet(book: Workbook, table: QuotaTable, part: Part, name: str, lines: list[tuple[str, Font]]) -> None:
    sheet = book.create_sheet(name)
    _set_page(sheet)
    for column, (kind, heading) in enumerate(zip(part.kinds, part.headings, strict=True), start=1):
        width = _WIDTHS[kind] * (2.6 if heading == "Why" else 1.0)
        sheet.column_dimensions[get_column_letter(column)].width = width
    columns = max(4, len(part.headings))
    for column in range(len(part.headings) + 1, columns + 1):
        sheet.column_dimensions[get_column_letter(column)].width = 26
    letters = [get_column_letter(c) for c in range(1, columns + 1)]
    per_line = int(sum(sheet.column_dimensions[c].width for c in letters))
    row = 1
    for text, font in [
        (part.title, Font(bold=True, size=14, color=INK)),
        *lines,
        (part.note, Font(color=MUTED, size=10)),
    ]:
        _line(sheet, row, text, font, columns, int(per_line * 11 / font.size))
        row += 1
    row = _write_part(sheet, part, table.record.unit, row + 1)
    _line(sheet, row + 1, CAUTION, Font(italic=True, color=RISK, size=10), columns, per_line)


def _pairs_sheet(book: Workbook, name: str, pairs: Pairs) -> None:
    part = Part(name, "", ("Item", "Content"), ("text", "text"), tuple(pairs))
    sheet = book.create_sheet(name)
    _set_page(sheet)
    sheet.column_dimensions["A"].width, sheet.column_dimensions["B"].width = 40, 90
    _line(sheet, 1, name, Font(bold=True, size=14, color=INK), 2, 130)
    row = _write_part(sheet, part, "animals", 3)
    _line(sheet, row + 1, CAUTION, Font(italic=True, color=RISK, size=10), 2, 130)


def quota_workbook(table: QuotaTable) -> bytes:
    """The workbook's bytes: quota table, lookup card, steps, other quotas, assumptions, record, provenance."""
    table = public(table)
    book = Workbook()
    book.remove(book.active)
    book.properties.creator = "Harvest"
    book.properties.created = book.properties.modified = datetime.now(UTC).replace(tzinfo=None)
    name = dict(record_pairs(table.record)).get("Name", "")
    lines = [
        (name, Font(color=MUTED, size=11)),
        (headline(table), Font(bold=True, size=12, color=ABUNDANCE)),
        *((text, Font(color=INK, size=10)) for text in findings(table)),
    ]
    names = ("Quota table", "Lookup card", "Why this number", "Other quotas")
    for part, sheet_name in zip(parts(table), names, strict=True):
        _part_sheet(book, table, part, sheet_name, lines if sheet_name == "Quota table" else [])
    _pairs_sheet(book, "Assumptions", assumptions(table))
    _pairs_sheet(book, "Record", [*record_pairs(table.record)])
    _history_sheet(book, table)
    _pairs_sheet(book, "Provenance", provenance(table))
    stream = io.BytesIO()
    book.save(stream)
    return stream.getvalue()


def _history_sheet(book: Workbook, table: QuotaTable) -> None:
    """The record's yearly history, as entered."""
    record = table.record
    hidden = is_private(record, "history.removals")
    removals: tuple[Value, ...] = (PRIVATE,) * len(record.history.years) if hidden else record.history.removals
    headings, kinds = ["Year", "Reported removals"], ["year", "index"]
    columns: list[tuple[Value, ...]] = [tuple(map(float, record.history.years)), removals]
    for survey in () if is_private(record, "survey") else record.surveys:
        headings += [survey.name, "CV"]
        kinds += ["index", "share"]
        columns += [survey.values, survey.cvs]
    if any(record.history.notes) and not is_private(record, "history.note"):
        headings.append("Note")
        kinds.append("text")
        columns.append(record.history.notes)
    rows = tuple(tuple("" if v is None else v for v in row) for row in zip(*columns, strict=True))
    note = f"As entered, in {words.kind(record)}; an index in its own unit."
    part = Part("History", note, tuple(headings), tuple(kinds), rows)
    _part_sheet(book, table, part, "History", [])
