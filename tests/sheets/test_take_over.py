"""Single faults of sheets: what is asked, what each answer does, what is refused."""

from __future__ import annotations

from datetime import datetime
from typing import Any

import pytest

from tests.sheets.sheets import errors, ids, take_rows

_NUMBER = "a number such as 1250 or 12.5, or an empty cell"


def test_a_clean_sheet_is_taken_over_without_a_question() -> None:
    rows = [
        ["Year", "Removals", "Count", "CV", "Note"],
        [2019, 0, 100.5, 0.1, None],
        ["2020", "12", " 98 ", "0.125", "x"],
        [2021.0, None, None, None, 7],
    ]
    taken = take_rows(rows)
    assert taken.header == ("year", "removals", "count", "count_cv", "note")
    assert taken.rows == (
        ("2019", "0", "100.5", "0.1", ""),
        ("2020", "12", "98", "0.125", "x"),
        ("2021", "", "", "", "7"),
    )
    assert (taken.questions, taken.problems, taken.ready) == ((), (), True)


#: Header and rows, the question, and for each answer the rows of the history.
CASES: dict[str, tuple[list[list[Any]], str, dict[str, str]]] = {
    "a point before three digits": (
        [["Year", "Bag"], [2019, "1.234"], [2020, 987]],
        "thousands or decimal: column B",
        {"thousands": "2019,1234 2020,987", "decimal": "2019,1.234 2020,987"},
    ),
    "a comma before three digits": (
        [["Year", "Bag"], [2019, "1,234"], [2020, 987]],
        "thousands or decimal: column B",
        {"thousands": "2019,1234 2020,987", "decimal": "2019,1.234 2020,987"},
    ),
    "a point that the same column tells": (
        [["Year", "Bag"], [2019, "1.234"], [2020, "1.234.567"]],
        "thousands",
        {"yes": "2019,1234 2020,1234567"},
    ),
    "a comma that the same column tells": (
        [["Year", "Bag"], [2019, "1,234"], [2020, "12,5"]],
        "decimal comma",
        {"yes": "2019,1.234 2020,12.5"},
    ),
    "a dash": (
        [["Year", "Bag"], [2019, "–"], [2020, 5]],
        "dash or none: column B",
        {"empty": "2019, 2020,5", "zero": "2019,0 2020,5"},
    ),
    "a mark for a missing value": (
        [["Year", "Bag"], [2019, "N/A"], [2020, 5]],
        "not available",
        {"yes": "2019, 2020,5"},
    ),
    "doubt": (
        [["Year", "Bag"], [2019, "~12"], [2020, 5]],
        "doubtful numbers",
        {"number": "2019,12 2020,5", "empty": "2019, 2020,5"},
    ),
    "a unit": ([["Year", "Bag"], [2019, "12 deer"], [2020, "1 deer"]], "units", {"yes": "2019,12 2020,1"}),
    "years as text": (
        [["Year", "Bag"], ["FY 2019", 12], ["FY 2020", 1]],
        "text beside year",
        {"drop": "2019,12 2020,1", "note": "2019,12,FY 2020,1,FY"},
    ),
    "years shown as dates": (
        [["Year", "Bag"], [datetime(1905, 7, 11), 12]],
        "years shown as dates",
        {"number": "2019,12", "date": "1905,12"},
    ),
    "dates": ([["Year", "Bag"], ["01.10.2019", 12], ["01.10.2020", 1]], "dates", {"yes": "2019,12 2020,1"}),
    "seasons": (
        [["Year", "Bag"], ["2019/20", 12], ["2020/21", 1]],
        "seasons",
        {"first": "2019,12 2020,1", "second": "2020,12 2021,1"},
    ),
    "a year without a row": ([["Year", "Bag"], [2019, 3], [2021, 4]], "gaps", {"yes": "2019,3 2020, 2021,4"}),
    "falling years": ([["Year", "Bag"], [2020, 3], [2019, 4]], "order", {"yes": "2019,4 2020,3"}),
    "several rows a year": (
        [["Year", "Bag"], [2019, 3], [2019, 9], [2020, 4]],
        "duplicates",
        {"sum": "2019,12 2020,4"},
    ),
    "rows that repeat": (
        [["Year", "Bag"], [2019, 3], [2019, 3], [2020, 4]],
        "duplicates",
        {"sum": "2019,6 2020,4", "once": "2019,3 2020,4"},
    ),
    "a total with a year": (
        [["Year", "District", "Bag"], [2019, "A", 3], [2020, "Total", 4]],
        "labelled totals",
        {"leave out": "2019,3", "keep": "2019,3 2020,4"},
    ),
    "an empty row": ([["Year", "Bag"], [2019, 3], [], [2020, 4]], "empty rows", {"yes": "2019,3 2020,4"}),
    "a heading between": ([["Year", "Bag"], [2019, 3], ["North"], [2020, 4]], "footnotes", {"yes": "2019,3 2020,4"}),
    "the header again": (
        [["Year", "Bag"], [2019, 3], ["Year", "Bag"], [2020, 4]],
        "footnotes",
        {"yes": "2019,3 2020,4"},
    ),
    "a footnote that names a year": (
        [["Year", "Bag"], [2019, 3], [2020, 4], ["Until 2019 without the islands"]],
        "footnotes",
        {"yes": "2019,3 2020,4"},
    ),
    "several years in one": (
        [["Year", "Bag"], ["2010-2018", 30], [2019, 3], [2020, 4]],
        "totals",
        {"yes": "2019,3 2020,4"},
    ),
    "a ± without use": (
        [["Year", "Bag"], [2019, "12 ± 3"], [2020, 4]],
        "plus minus: column B",
        {"ignore": "2019,12 2020,4"},
    ),
    "a remark in a column that is left out": (
        [["Year", "Bag", "Weather"], [2019, 3, "fog, no flight"], [2020, 4, "fair"]],
        "notes lost",
        {"drop": "2019,3 2020,4", "note": "2019,3,fog, no flight 2020,4,"},
    ),
}


