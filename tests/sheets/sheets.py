"""Sheets made by hand, so that no test of the reading depends on files."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from harvest.sheets.grid import Book, Sheet
from harvest.sheets.guessing import guess_mapping
from harvest.sheets.take_over import take_over
from harvest.sheets.taken import Taken


def make_sheet(rows: Sequence[Sequence[Any]], name: str = "S", **more: Any) -> Sheet:
    width = max(len(row) for row in rows)
    return Sheet(name, tuple((*row, *[None] * (width - len(row))) for row in rows), **more)


def make_book(rows: Sequence[Sequence[Any]], **more: Any) -> Book:
    return Book("herd.xlsx", (make_sheet(rows, **more),))


def take_rows(rows: Sequence[Sequence[Any]], answers: dict[str, str] | None = None, **more: Any) -> Taken:
    book = make_book(rows, **more)
    return take_over(book, guess_mapping(book), answers)


def ids(taken: Taken) -> list[str]:
    return [question.id for question in taken.questions]


def errors(taken: Taken) -> list[tuple[str, str]]:
    return [(problem.where, problem.found) for problem in taken.problems]
