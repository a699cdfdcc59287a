"""Writing a record as an Excel workbook: a form that a manager can fill in, from the table of fields."""

from __future__ import annotations

import csv
import io
import tomllib
from datetime import UTC, datetime
from typing import Any

from openpyxl import Workbook
from openpyxl.worksheet.worksheet import Worksheet

from harvest.errors import CAUTION
from harvest.record.fields import fields_of
from harvest.record.history import unguard_note
from harvest.record.numbers import parse_number
from harvest.record.schema import NOTE, Field, Section
from harvest.sheets import record_workbook_style as style
from harvest.sheets import record_workbook_words as words
from harvest.sheets.record_workbook_form import (
    BY_YEAR,
    FIRST,
    FORMAT_LABEL,
    HEADINGS,
    HELP,
    HISTORY,
    HOW,
    ITEM,
    KINDS,
    LAST,
    LEVELS,
    MIDDLE,
    READ_ME,
    UNIT,
    VALUES,
    block_title,
    is_shown,
    sheets,
)
from harvest.sheets.record_workbook_values import quote, to_cells

_WIDTHS = (34.0, 23.0, 14.0, 12.0, 14.0, 24.0, 72.0)
_SPARE_YEARS = 10
_TEXTS = ("text", "long text", "choice", "list of names", "file name")


def write_workbook(record_text: str, history_text: str, *, invented: bool = False) -> bytes:
    """The workbook of a record given as the text of its two files.

    Parameters
    ----------
    record_text, history_text : str
        Without errors.
    invented : bool
        Whether all values are examples, to be marked as such.

    Returns
    -------
    bytes
        An .xlsx file that reading turns into the same record.
    """
    document = tomllib.loads(record_text)
    book = Workbook()
    book.properties.creator = "Harvest"
    book.properties.created = book.properties.modified = datetime.now(UTC).replace(tzinfo=None)
    _write_read_me(book.active, document, invented)
    for title, sections in sheets().items():
        _write_form(book.create_sheet(title), title, sections, document, invented)
    _write_history(book.create_sheet(HISTORY), history_text, invented)
    stream = io.BytesIO()
    book.save(stream)
    return stream.getvalue()


def _write_read_me(sheet: Worksheet, document: dict[str, Any], invented: bool) -> None:
    sheet.title = READ_ME
    style.set_page(sheet)
    sheet.page_setup.fitToHeight = 1
    style.set_widths(sheet, (26.0, 96.0))
    row = _write_title(sheet, "The record of one population", invented, 2)
    for text in (*words.ABOUT, words.PRIVATE):
        row = _write_line(sheet, row, text)
    row = _write_pairs(sheet, row + 1, "How a range is stated", words.kind_rows())
    contents = [(title, ", ".join(s.title for s in some)) for title, some in sheets().items()]
    row = _write_pairs(
        sheet, row + 1, "The sheets", [*contents, (HISTORY, "Counts and reported removals, year by year")]
    )
    style.write_text(sheet.cell(row + 1, 1), FORMAT_LABEL, color=style.MUTED)
    style.write_text(sheet.cell(row + 1, 2), "", color=style.MUTED)
    style.put(sheet.cell(row + 1, 2), document["format"])
    _write_line(sheet, row + 3, CAUTION, color=style.RISK)


def _write_title(sheet: Worksheet, title: str, invented: bool, columns: int) -> int:
    """The sheet's title, and where the values are examples a line that says so; the row for what follows."""
    style.write_text(sheet.cell(1, 1), title, bold=True, size=14, wrap=False)
    sheet.row_dimensions[1].height = 24
    if not invented:
        return 2
    style.write_text(sheet.cell(2, 1), words.INVENTED, bold=True, color=style.RISK, size=11, wrap=False)
    return 3


def _write_line(sheet: Worksheet, row: int, text: str, color: str = style.INK) -> int:
    """A text across the sheet; the next row."""
    sheet.merge_cells(start_row=row, start_column=1, end_row=row, end_column=2)
    style.write_text(sheet.cell(row, 1), text, color=color)
    sheet.row_dimensions[row].height = style.height_of(text, 118)
    return row + 1


def _write_pairs(sheet: Worksheet, row: int, title: str, pairs: list[tuple[str, str]]) -> int:
    style.write_text(sheet.cell(row, 1), title, bold=True, color=style.ABUNDANCE, size=11)
    for name, text in pairs:
        row += 1
        style.write_text(sheet.cell(row, 1), name, bold=True)
        style.write_text(sheet.cell(row, 2), text)
    return row + 1


