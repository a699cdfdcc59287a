"""Reading the yearly history: a CSV file with a header, one row a year, empty cells for what is not known.

Notes are free text, and a spreadsheet would run a note such as "=1+1" as a formula. ``guard_note`` therefore
puts one apostrophe in front of a note that begins (after any apostrophes) with one of ``RISKY``;
``unguard_note`` takes exactly one off again, so that every note survives a round trip.
"""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Sequence
from dataclasses import dataclass, field

from harvest.record.numbers import explain_number, find_date_year, parse_number
from harvest.record.reporting import Report, listed, nearest, show
from harvest.record.schema import FIRST_YEAR, LAST_YEAR, MAX_NUMBER, NOTE, REMOVALS, YEAR
from harvest.record.values import find_text_fault, judge_cv

#: First characters that make a spreadsheet take a text for a formula; every file that the program writes heeds them.
RISKY = "=+-@\t\r\n＝＋－＠"
_GUARDED = re.compile(f"'+[{re.escape(RISKY)}]")
_RISKY_START = re.compile(f"'*[{re.escape(RISKY)}]")
_MOST_COLUMNS = 200
_MOST_ROWS = LAST_YEAR - FIRST_YEAR + 1
_SEPARATORS = {";": "semicolons", "\t": "tabs", "|": "bars"}

Rows = list[tuple[int, list[str]]]


@dataclass(frozen=True)
class Wanted:
    """The columns that the record names: counts with the survey's name, and columns of CVs."""

    counts: tuple[str, ...] = ()
    cvs: tuple[str, ...] = ()
    #: False where ``record.toml`` could not be read, so that no column can be called unknown.
    known: bool = True

    @property
    def columns(self) -> tuple[str, ...]:
        """All known columns."""
        return (YEAR, REMOVALS, NOTE, *self.counts, *self.cvs)


@dataclass(frozen=True)
class Table:
    """The history as read; a column that cannot be used is missing from ``columns``.

    Attributes
    ----------
    rows : tuple of int
        The row numbers as a spreadsheet shows them.
    years : tuple of int or None
        None where the years cannot be used.
    columns : dict
        Numbers by column; None for an empty cell.
    notes : tuple of str
        Empty where there is no such column.
    """

    rows: tuple[int, ...] = ()
    years: tuple[int, ...] | None = None
    columns: dict[str, tuple[float | None, ...]] = field(default_factory=dict)
    notes: tuple[str, ...] = ()

    def where(self, index: int, column: str) -> str:
        """A cell as the user would look for it."""
        year = f" (year {self.years[index]})" if self.years is not None else ""
        return f"row {self.rows[index]}{year}, column {column}"


def guard_note(text: str) -> str:
    """The note as it is written into a cell."""
    return f"'{text}" if _RISKY_START.match(text) else text


def unguard_note(cell: str) -> str:
    """The note that a cell holds."""
    return cell[1:] if _GUARDED.match(cell) else cell


def check_history(text: str, wanted: Wanted, report: Report) -> Table | None:
    """The history in ``text``, or None where its rows cannot even be told apart."""
    separator = _find_separator(text, report)
    parsed = _parse_rows(text, separator, report)
    if parsed is None:
        return None
    header, rows = parsed
    places = _check_header(header, rows, wanted, report)
    if places is None:
        return None
    rows = _check_widths(rows, len(header), report)
    if not rows:
        report.error("", "no years", "the history needs at least one year", "Add a row for each year.")
        return None
    numbers = tuple(number for number, _ in rows)
    years = _check_years(rows, places[YEAR], report) if YEAR in places else None
    table = Table(numbers, years)
    columns = {}
    for name in dict.fromkeys((REMOVALS, *wanted.counts, *wanted.cvs)):
        if name in places:
            cells = [cells[places[name]] for _, cells in rows]
            column = _check_column(table, name, cells, name in wanted.cvs, report)
            if column is not None:
                columns[name] = column
    notes = [cells[places[NOTE]] for _, cells in rows] if NOTE in places else []
    return Table(numbers, years, columns, _check_notes(table, notes, report))


