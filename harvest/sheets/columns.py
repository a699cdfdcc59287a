"""Reading the cells of a column of numbers, with a question for everything but the plain number."""

from __future__ import annotations

from dataclasses import dataclass, replace
from datetime import date
from decimal import Decimal

from harvest.record.reporting import listed, show
from harvest.sheets import catalogue
from harvest.sheets.context import Context
from harvest.sheets.marks import Marks, find_votes, read_token, weigh_marks
from harvest.sheets.numbers import (
    NONE,
    NOT_KNOWN,
    Written,
    is_blank,
    is_too_large,
    number_of,
    plain_text,
    round_cv,
    take_apart,
    text_of,
)
from harvest.sheets.roles import CV, REMOVALS
from harvest.sheets.rows import YearRow

#: Half the width of a 95% interval, in standard errors.
_HALF_WIDTH = Decimal("1.96")
_UNREADABLE = "a number such as 1250 or 12.5, or an empty cell"


@dataclass(frozen=True)
class Value:
    """What one cell says: its number (None for not known), whether a percent sign follows, the CV, the remark."""

    number: Decimal | None = None
    percent: bool = False
    cv: Decimal | None = None
    remark: str = ""


@dataclass(frozen=True)
class Reading:
    """A column to be read: where it is, its role, whether a ± tells a CV that is needed, how its marks are read."""

    column: int
    role: str
    takes_error: bool
    marks: Marks
    units: dict[str, str]


def read_columns(
    context: Context, rows: tuple[YearRow, ...], roles: dict[int, str], with_error: frozenset[int]
) -> dict[int, tuple[Value, ...]]:
    """The numbers of all columns.

    Parameters
    ----------
    context : Context
    rows : tuple of YearRow
    roles : dict
        Role by column, of the columns that hold numbers.
    with_error : frozenset of int
        The columns whose ± is wanted as a CV.

    Returns
    -------
    dict
        By column, a value for each row; an unreadable one is empty, and a problem.
    """
    tokens = {column: _list_tokens(context, rows, column) for column in roles}
    everywhere = find_votes(token for column in tokens.values() for token in column)
    units: dict[str, dict[str, str]] = {}
    values = {}
    for column, role in roles.items():
        numbers = [n for row in rows if (n := number_of(context.view.cell(row.row, column))) is not None]
        marks = weigh_marks(context.view.column(column), tokens[column], numbers, everywhere, role == CV)
        shared = units.setdefault(role if role == REMOVALS else f"{column}", {})
        reading = Reading(column, role, column in with_error, marks, shared)
        values[column] = tuple(_read_cell(context, row.row, reading) for row in rows)
    for found in units.values():
        _check_units(context, found)
    return values


def _list_tokens(context: Context, rows: tuple[YearRow, ...], column: int) -> list[str]:
    """Every number written as text in a column, those behind a ± too."""
    tokens = []
    for row in rows:
        cell = context.view.cell(row.row, column)
        written = take_apart(cell) if isinstance(cell, str) else None
        if written is not None:
            tokens += [token for token in (written.token, written.error) if token]
    return tokens


def _read_cell(context: Context, row: int, reading: Reading) -> Value:
    cell = context.view.cell(row, reading.column)
    if is_blank(cell):
        return Value()
    number = number_of(cell)
    if number is not None:
        return _check_number(context, row, reading.column, Value(number))
    if isinstance(cell, str):
        return _read_text(context, row, reading, cell.strip())
    found = f"the date {text_of(cell)}" if isinstance(cell, date) else show(cell)
    context.refuse(row, reading.column, found, _UNREADABLE)
    return Value()


