"""What a mapping asks for, checked: the year's column, removals, surveys with what tells their precision, notes."""

from __future__ import annotations

import re
from dataclasses import dataclass

from harvest.record.reporting import Report, listed, show
from harvest.sheets.grid import Book, SheetError
from harvest.sheets.header import column_names
from harvest.sheets.roles import COUNT, CV, ERROR, NOTE, NUMERIC, REMOVALS, ROLES, YEAR, ColumnUse, Mapping
from harvest.sheets.view import View, view_of

_LONGEST_NAME = 100
_PERCENT = re.compile("%|per ?cent|prozent|pour ?cent|por ?ciento", re.IGNORECASE)


@dataclass(frozen=True)
class SurveyPlan:
    """A survey: its columns of counts, and the column of its CVs or standard errors with its role."""

    name: str
    counts: tuple[int, ...]
    precision: int | None = None
    role: str = ""


@dataclass(frozen=True)
class Plan:
    """The columns by what they are for, and those whose header speaks of percent."""

    year: int
    removals: tuple[int, ...]
    surveys: tuple[SurveyPlan, ...]
    notes: tuple[int, ...]
    roles: dict[int, str]
    in_percent: frozenset[int] = frozenset()

    @property
    def with_error(self) -> frozenset[int]:
        """The columns of counts whose ± is wanted as a CV: nothing else tells the survey's precision."""
        return frozenset(s.counts[0] for s in self.surveys if s.precision is None and len(s.counts) == 1)


def view_mapped(book: Book, mapping: Mapping) -> View:
    """The sheet that a mapping speaks of.

    Raises
    ------
    SheetError
        When the mapping speaks of a sheet, row, column or role that is not there.
    """
    if not 0 <= mapping.sheet < len(book.sheets):
        raise SheetError(f'"{book.name}" has {len(book.sheets)} sheet(s); choose one of them.')
    view = view_of(book.sheets[mapping.sheet], mapping.transposed)
    rows, columns = view.sheet.size
    if not 0 <= mapping.header_first <= mapping.header_end <= rows:
        raise SheetError(
            f'The header of sheet "{view.sheet.name}" cannot be rows {mapping.header_first + 1} to '
            f"{mapping.header_end} of {rows}; choose rows that are there, the first one first."
        )
    for use in mapping.columns:
        if not 0 <= use.column < columns:
            raise SheetError(f'Sheet "{view.sheet.name}" has {columns} columns; choose among them.')
        if use.role not in ROLES:
            raise SheetError(f"A column cannot be {show(use.role)}; choose one of {listed(ROLES)}.")
    if len({use.column for use in mapping.columns}) < len(mapping.columns):
        raise SheetError("A column has two uses; choose one for each column.")
    return view


def make_plan(view: View, mapping: Mapping, report: Report) -> Plan | None:
    """The columns by what they are for, or None with the problems where they do not fit together."""
    uses = sorted(mapping.columns, key=lambda use: use.column)
    years = [use.column for use in uses if use.role == YEAR]
    where = f'sheet "{view.sheet.name}"'
    if not years:
        rule = "one column holds the years, one row for each year"
        cure = "Choose the column of years; a text without a table of years cannot be taken over: choose another file."
        report.error(where, "no column of years", rule, cure)
    elif len(years) > 1:
        found = f"years in {listed(view.column(c) for c in years)}"
        report.error(where, found, "only one column holds the years", "Leave the others out.")
    names = column_names(view.sheet, mapping.header_first, mapping.header_end)
    surveys = _plan_surveys(view, uses, names, report)
    if report.faulty:
        return None
    return Plan(
        year=years[0],
        removals=tuple(use.column for use in uses if use.role == REMOVALS),
        surveys=surveys,
        notes=tuple(use.column for use in uses if use.role == NOTE),
        roles={use.column: use.role for use in uses if use.role in NUMERIC},
        in_percent=frozenset(c for c, name in enumerate(names) if _PERCENT.search(name)),
    )


def _plan_surveys(view: View, uses: list[ColumnUse], names: tuple[str, ...], report: Report) -> tuple[SurveyPlan, ...]:
    counts: dict[str, list[int]] = {}
    for use in uses:
        if use.role == COUNT:
            counts.setdefault(_clean(use.survey) or _clean(names[use.column]), []).append(use.column)
    precision: dict[str, ColumnUse] = {}
    for use in uses:
        if use.role in (CV, ERROR):
            name = _clean(use.survey) or (next(iter(counts)) if len(counts) == 1 else "")
            where = f'sheet "{view.sheet.name}", {view.column(use.column)}'
            if name not in counts:
                known = f"the surveys are {listed(counts)}" if counts else "there is no column of counts"
                cure = "Choose the survey that it belongs to, or leave the column out."
                report.error(where, f"a column of {use.role} without its survey", known, cure)
            elif name in precision:
                other = view.column(precision[name].column)
                cure = "Leave one of the two columns out."
                report.error(where, f"a second column beside {other}", "one column tells a survey's precision", cure)
            else:
                precision[name] = use
    return tuple(_plan_survey(name, columns, precision.get(name)) for name, columns in counts.items())


def _plan_survey(name: str, columns: list[int], use: ColumnUse | None) -> SurveyPlan:
    return SurveyPlan(name, tuple(columns)) if use is None else SurveyPlan(name, tuple(columns), use.column, use.role)


def _clean(name: str) -> str:
    """A survey's name on one line, without hidden characters."""
    return " ".join("".join(c if c.isprintable() else " " for c in name).split())[:_LONGEST_NAME].strip()
