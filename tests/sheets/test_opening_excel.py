"""Workbooks are read as they were last saved; what is damaged or made to harm is refused, and quickly."""

from __future__ import annotations

import io
import struct
import time
import warnings
import zipfile
from collections.abc import Callable
from datetime import date, datetime, timedelta
from datetime import time as moment

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from openpyxl import Workbook

from harvest.sheets.grid import Sheet, SheetError
from harvest.sheets.opening import open_book

SHEET = "xl/worksheets/sheet1.xml"
Change = Callable[[bytes], bytes]


def saved(book: Workbook) -> bytes:
    stream = io.BytesIO()
    book.save(stream)
    return stream.getvalue()


def made(*rows: list[object]) -> bytes:
    book = Workbook()
    for row in rows or ([2019, 3],):
        book.active.append(row)
    return saved(book)


def rewritten(data: bytes, changes: dict[str, Change | bytes | None]) -> bytes:
    """The archive with parts changed, added, or (None) left out."""
    stream = io.BytesIO()
    left = dict(changes)
    with zipfile.ZipFile(io.BytesIO(data)) as old, zipfile.ZipFile(stream, "w", zipfile.ZIP_DEFLATED) as new:
        for name in old.namelist():
            change = left.pop(name, lambda text: text)
            if change is not None:
                new.writestr(name, change if isinstance(change, bytes) else change(old.read(name)))
        for name, text in left.items():
            new.writestr(name, text)
    return stream.getvalue()


def with_rows(text: bytes) -> bytes:
    """A workbook whose sheet has these rows of XML below its own."""
    return rewritten(made(), {SHEET: lambda old: old.replace(b"</sheetData>", text + b"</sheetData>")})


def first(data: bytes) -> Sheet:
    return open_book("a.xlsx", data).sheets[0]


def refusal(data: bytes, name: str = "a.xlsx") -> str:
    with pytest.raises(SheetError) as caught:
        open_book(name, data)
    return str(caught.value)


def test_values_come_as_what_they_are() -> None:
    sheet = first(
        made(
            ["year", 2019, 3.5, True, None, " both "],
            [datetime(2019, 1, 2, 3, 4), date(2020, 5, 6), moment(7, 8), timedelta(days=1.5)],
        )
    )
    assert sheet.cells == (
        ("year", 2019, 3.5, True, None, " both "),
        (datetime(2019, 1, 2, 3, 4), datetime(2020, 5, 6), "07:08:00", 1.5, None, None),
    )
    assert [type(value) for value in sheet.cells[0]] == [str, int, float, bool, type(None), str]


def test_errors_stay_as_text_and_texts_as_typed() -> None:
    book = Workbook()
    for column, value in enumerate(["#REF!", "#DIV/0!", "#N/A"], start=1):
        book.active.cell(1, column, value).data_type = "e"
    book.active["A2"] = "=1+1"
    book.active["A2"].data_type = "s"
    book.active["B2"] = "_x005F_x0041_"
    sheet = first(saved(book))
    assert sheet.cells == (("#REF!", "#DIV/0!", "#N/A"), ("=1+1", "_x0041_", None))
    assert sheet.formulas == frozenset()


def test_hidden_and_merged_parts_are_kept_and_told() -> None:
    book = Workbook()
    sheet = book.active
    for row in range(1, 4):
        sheet.append([row, row, row])
    sheet.merge_cells("A1:B2")
    sheet.merge_cells("E9:F9")
    sheet.row_dimensions[2].hidden = sheet.row_dimensions[30].hidden = True
    sheet.column_dimensions["C"].hidden = sheet.column_dimensions["H"].hidden = True
    other = book.create_sheet("Old counts")
    other["B1"], other.sheet_state = "x", "veryHidden"
    found = open_book("a.xlsx", saved(book))
    assert [(s.name, s.hidden) for s in found.sheets] == [("Sheet", False), ("Old counts", True)]
    assert found.sheets[0].cells == ((1, None, 1), (None, None, 2), (3, 3, 3))
    assert found.sheets[0].merged == ((0, 0, 1, 1),)
    assert (found.sheets[0].hidden_rows, found.sheets[0].hidden_columns) == (frozenset({1}), frozenset({2}))
    assert found.sheets[1].cells == ((None, "x"),)
    assert found.notes == ('The sheet "Old counts" is hidden in the file.',)


