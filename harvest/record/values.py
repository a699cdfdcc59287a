"""Checking one value against its row in the table of fields."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Callable
from typing import Any, Final

from harvest.record.distributions import check_distribution, plain_number
from harvest.record.model import ByYear, Level
from harvest.record.numbers import explain_number
from harvest.record.reporting import Report, nearest, show
from harvest.record.schema import INSIDE_0_1, MAX_NUMBER, MAX_TEXT, SHARE, USUAL_CV, Field, Interval


class Faulty:
    """Stands for a value that was given and cannot be used."""

    def __repr__(self) -> str:
        return "FAULTY"


FAULTY: Final = Faulty()

_YEARS = Interval(1, 200)
_OF_CAPACITY = SHARE
_MOST_NAMES = 100


def check_value(field: Field, raw: Any, where: str, report: Report) -> Any:
    """The value in the record's own types, or ``FAULTY`` with its faults in ``report``."""
    value = _CHECKS[field.sort](field, raw, where, report)
    return FAULTY if value is None else value


def find_text_fault(text: str, *, lines: bool = False) -> tuple[str, str] | None:
    """The rule and the cure, where a text cannot be kept (in a spreadsheet cell, among others).

    Parameters
    ----------
    text : str
    lines : bool
        Whether line breaks and tabs are allowed.
    """
    if len(text) > MAX_TEXT:
        return f"a text has at most {MAX_TEXT:,} characters", "Shorten the text."
    allowed = "\n\t" if lines else ""
    for character in text:
        if character in allowed:
            continue
        if unicodedata.category(character) in ("Cc", "Cs") or character in "\ufffe\uffff":
            name = f"U+{ord(character):04X}"
            if character in "\n\t":
                return "this text must be on one line without tabs", "Write it on one line."
            return "a text must not hold control characters", f"Take out the hidden character {name}."
    return None


def _check_text(field: Field, raw: Any, where: str, report: Report) -> str | None:
    if not isinstance(raw, str):
        report.error(where, show(raw), f"it must be {field.rule()}", 'Put the text in quotes: "…".')
        return None
    fault = find_text_fault(raw, lines=field.sort == "long text")
    if fault is not None:
        report.error(where, show(raw), *fault)
        return None
    if field.required and not raw.strip():
        report.error(where, show(raw), "it must not be empty", f"Write the {field.key} in quotes.")
        return None
    if field.key in ("column", "cv_column"):
        return _check_column_name(raw, where, report)
    return raw


def _check_column_name(raw: str, where: str, report: Report) -> str | None:
    if raw != raw.strip() or not (raw[:1].isalnum() or raw[:1] == "_") or len(raw) > 100:
        report.error(
            where,
            show(raw),
            "a column's name begins with a letter, digit or _, has no spaces around it, at most 100 long",
            "Rename the column here and in the history.",
        )
        return None
    return raw


def _check_file_name(field: Field, raw: Any, where: str, report: Report) -> str | None:
    name = _check_text(field, raw, where, report)
    if name is None:
        return None
    if re.search(r"[/\\:]", name) or name.startswith((".", "~")) or not name.strip():
        report.error(
            where,
            show(raw),
            "the history lies in the record's own folder: a bare name without folder, drive or dots in front",
            'Put the file beside record.toml and write its bare name, such as "history.csv".',
        )
        return None
    if not name.lower().endswith(".csv") or name != name.strip() or len(name) > 100:
        report.error(
            where,
            show(raw),
            "the history must be a .csv file",
            'Save it as CSV from the spreadsheet and write its name, such as "history.csv".',
        )
        return None
    return name


def _check_choice(field: Field, raw: Any, where: str, report: Report) -> str | None:
    if isinstance(raw, str) and raw in field.choices:
        return raw
    guess = nearest(raw, field.choices) if isinstance(raw, str) else None
    cure = f'Was "{guess}" meant?' if guess else "Write one of these, in quotes."
    report.error(where, show(raw), f"it must be {field.rule()}", cure)
    return None


def _number_cure(raw: Any, field: Field) -> str:
    if isinstance(raw, str):
        return f"{explain_number(raw)[1]} Numbers stand without quotes."
    if isinstance(raw, float) and field.sort == "whole number" and raw.is_integer():
        return "Write it without a decimal point."
    if field.sort == "proportion" and plain_number(raw) is not None and 1 < raw <= 100:
        return f"Was {raw / 100:g} meant? A proportion is not written in percent."
    return "Write a plain number in the allowed range, without quotes."


