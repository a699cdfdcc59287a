"""A clean history, written messily in known ways, is taken over to the same numbers."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from hypothesis import given
from hypothesis import strategies as st

from harvest.record.history import Wanted, check_history
from harvest.record.reporting import Report
from harvest.sheets.grid import Book
from harvest.sheets.guessing import guess_mapping
from harvest.sheets.take_over import take_over
from harvest.sheets.taken import Taken
from harvest.sheets.view import turn
from tests.sheets.sheets import make_sheet


@dataclass(frozen=True)
class Year:
    year: int
    removals: int | None
    count: float | None
    cv: float | None
    note: str


@dataclass(frozen=True)
class Mess:
    decimal: str
    thousands: str
    missing: str | None
    percent: str
    years: str
    titles: int
    falling: bool
    total: bool
    footnote: bool
    gap_rows: bool
    turned: bool


@st.composite
def histories(draw: st.DrawFn) -> tuple[Year, ...]:
    first = draw(st.integers(1950, 2000))
    years = []
    for year in range(first, first + draw(st.integers(2, 8))):
        counted = draw(st.booleans())
        years.append(
            Year(
                year,
                draw(st.none() | st.integers(0, 3_000_000)),
                draw(st.integers(1, 99_999_999)) / 100 if counted else None,
                draw(st.integers(30, 1_000)) / 1_000 if counted else None,
                draw(st.sampled_from(["", "fog", "no flight, snow", "=1+1"])),
            )
        )
    return tuple(years)


messes = st.builds(
    Mess,
    decimal=st.sampled_from(".,"),
    thousands=st.sampled_from(["", " ", "\u00a0", "\u202f", "'", "other"]),
    missing=st.sampled_from([None, "n/a", "?", "k.A."]),
    percent=st.sampled_from(["", "bare", "sign"]),
    years=st.sampled_from(["plain", "season", "date", "text"]),
    titles=st.integers(0, 2),
    falling=st.booleans(),
    total=st.booleans(),
    footnote=st.booleans(),
    gap_rows=st.booleans(),
    turned=st.booleans(),
)


def write_number(value: float | None, digits: int, mess: Mess) -> str | None:
    if value is None:
        return mess.missing
    mark = {"other": "," if mess.decimal == "." else "."}.get(mess.thousands, mess.thousands)
    text = f"{value:,.{digits}f}"
    return text.replace(",", "\0").replace(".", mess.decimal).replace("\0", mark)


def write_cv(cv: float | None, mess: Mess) -> str | None:
    if cv is None or not mess.percent:
        return write_number(cv, 3, mess)
    return f"{write_number(cv * 100, 1, mess)}{'%' if mess.percent == 'sign' else ''}"


def write_year(year: int, mess: Mess) -> Any:
    return {
        "plain": year,
        "season": f"Winter {year}/{(year + 1) % 100:02}",
        "date": f"{year}-10-01",
        "text": f"{year} *",
    }[mess.years]


def write_sheet(history: tuple[Year, ...], mess: Mess) -> Book:
    rows: list[list[Any]] = []
    for y in history:
        numbers = write_number(y.removals, 0, mess), write_number(y.count, 2, mess), write_cv(y.cv, mess)
        rows.append([write_year(y.year, mess), *numbers, y.note or None])
    if mess.falling:
        rows.reverse()
    if mess.gap_rows:
        rows.insert(1, [])
    rows += [["Total", "123"]] if mess.total else []
    rows += [["* counted by two observers"]] if mess.footnote else []
    titles: list[list[Any]] = [["The herd of an invented valley"], []][: mess.titles]
    sheet = make_sheet([*titles, ["Year", "Removals", "Count", "CV", "Notes"], *rows])
    return Book("herd.xlsx", (turn(sheet) if mess.turned else sheet,))


def answer_all(book: Book) -> Taken:
    """Every question answered as the one who wrote the sheet would."""
    mapping = guess_mapping(book)
    answers: dict[str, str] = {}
    taken = take_over(book, mapping)
    while unanswered := [question for question in taken.questions if question.answer is None]:
        answers |= {question.id: answer(question.id) for question in unanswered}
        taken = take_over(book, mapping, answers)
    return taken


def answer(question: str) -> str:
    if question.startswith("thousands or decimal"):
        return "thousands"
    return {"seasons": "first", "text beside year": "drop"}.get(question, "yes")


@given(histories(), messes)
def test_the_same_numbers_come_out(history: tuple[Year, ...], mess: Mess) -> None:
    taken = answer_all(write_sheet(history, mess))
    assert (taken.problems, taken.ready) == ((), True)
    report = Report("history.csv")
    table = check_history(taken.history_text, _wanted(taken), report)
    assert report.problems == []
    assert table is not None
    assert table.years == tuple(y.year for y in history)
    assert table.columns["removals"] == tuple(y.removals for y in history)
    nothing = (None,) * len(history)
    assert table.columns.get("count", nothing) == tuple(y.count for y in history)
    assert table.columns.get("count_cv", nothing) == tuple(y.cv for y in history)
    assert (table.notes or ("",) * len(history)) == tuple(y.note for y in history)


@given(histories(), messes)
def test_a_sheet_with_a_repair_is_not_ready_without_the_answers(history: tuple[Year, ...], mess: Mess) -> None:
    book = write_sheet(history, mess)
    taken = take_over(book, guess_mapping(book))
    changed = mess.years != "plain" or mess.falling or mess.total or mess.footnote or mess.gap_rows or mess.turned
    assert not (changed and taken.ready)
    assert taken.ready == (taken.questions == ())


def _wanted(taken: Taken) -> Wanted:
    return Wanted(tuple(s.column for s in taken.surveys), tuple(s.cv_column for s in taken.surveys if s.cv_column))
