"""The absolute counts of a record: which one stands for a year, and which one abundance starts from."""

from __future__ import annotations

from dataclasses import dataclass

from harvest.record.model import Record, Survey


@dataclass(frozen=True)
class AbsoluteCount:
    """An absolute count with its survey, its place in the history and its CV; zero is "below the detection limit"."""

    survey: Survey
    row: int
    count: float
    cv: float


def absolute_counts(record: Record) -> dict[int, AbsoluteCount]:
    """Absolute counts with a CV, by year: of several in one year one above zero, then the one with the smallest CV."""
    found: dict[int, AbsoluteCount] = {}
    for survey in record.surveys:
        if survey.kind == "absolute":
            for row, (value, cv) in enumerate(zip(survey.values, survey.cvs, strict=True)):
                if value is not None and cv is not None:
                    mine, year = AbsoluteCount(survey, row, value, cv), record.history.years[row]
                    rival = found.get(year)
                    if rival is None or (mine.count <= 0.0, cv) < (rival.count <= 0.0, rival.cv):
                        found[year] = mine
    return found


def latest_absolute_count(record: Record) -> AbsoluteCount | None:
    """The latest of :func:`absolute_counts` above zero that is known when the first quota is set, or None.

    A count before the season (or at the year's start) serves the quota of its own year at the earliest, one
    after the season that of the next year.
    """
    usable = [
        (year, count)
        for year, count in absolute_counts(record).items()
        if count.count > 0.0 and year + (count.survey.when == "after") <= record.quota_year
    ]
    return max(usable, key=lambda pair: pair[0])[1] if usable else None


def years_without_removals(record: Record) -> list[int]:
    """Years from the latest usable absolute count to the first quota whose removals are not on record."""
    latest = latest_absolute_count(record)
    if latest is None:
        return []
    year = record.history.years[latest.row]
    first = year + 1 if latest.survey.when == "after" else year
    taken = dict(zip(record.history.years, record.history.removals, strict=True))
    return [y for y in range(first, record.quota_year) if taken.get(y) is None]


def supports_quota(record: Record) -> bool:
    """Whether this year's abundance can be worked out: an absolute count, and removals on record since."""
    return latest_absolute_count(record) is not None and not years_without_removals(record)