def _write_form(
    sheet: Worksheet, title: str, sections: tuple[Section, ...], document: dict[str, Any], invented: bool
) -> None:
    style.set_page(sheet)
    style.set_widths(sheet, _WIDTHS)
    row = _write_title(sheet, title, invented, len(HEADINGS))
    style.write_heading(sheet, row, HEADINGS)
    row += 1
    for section in sections:
        for number, table in enumerate(_tables(section, document), start=1):
            style.write_band(sheet, row, block_title(section, number), words.about_section(section), len(HEADINGS))
            for field in filter(is_shown, fields_of(section.name)):
                row += 1
                _write_field(sheet, row, field, table.get(field.key), invented)
            row += 2
    style.write_text(sheet.cell(row, 1), CAUTION, color=style.RISK, wrap=False)


def _tables(section: Section, document: dict[str, Any]) -> list[dict[str, Any]]:
    """The tables of a section; an empty one more where there can be several."""
    if not section.many:
        return [document.get(section.name, {}) if section.name else document]
    tables: list[dict[str, Any]] = document.get(section.name, [])
    return [*tables, {}] if len(tables) < section.at_most else tables


def _write_field(sheet: Worksheet, row: int, field: Field, value: Any, invented: bool) -> None:
    """One row: the item, the cells of its value, its unit, what it is."""
    help_text = words.about_field(field)
    required = field.required or field.shown
    style.write_text(
        sheet.cell(row, ITEM + 1), field.title, bold=required, color=style.INK if required else style.MUTED
    )
    style.write_text(sheet.cell(row, UNIT + 1), field.unit, color=style.MUTED, indent=1)
    style.write_text(sheet.cell(row, HELP + 1), help_text, color=style.MUTED, indent=1)
    cells = {} if value is None else to_cells(field, value)
    is_text = field.sort in _TEXTS
    for column in range(ITEM, HELP + 1):
        cell = sheet.cell(row, column + 1)
        style.as_paper(cell)
        if column in _inputs(field):
            style.as_input(cell, text=is_text or column == HOW, invented=invented)
            style.put(cell, cells.get(column))
    _offer_choices(sheet, row, field)
    if is_text:
        for column in (MIDDLE, LAST):
            style.as_input(sheet.cell(row, column + 1), text=True, invented=invented)
        sheet.merge_cells(start_row=row, start_column=FIRST + 1, end_row=row, end_column=LAST + 1)
    content = str(cells.get(FIRST, "")) if is_text else ""
    sheet.row_dimensions[row].height = max(
        style.height_of(help_text, _WIDTHS[HELP] * 1.05), style.height_of(content, sum(_WIDTHS[FIRST : LAST + 1]))
    )


def _inputs(field: Field) -> tuple[int, ...]:
    """The cells of a row that are filled in."""
    return {"distribution": VALUES, "level": (HOW, FIRST), "years and chance": (HOW, FIRST, LAST)}.get(
        field.sort, (FIRST,)
    )


def _offer_choices(sheet: Worksheet, row: int, field: Field) -> None:
    how, first = sheet.cell(row, HOW + 1), sheet.cell(row, FIRST + 1)
    if field.sort == "distribution":
        style.offer(sheet, how, tuple(name for name, _ in KINDS.values()), words.kinds_prompt())
    elif field.sort == "level":
        style.offer(sheet, how, tuple(LEVELS), "An abundance in the record's unit, or a share of carrying capacity.")
    elif field.sort == "years and chance":
        style.write_text(how, BY_YEAR, color=style.MUTED, indent=1)
        style.as_paper(how)
    elif field.choices:
        style.offer(sheet, first, field.choices)


def _write_history(sheet: Worksheet, history_text: str, invented: bool) -> None:
    style.set_page(sheet)
    rows = list(csv.reader(io.StringIO(history_text, newline="")))
    header, years = rows[0], rows[1:]
    row = _write_title(sheet, HISTORY, invented, len(header))
    for text, color in (*((text, style.MUTED) for text in words.HISTORY_HELP), (CAUTION, style.RISK)):
        style.write_text(sheet.cell(row, 1), text, color=color, wrap=False)
        row += 1
    style.write_heading(sheet, row, tuple(header))
    style.set_widths(sheet, tuple(48.0 if name == NOTE else max(11.0, min(30.0, len(name) + 3.0)) for name in header))
    for cells in [*years, *([""] * len(header) for _ in range(_SPARE_YEARS))]:
        row += 1
        for column, (name, text) in enumerate(zip(header, cells, strict=True), start=1):
            cell = sheet.cell(row, column)
            style.as_input(cell, text=name == NOTE, invented=invented)
            style.put(cell, _history_cell(name, text))


def _history_cell(name: str, text: str) -> str | int | float | None:
    """A cell of the history: notes as they read, numbers as numbers."""
    if name == NOTE:
        note = unguard_note(text)
        return quote(note) if note else None
    number = parse_number(text)
    if number is None:
        return text or None
    return int(number) if number.is_integer() else number
