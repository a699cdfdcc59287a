"""Taking over a manager's own sheet: nothing is repaired unless the user has said so."""

from __future__ import annotations

from decimal import Decimal

from harvest.record.reporting import Report, show
from harvest.record.schema import NOTE, REMOVALS, YEAR
from harvest.record.values import find_text_fault
from harvest.sheets import catalogue
from harvest.sheets.columns import Value, read_columns
from harvest.sheets.context import Context
from harvest.sheets.grid import Book
from harvest.sheets.numbers import holds_number, is_blank, plain_text, text_of
from harvest.sheets.parts import add_columns, drop_total
from harvest.sheets.precision import Numbers, check_cv, divide_errors, fill_cvs, read_cvs
from harvest.sheets.questions import Asking
from harvest.sheets.roles import CV, Mapping
from harvest.sheets.rows import Layout, YearRow, find_rows
from harvest.sheets.taken import Taken, TakenSurvey, name_column
from harvest.sheets.uses import Plan, SurveyPlan, make_plan, view_mapped
from harvest.sheets.yearly import Counted, Line, order_lines

#: So many words in a cell that is left out are a remark rather than a label.
_WORDS_OF_REMARK = 2


def take_over(book: Book, mapping: Mapping, answers: dict[str, str] | None = None) -> Taken:
    """The history that a sheet holds, with a question for everything that is not plainly written.

    Parameters
    ----------
    book : Book
    mapping : Mapping
        What the columns are, as :func:`~harvest.sheets.guessing.guess_mapping` guesses and the user corrects.
    answers : dict, optional
        Value of the chosen option by question id.

    Returns
    -------
    Taken
        Ready once every question is answered and no problem is left. An answer can bring up further questions.

    Raises
    ------
    SheetError
        When the mapping speaks of a sheet, row, column or role that is not there.
    """
    view = view_mapped(book, mapping)
    report = Report(book.name)
    context = Context(view, Asking(answers or {}), report)
    plan = make_plan(view, mapping, report)
    if plan is None:
        return Taken((), (), (), (), tuple(report.problems))
    _ask_about_sheet(context, plan)
    layout = Layout(plan.year, tuple(plan.roles), plan.notes)
    rows = find_rows(context, mapping.header_end, layout)
    if not rows:
        rule = "each row of the history has its year"
        cure = "Choose the column that holds the years, and the rows of the header above them."
        report.error(f'sheet "{view.sheet.name}", {view.column(plan.year)}', "no years", rule, cure)
    else:
        _check_cells(context, rows, plan)
    lines = order_lines(context, _read_lines(context, rows, plan), [survey.name for survey in plan.surveys])
    _check_notes(context, lines)
    header, table, surveys = _tabulate(context, plan, lines)
    context.asking.report_stops(view.sheet.name, report)
    return Taken(header, table, surveys, context.asking.questions(), tuple(report.problems))


def _ask_about_sheet(context: Context, plan: Plan) -> None:
    view, asking = context.view, context.asking
    name = f'sheet "{view.sheet.name}"'
    if view.sheet.hidden:
        asking.add(catalogue.HIDDEN_SHEET, name, "hidden", "used")
    if view.turned:
        asking.add(catalogue.TRANSPOSED, name, "years from left to right", "a row for each year")
    for column in sorted({plan.year, *plan.roles, *plan.notes} & view.sheet.hidden_columns):
        asking.add(catalogue.HIDDEN_COLUMNS, view.column(column), "hidden", "used")
    if not plan.removals:
        asking.add(catalogue.NO_REMOVALS, name, "no column of removals", "removals empty in every year")


def _check_cells(context: Context, rows: tuple[YearRow, ...], plan: Plan) -> None:
    """Ask about formulas and merged cells among the cells that are used."""
    view = context.view
    numbered = {row.row for row in rows}
    used = {plan.year, *plan.roles, *plan.notes}
    for row, column in sorted(view.sheet.formulas):
        if row not in numbered or column not in used:
            continue
        if is_blank(view.cell(row, column)):
            context.refuse_uncomputed(row, column)
        else:
            stored = text_of(view.cell(row, column))
            context.asking.add(catalogue.FORMULAS, view.place(row, column), "a formula", stored)
    for top, left, bottom, right in view.sheet.merged:
        covered = sum(top <= row <= bottom for row in numbered) * sum(left <= c <= right for c in plan.roles)
        if left in plan.roles and covered > 1:
            found = text_of(view.cell(top, left)) or "empty"
            context.asking.add(catalogue.MERGED_CELLS, view.place(top, left), show(found), "the first cell only")


