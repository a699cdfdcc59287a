"""Cells have the names that the user sees, turned or not."""

from __future__ import annotations

import pytest

from harvest.sheets.view import letters, turn, view_of
from tests.sheets.sheets import make_sheet


@pytest.mark.parametrize(
    ("column", "name"), [(0, "A"), (25, "Z"), (26, "AA"), (51, "AZ"), (52, "BA"), (701, "ZZ"), (702, "AAA")]
)
def test_a_columns_letters(column: int, name: str) -> None:
    assert letters(column) == name


def test_places_in_a_sheet_as_it_is_and_turned() -> None:
    sheet = make_sheet([[1, 2, 3], [4, 5, 6]])
    plain, turned = view_of(sheet, False), view_of(sheet, True)
    assert (plain.cell(1, 2), plain.place(1, 2), plain.column(2), plain.row(1)) == (6, "C2", "column C", "row 2")
    assert (turned.cell(2, 1), turned.place(2, 1), turned.column(1), turned.row(2)) == (6, "C2", "row 2", "column C")
    assert turned.where(2, 1) == 'sheet "S", cell C2'
    assert plain.cell(2, 0) is plain.cell(0, 3) is None


def test_turning_twice_changes_nothing() -> None:
    sheet = make_sheet(
        [[1, 2, 3], [4, 5, 6]],
        hidden=True,
        formulas=frozenset({(0, 2)}),
        merged=((0, 1, 0, 2),),
        hidden_rows=frozenset({1}),
        hidden_columns=frozenset({2}),
    )
    once = turn(sheet)
    assert once.cells == ((1, 4), (2, 5), (3, 6))
    assert (once.formulas, once.merged) == (frozenset({(2, 0)}), ((1, 0, 2, 0),))
    assert (once.hidden_rows, once.hidden_columns) == (frozenset({2}), frozenset({1}))
    assert turn(once) == sheet