def _check_number(field: Field, raw: Any, where: str, report: Report) -> float | None:
    value = plain_number(raw)
    if value is None or value not in (field.within or Interval(-MAX_NUMBER)):
        report.error(where, show(raw), f"it must be {field.rule()}", _number_cure(raw, field))
        return None
    return value


def _check_whole(field: Field, raw: Any, where: str, report: Report) -> int | None:
    if isinstance(raw, bool) or not isinstance(raw, int) or (field.within and raw not in field.within):
        report.error(where, show(raw), f"it must be {field.rule()}", _number_cure(raw, field))
        return None
    return raw


def _check_cv(field: Field, raw: Any, where: str, report: Report) -> float | None:
    value = plain_number(raw)
    if value is None:
        report.error(where, show(raw), f"it must be {field.rule()}", _number_cure(raw, field))
        return None
    return judge_cv(value, where, report, zero=bool(field.within and 0 in field.within))


def judge_cv(value: float, where: str, report: Report, *, zero: bool = False) -> float | None:
    """A coefficient of variation that can be used, or None; warns of an unusual one.

    Parameters
    ----------
    zero : bool
        Whether 0 (no error at all) is allowed.
    """
    if value < 0 or (value == 0 and not zero):
        report.error(
            where,
            f"{value:g}",
            "a coefficient of variation must be above 0",
            "Write the coefficient of variation (standard error divided by the estimate), such as 0.15.",
        )
        return None
    if value > 2:
        report.error(
            where,
            f"{value:g}",
            "a coefficient of variation is a proportion, at most 2",
            f"Was {value / 100:g} ({value:g} percent) meant? Then write {value / 100:g}.",
        )
        return None
    if value not in USUAL_CV and value > 0:
        report.warning(
            where,
            f"{value:g}",
            f"a coefficient of variation is usually {USUAL_CV}",
            "Unusual: check that it is right. 0.15 means 15 percent.",
        )
    return value


def _check_level(field: Field, raw: Any, where: str, report: Report) -> Level | None:
    if not isinstance(raw, dict):
        value = _check_number(field, raw, where, report)
        if value is not None and value < 1:
            report.warning(
                where,
                show(raw),
                "a plain number is an abundance in the record's unit",
                f"If a fraction of carrying capacity was meant, write {{ of_capacity = {value:g} }}.",
            )
        return None if value is None else Level(value)
    value = plain_number(raw.get("of_capacity"))
    if set(raw) != {"of_capacity"} or value is None or value not in _OF_CAPACITY:
        found = show(raw["of_capacity"]) if set(raw) == {"of_capacity"} else show(raw)
        rule = f"a fraction of carrying capacity is {{ of_capacity = … }} with a number {_OF_CAPACITY}"
        report.error(where, found, rule, "Write for example { of_capacity = 0.3 }, or an abundance as a number.")
        return None
    return Level(value, of_capacity=True)


def _check_by_year(field: Field, raw: Any, where: str, report: Report) -> ByYear | None:
    if not isinstance(raw, dict) or set(raw) != {"years", "chance"}:
        report.error(where, show(raw), f"it must be {field.rule()}", "Write both years and chance, and nothing else.")
        return None
    years, chance = raw["years"], plain_number(raw["chance"])
    sound_years = isinstance(years, int) and not isinstance(years, bool) and years in _YEARS
    if not sound_years:
        rule = f"years must be a whole number {_YEARS}"
        report.error(f"{where}.years", show(years), rule, "Write for example years = 10.")
    if chance is None or chance not in INSIDE_0_1:
        rule = f"chance must be a proportion {INSIDE_0_1}"
        report.error(f"{where}.chance", show(raw["chance"]), rule, "Write for example chance = 0.8.")
        return None
    return ByYear(years, chance) if sound_years else None


def _check_names(field: Field, raw: Any, where: str, report: Report) -> tuple[str, ...] | None:
    if not isinstance(raw, list) or len(raw) > _MOST_NAMES or not all(isinstance(n, str) for n in raw):
        report.error(where, show(raw), f"it must be {field.rule()}", "Write the names in quotes, in square brackets.")
        return None
    return tuple(raw)


_CHECKS: dict[str, Callable[[Field, Any, str, Report], Any]] = {
    "text": _check_text,
    "long text": _check_text,
    "file name": _check_file_name,
    "whole number": _check_whole,
    "number": _check_number,
    "proportion": _check_number,
    "CV": _check_cv,
    "choice": _check_choice,
    "level": _check_level,
    "distribution": check_distribution,
    "years and chance": _check_by_year,
    "list of names": _check_names,
}