@pytest.mark.parametrize("case", CASES)
def test_each_answer_has_its_effect(case: str) -> None:
    rows, question, effects = CASES[case]
    unanswered = take_rows(rows)
    assert ids(unanswered) == [question]
    assert [value for value, _ in unanswered.questions[0].options] == [*effects, "no"]
    assert not unanswered.ready
    for number, (answer, expected) in enumerate(effects.items()):
        taken = take_rows(rows, {question: answer})
        assert " ".join(",".join(row) for row in taken.rows) == expected
        assert (taken.problems, taken.ready) == ((), True)
        if number == 0:
            assert unanswered.rows == taken.rows


def test_rows_without_a_year_can_belong_to_the_year_above() -> None:
    rows = [["Year", "Bag"], [2019, 3], [None, 9], [2020, 4]]
    taken = take_rows(rows, {"no year": "above", "duplicates": "sum"})
    assert taken.rows == (("2019", "12"), ("2020", "4"))
    first = take_rows([["Year", "Bag"], [None, 9], [2019, 3], [2020, 4]], {"no year": "above"})
    assert errors(first) == [('sheet "S", cell A2', "nothing")]


@pytest.mark.parametrize(
    ("cell", "found"),
    [
        ("10-14", '"10-14"'),
        ("twelve", '"twelve"'),
        ("12 %", '"12 %"'),
        ("1.2 k", '"1.2 k"'),
        ("#REF!", '"#REF!"'),
        (True, "true"),
        (datetime(2019, 3, 1), "the date 2019-03-01"),
    ],
)
def test_what_cannot_be_read_is_refused_by_its_cell(cell: Any, found: str) -> None:
    taken = take_rows([["Year", "Bag"], [2019, cell], [2020, 4]])
    assert [str(problem) for problem in taken.problems] == [
        f'error: herd.xlsx, sheet "S", cell B2: found {found}; {_NUMBER}. '
        "Correct the cell in the file, or leave the column out."
    ]
    assert taken.rows == (("2019", ""), ("2020", "4"))


@pytest.mark.parametrize(("cell", "found"), [(-5, "-5"), ("-5", "-5"), (2e15, "2000000000000000")])
def test_numbers_out_of_range_are_refused(cell: Any, found: str) -> None:
    taken = take_rows([["Year", "Bag"], [2019, cell], [2020, 4]])
    assert errors(taken) == [('sheet "S", cell B2', found)]


