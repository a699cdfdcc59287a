"""Years as people write them."""

from __future__ import annotations

from datetime import date, datetime

import pytest

from harvest.sheets.grid import Cell
from harvest.sheets.years import YearCell, read_year, score_years


@pytest.mark.parametrize(
    ("cell", "read"),
    [
        (None, YearCell("empty")),
        ("  ", YearCell("empty")),
        (2019, YearCell("year", 2019)),
        (2019.0, YearCell("year", 2019)),
        (" 2019 ", YearCell("year", 2019)),
        ("2019.0", YearCell("year", 2019)),
        (2019.5, YearCell("other")),
        (19, YearCell("other")),
        ("'98", YearCell("other")),
        (True, YearCell("other")),
        (datetime(2019, 1, 1), YearCell("date", 2019)),
        (date(2019, 6, 30), YearCell("date", 2019)),
        ("2019-01-01", YearCell("date", 2019)),
        ("31.12.2019", YearCell("date", 2019)),
        (datetime(1905, 7, 11), YearCell("shown as date", 2019)),
        ("2018/19", YearCell("season", 2018)),
        ("2018-2019", YearCell("season", 2018)),
        ("1999/00", YearCell("season", 1999)),
        ("Winter 2018/19", YearCell("season", 2018, "Winter")),
        ("2018/20", YearCell("other")),
        ("2019*", YearCell("text", 2019, "*")),
        ("Jahr 2019 (vorl.)", YearCell("text", 2019, "Jahr (vorl.)")),
        ("Total", YearCell("summary")),
        ("Mittelwert 2010-2019", YearCell("summary")),
        ("2010-2019", YearCell("summary")),
        ("Source: the warden", YearCell("other")),
        ("Counts of 2018 and 2019", YearCell("other")),
        (1500, YearCell("other")),
    ],
)
def test_a_cell_of_the_year_column(cell: Cell, read: YearCell) -> None:
    assert read_year(cell) == read


def test_years_that_follow_one_another_score_more() -> None:
    assert score_years((2019, 2020, 2021)) == 7
    assert score_years((2021, None, 2020)) == 4
    assert score_years((1800, 2010, 1999)) == 3
    assert score_years(("a report on the winter of 2019 in the valley",)) == 0
