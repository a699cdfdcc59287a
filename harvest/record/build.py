"""Making a :class:`Record` of checked values."""

from __future__ import annotations

from typing import Any

from harvest.record.fields import field_at, fields_of
from harvest.record.history import Table
from harvest.record.model import (
    Correlation,
    CurveChoice,
    Distribution,
    History,
    LifeHistory,
    Losses,
    Objectives,
    Record,
    RuleChoice,
    Survey,
    SurveyPlan,
    fixed,
)
from harvest.record.schema import REMOVALS
from harvest.record.tables import Values

#: Keys at the top of the file that are not attributes of a record.
_FILE_KEYS = ("format", "history")


def build_record(values: Values, table: Table) -> Record:
    """The record of values and a history that have no error; keys left out get their defaults.

    Rates, settings and texts come in the order of the table of fields, whatever their order in the file.
    """
    top = {key: value for key, value in _filled("", values[""]).items() if key not in _FILE_KEYS}
    low_abundance = values["rates"].get("low_abundance", field_at("rates.low_abundance").default)
    rule = values["rule"]
    return Record(
        **top,
        history=History(table.years or (), table.columns[REMOVALS], table.notes),
        surveys=tuple(_build_survey(survey, top["count_when"], table) for survey in values["survey"]),
        curves=tuple(_build_curve(curve) for curve in values["curve"]),
        rates=_ordered("rates", values["rates"], without=("low_abundance",)),
        low_abundance=low_abundance,
        correlations=tuple(_build_correlation(c) for c in values["correlation"]),
        life=LifeHistory(**_filled("life", values["life"])),
        objectives=Objectives(**_filled("objectives", values["objectives"])),
        losses=Losses(**_filled("losses", values["losses"])),
        rule=RuleChoice(rule["name"], _ordered("rule", rule, without=("name",))) if rule else None,
        survey_plan=SurveyPlan(**_filled("survey_plan", values["survey_plan"])),
        plan=_ordered("plan", values["plan"]),
        private=values["private"].get("fields", ()),
    )


def _filled(section: str, given: Values) -> Values:
    """Every key of a section, with the defaults of those left out."""
    filled: dict[str, Any] = {}
    for field in fields_of(section):
        default = field.default
        if field.sort == "distribution" and not isinstance(default, Distribution | None):
            default = fixed(default)
        filled[field.key] = given.get(field.key, default)
    return filled


def _ordered(section: str, given: Values, without: tuple[str, ...] = ()) -> tuple[tuple[str, Any], ...]:
    keys = (f.key for f in fields_of(section) if f.key not in without)
    return tuple((key, given[key]) for key in keys if key in given)


def _build_survey(given: Values, count_when: str, table: Table) -> Survey:
    filled = _filled("survey", given)
    values = table.columns[filled["column"]]
    stated = table.columns[filled["cv_column"]] if filled["cv_column"] else (filled["cv"],) * len(values)
    cvs = tuple(None if v is None else cv for v, cv in zip(values, stated, strict=True))
    return Survey(**{**filled, "when": filled["when"] or count_when}, values=values, cvs=cvs)


def _build_correlation(given: Values) -> Correlation:
    first, second = given["between"]
    return Correlation(first, second, given["value"])


def _build_curve(given: Values) -> CurveChoice:
    filled = _filled("curve", given)
    rates = _ordered("curve", given, without=("name", "weight"))
    return CurveChoice(filled["name"], filled["weight"], rates)