def test_a_year_that_cannot_be_read_is_refused() -> None:
    taken = take_rows([["Year", "Bag"], [2019, 3], ["'20", 5], [2021, 4]])
    assert errors(taken) == [('sheet "S", cell A3', '"\'20"')]


def test_a_column_without_any_year_is_refused() -> None:
    taken = take_rows([["Year", "Bag"], [2019, 3]], hidden_rows=frozenset({1}), answers={"hidden rows": "leave out"})
    assert errors(taken) == [('sheet "S", column A', "no years")]
    assert taken.rows == ()


def test_two_units_in_one_column_are_refused() -> None:
    taken = take_rows([["Year", "Catch"], [2019, "1.2 t"], [2020, "900 kg"]], {"units": "yes"})
    assert errors(taken) == [('sheet "S", cell B3', "different units: t, kg")]


def test_two_units_in_removals_to_be_added_are_refused() -> None:
    rows = [["Year", "Catch north", "Catch south"], [2019, "1 t", "900 kg"], [2020, "2 t", None]]
    assert errors(take_rows(rows)) == [('sheet "S", cell C2', "different units: t, kg")]


def test_an_empty_part_is_asked_about_and_never_zero_by_itself() -> None:
    rows = [["Year", "Bag hinds", "Bag stags"], [2019, 3, None], [2020, 4, 0], [2021, None, None]]
    answers = {"sum removals": "yes", "empty parts: removals of one row": "empty"}
    assert take_rows(rows, answers).rows == (("2019", ""), ("2020", "4"), ("2021", ""))
    answers["empty parts: removals of one row"] = "zero"
    assert take_rows(rows, answers).rows == (("2019", "3"), ("2020", "4"), ("2021", ""))


def test_a_total_among_the_parts_is_found_by_its_numbers() -> None:
    rows = [["Year", "Bag hinds", "Bag stags", "Bag"], [2019, 3, 2, 5], [2020, 4, 0, 4]]
    answers = {"sum removals": "yes", "total column: column D": "leave out"}
    assert take_rows(rows, answers).rows == (("2019", "5"), ("2020", "4"))
    answers["total column: column D"] = "add"
    assert take_rows(rows, answers).rows == (("2019", "10"), ("2020", "8"))


def test_sums_are_exact() -> None:
    rows = [["Year", "Catch north", "Catch south"], [2019, 0.1, 0.2], [2020, "1.10", 2]]
    assert take_rows(rows, {"sum removals": "yes"}).rows == (("2019", "0.3"), ("2020", "3.10"))


@pytest.mark.parametrize(
    ("answer", "cvs"),
    [("standard error", ["0.10", "0.125"]), ("half-width", ["0.051", "0.0638"]), ("cv", ["0.10", "0.125"])],
)
def test_a_plus_minus_becomes_a_cv(answer: str, cvs: list[str]) -> None:
    rows = [["Year", "Bag", "Count"], [2019, 3, "100 ± 10"], [2020, 3, "100 ±12.5"]]
    taken = take_rows(rows, {"plus minus: column C": answer})
    assert [row[3] for row in taken.rows] == cvs
    assert taken.surveys[0].cv_column == "count_cv"


def test_a_plus_minus_left_out_leaves_no_cvs() -> None:
    taken = take_rows([["Year", "Bag", "Count"], [2019, 3, "100 ± 10"]], {"plus minus: column C": "ignore"})
    assert taken.header == ("year", "removals", "count")
    assert (taken.surveys[0].cv_column, taken.ready) == (None, True)


def test_a_plus_minus_beside_zero_is_refused() -> None:
    taken = take_rows([["Year", "Bag", "Count"], [2019, 3, "0 ± 10"], [2020, 3, "9 ± 1"]])
    assert errors(taken) == [('sheet "S", cell C2', '"0 ± 10"')]


def test_some_cvs_in_percent() -> None:
    rows = [["Year", "Count", "CV"], [2019, 100, 0.5], [2020, 90, 12], [2021, 80, "9%"]]
    answers = {"no removals": "yes", "percent cv: column C": "yes", "mixed cv: column C": "large"}
    assert [row[3] for row in take_rows(rows, answers).rows] == ["0.5", "0.12", "0.09"]
    answers["mixed cv: column C"] = "all"
    assert [row[3] for row in take_rows(rows, answers).rows] == ["0.005", "0.12", "0.09"]


