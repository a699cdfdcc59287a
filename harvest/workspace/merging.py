"""Two windows on one history: what one changed is put onto what the other wrote."""

from __future__ import annotations

from harvest.record.schema import YEAR
from harvest.workspace.draft import Grid

Row = tuple[str, ...]


def merged(base: Grid, mine: Grid, theirs: Grid) -> Grid | None:
    """My changes since ``base``, made to ``theirs``; rows are told by their year.

    Rows without a year yet, as a new one is at first, are kept at the end. None where the two cannot be put
    together: a year stands twice, or the columns differ.
    """
    if theirs == base:
        return mine
    if not base.header == mine.header == theirs.header:
        return None
    tables = [_by_year(grid) for grid in (base, mine, theirs)]
    if any(table is None for table in tables):
        return None
    (old, old_loose), (my, my_loose), (their, their_loose) = (table or ({}, []) for table in tables)
    rows: dict[str, Row] = {}
    for year, row in their.items():
        before, now = old.get(year), my.get(year)
        if before is not None and now is None:
            continue
        if now is None or before == now:
            rows[year] = row
        elif before is None:
            rows[year] = now
        else:
            rows[year] = tuple(n if n != b else t for b, n, t in zip(before, now, row, strict=True))
    rows |= {year: row for year, row in my.items() if year not in their and old.get(year) != row}
    loose = [*my_loose, *(row for row in their_loose if row not in old_loose and row not in my_loose)]
    return Grid(mine.header, (*(rows[year] for year in sorted(rows)), *loose))


def _by_year(grid: Grid) -> tuple[dict[str, Row], list[Row]] | None:
    """Rows by year, and those without one; None where a year stands twice."""
    place = grid.header.index(YEAR) if YEAR in grid.header else None
    dated: dict[str, Row] = {}
    loose: list[Row] = []
    for row in grid.rows:
        year = "" if place is None else row[place]
        if not (year.isdecimal() and len(year) == 4):
            loose.append(row)
        elif year in dated:
            return None
        else:
            dated[year] = row
    return dated, loose
