"""Reading a record's workbook: what it says, right or wrong, and where each key is."""

from __future__ import annotations

from dataclasses import dataclass
from dataclasses import field as attribute
from typing import Any

from harvest.record.fields import SECTIONS, fields_of
from harvest.record.reporting import listed, show
from harvest.record.schema import HISTORY_FILE, Field
from harvest.record.tables import place
from harvest.sheets.grid import Book, Cell, Sheet, SheetError
from harvest.sheets.limits import cell_name
from harvest.sheets.record_workbook_form import (
    FIRST,
    FORMAT_LABEL,
    HEADINGS,
    HISTORY,
    ITEM,
    MARK,
    READ_ME,
    VALUES,
    field_named,
    key_named,
    label,
    section_named,
    split_title,
)
from harvest.sheets.record_workbook_found import Reading
from harvest.sheets.record_workbook_history import read_history
from harvest.sheets.record_workbook_values import Cells, find_unused, found_in, from_cells, tidy


@dataclass
class _Block:
    """The table of a section that rows are read into."""

    section: str
    table: dict[str, Any]
    sheet: str
    row: int
    rows: dict[str, int] = attribute(default_factory=dict)


def find_format(book: Book) -> tuple[Sheet, Cell] | None:
    """The sheet that marks the workbook as a record's, and the version of the format that it states."""
    for sheet in book.sheets:
        for row in sheet.cells:
            if row[ITEM] == FORMAT_LABEL and len(row) > 1:
                return sheet, row[1]
    return None


def read_workbook(book: Book) -> Reading:
    """What the workbook says.

    Raises
    ------
    SheetError
        When it is not the workbook of a record.
    """
    marker = find_format(book)
    if marker is None:
        raise SheetError(
            f"{show(book.name)} is not the workbook of a record: no sheet has a row {show(FORMAT_LABEL)}, as the sheet "
            f"{show(READ_ME)} of such a workbook does. Start from a new one, and copy your numbers into it: "
            "harvest new NAME.xlsx"
        )
    read_me, version = marker
    reading = Reading(book.name, {"format": version, "history": HISTORY_FILE})
    for sheet in book.sheets:
        if sheet.name == HISTORY:
            read_history(sheet, reading)
        elif sheet is not read_me:
            _read_form(sheet, reading)
    if not reading.history:
        rule, cure = "the yearly history stands there", "Add the sheet, with a table of years."
        reading.add("error", f"sheet {show(HISTORY)}", "nothing", rule, cure)
    return reading


def _read_form(sheet: Sheet, reading: Reading) -> None:
    """Every block of a sheet, whatever the sheet's name."""
    blocks: list[_Block] = []
    above: list[int] = []
    for number, row in enumerate(sheet.cells, start=1):
        item = row[ITEM]
        title = item.strip() if isinstance(item, str) else item
        cells = {column: tidy(row[column]) for column in VALUES if column < len(row) and row[column] is not None}
        if isinstance(title, str) and title.startswith(MARK.strip()):
            blocks.append(_Block(split_title(title), {}, sheet.name, number))
        elif blocks:
            _read_row(blocks[-1], number, title, cells, reading)
        elif cells and title != HEADINGS[ITEM]:
            above.append(number)
    where = f"sheet {show(sheet.name)}"
    if not blocks:
        rule, cure = "only sheets with the headings of a record's workbook are read", "Nothing, if it is your own."
        reading.add("warning", where, "none of the record's headings", rule, cure)
        return
    if above:
        rule, cure = "values stand below the heading of their block", "Move them, or take them out."
        reading.add("error", where, f"values in row {listed(map(str, above))}", rule, cure)
    for block in blocks:
        _keep_block(block, reading)
    reading.tell_formulas(sheet, [place for place in sheet.formulas if place[1] in VALUES])
    _tell_outside(sheet, reading)


def _read_row(block: _Block, row: int, title: Cell, cells: Cells, reading: Reading) -> None:
    if not cells and not isinstance(title, str):
        return
    where = f"sheet {show(block.sheet)}, row {row}"
    if title is None:
        cure = "Write the name of the item in the first column, or empty the cells."
        reading.add(
            "error", where, found_in(cells, tuple(cells)), "each value has the name of its item before it", cure
        )
        return
    known = field_named(block.section, str(title))
    key = known.key if known else key_named(str(title))
    if key in block.rows:
        if cells:
            cure = "Take out one of the two rows, or put a heading above the second block."
            reading.add("error", where, f"a second row {show(title)}", "each item stands once in its block", cure)
        return
    block.rows[key] = row
    value = from_cells(known, cells) if known else cells.get(FIRST, next(iter(cells.values()), None))
    if known:
        _tell_unused(known, cells, where, reading)
    if value is not None:
        block.table[key] = value


def _tell_unused(known: Field, cells: Cells, where: str, reading: Reading) -> None:
    unused, rule = find_unused(known, cells)
    if unused:
        names = listed(HEADINGS[column] for column in unused)
        cure = "Empty what is not used, or choose another way to state it."
        reading.add("error", f"{where} ({known.title})", f"{found_in(cells, unused)} under {names}", rule, cure)


def _keep_block(block: _Block, reading: Reading) -> None:
    """Put a block's table into the document, and note where its rows are; an empty block counts for nothing."""
    name, known = block.section, fields_of(block.section)
    section = section_named(name)
    prefix = name if section is not None else show(name)
    if section is not None and section.many:
        reading.places.setdefault(name, (block.sheet, block.row))
        if not block.table:
            return
        tables = reading.document.setdefault(name, [])
        tables.append(block.table)
        prefix = f"{name} {len(tables)}"
    elif block.table:
        _merge(block, reading.document.setdefault(name, {}) if name else reading.document, reading)
    if prefix:
        reading.places.setdefault(prefix, (block.sheet, block.row))
    for key, row in block.rows.items():
        shown = key if any(field.key == key for field in known) else show(key)
        reading.places.setdefault(place(prefix, shown), (block.sheet, row))


def _merge(block: _Block, table: Any, reading: Reading) -> None:
    """Add a block to a table that can stand only once."""
    sections = () if block.section else {section.name for section in SECTIONS}
    for key, value in block.table.items():
        if isinstance(table, dict) and key not in table and key not in sections:
            table[key] = value
        else:
            where = f"sheet {show(block.sheet)}, row {block.rows[key]}"
            cure = "Take out one of the two, or give it the name of an item of this block."
            reading.add("error", where, f"a second {show(label(key))}", "each item stands once in the workbook", cure)


def _tell_outside(sheet: Sheet, reading: Reading) -> None:
    """Cells beyond the form's columns are the manager's own."""
    outside = [
        cell_name(r, c)
        for r, row in enumerate(sheet.cells)
        for c in range(len(HEADINGS), len(row))
        if row[c] is not None
    ]
    if outside:
        rule, cure = "only the form's own columns are read", "Nothing, if they are remarks of your own."
        reading.add("warning", f"sheet {show(sheet.name)}", f"cells beside the form: {listed(outside, 10)}", rule, cure)
