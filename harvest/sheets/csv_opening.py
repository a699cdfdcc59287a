"""Opening a table saved as text: its character set and its separator are guessed, and the guess is told."""

from __future__ import annotations

import codecs
import csv
import io
import re
from collections import Counter

from harvest.record.reporting import show
from harvest.sheets.grid import Book, Sheet, SheetError
from harvest.sheets.limits import MAX_COLUMNS, MAX_ROWS, as_rectangle, check_size

#: In the order in which they are taken where the lines fit several.
_SEPARATORS = {"\t": "tabs", ";": "semicolons", "|": "bars", ",": "commas"}
_LINES_LOOKED_AT = 300
_CONTROL = re.compile("[\x00-\x08\x0b\x0e-\x1f]")
#: What a spreadsheet program may write into the first line to name the separator.
_STATED = re.compile(r"sep=(.)\r?\n?", re.IGNORECASE)
_SAVE_AS = 'In the spreadsheet program choose "Save as" and the type "CSV UTF-8" or "Excel workbook (.xlsx)".'


def open_csv(name: str, data: bytes) -> Book:
    """The one sheet of a text table; every cell is a text, or None where it is empty.

    Raises
    ------
    SheetError
        When it is not text, has cells that cannot be told apart, or is too large.
    """
    text, notes = _decode(name, data)
    stated = _STATED.match(text)
    if stated:
        text = text[stated.end() :]
    separator, told = (stated[1], None) if stated else _guess_separator(text)
    cells = as_rectangle(_split(name, text, separator))
    if not cells:
        raise SheetError(f"{show(name)} has only empty cells. Save the spreadsheet again, and choose that file.")
    check_size(show(name), len(cells), len(cells[0]))
    stem = name.rsplit(".", 1)[0] or name
    return Book(name, (Sheet(stem, cells),), (*notes, *([told] if told else [])))


def _decode(name: str, data: bytes) -> tuple[str, list[str]]:
    """The text, with a note where its character set is a guess."""
    if data.startswith((codecs.BOM_UTF16_LE, codecs.BOM_UTF16_BE)):
        text, note = _decode_wide(name, data, "utf-16"), None
    elif (order := _find_wide_order(data)) is not None:
        text, note = _decode_wide(name, data, order), "UTF-16"
    else:
        text, note = _decode_narrow(data)
    if _CONTROL.search(text):
        raise SheetError(
            f"{show(name)} holds characters that no table saved as text has: it is another kind of file. {_SAVE_AS}"
        )
    if note is None:
        return text, []
    return text, [f"The character set was guessed as {note}: check letters with accents in the preview."]


def _find_wide_order(data: bytes) -> str | None:
    """UTF-16 without its mark: about every second byte of a table with few letters beyond a to z is zero."""
    head = data[:2000]
    zeros = head[0::2].count(0), head[1::2].count(0)
    if len(head) >= 4 and max(zeros) > 0.4 * len(head) / 2 and min(zeros) == 0:
        return "utf-16-be" if zeros[0] else "utf-16-le"
    return None


def _decode_wide(name: str, data: bytes, order: str) -> str:
    try:
        return data.decode(order)
    except UnicodeDecodeError as error:
        raise SheetError(f"{show(name)} looks like UTF-16 text and is damaged. {_SAVE_AS}") from error


def _decode_narrow(data: bytes) -> tuple[str, str | None]:
    try:
        return data.decode("utf-8-sig"), None
    except UnicodeDecodeError:
        pass
    try:
        return data.decode("cp1252"), "Windows-1252"
    except UnicodeDecodeError:
        return data.decode("latin-1"), "Latin-1"


def _guess_separator(text: str) -> tuple[str, str | None]:
    """The separator that cuts most of the first lines into equally many cells, more than one; and a note."""
    fits = {mark: _fit(text, mark) for mark in _SEPARATORS}
    best = max(fits, key=lambda mark: fits[mark])  # the first of equals
    if fits[best] == 0.0:
        return ",", None
    return best, f"The cells were taken to be separated by {_SEPARATORS[best]}."


def _fit(text: str, separator: str) -> float:
    """The share of the first lines that have the commonest number of cells above one; quotes are respected."""
    counts: Counter[int] = Counter()
    try:
        for row in csv.reader(io.StringIO(text, newline=""), delimiter=separator):
            if any(cell.strip() for cell in row):
                counts[len(row)] += 1
            if counts.total() == _LINES_LOOKED_AT:
                break
    except csv.Error:
        return 0.0
    several = [times for width, times in counts.items() if width > 1]
    return max(several) / counts.total() if several else 0.0


def _split(name: str, text: str, separator: str) -> list[list[str | None]]:
    rows: list[list[str | None]] = []
    try:
        for row in csv.reader(io.StringIO(text, newline=""), delimiter=separator, strict=True):
            rows.append([cell or None for cell in row])
            if len(row) > MAX_COLUMNS or len(rows) > 2 * MAX_ROWS:
                check_size(show(name), max(len(rows), 1), len(row))
    except csv.Error as error:
        raise SheetError(
            f"{show(name)}, row {len(rows) + 1}, has cells that cannot be told apart ({show(str(error))}). A cell with "
            'a quote or the separator in it stands in quotes, as in "fog; no flight"; each quote needs its pair. '
            "Mend the row, or save the table as an Excel workbook (.xlsx)."
        ) from error
    return rows
