"""Whatever a sheet holds and whatever is answered: nothing fails, and what is ready passes the history's checks."""

from __future__ import annotations

from datetime import date, datetime
from typing import Any

from hypothesis import given, settings
from hypothesis import strategies as st

from harvest.record.history import Wanted, check_history
from harvest.record.reporting import Report
from harvest.sheets.grid import Book, Sheet, SheetError
from harvest.sheets.guessing import guess_mapping
from harvest.sheets.roles import ROLES, ColumnUse, Mapping
from harvest.sheets.take_over import take_over

_WRITTEN = (
    "2019|2018/19|Winter 2020/21|2019*|2010-2015|1.234|1,234|12,5|1 234|1'234|12.5|-|n/a|none|?|3 t|4 kg|5 deer|6*|"
    "7 (fog)|100 ± 10|100 ± 10%|9 ± x|15%|ca. 7|<3|-5|Total|Mean|Year|Removals|Count|CV|SE|Note|no flight|=1+1|a\x07b|"
    "#REF!|1e3|1e400|0|0,15|١٢|\u200b|\ud800"
)
_TEXTS = st.sampled_from(_WRITTEN.split("|"))
_CELLS: st.SearchStrategy[Any] = st.one_of(
    st.none(),
    _TEXTS,
    st.integers(2015, 2024),
    st.integers(-3, 3_000),
    st.floats(),
    st.booleans(),
    st.dates(date(1900, 1, 1), date(2100, 1, 1)),
    st.datetimes(datetime(1900, 1, 1), datetime(2100, 1, 1)),
    st.text(max_size=8),
)


#: Texts that can be read once the questions are answered, so that many sheets get ready.
_READABLE = st.one_of(
    st.none(),
    st.sampled_from(["1.234", "1,234", "12,5", "1 234", "12.5", "-", "n/a", "none", "3 t", "6*", "7 (fog)"]),
    st.sampled_from(["100 ± 10", "ca. 7", "1e3", "0", "0,15"]),
    st.integers(0, 3_000),
    st.floats(0, 1, exclude_min=True),
)


@st.composite
def sheets(draw: st.DrawFn) -> Sheet:
    width = draw(st.integers(1, 6))
    tame = draw(st.booleans())
    rows = draw(st.lists(st.tuples(*[_READABLE if tame else _CELLS] * width), max_size=10))
    if tame or draw(st.booleans()):
        years = [(draw(st.sampled_from([2015 + number, 2016, None])), *row[1:]) for number, row in enumerate(rows)]
        rows = [("Year", "Removals", "Count", "CV", "Note", "Bag")[:width], *years]
    ends = st.integers(0, 9)
    return Sheet(
        "S",
        tuple(rows),
        hidden=draw(st.booleans()),
        formulas=draw(st.frozensets(st.tuples(ends, ends), max_size=3)),
        merged=tuple(
            (top, left, top + down, left + across)
            for top, left, down, across in draw(st.lists(st.tuples(ends, ends, ends, ends), max_size=2))
        ),
        hidden_rows=draw(st.frozensets(ends, max_size=2)),
        hidden_columns=draw(st.frozensets(ends, max_size=1)),
    )


def map_freely(draw: st.DataObject, book: Book) -> Mapping:
    """The guess, or whatever a user could choose instead."""
    guess = guess_mapping(book)
    if draw.draw(st.booleans()):
        return guess
    surveys = st.sampled_from(["", "north", "south"])
    uses = [ColumnUse(use.column, draw.draw(st.sampled_from(ROLES)), draw.draw(surveys)) for use in guess.columns]
    return Mapping(guess.sheet, guess.header_first, guess.header_end, tuple(uses), guess.transposed)


@settings(max_examples=300)
@given(sheets(), st.data())
def test_what_is_ready_passes_the_checks_of_the_history(sheet: Sheet, data: st.DataObject) -> None:
    book = Book("any.xlsx", (sheet,))
    try:
        mapping = map_freely(data, book)
    except SheetError:
        assert sheet.cells == ()
        return
    answers: dict[str, str] = {}
    stops = data.draw(st.booleans())
    taken = take_over(book, mapping)
    while unanswered := [question for question in taken.questions if question.answer is None]:
        for question in unanswered:
            assert question.count >= len(question.examples) > 0
            options = question.options if stops else question.options[:-1]
            answers[question.id] = data.draw(st.sampled_from([value for value, _ in options]))
        taken = take_over(book, mapping, answers)
    stopped = "no" in {question.answer for question in taken.questions}
    assert taken.ready == (not taken.problems)
    assert not (stopped and taken.ready)
    if taken.ready:
        report = Report("history.csv")
        columns = [survey.column for survey in taken.surveys]
        cv_columns = [survey.cv_column for survey in taken.surveys if survey.cv_column]
        table = check_history(taken.history_text, Wanted(tuple(columns), tuple(cv_columns)), report)
        assert [str(problem) for problem in report.problems if problem.severity == "error"] == []
        assert table is not None
        assert table.notes in ((), tuple(row[-1] for row in taken.rows))
