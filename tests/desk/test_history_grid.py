"""The editor's changes, as Streamlit tells them, made to the table that it was given."""

from __future__ import annotations

from typing import Any

import pandas as pd
import pytest

from harvest.desk.history_grid import _frame, edited
from harvest.workspace import Grid

HEADER = ("year", "removals", "count", "note")
BASE = Grid(HEADER, (("2020", "5", "", "wet"), ("2021", "6", "100", ""), ("2022", "0,5", "110.5", "'=1")))


@pytest.mark.parametrize(
    ("state", "rows"),
    [
        ({}, BASE.rows),
        (
            {"edited_rows": {0: {"removals": 7, "count": 12.5}, "2": {"removals": 0}}},
            (("2020", "7", "12.5", "wet"), BASE.rows[1], ("2022", "0", "110.5", "'=1")),
        ),
        ({"edited_rows": {1: {"count": None}}}, (BASE.rows[0], ("2021", "6", "", ""), BASE.rows[2])),
        ({"deleted_rows": [0, 2]}, (BASE.rows[1],)),
        (
            {"added_rows": [{"year": 2023, "note": "=SUM(A1)"}, {}, {"_index": 5}]},
            (*BASE.rows, ("2023", "", "", "'=SUM(A1)")),
        ),
        (
            {
                "edited_rows": {0: {"note": "lost"}, 1: {"note": "kept"}},
                "deleted_rows": [0],
                "added_rows": [{"year": 2023, "count": 0}],
            },
            (("2021", "6", "100", "kept"), BASE.rows[2], ("2023", "", "0", "")),
        ),
        ({"edited_rows": {0: {"removals": "1,200", "unknown": "x"}}}, (("2020", "1,200", "", "wet"), *BASE.rows[1:])),
        ({"edited_rows": {0: {"note": '<b>, \n"x"'}}}, (("2020", "5", "", '<b>, \n"x"'), *BASE.rows[1:])),
    ],
)
def test_changes_are_made(state: dict[str, Any], rows: tuple[tuple[str, ...], ...]) -> None:
    assert edited(BASE, state) == Grid(HEADER, rows)


def test_the_baseline_stays_as_it_is() -> None:
    before = Grid(BASE.header, BASE.rows)
    edited(BASE, {"edited_rows": {0: {"removals": 7}}, "deleted_rows": [1]})
    assert before == BASE


def test_columns_of_numbers_are_numbers_and_others_stay_as_typed() -> None:
    frame = _frame(BASE)
    assert [str(kind) for kind in frame.dtypes] == ["Int64", "object", "Float64", "object"]
    assert frame["year"].tolist() == [2020, 2021, 2022]
    assert frame["removals"].tolist() == ["5", "6", "0,5"]
    assert frame["count"].isna().tolist() == [True, False, False]
    assert frame["note"].tolist() == ["wet", "", "=1"]


def test_a_history_without_rows_has_its_columns() -> None:
    frame = _frame(Grid(HEADER, ()))
    assert list(frame) == list(HEADER)
    assert frame.shape == (0, 4)
    assert pd.api.types.is_numeric_dtype(frame["year"])
