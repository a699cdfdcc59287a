"""What a mark before three digits stands for, by the evidence there is."""

from __future__ import annotations

from decimal import Decimal

import pytest

from harvest.sheets.marks import Marks, find_votes, weigh_marks
from tests.sheets.sheets import ids, take_rows

_NOTHING: frozenset[str] = frozenset()


def weigh(tokens: list[str], numbers: list[Decimal] | None = None, others: frozenset[str] = _NOTHING) -> Marks:
    return weigh_marks("column C", tokens, numbers or [], others, False)


def test_only_tokens_that_can_be_read_in_one_way_tell_the_mark() -> None:
    assert find_votes(["987", "1.234", "1 234"]) == frozenset()
    assert find_votes(["1.234", "12,5"]) == {"comma"}
    assert find_votes(["1.234,5", "12.5"]) == {"comma", "point"}


@pytest.mark.parametrize(
    ("marks", "token", "decided"),
    [
        (weigh(["1.234", "12,5"]), "1.234", "comma"),
        (weigh(["1.234", "12.5"]), "1.234", "point"),
        (weigh(["1.234"], others=frozenset({"comma"})), "1.234", "comma"),
        (weigh(["1.234"], others=frozenset({"point"})), "1.234", None),
        (weigh(["1,234"], others=frozenset({"comma"})), "1,234", None),
        (weigh(["1,234", "12,5", "12.5"]), "1,234", None),
        (weigh(["1.234"]), "1.234", None),
        (weigh_marks("column C", ["1,000"], [], frozenset({"point"}), True), "1,000", "comma"),
    ],
)
def test_the_column_is_believed_and_the_sheet_only_for_thousands(marks: Marks, token: str, decided: str | None) -> None:
    assert marks.decide(token)[0] == decided


@pytest.mark.parametrize(("numbers", "first"), [([], "thousands"), ([987, 5], "thousands"), ([2, 3], "decimal")])
def test_the_likelier_reading_is_proposed(numbers: list[int], first: str) -> None:
    assert weigh(["1.234"], [Decimal(n) for n in numbers]).kind.options[0][0] == first


def test_decimals_elsewhere_do_not_make_a_count_a_thousandth() -> None:
    taken = take_rows([["Year", "Bag", "Count", "CV"], ["2019", "3", "1.234", "0.15"], ["2020", "4", "987", "0.2"]])
    assert ids(taken) == ["thousands or decimal: column C"]
    assert [row[2] for row in taken.rows] == ["1234", "987"]


def test_a_cv_is_never_thousands() -> None:
    taken = take_rows([["Year", "Bag", "Count", "CV"], ["2019", "3", "12.5", "1,000"]], {"decimal comma": "yes"})
    assert taken.rows == (("2019", "3", "12.5", "1.000"),)
    assert taken.ready
