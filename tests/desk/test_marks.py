"""Numbers in the reader's marks."""

from __future__ import annotations

import pytest

from harvest.desk.marks import Marks, marks_of
from harvest.desk.names import file_name


@pytest.mark.parametrize(
    ("language", "decimal", "thousands"),
    [
        ("de-DE", ",", "."),
        ("fr-FR", ",", "\u202f"),
        ("en-US", ".", ","),
        ("sv", ",", "\u202f"),
        ("pt_BR", ",", "."),
        ("xx", ".", ","),
        ("", ".", ","),
        (None, ".", ","),
        ("../../x", ".", ","),
        ("de-DE-x-private-and-long", ".", ","),
        ("<b>", ".", ","),
        ("C", ".", ","),
    ],
)
def test_the_marks_of_a_language(language: str | None, decimal: str, thousands: str) -> None:
    assert marks_of(language) == Marks(decimal, thousands)


def test_the_marks_of_swiss_german() -> None:
    marks = marks_of("de-CH")
    assert marks.decimal == "."
    assert marks.thousands in ("’", "'")  # which apostrophe changed between editions of the language data


@pytest.mark.parametrize(
    ("text", "german", "french"),
    [
        ("1,234.5", "1.234,5", "1\u202f234,5"),
        ("1,234,567", "1.234.567", "1\u202f234\u202f567"),
        ("<0.1%", "<0,1%", "<0,1%"),
        ("0", "0", "0"),
        ("none", "none", "none"),
        ("No. of years, none", "No. of years, none", "No. of years, none"),
        ("", "", ""),
    ],
)
def test_a_number_is_turned(text: str, german: str, french: str) -> None:
    assert marks_of("de-DE").turn(text) == german
    assert marks_of("fr-FR").turn(text) == french
    assert marks_of("en-GB").turn(text) == text


@pytest.mark.parametrize(
    ("parts", "name"),
    [
        (("Ostrel Ridge red deer", "quota table"), "ostrel-ridge-red-deer-quota-table"),
        (("Ørsta Åäö", "x"), "rsta-aao-x"),
        (("../../etc/passwd", "quota"), "etc-passwd-quota"),
        (("a\0b\nc", "..", "CON"), "a-b-c-con"),
        (("", ""), "record"),
        (("鹿",), "record"),
        (("x" * 200, "quota"), "x" * 80),
        (("x" * 79 + "-yy",), "x" * 79),
    ],
)
def test_the_name_of_a_file(parts: tuple[str, ...], name: str) -> None:
    assert file_name(*parts) == name
