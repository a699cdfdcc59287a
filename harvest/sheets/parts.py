"""Adding up: columns of one row, and rows of one year."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from decimal import Decimal

from harvest.sheets import catalogue
from harvest.sheets.columns import Value
from harvest.sheets.context import Context
from harvest.sheets.numbers import plain_text
from harvest.sheets.precision import Numbers
from harvest.sheets.questions import Kind
from harvest.sheets.rows import YearRow

_FEWEST_ROWS = 2
_FEWEST_COLUMNS = 3


def add_columns(
    context: Context, rows: tuple[YearRow, ...], columns: Mapping[int, Sequence[Value]], kind: Kind, what: str
) -> Numbers:
    """One number a row from all columns; asks about the sum where there are several."""
    found = []
    for index, row in enumerate(rows):
        parts = [values[index].number for values in columns.values()]
        if len(parts) == 1:
            found.append(parts[0])
            continue
        total = add_parts(context, parts, context.view.row(row.row), f"{what} of one row")
        if any(part is not None for part in parts):
            context.asking.add(kind, context.view.row(row.row), _sum_text(parts), _text(total))
        found.append(total)
    return tuple(found)


def drop_total(context: Context, columns: Mapping[int, tuple[Value, ...]]) -> dict[int, tuple[Value, ...]]:
    """The columns of removals without one that is always the sum of the others, if the user calls it their total."""
    for column, values in columns.items():
        others = [v for c, v in columns.items() if c != column]
        if len(others) >= _FEWEST_COLUMNS - 1 and _is_sum(values, others):
            kind = catalogue.TOTAL_COLUMN.about(context.view.column(column))
            dropped = context.asking.choice(kind) == "leave out"
            becomes = "left out" if dropped else "added"
            context.asking.add(kind, context.view.column(column), "the sum of the others in every row", becomes)
            return {c: v for c, v in columns.items() if c != column or not dropped}
    return dict(columns)


def _is_sum(total: Sequence[Value], others: list[tuple[Value, ...]]) -> bool:
    checked = 0
    for index, value in enumerate(total):
        parts = [column[index].number for column in others]
        known = [part for part in parts if part is not None]
        if value.number is None or not known:
            continue
        if value.number != sum(known):
            return False
        checked += value.number > 0
    return checked >= _FEWEST_ROWS


def add_parts(context: Context, parts: Sequence[Decimal | None], where: str, what: str) -> Decimal | None:
    """The sum; where some parts are empty the user says whether it is, too."""
    known = [part for part in parts if part is not None]
    if not known:
        return None
    if len(known) == len(parts):
        return sum(known, Decimal(0))
    kind = catalogue.EMPTY_PARTS.about(what)
    total = sum(known, Decimal(0)) if context.asking.choice(kind) == "zero" else None
    context.asking.add(kind, where, _sum_text(parts), _text(total))
    return total


def _sum_text(parts: Sequence[Decimal | None]) -> str:
    return " + ".join("empty" if part is None else plain_text(part) for part in parts)


def _text(number: Decimal | None) -> str:
    return "empty" if number is None else plain_text(number)
