"""What a file is follows from its content; text tables are read as they stand, and guesses are told."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from harvest.sheets.csv_opening import open_csv
from harvest.sheets.grid import Book, SheetError
from harvest.sheets.limits import MAX_BYTES, as_rectangle, cell_name, in_megabytes
from harvest.sheets.opening import open_book

COMMAS = "The cells were taken to be separated by commas."
SEMICOLONS = "The cells were taken to be separated by semicolons."


def note_of(charset: str) -> str:
    return f"The character set was guessed as {charset}: check letters with accents in the preview."


def test_a_plain_table() -> None:
    book = open_book("C:\\mine\\herd.csv", b"year,n\r\n2019,3\r\n\r\n2020, x \r\n,,\r\n")
    assert book.name == "herd.csv"
    assert book.notes == (COMMAS,)
    (sheet,) = book.sheets
    assert sheet.name == "herd"
    assert sheet.cells == (("year", "n"), ("2019", "3"), (None, None), ("2020", " x "))
    assert sheet.size == (4, 2)
    assert (sheet.hidden, sheet.formulas, sheet.merged) == (False, frozenset(), ())


@pytest.mark.parametrize(
    ("data", "cells", "notes"),
    [
        ("Zählung;n\n2019;1,5\n".encode(), (("Zählung", "n"), ("2019", "1,5")), (SEMICOLONS,)),
        ("\ufeffyear,n\n".encode(), (("year", "n"),), (COMMAS,)),
        ("Zählung;n\n".encode("latin-1"), (("Zählung", "n"),), (note_of("Windows-1252"), SEMICOLONS)),
        (b"a;\x96\n", (("a", "–"),), (note_of("Windows-1252"), SEMICOLONS)),
        (b"a;\x81\n", (("a", "\x81"),), (note_of("Latin-1"), SEMICOLONS)),
        ("Zählung,n\n".encode("utf-16"), (("Zählung", "n"),), (COMMAS,)),
        ("Zählung,n\n".encode("utf-16-le"), (("Zählung", "n"),), (note_of("UTF-16"), COMMAS)),
        ("Zählung,n\n".encode("utf-16-be"), (("Zählung", "n"),), (note_of("UTF-16"), COMMAS)),
        (b"a\tb\n1,5\t2\n", (("a", "b"), ("1,5", "2")), ("The cells were taken to be separated by tabs.",)),
        (b"a|b\n1,5|2\n", (("a", "b"), ("1,5", "2")), ("The cells were taken to be separated by bars.",)),
        (b"Herd\n\ny;n\n2019;1,5\n2020;2\n", (("Herd", None), (None, None), ("y", "n"), ("2019", "1,5"), ("2020", "2")),
         (SEMICOLONS,)),
        (b"2019;1,5;2,5\n2020;3,5;4,5\n", (("2019", "1,5", "2,5"), ("2020", "3,5", "4,5")), (SEMICOLONS,)),
        (b"y,n,m\n2019,3,fog; wind\n2020,4,\n", (("y", "n", "m"), ("2019", "3", "fog; wind"), ("2020", "4", None)),
         (COMMAS,)),
        (b'a;"b;c"\n"d""e";"f\ng"\n', (("a", "b;c"), ('d"e', "f\ng")), (SEMICOLONS,)),
        (b"sep=;\r\na;b,c,d\r\n", (("a", "b,c,d"),), ()),
        (b"year\n2019\n", (("year",), ("2019",)), ()),
        (b"=1+1,'x\n", (("=1+1", "'x"),), (COMMAS,)),
    ],
)  # fmt: skip
def test_character_sets_and_separators(
    data: bytes, cells: tuple[tuple[str | None, ...], ...], notes: tuple[str, ...]
) -> None:
    book = open_book("a.csv", data)
    assert book.sheets[0].cells == cells
    assert book.notes == notes


@pytest.mark.parametrize(
    ("name", "data", "words"),
    [
        ("a.csv", b"", '"a.csv" is an empty file'),
        ("a.csv", b"\n\n", '"a.csv" has only empty cells'),
        ("a.csv", b"a" * (MAX_BYTES + 1), "20 megabytes; at most 20 megabytes are read"),
        ("a.csv", b"a,b\n1,\x00\n" * 9, "holds characters that no table saved as text has"),
        ("a.csv", b"\x01\x02\x03\xff" * 40, "holds characters that no table saved as text has"),
        ("a.csv", b"\xff\xfea", "looks like UTF-16 text and is damaged"),
        ("a.xlsm", b"PK\x03\x04", "is a workbook for macros, which are not read"),
        ("a.xls", b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + "Workbook".encode("utf-16-le"),
         'a workbook of the old kind (.xls), which is not read. Open it in the spreadsheet program, choose "Save as" '
         'and the type "Excel workbook (.xlsx)" or CSV.'),
        ("a.doc", b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1....", "an old office document"),
        ("a.xlsx", b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + "EncryptedPackage".encode("utf-16-le"),
         "is protected by a password. Take the password off"),
        ("a.csv", b"%PDF-1.7 ...", "is a PDF document, not a spreadsheet"),
        ("a.csv", b"{\\rtf1 Dear office", "is a text document (.rtf)"),
        ("a.xls", b"\n<HTML><table>", "is a web page, whatever its name says"),
        ("a.xls", b"<?xml version='1.0'?><Workbook/>", "is an XML file"),
        ("a.csv", b"\x89PNG\r\n\x1a\n", "is a picture"),
        ("a.csv", b'a,b\n1,2\n"open,3\n4,5\n', '"a.csv", row 3, has cells that cannot be told apart'),
        ("a.csv", b",".join([b"x"] * 501), "content in 1 rows and 501 columns"),
        ("a.csv", b"1\n" * 100_001, "content in 100,001 rows and 1 columns; at most 100,000 rows"),
        ("a.csv", b"1\n" * 99_999 + b"," * 499 + b"1\n", "at most 100,000 rows, 500 columns and 2,000,000 cells"),
    ],
)  # fmt: skip
def test_what_cannot_be_read_is_refused_with_its_cure(name: str, data: bytes, words: str) -> None:
    with pytest.raises(SheetError) as caught:
        open_book(name, data)
    assert words in str(caught.value)


def test_a_name_with_a_line_break_is_shown_on_one_line() -> None:
    with pytest.raises(SheetError) as caught:
        open_csv("x\nb", b"\x01")
    assert str(caught.value).startswith('"x\\nb" holds characters')


@given(st.binary(max_size=300))
@settings(max_examples=200)
def test_any_bytes_are_a_book_or_refused(data: bytes) -> None:
    try:
        book = open_book("any.csv", data)
    except SheetError:
        return
    assert isinstance(book, Book)
    assert len({len(row) for row in book.sheets[0].cells}) == 1


@given(
    st.lists(st.lists(st.sampled_from(["", "a", "1,5", 'say "x"', "b\nc", "ü"]), min_size=3, max_size=3), min_size=1)
)
@settings(max_examples=60)
def test_what_a_program_wrote_is_read_as_it_was(rows: list[list[str]]) -> None:
    text = "head;two;three\n" + "".join(
        ";".join(f'"{c.replace(chr(34), chr(34) * 2)}"' for c in r) + "\n" for r in rows
    )
    found = open_book("a.csv", text.encode()).sheets[0].cells[1:]
    wanted = as_rectangle([[cell or None for cell in row] for row in [["x", "x", "x"], *rows]])[1:]
    assert found == wanted


def test_names_of_cells_and_sizes() -> None:
    assert [cell_name(0, 0), cell_name(6, 1), cell_name(9, 26)] == ["A1", "B7", "AA10"]
    assert in_megabytes(1_234_567) == "1.2 megabytes"
    assert in_megabytes(20_000_000) == "20 megabytes"


def test_rectangles_keep_cells_that_must_stay() -> None:
    assert as_rectangle([["a"], [None, None]]) == (("a",),)
    assert as_rectangle([["a"], [None, None]], frozenset({(1, 1)})) == (("a", None), (None, None))