def _read_text(context: Context, row: int, reading: Reading, text: str) -> Value:
    place = context.view.place(row, reading.column)
    if text.casefold() in NOT_KNOWN:
        context.asking.add(catalogue.NOT_AVAILABLE, place, text, "empty")
        return Value()
    if text.casefold() in NONE:
        kind = catalogue.NONE.about(context.view.column(reading.column))
        zero = context.asking.choice(kind) == "zero"
        context.asking.add(kind, place, text, "0" if zero else "empty")
        return Value(Decimal(0)) if zero else Value()
    written = take_apart(text)
    if written is None or (written.percent and reading.role != CV):
        context.refuse(row, reading.column, show(text), _UNREADABLE)
        return Value()
    number = read_token(context, place, written.token, reading.marks)
    if number is None:
        context.refuse(row, reading.column, show(text), _UNREADABLE)
        return Value()
    value = _check_number(context, row, reading.column, Value(number, percent=written.percent))
    return value if value.number is None else _settle_dress(context, row, reading, text, written, value)


def _check_number(context: Context, row: int, column: int, value: Value) -> Value:
    if value.number is None or (value.number >= 0 and not is_too_large(value.number)):
        return value
    context.refuse(row, column, plain_text(value.number), "a number from 0 to 1e15")
    return Value()


def _settle_dress(context: Context, row: int, reading: Reading, text: str, written: Written, value: Value) -> Value:
    """The value once the user has said what becomes of the signs, the unit and the remark around it."""
    place, becomes = context.view.place(row, reading.column), plain_text(value.number or Decimal(0))
    if written.unit:
        reading.units.setdefault(_same_unit(written.unit), context.view.where(row, reading.column))
        context.asking.add(catalogue.UNITS, place, text, becomes)
    if written.error:
        value = replace(value, cv=_read_error(context, row, reading, text, written, value.number))
    if written.remark:
        kept = context.asking.choice(catalogue.TEXT_AFTER) == "note"
        note = f", note {show(written.remark)}" if kept else ""
        context.asking.add(catalogue.TEXT_AFTER, place, text, f"{becomes}{note}")
        value = replace(value, remark=written.remark if kept else "")
    if written.doubt:
        empty = context.asking.choice(catalogue.DOUBTFUL) == "empty"
        context.asking.add(catalogue.DOUBTFUL, place, text, "empty" if empty else becomes)
        value = Value(remark=value.remark) if empty else value
    return value


def _read_error(
    context: Context, row: int, reading: Reading, text: str, written: Written, number: Decimal | None
) -> Decimal | None:
    """The CV that the number behind a ± tells, or None."""
    place, name = context.view.place(row, reading.column), context.view.column(reading.column)
    kind = (catalogue.PLUS_MINUS if reading.takes_error else catalogue.PLUS_MINUS_UNUSED).about(name)
    choice = context.asking.choice(kind)
    error = read_token(context, place, written.error, reading.marks) if choice != "ignore" else None
    cv = _find_cv(error, number, choice, written.error_percent)
    told = "left out" if choice == "ignore" else "no coefficient of variation" if cv is None else f"CV {plain_text(cv)}"
    context.asking.add(kind, place, text, f"{plain_text(number or Decimal(0))}, {told}")
    if cv is None and choice != "ignore":
        context.refuse(row, reading.column, show(text), "a count above 0 with a readable number behind the ±")
    return cv


def _find_cv(error: Decimal | None, number: Decimal | None, choice: str, percent: bool) -> Decimal | None:
    """The error behind a ± as a proportion of the number."""
    if error is None or not number:
        return None
    share = error / 100 if percent or choice == "cv" else error / number
    if choice == "half-width":
        share /= _HALF_WIDTH
    return round_cv(share, error)


def _same_unit(unit: str) -> str:
    """The unit without plural and full stop, so that "deers" is "deer"."""
    bare = unit.casefold().replace(".", "")
    return bare[:-1] if len(bare) > 2 and bare.endswith("s") else bare


def _check_units(context: Context, found: dict[str, str]) -> None:
    if len(found) > 1:
        where = list(found.values())[1]
        rule = "numbers of one column, and removals that are added up, have one unit"
        context.report.error(where, f"different units: {listed(found)}", rule, "Write all of them in one unit.")