def test_formulas_give_their_stored_values_and_are_told() -> None:
    data = with_rows(
        b'<row r="2"><c r="A2"><f>A1+1</f><v>2020</v></c><c r="B2"><f>B1*2</f></c>'
        b'<c r="C2" t="str"><f>T(0)</f><v></v></c><c r="D2" t="str"><f>T(1)</f><v>fog</v></c></row>'
        b'<row r="9"><c r="E9"><f>1+1</f><v/></c></row>'
    )
    book = open_book("a.xlsx", data)
    assert book.sheets[0].cells[:2] == ((2019, 3, None, None, None), (2020, None, None, "fog", None))
    assert book.sheets[0].size == (9, 5)
    assert book.sheets[0].formulas == {(1, 0), (1, 1), (1, 2), (1, 3), (8, 4)}
    assert book.notes == (
        '5 cells of the sheet "Sheet" hold formulas: the values stored when the file was last saved are used; save the '
        "file in the spreadsheet program first if it was changed by another program.",
        'Formulas without a stored value on the sheet "Sheet" are taken as empty cells: B2, E9.',
    )


def test_formatting_to_the_last_row_is_cut_off_quickly() -> None:
    rows = b"".join(b'<row r="%d" s="1" customFormat="1"><c r="A%d" s="0"/></row>' % (i, i) for i in range(3, 1048577))
    data = with_rows(rows)
    start = time.monotonic()
    sheet = first(data)
    assert sheet.cells == ((2019, 3),)
    assert time.monotonic() - start < 30


@pytest.mark.parametrize(
    ("row", "words"),
    [
        (b'<row r="100001"><c r="A100001"><v>1</v></c></row>', "in 100,001 rows and 2 columns; at most 100,000 rows"),
        (b'<row r="2"><c r="SG2"><v>1</v></c></row>', "in 2 rows and 501 columns"),
        (b'<row r="90000"><c r="SF90000"><v>1</v></c></row>', "2,000,000 cells"),
    ],
)
def test_too_much_content_is_refused(row: bytes, words: str) -> None:
    said = refusal(with_rows(row))
    assert said.startswith('the sheet "Sheet" of "a.xlsx" has content in')
    assert words in said
    assert "Copy the rows and columns of the yearly history into a new file" in said


@pytest.mark.parametrize(
    "row",
    [
        b'<row r="1"><c r="A1"><v>5</v></c></row>',
        b'<row r="2"><c r="A3"><v>5</v></c></row>',
        b'<row r="2"><c r="5"><v>5</v></c></row>',
        b'<row r="2"><c r="A2" t="s"><v>77</v></c></row>',
        b'<row r="2"><c r="A2"><v>x</v></c></row>',
        b"<row",
    ],
)
def test_a_damaged_sheet_is_refused(row: bytes) -> None:
    assert refusal(with_rows(row)).startswith('"a.xlsx" is damaged, or not a workbook that can be read.')


@pytest.mark.parametrize("text", ["utf-8", "utf-16"])
def test_definitions_in_the_xml_are_refused(text: str) -> None:
    """A billion laughs: each entity is ten of the one before it."""
    laughs = "".join(f'<!ENTITY l{n} "{f"&l{n - 1};" * 10}">' for n in range(1, 10))
    bomb = f'<!DOCTYPE worksheet [<!ENTITY l0 "ha">{laughs}]>'

    def change(old: bytes) -> bytes:
        return (bomb + old.decode().replace("<sheetData>", "<sheetData><row><c><v>&l9;</v></c></row>")).encode(text)

    for part in (SHEET, "xl/workbook.xml", "[Content_Types].xml"):
        start = time.monotonic()
        assert "holds definitions (DTD)" in refusal(rewritten(made(), {part: change}))
        assert time.monotonic() - start < 5


def test_definitions_across_two_pieces_are_found() -> None:
    padding = b"<!--" + b"x" * (1_000_000 - 4 - 3 - 5) + b"-->"
    text = padding + b"<!DOCTYPE worksheet>" + b"<worksheet/>"
    assert b"<!DOCTYPE" not in text[:1_000_000] and b"<!DOCTYPE" not in text[1_000_000:]
    assert "holds definitions (DTD)" in refusal(rewritten(made(), {SHEET: text}))


def test_a_drawing_may_name_its_kind_but_define_nothing() -> None:
    drawing = b"<!DOCTYPE svg><svg/>"
    assert first(rewritten(made(), {"xl/media/image1.svg": drawing})).cells == ((2019, 3),)
    assert "holds definitions (DTD)" in refusal(rewritten(made(), {"xl/drawings/image1.svg": drawing}))
    defining = b'<!DOCTYPE svg [<!ENTITY a "x">]><svg/>'
    assert "holds definitions (DTD)" in refusal(rewritten(made(), {"xl/media/image1.svg": defining}))


def test_an_unusual_character_set_is_refused() -> None:
    text = b'<?xml version="1.0" encoding="UTF-7"?>+ADwAIQ-DOCTYPE x+AD4-<worksheet/>'
    assert "a character set that no spreadsheet program writes" in refusal(rewritten(made(), {SHEET: text}))


