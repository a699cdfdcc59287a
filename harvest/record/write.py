"""Writing a record as the text of its two files, without loss."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable, Mapping
from dataclasses import replace
from typing import Any

import tomli_w

from harvest.errors import Problem, RecordError
from harvest.record.check import check_texts
from harvest.record.fields import SECTIONS, fields_of
from harvest.record.history import guard_note
from harvest.record.model import FORMAT, ByYear, Distribution, Level, Record, Survey
from harvest.record.schema import HISTORY_FILE, NOTE, RECORD_FILE, REMOVALS, YEAR

_HEAD = "# A record of Harvest. Change it in any text editor, or in the program; comments are lost when the program\n"
_HEAD += "# saves it. Every key is explained in the template of a new record.\n"
#: Whole numbers up to here are written without a decimal point.
_LARGEST_WHOLE = 1e15


def record_to_files(record: Record, history: str = HISTORY_FILE) -> tuple[str, str]:
    """The text of ``record.toml`` and of the history.

    Parameters
    ----------
    record : Record
    history : str
        File name of the history, for the key that names it.

    Returns
    -------
    record_text, history_text : str
        Reading them gives the record back, with rates, settings and plan texts in the order of the table of
        fields.

    Raises
    ------
    RecordError
        When the record would not be read back as it is: it breaks a rule of the format.
    """
    _check_lengths(record)
    texts = _render_record(record, history), _render_history(record)
    found, problems = check_texts(*texts)
    if found is None:
        raise RecordError(problems)
    if found != in_order(record):
        _refuse("a record that the files cannot hold", "Check the CVs against their columns and the names of rates.")
    return texts


def in_order(record: Record) -> Record:
    """The same record with rates, settings and plan texts in the order of the table of fields."""
    curves = tuple(replace(c, rates=_sorted("curve", c.rates)) for c in record.curves)
    rule = record.rule and replace(record.rule, settings=_sorted("rule", record.rule.settings))
    return replace(
        record,
        curves=curves,
        rule=rule,
        rates=_sorted("rates", record.rates),
        plan=_sorted("plan", record.plan),
    )


def _sorted(section: str, pairs: tuple[tuple[str, Any], ...]) -> tuple[tuple[str, Any], ...]:
    order = {field.key: place for place, field in enumerate(fields_of(section))}
    return tuple(sorted(pairs, key=lambda pair: order.get(pair[0], len(order))))


def _check_lengths(record: Record) -> None:
    years = len(record.history.years)
    rows = [record.history.removals, *(c for s in record.surveys for c in (s.values, s.cvs))]
    notes = len(record.history.notes)
    if any(len(row) != years for row in rows) or notes not in (0, years):
        _refuse("columns of different length", "Give removals, counts, CVs and notes one value for each year.")


def _refuse(found: str, cure: str) -> None:
    raise RecordError([Problem("error", RECORD_FILE, "", found, "a record must survive being saved", cure)])


def _render_record(record: Record, history: str) -> str:
    tables = _list_tables(record, history)
    parts = [_HEAD]
    for section in SECTIONS:
        for table in tables[section.name]:
            known = [field.key for field in fields_of(section.name)]
            pairs = [(key, table[key]) for key in known if table.get(key) is not None]
            if pairs or section.many:
                lines = [section.header] if section.name else []
                parts.append("\n".join([*lines, *(render_pair(key, make_plain(v)) for key, v in pairs)]) + "\n")
    return "\n".join(parts)


def _list_tables(record: Record, history: str) -> dict[str, list[Mapping[str, Any]]]:
    """Per section its tables, each a mapping of key to value in the record's types."""
    rule = record.rule
    return {
        "": [{**vars(record), "format": FORMAT, "history": history}],
        "survey": [vars(survey) for survey in record.surveys],
        "curve": [{**vars(curve), **dict(curve.rates)} for curve in record.curves],
        "rates": [{**dict(record.rates), "low_abundance": record.low_abundance}],
        "correlation": [{"between": (c.first, c.second), "value": c.value} for c in record.correlations],
        "life": [vars(record.life)],
        "objectives": [vars(record.objectives)],
        "losses": [vars(record.losses)],
        "rule": [{**dict(rule.settings), "name": rule.name}] if rule else [],
        "survey_plan": [vars(record.survey_plan)],
        "plan": [dict(record.plan)],
        "private": [{"fields": record.private}] if record.private else [],
    }


def make_plain(value: Any) -> Any:
    """A value of a record as TOML holds it."""
    if isinstance(value, Distribution):
        parameters = {name: make_plain(number) for name, number in value.parameters}
        return parameters["value"] if value.kind == "fixed" else {"distribution": value.kind, **parameters}
    if isinstance(value, Level):
        number = make_plain(value.value)
        return {"of_capacity": number} if value.of_capacity else number
    if isinstance(value, ByYear):
        return {"years": value.years, "chance": make_plain(value.chance)}
    if isinstance(value, tuple):
        return list(value)
    if isinstance(value, float) and value.is_integer() and abs(value) <= _LARGEST_WHOLE:
        return int(value)
    return value


def render_key(key: str) -> str:
    """A key as TOML writes it: bare, or in quotes."""
    return tomli_w.dumps({key: 0}).removesuffix(" = 0\n")


def render_pair(key: str, value: Any) -> str:
    """One line "key = value" of TOML; a table goes inside the line."""
    return f"{render_key(key)} = {_render_value(value)}"


def _render_value(value: Any) -> str:
    if isinstance(value, Mapping):
        return f"{{ {', '.join(render_pair(k, v) for k, v in value.items())} }}"
    if isinstance(value, list):
        return f"[{', '.join(map(_render_value, value))}]"
    return tomli_w.dumps({"x": value}).removeprefix("x = ").removesuffix("\n")


def _render_history(record: Record) -> str:
    columns: dict[str, Iterable[float | None]] = {REMOVALS: record.history.removals}
    for survey in record.surveys:
        columns[survey.column] = survey.values
        if survey.cv_column is not None:
            columns[survey.cv_column] = _join_cvs(record.surveys, survey.cv_column)
    rows = zip(record.history.years, *columns.values(), strict=True)
    notes = [[guard_note(note)] for note in record.history.notes]
    stream = io.StringIO(newline="")
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerow([YEAR, *columns, *([NOTE] if notes else [])])
    for index, (year, *numbers) in enumerate(rows):
        writer.writerow([year, *map(_render_cell, numbers), *(notes[index] if notes else [])])
    return stream.getvalue()


def _join_cvs(surveys: Iterable[Survey], column: str) -> list[float | None]:
    """The CVs of a column, which several surveys may share."""
    shared = [survey.cvs for survey in surveys if survey.cv_column == column]
    return [next((cv for cv in cvs if cv is not None), None) for cvs in zip(*shared, strict=True)]


def _render_cell(number: float | None) -> str:
    return "" if number is None else repr(make_plain(number))
