"""What is typed into a form becomes the value that the record holds, and a problem is told in a form's words."""

from __future__ import annotations

from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from harvest.desk.typed import allowed, in_form, text_of, value_of
from harvest.errors import Problem
from harvest.record.fields import FIELDS, field_at
from harvest.record.schema import MAX_NUMBER
from harvest.workspace import Draft
from harvest.workspace.document import locate
from tests.record.edits import CSV, TOML

DRAFT = Draft(TOML, CSV)


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("", None),
        ("  ", None),
        ("0", 0),
        (" 12 ", 12),
        ("+5", 5),
        ("-3", -3),
        ("007", 7),
        ("0.30", 0.3),
        (".5", 0.5),
        ("1e3", 1000.0),
        ("1,200", "1,200"),
        ("0,3", "0,3"),
        ("12%", "12%"),
        ("about 5", "about 5"),
        ("inf", "inf"),
        ("nan", "nan"),
        ("1e999", "1e999"),
        ("9" * 16, "9" * 16),
        ("1 200", "1 200"),
        ("١٢", "١٢"),
        ("<script>", "<script>"),
    ],
)
def test_what_is_typed(text: str, value: Any) -> None:
    found = value_of(text)
    assert found == value
    assert type(found) is type(value)


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (None, ""),
        (True, "true"),
        (False, "false"),
        (0, "0"),
        (5.0, "5"),
        (-0.0, "0"),
        (0.1, "0.1"),
        (1e22, "1e+22"),
        ("0,3", "0,3"),
        ([1], "[1]"),
    ],
)
def test_a_value_in_a_cell(value: Any, text: str) -> None:
    assert text_of(value) == text


@given(st.one_of(st.integers(-(10**15) + 1, 10**15 - 1), st.floats(-MAX_NUMBER, MAX_NUMBER)))
def test_a_number_comes_back_from_its_cell(value: float) -> None:
    assert value_of(text_of(value)) == value


@given(st.text())
def test_a_text_comes_back_from_its_cell_or_is_a_number(text: str) -> None:
    value = value_of(text)
    assert value is None or isinstance(value, int | float) or value == text.strip()
    assert value_of(text_of(value)) == value


def told(section: str, key: str, raw: Any, index: int | None = None) -> Problem:
    """The first error of a key with this value, as the form tells it."""
    draft = DRAFT.with_value(section, index, key, raw)
    problem = next(p for p in draft.check()[1] if p.severity == "error" and locate(p.where) == (section, index, key))
    return in_form(problem, field_at(f"{section}.{key}" if section else key), raw)


@pytest.mark.parametrize(
    ("raw", "found", "cure"),
    [
        (
            "1,200",
            'a thousands mark: "1,200"',
            "Write 1200, without a thousands mark (or 1.200 if the comma was a decimal comma).",
        ),
        ("0,3", 'a decimal comma: "0,3"', "Write 0.3, with a point."),
        ("12%", 'a percentage: "12%"', "Was 0.12 meant? Then write 0.12, without a percent sign."),
        ("n/a", 'a mark for a missing value: "n/a"', "Leave the cell empty; the reason can go into the column note."),
        ("many", '"many"', "Write a plain number such as 1250 or 12.5, or leave the cell empty."),
    ],
)
@pytest.mark.parametrize("place", [("", "present_quota"), ("objectives", "tolerance"), ("rates", "process_noise")])
def test_a_number_typed_wrongly(place: tuple[str, str], raw: str, found: str, cure: str) -> None:
    problem = told(*place, raw)
    assert (problem.found, problem.cure) == (found, cure)
    field = field_at(".".join(p for p in place if p))
    assert problem.rule == f"it must be {allowed(field)}"


def test_a_missing_key_is_asked_for() -> None:
    problem = told("", "season", None)
    assert problem == Problem(
        "error",
        "record.toml",
        "season",
        "nothing",
        "this is needed",
        "Whether the take falls in a short season or runs all year. Give one of short, all year.",
    )


def test_a_number_out_of_range_keeps_the_checks_words() -> None:
    problem = told("objectives", "tolerance", 5)
    assert problem.found == "5"
    assert problem.rule == "it must be a proportion above 0 and below 1"
    assert "quotes" not in str(problem)


@pytest.mark.parametrize("field", FIELDS, ids=lambda f: f.path)
def test_no_word_of_a_form_speaks_of_quotes_or_brackets(field: Any) -> None:
    words = allowed(field)
    assert words
    assert not set('"[]{}=') & set(words)


def test_a_problem_without_a_field_stays() -> None:
    problem = Problem("error", "record.toml", "x", "1", "2", "3")
    assert in_form(problem, None, 5) is problem
