"""Numbers as people write them."""

from __future__ import annotations

from decimal import Decimal

import pytest

from harvest.sheets.numbers import (
    Written,
    holds_number,
    interpretations,
    is_bare_number,
    number_of,
    plain_text,
    round_cv,
    take_apart,
    text_of,
)


@pytest.mark.parametrize(
    ("text", "written"),
    [
        ("12.5", Written("12.5")),
        (" 1 234 ", Written("1 234")),
        ("-5", Written("-5")),
        ("1e3", Written("1e3")),
        ("234 deer", Written("234", unit="deer")),
        ("1,2 t", Written("1,2", unit="t")),
        ("234 est.", Written("234", remark="est.")),
        ("241*", Written("241", remark="*")),
        ("239 (2 flights)", Written("239", remark="(2 flights)")),
        ("15 %", Written("15", percent=True)),
        ("ca. 250", Written("250", doubt="ca.")),
        ("<5", Written("5", doubt="<")),
        ("1,240 ± 150", Written("1,240", error="150")),
        ("1240 (± 12,5 %)", Written("1240", error="12,5", error_percent=True)),
        ("1240 +/- 150 birds", Written("1240", error="150", unit="birds")),
    ],
)
def test_a_number_is_taken_out_of_its_dress(text: str, written: Written) -> None:
    assert take_apart(text) == written


@pytest.mark.parametrize(
    "text",
    ["", "deer", "10-14", "2019-01-01", "12:30", "1.2 k", "3 thousand", "5 x 10", "12 34 5 6 7 x 8 = 9" * 20, "(234)"],
)
def test_what_does_not_begin_with_one_number_is_none(text: str) -> None:
    assert take_apart(text) is None


@pytest.mark.parametrize(
    ("token", "point", "comma"),
    [
        ("987", "987", "987"),
        ("12.5", "12.5", None),
        ("12,5", None, "12.5"),
        ("1.234", "1.234", "1234"),
        ("1,234", "1234", "1.234"),
        ("-1,234.5", "-1234.5", None),
        ("1.234,5", None, "1234.5"),
        ("1,234,567", "1234567", None),
        ("1.234.567", None, "1234567"),
        ("0,123", None, "0.123"),
        ("1234,567", None, "1234.567"),
        ("1 234", "1234", "1234"),
        ("1\u00a0234,50", None, "1234.50"),
        ("1\u2009234.5", "1234.5", None),
        ("1\u202f234", "1234", "1234"),
        ("1'234", "1234", "1234"),
        ("1’234.5", "1234.5", None),
        (".5", "0.5", None),
        ("12.", "12", None),
        ("1e3", "1000", None),
        ("12 34", None, None),
        ("1,23,456", None, None),
        ("1 234'567", None, None),
        ("1" * 41, None, None),
    ],
)
def test_a_token_is_read_by_both_decimal_marks(token: str, point: str | None, comma: str | None) -> None:
    found = {name: plain_text(number) for name, number in interpretations(token).items()}
    expected = {"point": point, "comma": comma}
    assert found == {name: text for name, text in expected.items() if text is not None}


@pytest.mark.parametrize(
    ("cell", "text"),
    [(3, "3"), (3.0, "3"), (0.15, "0.15"), (1e-7, "0.0000001"), (1e-300, "1E-300"), (1e20, "1" + "0" * 20)],
)
def test_a_number_is_as_precise_as_it_was(cell: float, text: str) -> None:
    number = number_of(cell)
    assert number is not None
    assert plain_text(number) == text


@pytest.mark.parametrize("cell", [None, True, "3", float("nan"), float("inf")])
def test_what_is_no_number_in_a_cell(cell: object) -> None:
    assert number_of(cell) is None  # type: ignore[arg-type]


def test_a_label_that_begins_with_a_number_is_no_bare_number() -> None:
    assert holds_number("2 observers")
    assert not is_bare_number("2 observers")
    assert is_bare_number("2")


def test_a_cell_as_text() -> None:
    assert [text_of(cell) for cell in (None, " a\r\nb ", 2.0, True)] == ["", "a\nb", "2", "TRUE"]


@pytest.mark.parametrize(
    ("cv", "error", "expected"),
    [("0.10483", "1300", "0.105"), ("0.10483", "5", "0.10"), ("0.010449", "12.5", "0.0104")],
)
def test_a_computed_cv_has_two_or_three_digits(cv: str, error: str, expected: str) -> None:
    assert str(round_cv(Decimal(cv), Decimal(error))) == expected
