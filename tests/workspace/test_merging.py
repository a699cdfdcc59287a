"""What two windows changed in one history is kept side by side."""

from __future__ import annotations

import pytest

from harvest.workspace import Grid
from harvest.workspace.merging import merged

HEADER = ("year", "removals", "note")


def grid(*rows: str, header: tuple[str, ...] = HEADER) -> Grid:
    return Grid(header, tuple(tuple(row.split(",")) for row in rows))


BASE = grid("2020,5,", "2021,6,wet", "2022,7,")


@pytest.mark.parametrize(
    ("mine", "theirs", "result"),
    [
        (grid("2020,9,", "2021,6,wet", "2022,7,"), BASE, grid("2020,9,", "2021,6,wet", "2022,7,")),
        (BASE, grid("2020,9,", "2021,6,wet", "2022,7,"), grid("2020,9,", "2021,6,wet", "2022,7,")),
        # one row, different cells
        (
            grid("2020,5,", "2021,8,wet", "2022,7,"),
            grid("2020,5,", "2021,6,dry", "2022,7,"),
            grid("2020,5,", "2021,8,dry", "2022,7,"),
        ),
        # one cell: mine, the last to be written
        (
            grid("2020,1,", "2021,6,wet", "2022,7,"),
            grid("2020,2,", "2021,6,wet", "2022,7,"),
            grid("2020,1,", "2021,6,wet", "2022,7,"),
        ),
        # both add a year
        (
            grid("2020,5,", "2021,6,wet", "2022,7,", "2023,8,"),
            grid("2019,4,", "2020,5,", "2021,6,wet", "2022,7,"),
            grid("2019,4,", "2020,5,", "2021,6,wet", "2022,7,", "2023,8,"),
        ),
        # both add the same year: mine
        (grid("2023,8,mine"), grid("2020,5,", "2021,6,wet", "2022,7,", "2023,9,theirs"), grid("2023,8,mine")),
        # I take one out, they change another
        (
            grid("2020,5,", "2022,7,"),
            grid("2020,5,", "2021,6,wet", "2022,1,"),
            grid("2020,5,", "2022,1,"),
        ),
        # they take out what I changed: my change is kept; what I left alone goes
        (grid("2020,5,", "2021,6,wet", "2022,99,"), grid("2020,5,"), grid("2020,5,", "2022,99,")),
        # a cell emptied on purpose stays empty
        (grid("2020,,", "2021,6,wet", "2022,7,"), grid("2020,5,x", "2021,6,wet", "2022,7,"), None),
    ],
)
def test_changes_are_put_together(mine: Grid, theirs: Grid, result: Grid | None) -> None:
    expected = grid("2020,,x", "2021,6,wet", "2022,7,") if result is None else result
    assert merged(BASE, mine, theirs) == expected


@pytest.mark.parametrize(
    ("mine", "result"),
    [
        # a new year is a row without one at first
        (
            grid("2020,5,", "2021,6,wet", "2022,7,", ",,note"),
            grid("2020,50,", "2021,60,wet", "2022,70,", ",,note"),
        ),
        # a year that was cleared, or half typed, keeps its row
        (grid(",5,", "2021,6,wet", "2022,7,"), grid("2021,60,wet", "2022,70,", ",5,")),
        (grid("20,5,", "2021,6,wet", "2022,7,"), grid("2021,60,wet", "2022,70,", "20,5,")),
    ],
)
def test_rows_without_a_year_are_kept_beside_theirs(mine: Grid, result: Grid) -> None:
    assert merged(BASE, mine, grid("2020,50,", "2021,60,wet", "2022,70,")) == result


@pytest.mark.parametrize(
    "mine",
    [
        grid("2020,5,", "2020,6,wet", "2022,7,"),
        grid("2020,5", header=("year", "removals")),
        grid("5,", header=("removals", "note")),
    ],
)
def test_what_cannot_be_put_together_is_told(mine: Grid) -> None:
    theirs = grid("2020,50,", "2021,60,wet", "2022,70,")
    assert merged(BASE, mine, theirs) is None
    assert merged(BASE, theirs, mine) is None
