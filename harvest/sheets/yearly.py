"""One line a year: rows of the same year put together, years sorted, missing years added."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from itertools import groupby, pairwise

from harvest.sheets import catalogue
from harvest.sheets.context import Context
from harvest.sheets.numbers import plain_text, round_cv
from harvest.sheets.parts import add_parts
from harvest.sheets.questions import Kind


@dataclass(frozen=True)
class Counted:
    """A survey's count and its CV; None for what is not known."""

    count: Decimal | None = None
    cv: Decimal | None = None


@dataclass(frozen=True)
class Line:
    """What one row, or one year, says; ``place`` is where its year stands in the file."""

    year: int
    place: str
    removals: Decimal | None
    counted: tuple[Counted, ...]
    note: str = ""


def order_lines(context: Context, lines: Sequence[Line], surveys: Sequence[str]) -> tuple[Line, ...]:
    """One line for each year from the first to the last; every change is asked about."""
    for before, line in pairwise(lines):
        if line.year < before.year:
            context.asking.add(catalogue.ORDER, line.place, f"{line.year} after {before.year}", "sorted")
    ordered = sorted(lines, key=lambda line: line.year)
    grouped = [list(group) for _, group in groupby(ordered, key=lambda line: line.year)]
    return _fill_gaps(context, _merge_years(context, grouped, surveys), len(surveys))


def _fill_gaps(context: Context, lines: list[Line], surveys: int) -> tuple[Line, ...]:
    filled = lines[:1]
    for line in lines[1:]:
        before = filled[-1].year
        missing = range(before + 1, line.year)
        if missing:
            named = f"{missing[0]}" if len(missing) == 1 else f"{missing[0]} to {missing[-1]}"
            found = f"{line.year} after {before}"
            context.asking.add(catalogue.GAPS, line.place, found, f"{named} added, empty")
        filled += [Line(year, line.place, None, (Counted(),) * surveys) for year in missing]
        filled.append(line)
    return tuple(filled)


def _merge_years(context: Context, grouped: list[list[Line]], surveys: Sequence[str]) -> list[Line]:
    repeated = [group for group in grouped if len(group) > 1]
    removals = catalogue.DUPLICATE_REMOVALS
    if all(_say_the_same([line.removals for line in group]) for group in repeated):
        removals = removals.offering(catalogue.REPEATED)
    counts = []
    for number, survey in enumerate(surveys):
        kind = catalogue.DUPLICATE_COUNTS.about(survey)
        if all(
            _say_the_same([line.counted[number] for line in group if line.counted[number].count is not None])
            for group in repeated
        ):
            kind = kind.offering(catalogue.REPEATED).preferring(catalogue.REPEATED[0])
        counts.append(kind)
    return [_merge(context, group, removals, counts, surveys) if len(group) > 1 else group[0] for group in grouped]


def _say_the_same(found: Sequence[Decimal | Counted | None]) -> bool:
    return len({value for value in found if value is not None}) <= 1


def _merge(context: Context, group: list[Line], removals: Kind, counts: list[Kind], surveys: Sequence[str]) -> Line:
    """The lines of one year as one."""
    year = f"year {group[0].year}"
    taken = _merge_removals(context, group, removals)
    counted = tuple(
        _merge_counts(context, year, [line.counted[number] for line in group], kind, surveys[number])
        for number, kind in enumerate(counts)
    )
    notes = dict.fromkeys(line.note for line in group if line.note)
    return replace(group[0], removals=taken, counted=counted, note="; ".join(notes))


def _merge_removals(context: Context, group: list[Line], kind: Kind) -> Decimal | None:
    parts = [line.removals for line in group]
    if context.asking.choice(kind) == "once":
        total = next((part for part in parts if part is not None), None)
    else:
        total = add_parts(context, parts, f"year {group[0].year}", "removals of one year")
    becomes = "removals empty" if total is None else f"removals {plain_text(total)}"
    context.asking.add(kind, f"year {group[0].year}", f"{len(group)} rows", becomes)
    return total


def _merge_counts(context: Context, year: str, parts: list[Counted], kind: Kind, survey: str) -> Counted:
    known = [part for part in parts if part.count is not None]
    if not known:
        return Counted()
    choice = context.asking.choice(kind)
    if choice == "once":
        merged = known[0]
    elif choice == "sum":
        total = add_parts(context, [part.count for part in parts], year, f"counts of one year, {survey}")
        merged = Counted(total, _combine_cvs(known) if total is not None else None)
    else:
        merged = Counted()
    becomes = "empty" if merged.count is None else plain_text(merged.count)
    context.asking.add(kind, year, " and ".join(plain_text(part.count or Decimal(0)) for part in known), becomes)
    return merged


def _combine_cvs(parts: list[Counted]) -> Decimal | None:
    """The CV of a sum of independent counts: the root of the summed squares of CV · count, over the sum."""
    if any(part.cv is None for part in parts):
        return None
    total = sum((part.count or Decimal(0) for part in parts), Decimal(0))
    squares = sum((((part.cv or Decimal(0)) * (part.count or Decimal(0))) ** 2 for part in parts), Decimal(0))
    return round_cv(squares.sqrt() / total, squares.sqrt()) if total else None
