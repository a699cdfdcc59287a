"""Two windows on one history: what one changed is put onto what the other wrote."""

from __future__ import annotations

from harvest.record.schema import YEAR
from harvest.workspace.draft import Grid


def merged(base: Grid, mine: Grid, theirs: Grid) -> Grid:
    """My changes since ``base``, made to ``theirs``; rows are told by their year.

    Where rows cannot be told by their year (a year is missing or stands twice), or the columns differ, mine holds as
    it is: theirs stays among the earlier versions.
    """
    if theirs == base:
        return mine
    tables = [_by_year(grid) for grid in (base, mine, theirs)]
    if any(table is None for table in tables) or not base.header == mine.header == theirs.header:
        return mine
    old, my, their = (table or {} for table in tables)
    result: dict[str, tuple[str, ...]] = {}
    for year, row in their.items():
        if year in old and year not in my:
            continue
        before, now = old.get(year), my.get(year)
        if now is None or before == now:
            result[year] = row
        elif before is None:
            result[year] = now
        else:
            result[year] = tuple(n if n != b else t for b, n, t in zip(before, now, row, strict=True))
    for year, row in my.items():
        if year not in their and old.get(year) != row:
            result[year] = row
    return Grid(mine.header, tuple(result[year] for year in sorted(result)))


def _by_year(grid: Grid) -> dict[str, tuple[str, ...]] | None:
    if YEAR not in grid.header:
        return None
    place = grid.header.index(YEAR)
    years = [row[place] for row in grid.rows]
    if len(set(years)) != len(years) or not all(year.isdecimal() and len(year) == 4 for year in years):
        return None
    return dict(zip(years, grid.rows, strict=True))
