"""Guessing which sheet is the history and what its columns are; the user sees and corrects every guess."""

from __future__ import annotations

from collections.abc import Sequence

from harvest.sheets.grid import Book, Cell, Sheet, SheetError
from harvest.sheets.header import (
    JOINT,
    HeaderGuess,
    column_names,
    find_header,
    find_year_column,
    scanned,
    score_columns,
)
from harvest.sheets.numbers import holds_number, is_blank
from harvest.sheets.roles import (
    COUNT,
    CV,
    ERROR,
    NOTHING,
    NUMERIC,
    REMOVALS,
    YEAR,
    ColumnUse,
    Mapping,
    is_summary,
    role_of,
)
from harvest.sheets.view import view_of
from harvest.sheets.years import score_years

#: The score of two years that follow one another.
_LIKE_YEARS = 4


def guess_sheet(book: Book) -> int:
    """The sheet most like a history, from 0: a visible one with the longest run of years.

    Raises
    ------
    SheetError
        When no sheet holds anything.
    """
    if not any(sheet.cells for sheet in book.sheets):
        raise SheetError(
            f'"{book.name}" holds no filled cell; a history has one row for each year. '
            "Choose the file with the yearly counts and removals."
        )

    def rank(number: int) -> tuple[bool, bool, int, int]:
        sheet = book.sheets[number]
        score = max(_score_down(sheet), _score_across(sheet))
        return score >= _LIKE_YEARS, not sheet.hidden and bool(sheet.cells), score, -number

    return max(range(len(book.sheets)), key=rank)


def guess_mapping(
    book: Book, sheet: int | None = None, header: HeaderGuess | None = None, transposed: bool | None = None
) -> Mapping:
    """What each column is, by the words of its header and by its content.

    Parameters
    ----------
    book : Book
    sheet : int, optional
        From 0; guessed where not given.
    header : HeaderGuess, optional
        Guessed where not given; where the sheet is turned, the rows are those of the turned sheet.
    transposed : bool, optional
        Whether the years run from left to right; guessed where not given.

    Returns
    -------
    Mapping
        Without a column of years where none looks like years: the user may name it.

    Raises
    ------
    SheetError
        When no sheet holds anything.
    """
    number = guess_sheet(book) if sheet is None else sheet
    turned = _runs_across(book.sheets[number]) if transposed is None else transposed
    seen = view_of(book.sheets[number], turned).sheet
    found = find_header(seen) if header is None else header
    names = column_names(seen, found.first, found.end)
    roles = _guess_roles(seen, found, names)
    return Mapping(number, found.first, found.end, _name_surveys(roles, names), turned)


def _score_down(sheet: Sheet) -> int:
    """The score of the column that looks most like years."""
    return max(score_columns(sheet), default=0)


def _score_across(sheet: Sheet) -> int:
    """The score of the row that looks most like years."""
    return max((score_years(row) for row in scanned(sheet)), default=0)


def _runs_across(sheet: Sheet) -> bool:
    """Whether the years stand beside one another rather than below one another."""
    across = _score_across(sheet)
    return across >= _LIKE_YEARS and across > _score_down(sheet)


def _guess_roles(sheet: Sheet, header: HeaderGuess, names: tuple[str, ...]) -> list[str]:
    by_words = [role_of(name) or NOTHING for name in names]
    body = sheet.cells[header.end :]
    columns = [tuple(row[c] for row in body) for c in range(len(names))]
    year = _guess_year(by_words, columns, find_year_column(sheet))
    roles = []
    for number, (role, cells) in enumerate(zip(by_words, columns, strict=True)):
        usable = role != YEAR and not all(is_blank(cell) for cell in cells)
        if role in NUMERIC:
            computed = any(row >= header.end and column == number for row, column in sheet.formulas)
            usable = usable and any(holds_number(cell) for cell in cells)
            usable = usable or computed
        roles.append(YEAR if number == year else role if usable else NOTHING)
    return _without_parts(roles, names)


def _guess_year(by_words: list[str], columns: Sequence[Sequence[Cell]], by_content: int | None) -> int | None:
    named = [c for c, role in enumerate(by_words) if role == YEAR and score_years(columns[c])]
    return max(named, key=lambda c: score_years(columns[c])) if named else by_content


def _without_parts(roles: list[str], names: tuple[str, ...]) -> list[str]:
    """Removals by sex or age beside their total: the total alone, else they would be counted twice."""
    taken = [c for c, role in enumerate(roles) if role == REMOVALS]
    totals = [c for c in taken if any(is_summary(label) for label in names[c].split(JOINT))]
    if len(totals) != 1:
        return roles
    return [NOTHING if role == REMOVALS and c not in totals else role for c, role in enumerate(roles)]


def _name_surveys(roles: list[str], names: tuple[str, ...]) -> tuple[ColumnUse, ...]:
    """Each count is a survey of its own; a CV or standard error belongs to the count before it, else to the first."""
    counts = [c for c, role in enumerate(roles) if role == COUNT]
    surveys = {c: names[c] if names.count(names[c]) == 1 else f"{names[c]} {c + 1}" for c in counts}
    uses = []
    for column, role in enumerate(roles):
        survey = surveys.get(column, "")
        if role in (CV, ERROR) and counts:
            survey = surveys[max((c for c in counts if c < column), default=counts[0])]
        uses.append(ColumnUse(column, role, survey))
    return tuple(uses)
