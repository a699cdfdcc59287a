"""Guesses: the sheet, the header, the roles."""

from __future__ import annotations

from datetime import datetime

import pytest

from harvest.sheets.grid import Book, Sheet, SheetError
from harvest.sheets.guessing import guess_mapping, guess_sheet
from harvest.sheets.header import HeaderGuess
from harvest.sheets.roles import ColumnUse
from tests.sheets.sheets import make_book, make_sheet

_HISTORY = [["Year", "Bag"], [2019, 3], [2020, 4]]


def roles(*rows: list[object]) -> list[tuple[str, str]]:
    return [(use.role, use.survey) for use in guess_mapping(make_book(rows)).columns]


def test_the_sheet_with_the_years_is_taken() -> None:
    book = Book("b.xlsx", (make_sheet([["Read me"], ["2019"]]), make_sheet(_HISTORY), make_sheet([["x"]])))
    assert guess_sheet(book) == 1


def test_a_visible_sheet_goes_before_a_hidden_one_with_more_years() -> None:
    hidden = make_sheet([*_HISTORY, [2021, 5]], hidden=True)
    assert guess_sheet(Book("b.xlsx", (hidden, make_sheet(_HISTORY)))) == 1
    assert guess_sheet(Book("b.xlsx", (hidden, make_sheet([["Read me"]])))) == 0


def test_a_book_without_a_filled_cell_is_refused() -> None:
    with pytest.raises(SheetError, match=r'^"b.xlsx" holds no filled cell; .* Choose the file with the yearly'):
        guess_sheet(Book("b.xlsx", (Sheet("S", ()),)))


def test_each_cv_belongs_to_the_count_before_it() -> None:
    header = ["Year", "Harvest", "Aerial count", "Aerial CV", "Ground count", "S.E.", "Quota", "Remarks"]
    assert roles(header, [2019, 3, 100, 0.1, 50, 5, 9, "x"], [2020, 3, 100, 0.1, 50, 5, 9, None]) == [
        ("year", ""),
        ("removals", ""),
        ("count", "Aerial count"),
        ("cv", "Aerial count"),
        ("count", "Ground count"),
        ("standard error", "Ground count"),
        ("leave out", ""),
        ("note", ""),
    ]


def test_columns_of_one_name_are_surveys_of_their_own() -> None:
    found = roles(["Year", "Count", "Count"], [2019, 3, 4], [2020, 4, 5])
    assert found == [("year", ""), ("count", "Count 2"), ("count", "Count 3")]


def test_a_total_stands_for_its_parts() -> None:
    found = roles(["Year", "Bag hinds", "Bag stags", "Bag · total"], [2019, 1, 2, 3], [2020, 2, 2, 4])
    assert [role for role, _ in found] == ["year", "leave out", "leave out", "removals"]


def test_years_are_known_by_their_content() -> None:
    first, second = [2010, 2019, 4, datetime(2019, 3, 1)], [2011, 2020, 5, datetime(2020, 3, 1)]
    found = roles(["Count", "Period", "Removed", "Survey date"], first, second, [1890, 2021, 5, None])
    assert [role for role, _ in found] == ["count", "year", "removals", "leave out"]


def test_a_column_called_year_is_enough_for_one_year() -> None:
    assert [role for role, _ in roles(["Year", "Bag"], [2019, 3])] == ["year", "removals"]


def test_columns_without_numbers_are_left_out() -> None:
    found = roles(["Year", "Harvest", "Count"], [2019, "see below", None], [2020, None, 5])
    assert [role for role, _ in found] == ["year", "leave out", "count"]


def test_years_from_left_to_right_are_turned() -> None:
    book = make_book([["Deer"], ["Year", 2019, 2020, 2021], ["Bag", 1, 2, 3]])
    mapping = guess_mapping(book)
    assert (mapping.transposed, mapping.header_first, mapping.header_end) == (True, 0, 1)
    assert mapping.columns[1:] == (ColumnUse(1, "year"), ColumnUse(2, "removals"))
    assert not guess_mapping(book, transposed=False).transposed


def test_a_header_given_by_the_user_is_kept() -> None:
    book = make_book([["Year", "Count"], ["Year", "Bag"], [2019, 3], [2020, 4]])
    assert guess_mapping(book).header_end == 2
    mapping = guess_mapping(book, 0, HeaderGuess(0, 1))
    assert (mapping.header_first, mapping.header_end, mapping.columns[1].role) == (0, 1, "count")