def test_a_header_in_percent_over_proportions_is_asked_about() -> None:
    rows = [["Year", "Bag", "Count", "CV (%)"], [2019, 3, 100, 1.5], [2020, 4, 90, 0.5]]
    question = "percent header: column D"
    assert ids(take_rows(rows)) == [question]
    assert [row[3] for row in take_rows(rows, {question: "as is"}).rows] == ["1.5", "0.5"]
    assert [row[3] for row in take_rows(rows, {question: "divide"}).rows] == ["0.015", "0.005"]
    mixed = take_rows([*rows, [2021, 4, 90, 12]])
    assert (ids(mixed), mixed.questions[0].options[0][0]) == (["mixed cv: column D"], "all")


@pytest.mark.parametrize(("cv", "found"), [(0, "0"), ("0%", "0"), (250, "2.5")])
def test_a_cv_out_of_range_is_refused(cv: Any, found: str) -> None:
    taken = take_rows([["Year", "Bag", "Count", "CV"], [2019, 1, 100, cv]])
    assert errors(taken) == [('sheet "S", cell D2', found)]


def test_a_missing_cv_is_filled_or_the_column_left_out() -> None:
    rows = [["Year", "Bag", "Count", "CV"], [2019, 1, 100, 0.1], [2020, 1, 90, None], [2021, 1, None, None]]
    filled = take_rows(rows, {"missing cv: Count": "largest"})
    assert [row[3] for row in filled.rows] == ["0.1", "0.1", ""]
    without = take_rows(rows, {"missing cv: Count": "leave out"})
    assert (without.header, without.surveys[0].cv_column) == (("year", "removals", "count"), None)


def test_a_standard_error_needs_its_count() -> None:
    rows = [["Year", "Bag", "Count", "SE"], [2019, 1, 100, 12], [2020, 1, None, 12]]
    taken = take_rows(rows, {"standard errors": "yes"})
    assert taken.rows[0][3] == "0.12"
    assert errors(taken) == [('sheet "S", cell D3', "12")]


def test_counts_of_several_rows_are_added_only_by_an_explicit_answer() -> None:
    rows = [["Year", "Bag", "Count", "CV"], [2019, 1, 100, 0.2], [2019, 2, 50, 0.1], [2020, 1, 70, 0.1]]
    left = take_rows(rows, {"duplicates": "sum", "duplicate counts: Count": "leave out"})
    assert left.rows == (("2019", "3", "", ""), ("2020", "1", "70", "0.1"))
    added = take_rows(rows, {"duplicates": "sum", "duplicate counts: Count": "sum"})
    assert added.rows == (("2019", "3", "150", "0.137"), ("2020", "1", "70", "0.1"))
    assert take_rows(rows).rows == left.rows


def test_a_count_that_rows_repeat_is_taken_once() -> None:
    rows = [["Year", "Bag", "Count"], [2019, 1, 100], [2019, 2, 100], [2020, 1, 70], [2020, 3, None]]
    taken = take_rows(rows, {"duplicates": "sum", "duplicate counts: Count": "once"})
    assert taken.rows == (("2019", "3", "100"), ("2020", "4", "70"))


def test_notes_of_one_year_stand_beside_one_another() -> None:
    rows = [["Year", "Bag", "Note"], [2019, 1, "fog"], [2019, 2, "snow"], [2019, 2, "fog"]]
    assert take_rows(rows, {"duplicates": "sum"}).rows == (("2019", "5", "fog; snow"),)


def test_a_hidden_character_in_a_note_is_refused() -> None:
    taken = take_rows([["Year", "Bag", "Note"], [2019, 1, "a\x07b"], [2020, 1, "a\r\nb"]])
    assert [(p.where, p.cure) for p in taken.problems] == [
        ('sheet "S", cell C2', "Take out the hidden character U+0007.")
    ]
    assert taken.rows[1][2] == "a\nb"


