"""Checking the history against ``record.toml``: counts with their CVs, the quota year, what is missing."""

from __future__ import annotations

from typing import Any

from harvest.record.counts import latest_absolute_count, years_without_removals
from harvest.record.history import Table
from harvest.record.model import Record
from harvest.record.reporting import Report
from harvest.record.schema import REMOVALS
from harvest.record.tables import Values, get

_LATEST_START = 6


def check_counts(values: Values, table: Table, report: Report) -> None:
    """Each count has a CV, and each count of zero a detection limit."""
    by_cv_column: dict[str, list[str]] = {}
    for survey in values["survey"]:
        column, cv_column = get(survey, "column"), get(survey, "cv_column")
        if column not in table.columns:
            continue
        if "detection_limit" not in survey:
            _check_zeros(table, column, report)
        if cv_column in table.columns:
            by_cv_column.setdefault(cv_column, []).append(column)
    for cv_column, columns in by_cv_column.items():
        _check_cvs(table, cv_column, columns, report)


def _check_zeros(table: Table, column: str, report: Report) -> None:
    for index, count in enumerate(table.columns[column]):
        if count == 0:
            report.error(
                table.where(index, column),
                "0",
                "a count of zero needs a detection limit",
                "Add detection_limit = … to the [[survey]]: the abundance below which it would see none. "
                "Leave the cell empty if there was no count.",
            )


def _check_cvs(table: Table, cv_column: str, columns: list[str], report: Report) -> None:
    """The CVs of one column, which several surveys may share."""
    for index, cv in enumerate(table.columns[cv_column]):
        counted = any(table.columns[column][index] is not None for column in columns)
        if counted and cv is None:
            report.error(
                table.where(index, cv_column),
                "nothing",
                "each count needs its coefficient of variation",
                "Write it, such as 0.15; where it is not known (or the count is zero), that of a like survey.",
            )
        elif cv is not None and not counted:
            report.warning(
                table.where(index, cv_column),
                f"{cv:g}",
                "a coefficient of variation without a count is not used",
                "Write the count, or empty this cell.",
            )


def check_quota_year(values: Values, table: Table, report_toml: Report) -> None:
    """The first quota year follows the recorded removals, and not by too much."""
    first = get(values[""], "first_quota_year")
    if first is None or table.years is None or REMOVALS not in table.columns:
        return
    taken = [y for y, h in zip(table.years, table.columns[REMOVALS], strict=True) if h is not None]
    earliest = max([table.years[0], *(y + 1 for y in taken[-1:]), *_list_count_years(values, table)])
    latest = table.years[-1] + _LATEST_START
    if not earliest <= first <= latest:
        report_toml.error(
            "first_quota_year",
            str(first),
            f"it must be from {earliest} (after the recorded removals and counts) to {latest}",
            "Correct it, or take it out: it then follows from the history and the lag.",
        )


def _list_count_years(values: Values, table: Table) -> list[int]:
    """For each absolute survey, the first quota year that its latest count can serve."""
    found = []
    for survey in values["survey"]:
        counts = table.columns.get(get(survey, "column") or "", ())
        years = [y for y, count in zip(table.years or (), counts, strict=False) if count is not None]
        if years and get(survey, "kind") == "absolute":
            found.append(years[-1] + (moment(survey, values[""]) == "after"))
    return found


def warn_of_history(values: Values, table: Table, report: Report) -> None:
    """Warnings that need the whole history."""
    years, removals = table.years, table.columns.get(REMOVALS)
    if years is None or removals is None:
        return
    if len(years) < 3:
        cure = "Rates will rest on the stated ranges; add earlier years where they are known."
        report.warning("", f"{len(years)} year(s)", "a history of 3 years or more says something about trends", cure)
    if any(h is not None for h in removals) and not any(removals):
        cure = "If removals are not known, leave the cells empty; 0 says that nothing was taken."
        report.warning(f"column {REMOVALS}", "0 in every year", "removals are usually above 0", cure)
    if get(values[""], "unit") == "animals":
        absolute = [get(s, "column") for s in values["survey"] if get(s, "kind") == "absolute"]
        for column in (REMOVALS, *(c for c in absolute if c)):
            _warn_of_marks(column, table, report)
    for survey in values["survey"]:
        counts = table.columns.get(get(survey, "column") or "")
        if counts is not None:
            _warn_of_survey(values, survey, counts, table, report)


def _warn_of_marks(column: str, table: Table, report: Report) -> None:
    """Warn of a thousands mark written as a point: 1.2 among numbers of animals in the hundreds."""
    numbers = table.columns.get(column, ())
    most = max((n for n in numbers if n is not None), default=0.0)
    for index, number in enumerate(numbers):
        if number is not None and not float(number).is_integer() and number < most / 50.0:
            report.warning(
                table.where(index, column),
                f"{number:.15g}, beside numbers up to {most:.15g}",
                "animals are counted in whole numbers of one size",
                f"If {number * 1000:.15g} was meant, write it without a thousands mark.",
            )


def _warn_of_survey(
    values: Values, survey: Values, counts: tuple[float | None, ...], table: Table, report: Report
) -> None:
    column = survey["column"]
    if not any(c is not None for c in counts):
        report.warning(f"column {column}", "no count in any year", "a survey has counts", "Add them, or take it out.")
    if get(survey, "kind") != "absolute" or moment(survey, values[""]) == "after":
        return
    for index, (count, taken) in enumerate(zip(counts, table.columns[REMOVALS], strict=True)):
        if count and taken is not None and taken > count:
            report.warning(
                table.where(index, REMOVALS),
                f"{taken:.15g}, with {column} = {count:.15g}",
                "removals are usually below the count of the same year",
                "Check both; counts are uncertain, so this can be right.",
            )


def moment(survey: Values, top: Values) -> Any:
    """When a survey happens: its own ``when``, else the record's ``count_when``."""
    return get(survey, "when") if "when" in survey else get(top, "count_when")


def _removals_cure(record: Record, missing: list[int]) -> str:
    """What to do about missing removals; a row added at the end must not move the quota year on."""
    cure = "Write the removals of these years (an estimate, where nothing else is known)"
    if missing[-1] > record.history.years[-1]:
        cure += f", in rows of their own, and state first_quota_year = {record.quota_year}"
    return cure + "."


def warn_of_abundance(record: Record, report_toml: Report, report_history: Report) -> None:
    """Warn where this year's abundance cannot be had: no usable absolute count, or removals missing since."""
    latest = latest_absolute_count(record)
    if latest is None:
        report_toml.warning(
            "survey",
            "no absolute count before the quota year",
            "this year's abundance comes from an absolute count above 0",
            "Add one, or no quota can be worked out.",
        )
        return
    year, missing = record.history.years[latest.row], years_without_removals(record)
    if missing:
        report_history.warning(
            f"column {REMOVALS}",
            f"nothing for {', '.join(map(str, missing))}",
            f"removals from the latest absolute count ({year}) to the quota year ({record.quota_year}) must be "
            "known before a quota can be worked out",
            _removals_cure(record, missing),
        )
