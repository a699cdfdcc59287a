"""Questions: what they show, and what an answer does."""

from __future__ import annotations

from harvest.record.reporting import Report
from harvest.sheets.questions import Asking, Kind, Question, yes

_KIND = Kind("units", "Units?", yes("Leave them out"), "Write the numbers alone.")
_CHOICE = Kind("none", "Which?", (("empty", "Not known"), ("zero", "Nothing")), "Write 0.")


def test_a_question_shows_at_most_five_cases_and_counts_them_all() -> None:
    asking = Asking({})
    for row in range(1, 8):
        asking.add(_KIND, f"B{row}", f"{row} t", str(row))
    assert asking.questions() == (
        Question(
            id="units",
            text="Units?",
            examples=("B1: 1 t → 1", "B2: 2 t → 2", "B3: 3 t → 3", "B4: 4 t → 4", "B5: 5 t → 5"),
            count=7,
            options=(("yes", "Leave them out"), ("no", "Stop: I mend the file")),
            answer=None,
        ),
    )


def test_what_was_found_stands_on_one_line_and_is_cut_off() -> None:
    asking = Asking({})
    asking.add(_KIND, "B1", "a\tb\n" + "c" * 100, "1")
    assert asking.questions()[0].examples == ("B1: a b " + "c" * 55 + "… → 1",)


def test_the_first_option_is_in_effect_until_there_is_an_answer() -> None:
    for given, effect in (("zero", "zero"), ("empty", "empty"), ("no", "empty"), ("?", "empty")):
        assert Asking({"none": given}).choice(_CHOICE) == effect
    assert Asking({}).choice(_CHOICE) == "empty"


def test_an_answer_that_no_option_gives_is_no_answer() -> None:
    for given, answer in (("zero", "zero"), ("no", "no"), ("yes", None), ("", None)):
        asking = Asking({"none": given})
        asking.add(_CHOICE, "B1", "-", "empty")
        assert asking.questions()[0].answer == answer


def test_no_is_an_error_at_the_first_case() -> None:
    asking, report = Asking({"units": "no", "none": "zero"}), Report("herd.csv")
    asking.add(_CHOICE, "B1", "-", "0")
    for place in ("B7", "B8", "B9"):
        asking.add(_KIND, place, "3 t", "3")
    asking.report_stops("Deer", report)
    assert [str(problem) for problem in report.problems] == [
        'error: herd.csv, sheet "Deer", cell B7 and 2 more: found 3 t; you chose to mend this in the file (Units?). '
        "Write the numbers alone."
    ]


def test_a_question_about_one_column_has_its_name() -> None:
    asked = _CHOICE.about("column C")
    assert (asked.id, asked.text) == ("none: column C", "Which? (column C)")


def test_options_can_be_added_and_put_first() -> None:
    more = _CHOICE.offering(("once", "Once"))
    assert [value for value, _ in more.options] == ["empty", "zero", "once"]
    assert [value for value, _ in more.preferring("zero").options] == ["zero", "empty", "once"]