def test_notes_that_grow_too_long_are_refused() -> None:
    rows = [["Year", "Bag", "Note"], [2019, 1, "a" * 3000], [2019, 2, "b" * 3000]]
    taken = take_rows(rows, {"duplicates": "sum"})
    assert [(p.where, p.rule) for p in taken.problems] == [
        ('sheet "S", cell A2', "a text has at most 5,000 characters")
    ]


def test_a_number_in_a_merged_cell_is_asked_about() -> None:
    rows = [["Year", "Bag", "Count"], [2019, 1, 100], [2020, 2, None]]
    taken = take_rows(rows, {"merged cells": "first"}, merged=((1, 2, 2, 2),))
    assert (ids(taken), taken.ready) == (["merged cells"], True)
    assert [row[2] for row in taken.rows] == ["100", ""]


def test_a_formula_of_a_year_without_a_value_is_refused() -> None:
    rows = [["Year", "Bag"], [2019, 1], [2020, 2], [None, 3]]
    taken = take_rows(rows, formulas=frozenset({(3, 0)}))
    assert errors(taken) == [('sheet "S", cell A4', "a formula without a stored value")]


def test_formulas_in_cells_that_are_not_used_do_not_matter() -> None:
    rows = [["Year", "Bag", "Hunters"], [2019, 1, 5], [2020, 2, None], ["Total", None, None]]
    taken = take_rows(rows, {"totals": "yes"}, formulas=frozenset({(2, 2), (3, 1)}))
    assert (ids(taken), taken.problems, taken.ready) == (["totals"], (), True)


def test_cells_of_a_turned_sheet_have_their_place_in_the_file() -> None:
    rows = [["Year", 2019, 2020, 2021], ["Bag", 1, "x?", 3]]
    assert errors(take_rows(rows)) == [('sheet "S", cell C2', '"x?"')]


def test_a_number_with_impossible_marks_is_refused() -> None:
    taken = take_rows([["Year", "Bag", "Count"], [2019, "12 34", "9 ± 1.2.3"], [2020, 4, 8]])
    assert errors(taken) == [('sheet "S", cell B2', '"12 34"'), ('sheet "S", cell C2', '"9 ± 1.2.3"')]


def test_a_total_column_may_have_empty_years() -> None:
    rows = [["Year", "Bag hinds", "Bag stags", "Bag"], [2019, None, None, None], [2020, 3, 2, 5], [2021, 4, 0, 4]]
    assert ids(take_rows(rows)) == ["total column: column D", "sum removals"]


def test_years_without_standard_error_or_count_stay_empty() -> None:
    rows = [["Year", "Bag", "Count", "SE"], [2019, 1, 100, 12], [2020, 1, None, None], [2020, 2, None, None]]
    taken = take_rows(rows, {"standard errors": "yes", "duplicates": "sum"})
    assert taken.rows == (("2019", "1", "100", "0.12"), ("2020", "3", "", ""))
    assert taken.ready


def test_a_sum_of_counts_has_a_cv_only_where_each_has() -> None:
    rows = [["Year", "Bag", "Count", "CV"], [2019, 1, 100, 0.2], [2019, 2, 50, None], [2020, 1, 70, 0.1]]
    taken = take_rows(rows, {"duplicates": "sum", "duplicate counts: Count": "sum"})
    assert taken.rows[0] == ("2019", "3", "150", "0.1")
    assert ids(taken) == ["duplicates", "duplicate counts: Count", "missing cv: Count"]


def test_numbers_with_words_are_no_lost_notes() -> None:
    rows = [["Year", "Bag", "Hunters"], [2019, 3, "12 from outside"], [2020, 4, "9 from outside"]]
    assert take_rows(rows).questions == ()


def test_a_merged_range_over_the_edge_of_the_sheet_counts_as_far_as_the_sheet_goes() -> None:
    rows = [["Year", "Removals", None], [None, "hinds", "stags"], [2018, 5, 6], [2019, 1, 2], [None, 3, 4]]
    taken = take_rows(rows, merged=((0, 1, 0, 9), (3, 0, 90_000, 0)))
    assert ids(taken) == ["merged years", "sum removals", "duplicates"]
    assert taken.rows == (("2018", "11"), ("2019", "10"))
