"""Where the header is, and what its columns are called."""

from __future__ import annotations

import pytest

from harvest.sheets.header import HeaderGuess, column_names, find_header
from tests.sheets.sheets import make_sheet

_DATA = [[2019, 3, 100], [2020, 4, 110]]
_NAMES = ["Year", "Bag", "Count"]


@pytest.mark.parametrize(
    ("rows", "first", "end"),
    [
        ([_NAMES, *_DATA], 0, 1),
        ([["Deer of the valley"], [], _NAMES, *_DATA], 2, 3),
        ([["Report 2019"], _NAMES, *_DATA], 1, 2),
        ([["2019"], _NAMES, *_DATA], 1, 2),
        ([_NAMES, [], *_DATA], 0, 1),
        ([_NAMES, [None, "(animals)", "(animals)"], *_DATA], 0, 2),
        ([_NAMES, ["North"], *_DATA], 0, 1),
        ([_NAMES, ["2010-2018", 30, 900], *_DATA], 0, 1),
        ([[None, "Removals"], _NAMES, *_DATA], 0, 2),
        (_DATA, 0, 0),
        ([["a title"], ["name", "place"], ["x", "y"]], 1, 2),
    ],
)
def test_the_header_is_found(rows: list[list[object]], first: int, end: int) -> None:
    assert find_header(make_sheet(rows)) == HeaderGuess(first, end)


def test_an_empty_sheet_has_no_header() -> None:
    assert find_header(make_sheet([[]])) == HeaderGuess(0, 1)


def test_merged_labels_stand_over_all_their_columns() -> None:
    rows = [["Year", "Removals", None, "Count"], [None, "females", "males", None], [2019, 1, 2, 3]]
    sheet = make_sheet(rows, merged=((0, 1, 0, 2), (0, 0, 1, 0), (0, 3, 1, 3)))
    assert column_names(sheet, 0, 2) == ("Year", "Removals · females", "Removals · males", "Count")


def test_labels_spread_in_a_file_that_cannot_merge() -> None:
    rows = [[None, "Removals", None, "Survey", None], ["Year", "females", "males", "count", "Remarks"]]
    names = column_names(make_sheet(rows), 0, 2)
    assert names == ("Year", "Removals · females", "Removals · males", "Survey · count", "Remarks")


def test_columns_without_a_label_have_their_letter() -> None:
    assert column_names(make_sheet([["Year", None, " a  b "]]), 0, 1) == ("Year", "column B", "a b")
    assert column_names(make_sheet([[1, 2]]), 0, 0) == ("column A", "column B")
