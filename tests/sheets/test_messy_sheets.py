"""Each messy sheet, taken over with the answers a manager would give, to the exact text of its history."""

from __future__ import annotations

from pathlib import Path

import pytest

from harvest.record.check import check_texts
from harvest.sheets.grid import Book
from harvest.sheets.guessing import guess_mapping
from harvest.sheets.opening import open_book
from harvest.sheets.take_over import take_over
from harvest.sheets.taken import Taken
from tests.sheets.make_messy import FOLDER, MESSY

#: By file: the answers, and the history.
EXPECTED: dict[str, tuple[dict[str, str], str]] = {
    "marsh_hares.csv": (
        {"not available": "yes", "decimal comma": "yes"},
        "year,removals,zählung_je_km2,zählung_je_km2_cv,note\n"
        "2018,41,12.5,0.20,\n"
        '2019,38,11.25,0.18,"nass, früh gezählt"\n'
        "2020,,,,\n"
        "2021,29,9.75,0.22,\n"
        "2022,0,10.5,0.21,Schonzeit\n",
    ),
    "valley_deer.xlsx": (
        {"footnotes": "yes", "sum removals": "yes", "empty parts: removals of one row": "zero"},
        "year,removals,spring_count_estimate,spring_count_estimate_cv,note\n"
        "2019,275,2140,0.12,\n"
        "2020,219,2055,0.14,'=late snow\n"
        "2021,220,2210,0.11,\n"
        "2022,308,,,no flight\n",
    ),
    "harbour_seals.xlsx": (
        {"dates": "yes", "percent cv: column D": "yes"},
        "year,removals,census,census_cv\n2017,12,640,0.15\n2018,9,655,0.125\n2019,14,618,0.18\n",
    ),
    "upland_grouse.xlsx": (
        {"totals": "yes", "no year": "leave out", "footnotes": "yes", "empty rows": "yes"},
        "year,removals,count\n2020,310,1480\n2021,295,1390\n2022,240,1275\n",
    ),
    "bay_cod.csv": (
        {"thousands": "yes", "plus minus: column C": "half-width"},
        "year,removals,survey_biomass,survey_biomass_cv\n"
        "2019,1050.5,12400,0.0535\n"
        "2020,980,11850,0.0538\n"
        "2021,1010,12020,0.051\n"
        "2022,870.25,,\n",
    ),
    "hidden_geese.xlsx": (
        {"hidden sheet": "yes", "hidden columns": "yes", "hidden rows": "leave out", "standard errors": "yes"},
        "year,removals,winter_count,winter_count_cv\n"
        "2018,300,8700,0.0805\n"
        "2019,310,7500,0.0853\n"
        "2020,350,10060,0.0805\n",
    ),
    "formulas_stored.xlsx": (
        {"formulas": "yes"},
        "year,removals,drive_count\n2020,71,410\n2021,65,395\n2022,68,402\n",
    ),
    "thousands_or_decimals.csv": (
        {"thousands or decimal: column B": "thousands", "thousands or decimal: column C": "thousands"},
        "year,removals,count\n2020,987,1234\n2021,1020,1310\n2022,954,998\n",
    ),
    "thousands_marks.csv": (
        {"thousands": "yes"},
        "year,removals,north_survey,south_survey\n2019,1204,12400,1150\n2020,980,11850,990\n2021,1010,12020,1075\n",
    ),
    "transposed_elk.xlsx": (
        {"transposed": "yes", "sum removals": "yes", "percent cv: row 7": "yes"},
        "year,removals,aerial_count,aerial_count_cv,note\n"
        "2019,23,320,0.15,\n"
        "2020,21,,,no money\n"
        "2021,20,305,0.12,\n"
        "2022,22,298,0.14,\n",
    ),
    "winter_seasons.csv": (
        {"seasons": "second", "order": "yes", "gaps": "yes"},
        "year,removals,count\n2018,75,1475\n2019,80,1512\n2020,,\n2021,91,1390\n2022,88,1450\n",
    ),
    "district_boar.xlsx": (
        {
            "merged years": "yes",
            "labelled totals": "leave out",
            "duplicates": "sum",
            "duplicate counts: Count": "sum",
            "empty parts: removals of one year": "empty",
            "gaps": "yes",
        },
        "year,removals,count,count_cv\n2019,215,1400,0.157\n2020,,1490,0.157\n2021,,,\n2022,189,1400,0.173\n",
    ),
    "dressed_ibex.csv": (
        {
            "text beside year": "drop",
            "units": "yes",
            "dash or none: column B": "zero",
            "text after number": "note",
            "not available": "yes",
            "doubtful numbers": "number",
        },
        "year,removals,ground_count,note\n"
        "2018,12,234,\n"
        "2019,0,241,two days only; *\n"
        "2020,9,,\n"
        "2021,0,250,\n"
        "2022,0,239,'=SUM(1); (fog)\n",
    ),
}
REFUSED: dict[str, tuple[str, ...]] = {
    "formulas_unstored.xlsx": tuple(
        f'error: formulas_unstored.xlsx, sheet "Roe", cell D{row}: found a formula without a stored value; the value '
        "of a formula is stored when the spreadsheet program saves the file. Open the file in the spreadsheet "
        "program, save it there, and choose it again."
        for row in (2, 3, 4)
    ),
    "unreadable_pike.csv": tuple(
        f'error: unreadable_pike.csv, sheet "unreadable_pike", cell {cell}: found "{found}"; a number such as 1250 or '
        "12.5, or an empty cell. Correct the cell in the file, or leave the column out."
        for cell, found in (("B3", "10-14"), ("C4", "thirty"))
    ),
    "letter.csv": (
        'error: letter.csv, sheet "letter": found no column of years; one column holds the years, one row for each '
        "year. Choose the column of years; a text without a table of years cannot be taken over: choose another file.",
    ),
}
_RECORD = """format = 1
name = "Invented herd"
unit = "animals"
season = "short"
count_when = "before"
lag = 0
history = "history.csv"

[[curve]]
name = "logistic"

[rates]
growth_rate = 0.3
carrying_capacity = 20000
process_noise = 0.1

[objectives]
limit = 10
"""