def _find_separator(text: str, report: Report) -> str:
    """The comma; or what stands in its place, noted as an error so that the other faults can be told too."""
    head = text.split("\n", 1)[0]
    counts = {mark: head.count(mark) for mark in _SEPARATORS}
    mark = max(counts, key=lambda m: counts[m])
    if counts[mark] == 0 or "," in head:
        return ","
    report.error(
        "row 1",
        f"{_SEPARATORS[mark]} between the columns",
        "columns are separated by commas, and numbers have a decimal point",
        'In the spreadsheet choose "Save as", CSV with commas (in some countries only with the language of '
        "the program set to English).",
    )
    return mark


def _parse_rows(text: str, separator: str, report: Report) -> tuple[list[str], Rows] | None:
    rows: Rows = []
    number = 0
    try:
        for cells in csv.reader(io.StringIO(text, newline=""), delimiter=separator, strict=True):
            number += 1
            if any(cell.strip() for cell in cells):
                rows.append((number, cells))
            if len(rows) > _MOST_ROWS + 1:
                cure = "Keep one row for each year."
                report.error(f"row {number}", "too many rows", f"a history has at most {_MOST_ROWS} years", cure)
                break
    except csv.Error as error:
        report.error(
            f"row {number + 1}",
            f"cells that cannot be told apart ({show(str(error))})",
            'a cell with a comma or a quote in it stands in quotes, as in "fog, no flight"',
            "Check the quotes in this row; each opening quote needs a closing one.",
        )
        return None
    if not rows:
        report.error("", "only empty cells", "the history has a header and a row for each year", "Fill it in.")
        return None
    first, header = rows[0]
    if first != 1:
        report.error("row 1", "an empty row", "the first row names the columns", "Take out the rows above it.")
    return [name.strip() for name in header], rows[1:]


def _check_header(header: list[str], rows: Rows, wanted: Wanted, report: Report) -> dict[str, int] | None:
    """Where each known column is, or None where there is no header."""
    if len(header) > _MOST_COLUMNS:
        report.error("row 1", f"{len(header):,} columns", f"at most {_MOST_COLUMNS} columns", "Take some out.")
        return None
    if all(not name or parse_number(name) is not None for name in header):
        cure = f"Put a row above the data: {YEAR},{REMOVALS}, then the columns of the surveys."
        report.error("row 1", "numbers, not names", "the first row names the columns", cure)
        return None
    places: dict[str, int] = {}
    for index, name in enumerate(header):
        where = f"row 1, column {index + 1}"
        if not name:
            if any(len(cells) > index and cells[index].strip() for _, cells in rows):
                report.error(where, "a column without a name", "each column has a name", "Name it or take it out.")
        elif name in places:
            cure = "Take out or rename one of the two."
            report.error(where, f"a second column {show(name)}", "each column stands once", cure)
        else:
            places[name] = index
            if wanted.known and name not in wanted.columns:
                _report_unknown(where, name, header, wanted, report)
    for name in dict.fromkeys((YEAR, REMOVALS, *wanted.counts, *wanted.cvs)):
        if name not in places:
            guess = nearest(name, [h for h in header if h and h not in wanted.columns])
            cure = (
                f"Was the column {show(guess)} meant? Both must read the same."
                if guess
                else f"Add it to row 1: {name}."
            )
            report.error("row 1", f"no column {show(name)}", "the history needs this column", cure)
    return places


def _report_unknown(where: str, name: str, header: list[str], wanted: Wanted, report: Report) -> None:
    guess = nearest(name, [c for c in wanted.columns if c not in header])
    cure = (
        f"Was {guess} meant?"
        if guess
        else "Name it in a [[survey]] of record.toml (column or cv_column), or take it out of the history."
    )
    rule = f"known columns are {listed(dict.fromkeys(wanted.columns))}"
    report.error(where, f"the unknown column {show(name)}", rule, cure)