def _read_lines(context: Context, rows: tuple[YearRow, ...], plan: Plan) -> list[Line]:
    """What each row says."""
    values = read_columns(context, rows, plan.roles, plan.with_error)
    taken = drop_total(context, {column: values[column] for column in plan.removals})
    removals = add_columns(context, rows, taken, catalogue.SUM_REMOVALS, "removals")
    surveys = [_read_survey(context, rows, plan, survey, values) for survey in plan.surveys]
    lines = []
    for index, row in enumerate(rows):
        lines.append(
            Line(
                year=row.year,
                place=context.view.place(row.row, plan.year),
                removals=removals[index] if plan.removals else None,
                counted=tuple(Counted(counts[index], cvs[index]) for counts, cvs in surveys),
                note=_read_note(context, row, plan, [column[index].remark for column in values.values()]),
            )
        )
    return lines


def _read_survey(
    context: Context, rows: tuple[YearRow, ...], plan: Plan, survey: SurveyPlan, values: dict[int, tuple[Value, ...]]
) -> tuple[Numbers, Numbers]:
    """Counts and CVs of one survey, row by row."""
    columns = {column: values[column] for column in survey.counts}
    kind = catalogue.SUM_COUNTS.about(survey.name)
    counts = add_columns(context, rows, columns, kind, f"counts of one row, {survey.name}")
    if survey.precision is None:
        first = survey.counts[0]
        found = zip(rows, values[first], strict=True)
        return counts, tuple(None if v.cv is None else check_cv(context, r.row, first, v.cv) for r, v in found)
    told = values[survey.precision]
    if survey.role == CV:
        return counts, read_cvs(context, rows, survey.precision, told, survey.precision in plan.in_percent)
    return counts, divide_errors(context, rows, survey.precision, told, counts)


def _read_note(context: Context, row: YearRow, plan: Plan, remarks: list[str]) -> str:
    """The notes of a row, and the remarks that stood beside its year and its numbers."""
    parts = []
    for column, cell in enumerate(context.view.sheet.cells[row.row]):
        if column not in plan.notes and not _is_kept_remark(context, row, column, plan):
            continue
        text = text_of(cell)
        fault = find_text_fault(text, lines=True)
        if fault is not None:
            context.refuse(row.row, column, show(text), *fault)
        else:
            parts.append(text)
    return "; ".join(part for part in (*parts, row.remark, *remarks) if part)


def _check_notes(context: Context, lines: tuple[Line, ...]) -> None:
    """Report notes that a record cannot keep once they are put together."""
    for line in lines:
        fault = find_text_fault(line.note, lines=True)
        if fault is not None:
            where = f'sheet "{context.view.sheet.name}", cell {line.place}'
            context.report.error(where, f"the note {show(line.note)} of {line.year}", *fault)


def _is_kept_remark(context: Context, row: YearRow, column: int, plan: Plan) -> bool:
    """Whether a cell of a column that is left out holds a remark that the user wants in the note."""
    cell = context.view.cell(row.row, column)
    if column in (plan.year, *plan.roles) or not isinstance(cell, str) or len(cell.split()) < _WORDS_OF_REMARK:
        return False
    if holds_number(cell):
        return False
    kept = context.asking.choice(catalogue.NOTES_LOST) == "note"
    place = context.view.place(row.row, column)
    context.asking.add(catalogue.NOTES_LOST, place, text_of(cell), "into the note" if kept else "left out")
    return kept


def _tabulate(
    context: Context, plan: Plan, lines: tuple[Line, ...]
) -> tuple[tuple[str, ...], tuple[tuple[str, ...], ...], tuple[TakenSurvey, ...]]:
    """Header, rows and surveys of the history."""
    years = [line.year for line in lines]
    header = [YEAR, REMOVALS]
    columns: list[list[str]] = [[str(year) for year in years], [_text(line.removals) for line in lines]]
    surveys = []
    for number, survey in enumerate(plan.surveys):
        counts = tuple(line.counted[number].count for line in lines)
        cvs = fill_cvs(context, survey.name, years, counts, tuple(line.counted[number].cv for line in lines))
        column = name_column(survey.name, header)
        header.append(column)
        columns.append([_text(count) for count in counts])
        cv_column = None if cvs is None else name_column(f"{column}_cv", header)
        if cvs is not None and cv_column is not None:
            header.append(cv_column)
            columns.append([_text(cv) for cv in cvs])
        surveys.append(TakenSurvey(survey.name, column, cv_column))
    if plan.notes or any(line.note for line in lines):
        header.append(NOTE)
        columns.append([line.note for line in lines])
    return tuple(header), tuple(zip(*columns, strict=True)), tuple(surveys)


def _text(number: Decimal | None) -> str:
    return "" if number is None else plain_text(number)