def test_bombs_are_refused_by_the_list_of_contents() -> None:
    start = time.monotonic()
    assert "grows to an unusual size" in refusal(rewritten(made(), {"xl/a.xml": b"0" * 11_000_000}))
    many = {f"xl/{n}.bin": bytes(range(256)) * 200 for n in range(2001)}
    assert "parts; a workbook has at most 2,000" in refusal(rewritten(made(), dict(many)))
    assert time.monotonic() - start < 30


def relabelled(data: bytes, part: str, size: int) -> bytes:
    """The archive whose list of contents states another unpacked size of a part."""
    place = data.rindex(part.encode()) - 46  # the list's entry, whose head has 46 bytes
    assert data[place : place + 4] == b"PK\x01\x02"
    return data[: place + 24] + struct.pack("<I", size) + data[place + 28 :]


def test_a_list_of_contents_that_lies_is_refused() -> None:
    bomb = rewritten(made(), {"xl/bomb.xml": b"0" * 50_000_000})
    lying = relabelled(bomb, "xl/bomb.xml", 1000)
    assert zipfile.ZipFile(io.BytesIO(lying)).getinfo("xl/bomb.xml").file_size == 1000
    assert refusal(lying).startswith('"a.xlsx" is damaged: it cannot be unpacked.')


def test_together_not_more_than_the_limit_is_unpacked(monkeypatch: pytest.MonkeyPatch) -> None:
    data = made(*([n, "text" * 9, n / 7] for n in range(2000)))
    monkeypatch.setattr("harvest.sheets.archive.MAX_UNPACKED", 100_000)
    assert "grows to an unusual size" in refusal(data)
    monkeypatch.setattr("harvest.sheets.archive._check_list", lambda name, parts: None)
    assert "grows to an unusual size" in refusal(data)  # found again in unpacking


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({"xl/vbaProject.bin": b"x"}, "holds macros (small programs), which are not read"),
        ({"xl/macrosheets/sheet1.xml": b"<x/>"}, "holds macros"),
        ({"xl/externalLinks/externalLink1.xml": b"<x/>"}, "holds links to other files"),
        ({"xl/workbook.bin": b"x"}, "is a binary workbook (.xlsb)"),
        ({"mimetype": b"application/vnd.oasis.opendocument.spreadsheet"}, "is a spreadsheet of the kind .ods"),
        ({"mimetype": b"application/vnd.oasis.opendocument.text"}, "is a document, which is not read"),
        ({"word/document.xml": b"<x/>"}, "is a text document or a presentation"),
        ({"[Content_Types].xml": None}, "is a zip archive, not a workbook"),
        ({"xl/workbook.xml": None}, "is damaged, or not a workbook that can be read"),
        ({SHEET: b""}, "is damaged, or not a workbook that can be read"),
    ],
)
def test_other_kinds_are_refused_by_name(changes: dict[str, Change | bytes | None], words: str) -> None:
    assert words in refusal(rewritten(made(), changes))


def test_an_encrypted_archive_is_refused() -> None:
    data = bytearray(made())
    place = data.index(b"PK\x01\x02")
    data[place + 8] |= 1
    assert "is protected by a password" in refusal(bytes(data))


def test_two_parts_of_one_name_are_refused() -> None:
    stream = io.BytesIO(made())
    with zipfile.ZipFile(stream, "a") as archive, warnings.catch_warnings():
        warnings.simplefilter("ignore")
        archive.writestr(SHEET, b"<worksheet/>")
    assert "two of its parts have the same name" in refusal(stream.getvalue())


def test_an_empty_workbook_is_refused() -> None:
    assert refusal(saved(Workbook())) == '"a.xlsx" has only empty sheets. Fill one in, save it, and choose it again.'


def test_a_workbook_under_another_name_is_opened() -> None:
    assert open_book("a.csv", made()).sheets[0].cells == ((2019, 3),)


@given(st.lists(st.tuples(st.integers(0, 6000), st.integers(0, 255)), min_size=1, max_size=8))
@settings(max_examples=150)
def test_any_damage_is_a_book_or_a_refusal(damage: list[tuple[int, int]]) -> None:
    data = bytearray(made(["year", "n"], [2019, 3.5], [2020, "=A1"]))
    for place, byte in damage:
        data[place % len(data)] = byte
    try:
        open_book("a.xlsx", bytes(data))
    except SheetError:
        return


@given(st.integers(0, 5000), st.integers(0, 30))
@settings(max_examples=60)
def test_any_damage_inside_a_sheet_is_a_book_or_a_refusal(place: int, size: int) -> None:
    data = made(["year", "n"], [2019, 3.5], [2020, "=A1"], [True, "x"])
    cut = rewritten(data, {SHEET: lambda old: old[: place % len(old)] + old[place % len(old) + size :]})
    try:
        open_book("a.xlsx", cut)
    except SheetError:
        return