def _check_widths(rows: Rows, width: int, report: Report) -> Rows:
    """The rows, each cut or filled to the header's width; a fault is noted for each other width."""
    even: Rows = []
    for number, cells in rows:
        if len(cells) < width or any(cell.strip() for cell in cells[width:]):
            report.error(
                f"row {number}",
                f"{len(cells)} cells",
                f"each row has {width} cells, as the header",
                "Empty cells still need their comma; a note with a comma needs quotes around it; "
                "a decimal comma must be a point.",
            )
        even.append((number, (cells + [""] * width)[:width]))
    return even


def _check_years(rows: Rows, column: int, report: Report) -> tuple[int, ...] | None:
    years: list[int] = []
    for number, cells in rows:
        year = _check_year(cells[column].strip(), f"row {number}, column {YEAR}", report)
        if year is not None:
            years.append(year)
    if len(years) < len(rows):
        return None
    sound = True
    for (number, _), before, year in zip(rows[1:], years, years[1:], strict=False):
        fault = _find_order_fault(before, year)
        if fault is not None:
            sound = False
            report.error(f"row {number}, column {YEAR}", f"{year} after {before}", *fault)
    return tuple(years) if sound else None


def _check_year(cell: str, where: str, report: Report) -> int | None:
    rule = f"a year is a whole number from {FIRST_YEAR} to {LAST_YEAR}"
    if re.fullmatch("[0-9]{4}", cell) and FIRST_YEAR <= int(cell) <= LAST_YEAR:
        return int(cell)
    dated = find_date_year(cell)
    number = parse_number(cell)
    if dated:
        report.error(where, f"the date {show(cell)}", rule, f"Write only the year: {dated}.")
    elif number is not None and number.is_integer() and FIRST_YEAR <= number <= LAST_YEAR:
        report.error(where, show(cell), rule, f"Write {number:.0f}.")
    else:
        report.error(where, show(cell), rule, "Write the year with four digits, such as 2024.")
    return None


def _find_order_fault(before: int, year: int) -> tuple[str, str] | None:
    rule = "years follow one another without a gap"
    if year == before + 1:
        return None
    if year == before:
        return rule, "This year stands twice: keep one row, or correct the year."
    if year < before:
        return rule, "Sort the rows by year, the earliest first."
    missing = f"{before + 1}" if year == before + 2 else f"{before + 1} to {year - 1}"
    return rule, f"Add a row for {missing}, with empty cells for what is not known."


def _check_column(
    table: Table, name: str, cells: Sequence[str], is_cv: bool, report: Report
) -> tuple[float | None, ...] | None:
    """The numbers of one column, or None where one of them cannot be used."""
    numbers: list[float | None] = []
    sound = True
    for index, cell in enumerate(cells):
        if not cell.strip():
            numbers.append(None)
            continue
        number = _check_cell(cell, table.where(index, name), is_cv, report)
        sound = sound and number is not None
        numbers.append(number)
    return tuple(numbers) if sound else None


def _check_cell(cell: str, where: str, is_cv: bool, report: Report) -> float | None:
    number = parse_number(cell)
    if number is None:
        found, cure = explain_number(cell)
        rule = "a number with a decimal point, or an empty cell"
        report.error(where, f"{found}: {show(cell)}" if found else show(cell), rule, cure)
        return None
    if is_cv:
        return judge_cv(number, where, report)
    if number < 0:
        report.error(where, f"{number:g}", f"a number from 0 to {MAX_NUMBER:g}", "Correct it, or leave the cell empty.")
        return None
    return number


def _check_notes(table: Table, cells: Sequence[str], report: Report) -> tuple[str, ...]:
    notes = tuple(unguard_note(cell) for cell in cells)
    for index, note in enumerate(notes):
        fault = find_text_fault(note, lines=True)
        if fault is not None:
            report.error(table.where(index, NOTE), show(note), *fault)
    return notes
