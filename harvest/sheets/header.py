"""Where a sheet's header is, and the names of its columns."""

from __future__ import annotations

from dataclasses import dataclass

from harvest.sheets.grid import Cell, Sheet
from harvest.sheets.numbers import is_bare_number, is_blank, text_of
from harvest.sheets.roles import role_of
from harvest.sheets.view import letters
from harvest.sheets.years import read_year, score_years

#: Stands between the two names of a column below a merged header.
JOINT = " · "
#: Rows and columns of a sheet that are looked at for years.
MOST_SCANNED = 1_000
_MOST_ROWS = 3
#: Rows between the header and the first year (empty ones, headings, several years in one) that are passed over.
_MOST_BETWEEN = 6
_LONGEST_LABEL = 40


@dataclass(frozen=True)
class HeaderGuess:
    """First row of the header and one past its last, from 0; equal where there is none."""

    first: int
    end: int


def find_header(sheet: Sheet) -> HeaderGuess:
    """The rows that name the columns: the nearest such rows above the first year, without the titles above them.

    Without a column of years it is the first row with two texts or more.
    """
    column = find_year_column(sheet)
    if column is None:
        rows = range(len(sheet.cells))
        first = next((r for r in rows if _count_labels(sheet, r) > 1 and not _holds_numbers(sheet, r)), 0)
        return HeaderGuess(first, min(first + 1, len(sheet.cells)))
    years = [row for row, cells in enumerate(sheet.cells) if read_year(cells[column]).year]
    data = next((row for row in years if _is_data(sheet, row, column)), years[0])
    above = range(data, max(data - _MOST_BETWEEN, 0), -1)
    end = next((row for row in above if _is_header_row(sheet, row - 1, False)), data)
    first = end
    while first > 0 and end - first < _MOST_ROWS and _is_header_row(sheet, first - 1, first < end):
        first -= 1
    return HeaderGuess(first, end)


def find_year_column(sheet: Sheet) -> int | None:
    """The column that looks most like years, or None where none has two."""
    scores = score_columns(sheet)
    best = max(scores, default=0)
    return scores.index(best) if best > 1 else None


def score_columns(sheet: Sheet) -> list[int]:
    """How much each column looks like years; of a large sheet the first rows and columns count."""
    return [score_years(column) for column in zip(*scanned(sheet), strict=True)]


def scanned(sheet: Sheet) -> list[tuple[Cell, ...]]:
    """The part of a sheet that is looked at for years, row by row."""
    return [row[:MOST_SCANNED] for row in sheet.cells[:MOST_SCANNED]]


def column_names(sheet: Sheet, first: int, end: int) -> tuple[str, ...]:
    """The name of each column.

    Parameters
    ----------
    sheet : Sheet
    first, end : int
        First row of the header and one past its last, from 0.

    Returns
    -------
    tuple of str
        The labels above one another are joined, as in "Removals · females"; merged ones stand over all their
        columns. A column without a label is called by its letter, as in "column C".
    """
    rows = [_spread(sheet, row, end) for row in range(first, end)]
    names = []
    for column in range(sheet.size[1]):
        labels = dict.fromkeys(row[column] for row in rows if row[column])
        names.append(JOINT.join(labels) or f"column {letters(column)}")
    return tuple(names)


def _spread(sheet: Sheet, row: int, end: int) -> list[str]:
    """The labels of one header row; a merged one stands over all its columns.

    A file without merged cells (CSV) shows a merged label in its first column only: there it stands over the
    columns to its right that have a label below but none of their own, up to one whose label tells another role.
    """
    labels = [" ".join(text_of(cell).split()) for cell in sheet.cells[row]]
    for top, left, bottom, right in sheet.merged:
        if top <= row <= bottom and left < len(labels):
            across = min(right + 1, len(labels))
            labels[left:across] = [" ".join(text_of(sheet.cells[top][left]).split())] * (across - left)
    if sheet.merged or row + 1 >= end:
        return labels
    for column in range(1, len(labels)):
        above = labels[column - 1]
        below = text_of(sheet.cells[row + 1][column])
        if above and below and not labels[column] and text_of(sheet.cells[row + 1][column - 1]):
            labels[column] = above if role_of(below) in (None, role_of(above)) else ""
    return labels


def _is_header_row(sheet: Sheet, row: int, upper: bool) -> bool:
    """Whether a row names columns; ``upper`` for one above another header row, which may have one label only."""
    if _holds_numbers(sheet, row) or _is_title(sheet, row):
        return False
    return _count_labels(sheet, row) > 1 or (upper and _is_lone_label(sheet, row))


def _is_data(sheet: Sheet, row: int, column: int) -> bool:
    """Whether a row with a year is data; one that has nothing else is a title unless a year follows below."""
    if sum(not is_blank(cell) for cell in sheet.cells[row]) > 1:
        return True
    below = next((cells for cells in sheet.cells[row + 1 :] if not all(is_blank(cell) for cell in cells)), None)
    return below is None or read_year(below[column]).year > 0


def _is_title(sheet: Sheet, row: int) -> bool:
    """Whether a row has one text only, in the first column that holds anything."""
    filled = [c for c, cell in enumerate(sheet.cells[row]) if not is_blank(cell)]
    left = next((c for c in range(sheet.size[1]) if any(not is_blank(cells[c]) for cells in sheet.cells)), 0)
    return filled == [left] and sheet.size[1] > 1


def _is_lone_label(sheet: Sheet, row: int) -> bool:
    filled = [text_of(cell) for cell in sheet.cells[row] if not is_blank(cell)]
    return len(filled) == 1 and len(filled[0]) <= _LONGEST_LABEL


def _count_labels(sheet: Sheet, row: int) -> int:
    return sum(isinstance(cell, str) and not is_blank(cell) for cell in sheet.cells[row])


def _holds_numbers(sheet: Sheet, row: int) -> bool:
    return any(is_bare_number(cell) for cell in sheet.cells[row])
