"""Coefficients of variation as proportions: from percentages and standard errors, and where they are missing."""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal

from harvest.sheets import catalogue
from harvest.sheets.columns import Value
from harvest.sheets.context import Context
from harvest.sheets.numbers import plain_text, round_cv, text_of
from harvest.sheets.questions import Kind
from harvest.sheets.rows import YearRow

Numbers = tuple[Decimal | None, ...]
#: The largest CV that a record may hold.
LARGEST_CV = 2


def read_cvs(
    context: Context, rows: tuple[YearRow, ...], column: int, values: Sequence[Value], in_percent: bool
) -> Numbers:
    """A column of CVs as proportions; the user says whether those without a percent sign are percentages.

    Parameters
    ----------
    context : Context
    rows : tuple of YearRow
    column : int
    values : sequence of Value
        One a row.
    in_percent : bool
        Whether the header speaks of percent.
    """
    name = context.view.column(column)
    bare = _kind_of_bare([v.number for v in values if v.number is not None and not v.percent], in_percent)
    found = []
    for row, value in zip(rows, values, strict=True):
        kind = catalogue.PERCENT_CV if value.percent else bare
        found.append(_settle(context, row.row, column, value.number, kind.about(name) if kind else None))
    return tuple(found)


def _kind_of_bare(numbers: list[Decimal], in_percent: bool) -> Kind | None:
    """The question that CVs without a percent sign raise, if any."""
    if not any(n > LARGEST_CV for n in numbers):
        return catalogue.PERCENT_HEADER if in_percent else None
    if any(n < 1 for n in numbers):
        return catalogue.PERCENT_MIXED.preferring("all") if in_percent else catalogue.PERCENT_MIXED
    return catalogue.PERCENT_CV


def _settle(context: Context, row: int, column: int, number: Decimal | None, kind: Kind | None) -> Decimal | None:
    """One CV once the user has spoken; one that is out of range is a problem."""
    if number is None:
        return None
    cv = number
    if kind is not None:
        choice = context.asking.choice(kind)
        if choice in ("yes", "all", "divide") or (choice == "large" and number > LARGEST_CV):
            cv = number / 100
        found = text_of(context.view.cell(row, column))
        context.asking.add(kind, context.view.place(row, column), found, plain_text(cv))
    return check_cv(context, row, column, cv)


def check_cv(context: Context, row: int, column: int, cv: Decimal) -> Decimal | None:
    """The CV, or None with a problem where a record cannot hold it."""
    if 0 < cv <= LARGEST_CV:
        return cv
    context.refuse(row, column, plain_text(cv), f"a coefficient of variation above 0, at most {LARGEST_CV}")
    return None


def divide_errors(
    context: Context, rows: tuple[YearRow, ...], column: int, errors: Sequence[Value], counts: Numbers
) -> Numbers:
    """CVs from standard errors."""
    found: list[Decimal | None] = []
    for row, value, count in zip(rows, errors, counts, strict=True):
        if value.number is None:
            found.append(None)
        elif not count:
            rule = "a standard error belongs to a count above 0 in the same row"
            context.refuse(row.row, column, plain_text(value.number), rule)
            found.append(None)
        else:
            cv = round_cv(value.number / count, value.number)
            told = f"{plain_text(value.number)} / {plain_text(count)}"
            context.asking.add(catalogue.STANDARD_ERRORS, context.view.place(row.row, column), told, plain_text(cv))
            found.append(check_cv(context, row.row, column, cv))
    return tuple(found)


def fill_cvs(context: Context, survey: str, years: Sequence[int], counts: Numbers, cvs: Numbers) -> Numbers | None:
    """The CVs with those that are missing, or None where the user states one for the whole survey."""
    known = [cv for cv in cvs if cv is not None]
    missing = [i for i, (n, cv) in enumerate(zip(counts, cvs, strict=True)) if n is not None and cv is None]
    if not missing or not known:
        return cvs if known else None
    kind = catalogue.MISSING_CV.about(survey)
    kept = context.asking.choice(kind) == "largest"
    filled = list(cvs)
    for index in missing:
        filled[index] = max(known)
        becomes = plain_text(max(known)) if kept else "no column of CVs"
        context.asking.add(kind, f"year {years[index]}", "a count without CV", becomes)
    return tuple(filled) if kept else None
