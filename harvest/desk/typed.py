"""From what is typed into a form to the value that ``record.toml`` holds, and back; and problems in a form's words."""

from __future__ import annotations

import re
from dataclasses import replace
from typing import Any

from harvest.errors import Problem
from harvest.record.numbers import explain_number, parse_number
from harvest.record.schema import MAX_NUMBER, MAX_TEXT, Field, Interval
from harvest.sheets.record_workbook_words import without_toml

_WHOLE = re.compile("[+-]?[0-9]{1,15}")
#: What a problem says about quotes and brackets makes no sense in a form.
_FILE_WORDS = (
    (", without quotes", ""),
    (" Numbers stand without quotes.", ""),
    ('Put the text in quotes: "…".', "Write a text."),
    (", in quotes", ""),
    (" in quotes", ""),
    ("Write a number, or a table with a distribution and its parameters.", "Write a plain number such as 1250 or 0.3."),
)


def value_of(text: str) -> Any:
    """A number where the text is one, else the text as typed, which the check then refuses; None for nothing."""
    bare = text.strip()
    if not bare:
        return None
    if _WHOLE.fullmatch(bare):
        return int(bare)
    number = parse_number(bare)
    return bare if number is None else number


def text_of(value: Any) -> str:
    """A value as it stands in a form's cell."""
    if value is None:
        return ""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, float):
        return repr(int(value)) if value.is_integer() and abs(value) < 1e15 else repr(value)
    return str(value)


def allowed(field: Field) -> str:
    """What a field takes, in words for a form."""
    within = field.within if field.within is not None else Interval(-MAX_NUMBER)
    words = {
        "text": f"a text of at most {MAX_TEXT:,} characters",
        "long text": f"a text of at most {MAX_TEXT:,} characters",
        "whole number": f"a whole number {within}",
        "number": f"a number {within}",
        "proportion": f"a proportion {within}",
        "CV": f"a coefficient of variation {within} (0.15 means 15 percent)",
        "level": f"a number {within}, or a share of carrying capacity",
        "distribution": f"a number or a range, {within}",
        "years and chance": "a number of years and a chance between 0 and 1",
        "list of names": "names from the list",
        "choice": "one of " + ", ".join(field.choices),
    }
    return words.get(field.sort, field.rule())


def in_blocks(problem: Problem, section: str) -> Problem:
    """A problem of a whole section without the notation of the file."""
    rule, cure = without_toml(problem.rule, section), without_toml(problem.cure, section)
    return replace(problem, rule=rule, cure=cure)


def in_form(problem: Problem, field: Field | None, raw: Any) -> Problem:
    """A problem of ``record.toml`` as a form tells it, beside the field that it is about."""
    if field is None:
        return problem
    cure = problem.cure
    if problem.found == "nothing" and problem.cure.startswith("Add "):
        return replace(problem, rule="this is needed", cure=f"{field.help} Give {allowed(field)}.")
    if isinstance(raw, str) and field.sort in ("whole number", "number", "proportion", "CV", "level", "distribution"):
        found, cure = explain_number(raw)
        told = f'{found}: "{raw[:60]}"' if found else problem.found
        return replace(problem, found=told, rule=f"it must be {allowed(field)}", cure=cure)
    for words, instead in _FILE_WORDS:
        cure = cure.replace(words, instead)
    rule = problem.rule.replace(field.rule(), allowed(field))
    return replace(problem, rule=rule, cure=cure)
