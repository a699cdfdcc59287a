"""The table that is taken over, as the text of a history."""

from __future__ import annotations

import pytest

from harvest.errors import Problem
from harvest.sheets.questions import Question
from harvest.sheets.taken import Taken, name_column


@pytest.mark.parametrize(
    ("text", "taken", "name"),
    [
        ("Aerial count (km²)", (), "aerial_count_km2"),
        ("Zählung Süd", (), "zählung_süd"),
        ("=1+1; <b>", (), "1_1_b"),
        ("_ _", (), "count"),
        ("Year", (), "year_count"),
        ("Note", (), "note_count"),
        ("Count", ("count", "count_2"), "count_3"),
        ("x" * 100, (), "x" * 60),
    ],
)
def test_a_columns_name_is_safe_and_unlike_the_others(text: str, taken: tuple[str, ...], name: str) -> None:
    assert name_column(text, taken) == name


def test_the_history_guards_notes_and_quotes_commas() -> None:
    rows = (("2019", "3", "=1+1"), ("2020", "", "fog, no flight"))
    taken = Taken(("year", "removals", "note"), rows, (), (), ())
    assert taken.history_text == 'year,removals,note\n2019,3,\'=1+1\n2020,,"fog, no flight"\n'
    assert taken.rows[0][2] == "=1+1"


def test_ready_needs_every_answer_and_no_error() -> None:
    def is_ready(answer: str | None, severity: str) -> bool:
        question = Question("units", "Units?", (), 1, (("yes", "Yes"),), answer)
        problem = Problem(severity, "f.csv", "cell B7", "x", "a number", "Correct it.")
        return Taken((), (), (), (question,), (problem,)).ready

    assert is_ready("yes", "warning")
    assert not is_ready(None, "warning")
    assert not is_ready("yes", "error")