def load(name: str) -> Book:
    return open_book(name, (FOLDER / name).read_bytes())


def take(name: str, answers: dict[str, str]) -> Taken:
    book = load(name)
    return take_over(book, guess_mapping(book), answers)


def record_text(taken: Taken) -> str:
    """A small record that names the surveys."""
    surveys = ""
    for survey in taken.surveys:
        precision = f'cv_column = "{survey.cv_column}"' if survey.cv_column else "cv = 0.2"
        surveys += f'\n[[survey]]\nname = "{survey.name}"\ncolumn = "{survey.column}"\nkind = "absolute"\n{precision}\n'
    return _RECORD + surveys


def test_every_messy_sheet_has_its_expectation() -> None:
    assert sorted({*EXPECTED, *REFUSED}) == sorted(MESSY) == sorted(file.name for file in Path(FOLDER).iterdir())


@pytest.mark.parametrize("name", MESSY)
def test_the_sheets_are_as_their_script_writes_them(name: str) -> None:
    assert load(name) == open_book(name, MESSY[name]())


@pytest.mark.parametrize("name", EXPECTED)
def test_a_messy_sheet_becomes_its_history(name: str) -> None:
    answers, history = EXPECTED[name]
    taken = take(name, answers)
    assert taken.history_text == history
    assert [question.id for question in taken.questions if question.answer is None] == []
    assert {question.id for question in taken.questions} == set(answers)
    assert taken.problems == ()
    assert taken.ready


@pytest.mark.parametrize("name", EXPECTED)
def test_the_history_passes_the_records_own_checks(name: str) -> None:
    taken = take(name, EXPECTED[name][0])
    record, problems = check_texts(record_text(taken), taken.history_text)
    assert [str(problem) for problem in problems if problem.severity == "error"] == []
    assert record is not None
    assert [survey.name for survey in record.surveys] == [survey.name for survey in taken.surveys]


@pytest.mark.parametrize(("name", "left"), [(n, i) for n, (answers, _) in EXPECTED.items() for i in answers])
def test_nothing_is_ready_while_an_answer_is_missing(name: str, left: str) -> None:
    answers = {i: a for i, a in EXPECTED[name][0].items() if i != left}
    taken = take(name, answers)
    assert left in [question.id for question in taken.questions if question.answer is None]
    assert not taken.ready
    assert taken.problems == ()
    assert len(taken.rows) > 0


@pytest.mark.parametrize(("name", "stopped"), [(n, i) for n, (answers, _) in EXPECTED.items() for i in answers])
def test_the_answer_no_is_an_error_with_a_cure(name: str, stopped: str) -> None:
    taken = take(name, EXPECTED[name][0] | {stopped: "no"})
    question = next(question for question in taken.questions if question.id == stopped)
    assert [problem.rule for problem in taken.problems] == [f"you chose to mend this in the file ({question.text})"]
    problem = taken.problems[0]
    assert (problem.severity, problem.file) == ("error", name)
    assert problem.where.startswith('sheet "')
    assert problem.cure.endswith(".")
    assert not taken.ready


@pytest.mark.parametrize("name", REFUSED)
def test_a_hopeless_sheet_is_refused_with_a_cure(name: str) -> None:
    taken = take(name, {"formulas": "yes"})
    assert tuple(str(problem) for problem in taken.problems) == REFUSED[name]
    assert not taken.ready
