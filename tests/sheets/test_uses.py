"""Mappings that do not fit together, or not to the sheet."""

from __future__ import annotations

import pytest

from harvest.sheets.grid import SheetError
from harvest.sheets.roles import ColumnUse, Mapping
from harvest.sheets.take_over import take_over
from tests.sheets.sheets import errors, make_book

_BOOK = make_book([["Year", "A", "B", "C"], [2019, 1, 2, 0.1], [2020, 3, 4, 0.2]])


def use(*uses: tuple[int, str, str]) -> Mapping:
    return Mapping(0, 0, 1, tuple(ColumnUse(*one) for one in uses))


@pytest.mark.parametrize(
    ("mapping", "message"),
    [
        (Mapping(1, 0, 1, ()), "has 1 sheet"),
        (Mapping(0, 2, 1, ()), "cannot be rows 3 to 1 of 3"),
        (Mapping(0, 0, 9, ()), "cannot be rows 1 to 9 of 3"),
        (use((4, "year", "")), "has 4 columns; choose among them"),
        (use((0, "years", "")), 'cannot be "years"; choose one of year, removals'),
        (use((0, "year", ""), (0, "note", "")), "has two uses; choose one"),
    ],
)
def test_a_mapping_of_what_is_not_there_is_refused(mapping: Mapping, message: str) -> None:
    with pytest.raises(SheetError, match=message):
        take_over(_BOOK, mapping)


@pytest.mark.parametrize(
    ("mapping", "problem"),
    [
        (use((1, "removals", "")), ('sheet "S"', "no column of years")),
        (use((0, "year", ""), (1, "year", "")), ('sheet "S"', "years in column A, column B")),
        (use((0, "year", ""), (3, "cv", "")), ('sheet "S", column D', "a column of cv without its survey")),
        (
            use((0, "year", ""), (1, "count", "north"), (2, "count", "south"), (3, "cv", "")),
            ('sheet "S", column D', "a column of cv without its survey"),
        ),
        (
            use((0, "year", ""), (1, "count", "north"), (2, "cv", "north"), (3, "standard error", "north")),
            ('sheet "S", column D', "a second column beside column C"),
        ),
    ],
)
def test_uses_that_do_not_fit_are_problems(mapping: Mapping, problem: tuple[str, str]) -> None:
    taken = take_over(_BOOK, mapping)
    assert errors(taken) == [problem]
    assert (taken.header, taken.rows, taken.ready) == ((), (), False)


def test_two_columns_of_one_survey_are_added_up_when_the_user_says_so() -> None:
    mapping = use((0, "year", ""), (1, "count", "herd"), (2, "count", " herd "), (3, "cv", "herd"))
    taken = take_over(_BOOK, mapping, {"sum counts: herd": "yes", "no removals": "yes"})
    assert taken.history_text == "year,removals,herd,herd_cv\n2019,,3,0.1\n2020,,7,0.2\n"
    assert taken.ready


def test_columns_not_named_are_left_out() -> None:
    taken = take_over(_BOOK, use((0, "year", ""), (1, "removals", "")))
    assert taken.history_text == "year,removals\n2019,1\n2020,3\n"
    assert taken.questions == ()
    assert taken.ready
