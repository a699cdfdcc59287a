"""A record survives its workbook, and what is wrong in a workbook is told with its sheet and row."""

from __future__ import annotations

import io
import zipfile
from collections.abc import Callable
from dataclasses import replace
from datetime import datetime

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from openpyxl import Workbook, load_workbook
from openpyxl.cell.cell import MergedCell

from harvest.errors import CAUTION, RecordError
from harvest.record import Record, demo_folder, demo_names, read_record
from harvest.record.check import check_texts
from harvest.record.fields import FIELDS, SECTIONS, fields_of
from harvest.record.model import FORMAT, History
from harvest.record.schema import DISTRIBUTIONS, Field
from harvest.record.template import blank_record_files
from harvest.record.write import in_order
from harvest.sheets import record_workbook_form as form
from harvest.sheets.grid import SheetError
from harvest.sheets.record_workbook import (
    blank_record_workbook,
    check_record_workbook,
    is_record_workbook,
    record_workbook,
)
from harvest.sheets.record_workbook_values import from_cells, quote, to_cells, unquote
from harvest.sheets.record_workbook_words import about_field, without_toml
from tests.record.strategies import notes, records, texts


def deer() -> Record:
    return read_record(demo_folder("deer"))


def edited(change: Callable[[Workbook], None], data: bytes | None = None) -> bytes:
    """The demo's workbook after somebody changed it."""
    book = load_workbook(io.BytesIO(record_workbook(deer()) if data is None else data))
    change(book)
    stream = io.BytesIO()
    book.save(stream)
    return stream.getvalue()


def row_of(book: Workbook, sheet: str, block: str, item: str = "") -> int:
    """The row of an item of a block, from 1; without an item, of the block's heading."""
    inside = False
    for row in range(1, book[sheet].max_row + 1):
        text = book[sheet].cell(row, 1).value
        inside = inside or text == form.MARK + block
        if inside and (text == item or not item):
            return row
    raise ValueError(f"no {item!r} below {block!r}")


def with_cell(sheet: str, block: str, item: str, column: str, value: object) -> tuple[bytes, str]:
    """The demo's workbook with one cell changed, and how a problem names the row."""
    place = []

    def change(book: Workbook) -> None:
        row = row_of(book, sheet, block, item)
        place.append(row)
        book[sheet][f"{column}{row}"] = value

    return edited(change), f'sheet "{sheet}", row {place[0] if place else 0}'


def with_stored_value(data: bytes, formula: str, value: str) -> bytes:
    """The workbook as a spreadsheet program would save it: the formula with its value."""
    stream = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(data)) as old, zipfile.ZipFile(stream, "w") as new:
        for part in old.infolist():
            text = old.read(part)
            for empty in ("<v></v>", "<v />", "<v/>"):
                text = text.replace(f"<f>{formula}</f>{empty}".encode(), f"<f>{formula}</f><v>{value}</v>".encode())
            new.writestr(part.filename, text)
    return stream.getvalue()


def told(data: bytes) -> list[str]:
    return [str(problem) for problem in check_record_workbook("herd.xlsx", data).problems]


@given(records())
@settings(max_examples=25, suppress_health_check=[HealthCheck.too_slow])
def test_any_record_survives_its_workbook(record: Record) -> None:
    checked = check_record_workbook("any.xlsx", record_workbook(record))
    found, _ = check_texts(checked.record_text, checked.history_text)
    assert found == in_order(record)


@pytest.mark.parametrize("name", demo_names())
def test_the_demos_survive_without_a_word(name: str) -> None:
    checked = check_record_workbook(f"{name}.xlsx", record_workbook(read_record(demo_folder(name))))
    assert checked.problems == ()
    assert checked.record == read_record(demo_folder(name))


def test_the_blank_workbook_is_the_template() -> None:
    data = blank_record_workbook()
    checked = check_record_workbook("new.xlsx", data)
    assert checked.problems == ()
    assert checked.record == check_texts(*blank_record_files())[0]
    book = load_workbook(io.BytesIO(data))
    assert all(str(sheet["A2"].value).startswith("ALL NUMBERS AND NAMES HERE ARE INVENTED") for sheet in book)


def test_a_record_is_not_marked_as_invented() -> None:
    book = load_workbook(io.BytesIO(record_workbook(deer())))
    assert not any("INVENTED" in str(cell.value) for sheet in book for row in sheet.iter_rows() for cell in row)


@pytest.mark.parametrize("data", [record_workbook(deer()), blank_record_workbook()], ids=["demo", "blank"])
def test_the_caution_stands_on_every_sheet_and_page(data: bytes) -> None:
    for sheet in load_workbook(io.BytesIO(data)):
        assert any(cell.value == CAUTION for row in sheet.iter_rows() for cell in row), sheet.title
        assert sheet.oddFooter.left.text == CAUTION


def test_every_key_has_its_row_with_its_help() -> None:
    book = load_workbook(io.BytesIO(blank_record_workbook()))
    for title, sections in form.sheets().items():
        for section in sections:
            for field in filter(form.is_shown, fields_of(section.name)):
                row = row_of(book, title, form.block_title(section, 1).removeprefix(form.MARK), field.title)
                assert book[title].cell(row, form.HELP + 1).value == about_field(field)
                assert book[title].cell(row, form.UNIT + 1).value == (field.unit or None)


def test_every_choice_is_offered_in_a_drop_down() -> None:
    book = load_workbook(io.BytesIO(blank_record_workbook()))
    offered = {rule.formula1 for sheet in book for rule in sheet.data_validations.dataValidation}
    wanted = {f'"{",".join(field.choices)}"' for field in FIELDS if field.choices}
    kinds = ",".join(name for name, _ in form.KINDS.values())
    assert offered == wanted | {f'"{kinds}"', '"abundance,share of carrying capacity"'}


def test_a_new_key_and_a_new_section_would_appear_by_themselves(monkeypatch: pytest.MonkeyPatch) -> None:
    added = Field("objectives", "antler_points", "whole number", "Points wanted.", example=8)
    monkeypatch.setattr("harvest.record.fields.FIELDS", (*FIELDS, added))
    section = replace(SECTIONS[-1], name="weather")
    monkeypatch.setattr("harvest.sheets.record_workbook_form.SECTIONS", (*SECTIONS, section))
    book = load_workbook(io.BytesIO(blank_record_workbook()))
    row = row_of(book, "Objectives", "Objectives", "Antler points")
    assert book["Objectives"].cell(row, form.HELP + 1).value == "Points wanted. Whole number. For example 8."
    assert book["Weather"]["A4"].value == "▸ Weather"


@pytest.mark.parametrize("field", FIELDS, ids=lambda field: field.path)
def test_every_example_survives_its_cells(field: Field) -> None:
    assert from_cells(field, to_cells(field, field.example)) == field.example


def test_every_distribution_has_its_words_and_cells() -> None:
    assert set(form.KINDS) == set(DISTRIBUTIONS)
    assert form.parameter_columns("triangular") == {"low": form.FIRST, "mode": form.MIDDLE, "high": form.LAST}
    assert form.parameter_columns("lognormal") == {"median": form.FIRST, "sd_log": form.LAST}


def test_items_and_headings_lead_back_to_keys() -> None:
    for field in filter(form.is_shown, FIELDS):
        assert form.field_named(field.section, field.title) == field
        assert form.field_named(field.section, field.key.upper()) == field
        assert form.key_named(field.title) in [f.key for f in FIELDS if f.title == field.title]
    for section in SECTIONS:
        assert form.split_title(form.block_title(section, 12)) == section.name
    assert form.key_named("Antler points") == "antler_points"
    assert form.label("some_cv") == "Some CV"


@given(texts | st.sampled_from(['""', '"', '"a"', "  ", "\n"]))
def test_quoted_texts_come_back(text: str) -> None:
    assert unquote(quote(text)) == text


@pytest.mark.parametrize("text", ["=1+1", "'quoted", "#REF!", "  both ", "_x0041_", "_x005F_x0041_", "a\n\tb", "2019"])
def test_texts_are_never_formulas_and_keep_every_character(text: str) -> None:
    history = replace(deer().history, notes=(text, *deer().history.notes[1:]))
    record = replace(deer(), place=text.replace("\n\t", ""), plan=(("purpose", text),), history=history)
    data = record_workbook(record)
    assert check_record_workbook("a.xlsx", data).record == record
    book = load_workbook(io.BytesIO(data))
    assert not any(cell.data_type == "f" for sheet in book for row in sheet.iter_rows() for cell in row)


@given(notes)
@settings(max_examples=15)
def test_any_note_survives(note: str) -> None:
    record = replace(deer(), history=replace(deer().history, notes=(note, *deer().history.notes[1:])))
    assert check_record_workbook("a.xlsx", record_workbook(record)).record == record


@given(st.floats(min_value=1e-300, max_value=1e15))
@settings(max_examples=15)
def test_numbers_keep_every_digit(number: float) -> None:
    record = replace(deer(), present_quota=number)
    record = replace(record, history=replace(record.history, removals=(number, *record.history.removals[1:])))
    assert check_record_workbook("a.xlsx", record_workbook(record)).record == record


def test_a_record_that_breaks_a_rule_is_refused() -> None:
    with pytest.raises(RecordError):
        record_workbook(replace(deer(), history=History((), ())))


def test_what_is_a_record_workbook() -> None:
    plain = Workbook()
    plain.active.append(["year", "removals"])
    stream = io.BytesIO()
    plain.save(stream)
    assert is_record_workbook(record_workbook(deer()))
    assert not is_record_workbook(stream.getvalue())
    assert not is_record_workbook(b"year,removals\n2020,3\n")
    assert not is_record_workbook(b"")
    with pytest.raises(SheetError, match=r'^"plain.xlsx" is not the workbook of a record: .* harvest new NAME\.xlsx$'):
        check_record_workbook("plain.xlsx", stream.getvalue())


def test_a_newer_format_is_told() -> None:
    def change(book: Workbook) -> None:
        row = next(row for row in range(1, 60) if book["Read me"].cell(row, 1).value == form.FORMAT_LABEL)
        book["Read me"].cell(row, 2).value = FORMAT + 1

    assert told(edited(change)) == [
        f"error: herd.xlsx, format: found {FORMAT + 1}; this program knows record formats up to {FORMAT}. "
        "The record was written by a newer version: update the program."
    ]


@pytest.mark.parametrize(
    ("sheet", "block", "item", "column", "value", "words"),
    [
        (
            "Growth", "Rates of all curves", "Good and bad years (process noise)", "C", "0,05",
            "(rates.process_noise.low): found \"0,05\"; \"uniform\" takes low and high. Write a plain number.",
        ),
        (
            "Growth", "Rates of all curves", "Demographic noise", "C", "12 %",
            '(rates.demographic_noise): found "12 %"; it must be a number from 0 to 20, or a range. '
            "Write a number, or a table with a distribution and its parameters.",
        ),
        (
            "Growth", "Rates of all curves", "Greatest growth per head (max growth)", "B", "90% betwen",
            '(rates.max_growth.distribution): found "90% betwen"; the distribution must be one of "fixed", "uniform", '
            '"triangular", "normal", "lognormal", "beta", "90% between". Was "90% between" meant?',
        ),
        (
            "Population", "Population", "Season", "C", "shrt",
            '(season): found "shrt"; it must be one of "short" or "all year". Was "short" meant?',
        ),
        (
            "Population", "Population", "Counted in", "C", None,
            '(unit): found nothing; this key is needed. Add unit, one of "animals" or "tonnes". '
            "Unit of abundance, removals and quota.",
        ),
        (
            "Objectives", "Objectives", "Risk tolerance", "C", 5,
            "(objectives.tolerance): found 5; it must be a proportion above 0 and below 1. "
            "Was 0.05 meant? A proportion is not written in percent.",
        ),
        (
            "Objectives", "Objectives", "Horizon", "C", 20.5,
            "(objectives.horizon): found 20.5; it must be a whole number from 1 to 200. "
            "Write a plain number in the allowed range.",
        ),
        (
            "Objectives", "Objectives", "Counts as collapsed below", "C", 10,
            "(objectives.collapse): found 10; a fraction of carrying capacity is \"share of carrying capacity\" with a "
            "number above 0 and at most 1. Write for example 0.3 as \"share of carrying capacity\", "
            "or an abundance as a number.",
        ),
        (
            "Objectives", "Objectives", "Recovery: back above the limit", "E", None,
            "(objectives.recovery): found a table; it must be the years in the first cell and the chance in the last. "
            "Write both years and chance, and nothing else.",
        ),
        (
            "Surveys", "Survey 1", "Kind", "C", "absolut",
            '(survey 1, kind): found "absolut"; it must be one of "absolute" or "index". Was "absolute" meant?',
        ),
        (
            "Growth", "Rates of all curves", "Carrying capacity", "A", "Carying capacity",
            '(rates."carying_capacity"): found 3200; this key is unknown here. Was "Carrying capacity" meant?',
        ),
    ],
)  # fmt: skip
def test_a_fault_is_told_with_its_sheet_and_row(
    sheet: str, block: str, item: str, column: str, value: object, words: str
) -> None:
    data, where = with_cell(sheet, block, item, column, value)
    assert f"error: herd.xlsx, {where} {words}" in told(data)
    assert check_record_workbook("herd.xlsx", data).record is None


@pytest.mark.parametrize(
    ("item", "column", "value", "words"),
    [
        ("Good and bad years (process noise)", "D", 0.1,
         'found 0.1 under Most likely; "uniform" means: anywhere between low and high, equally likely'),
        ("Demographic noise", "E", 1, 'found 1 under High; "exactly" means: known exactly: one value'),
        ("Low abundance meant by max growth", "E", 0.1,
         "found 0.1 under High; the value stands in one cell, the first"),
        ("Low abundance meant by max growth", "B", "exactly",
         'found "exactly" under How it is stated; the value stands in one cell, the first'),
    ],
)  # fmt: skip
def test_cells_without_a_use_are_told(item: str, column: str, value: object, words: str) -> None:
    data, where = with_cell("Growth", "Rates of all curves", item, column, value)
    cure = "Empty what is not used, or choose another way to state it."
    assert told(data) == [f"error: herd.xlsx, {where} ({item}): {words}. {cure}"]


def test_a_range_without_its_kind_is_told_and_kept() -> None:
    data, where = with_cell("Growth", "Rates of all curves", "Greatest growth per head (max growth)", "B", None)
    assert any(f"{where} (rates.max_growth.distribution): found nothing" in line for line in told(data))
    assert "max_growth = { low = 0.28, high = 0.44 }" in check_record_workbook("herd.xlsx", data).record_text


def test_one_number_without_a_kind_is_exact() -> None:
    data, _ = with_cell("Growth", "Rates of all curves", "Demographic noise", "B", None)
    assert check_record_workbook("herd.xlsx", data).record == deer()


def test_a_number_in_a_text_is_the_text() -> None:
    data, _ = with_cell("Population", "Population", "Place", "C", 2019)
    record = check_record_workbook("herd.xlsx", data).record
    assert record is not None
    assert record.place == "2019"


def test_a_row_that_nobody_knows_is_carried() -> None:
    data, where = with_cell("Objectives", "Objectives", "Target: aim for", "A", "Antler points")
    assert told(data) == [
        f'error: herd.xlsx, {where} (objectives."antler_points"): found 2200; this key is unknown here. '
        'Take it out. Known here: "Limit: never below", "Target: aim for", "Ceiling: hold below", '
        '"Counts as collapsed below", "Horizon", "Risk tolerance", "Recovery: back above the limit", '
        '"Reduction: down below the ceiling", "Years in the quota table", "Recovery factor".'
    ]
    assert "antler_points = 2200" in check_record_workbook("herd.xlsx", data).record_text


def test_a_block_that_nobody_knows_is_carried() -> None:
    data, where = with_cell("Objectives", "Losses", "", "A", "▸ Gains")
    assert told(data)[0].startswith(f'error: herd.xlsx, {where} ("gains"): found a table; this key is unknown here.')
    assert "[gains]" in check_record_workbook("herd.xlsx", data).record_text


def test_a_second_row_of_the_same_item_is_told() -> None:
    data, where = with_cell("Objectives", "Objectives", "Target: aim for", "A", "Limit: never below")
    assert told(data) == [
        f'error: herd.xlsx, {where}: found a second row "Limit: never below"; each item stands once in its block. '
        "Take out one of the two rows, or put a heading above the second block."
    ]


def test_a_second_block_of_a_single_section_is_told() -> None:
    data, where = with_cell("Objectives", "Losses", "", "A", "▸ Objectives")
    row = int(where.rsplit(" ", 1)[1])
    assert told(data)[0] == (
        f'error: herd.xlsx, sheet "Objectives", row {row + 1} (objectives."wounding"): found 0.03; this key is '
        'unknown here. This key belongs in the block "Losses": move it there.'
    )


def test_a_value_without_an_item_is_told() -> None:
    data, where = with_cell("Objectives", "Objectives", "Target: aim for", "A", None)
    assert told(data) == [
        f'error: herd.xlsx, {where}: found "abundance", 2200; each value has the name of its item before it. '
        "Write the name of the item in the first column, or empty the cells."
    ]


def test_values_above_the_first_heading_are_told() -> None:
    data, _ = with_cell("Plan", "Texts of the plan", "", "A", None)
    assert any(
        'sheet "Plan": found values in row 3, 4, 7; values stand below the heading' in line for line in told(data)
    ), told(data)


def test_a_second_survey_goes_into_the_empty_block() -> None:
    def change(book: Workbook) -> None:
        start = row_of(book, "Surveys", "Survey 2")
        for item, value in (
            ("Name", "pellets"),
            ("Column of the counts", "pellets"),
            ("Kind", "index"),
            ("Coefficient of variation (CV)", 0.3),
        ):
            row = next(r for r in range(start, start + 12) if book["Surveys"].cell(r, 1).value == item)
            book["Surveys"].cell(row, 3).value = value
        sheet = book["History"]
        header = next(r for r in range(1, 9) if sheet.cell(r, 1).value == "year")
        sheet.cell(header, 6).value = "pellets"
        sheet.cell(header + 2, 6).value = 12.5

    record = check_record_workbook("herd.xlsx", edited(change)).record
    assert record is not None
    assert [survey.name for survey in record.surveys] == ["aerial count", "pellets"]
    assert record.surveys[1].values[:3] == (None, 12.5, None)


def test_faults_of_the_history_are_told_with_their_row() -> None:
    def change(book: Workbook) -> None:
        sheet = book["History"]
        header = next(r for r in range(1, 9) if sheet.cell(r, 1).value == "year")
        assert header == 5
        sheet["B6"].value = "0,3"
        sheet["C7"].value = "many"
        sheet["A18"].value = 2031

    problems = told(edited(change))
    assert problems[0] == (
        'error: herd.xlsx, sheet "History", row 18, column year: found 2031 after 2025; years follow one another '
        "without a gap. Add a row for 2026 to 2030, with empty cells for what is not known."
    )
    assert problems[1] == (
        'error: herd.xlsx, sheet "History", row 6, column removals: found a decimal comma: "0,3"; a number with a '
        "decimal point, or an empty cell. Write 0.3, with a point."
    )
    assert problems[2].startswith('error: herd.xlsx, sheet "History", row 7, column aerial_count: found "many"')
    assert len(problems) == 3


def test_an_empty_row_in_the_history_moves_no_row_number() -> None:
    def change(book: Workbook) -> None:
        book["History"].insert_rows(8)
        book["History"]["B10"].value = "x"

    assert any('sheet "History", row 10 (year 2017), column removals: found' in line for line in told(edited(change)))


def test_a_history_without_its_heading_or_its_sheet_is_told() -> None:
    def rename(book: Workbook) -> None:
        book["History"]["A5"].value = "when"

    def drop(book: Workbook) -> None:
        del book["History"]

    assert told(edited(rename))[0] == (
        'error: herd.xlsx, sheet "History": found no heading "year"; a row of headings begins the table, with the '
        "heading year. Name the column year."
    )
    assert told(edited(drop))[0] == (
        'error: herd.xlsx, sheet "History": found nothing; the yearly history stands there. '
        "Add the sheet, with a table of years."
    )


def test_sheets_and_cells_of_the_managers_own_are_told_and_left_alone() -> None:
    def change(book: Workbook) -> None:
        book.create_sheet("My sums").append(["what", 3])
        book["Plan"]["J5"].value = "ask the office"

    checked = check_record_workbook("herd.xlsx", edited(change))
    assert [str(problem) for problem in checked.problems] == [
        'warning: herd.xlsx, sheet "Plan": found cells beside the form: J5; only the form\'s own columns are read. '
        "Nothing, if they are remarks of your own.",
        'warning: herd.xlsx, sheet "My sums": found none of the record\'s headings; only sheets with the headings of a '
        "record's workbook are read. Nothing, if it is your own.",
    ]
    assert checked.record == deer()


def test_a_formula_without_a_stored_value_is_an_error() -> None:
    data, where = with_cell("Objectives", "Objectives", "Target: aim for", "C", "=1000+200")
    row = where.rsplit(" ", 1)[1]
    assert told(data) == [
        f'error: herd.xlsx, sheet "Objectives": found formulas in C{row}; a formula needs a stored value. '
        "Write the numbers, or open and save the file in the spreadsheet program."
    ]


def test_a_formula_with_a_stored_value_is_used_and_told() -> None:
    data, where = with_cell("Objectives", "Objectives", "Target: aim for", "C", "=2000+201")
    row = where.rsplit(" ", 1)[1]
    checked = check_record_workbook("herd.xlsx", with_stored_value(data, "2000+201", "2201"))
    assert [str(problem) for problem in checked.problems] == [
        f'warning: herd.xlsx, sheet "Objectives": found formulas in C{row}; the values stored when the file was last '
        "saved are used. Write the numbers, or open and save the file in the spreadsheet program."
    ]
    assert checked.record is not None
    assert checked.record.objectives.target is not None
    assert checked.record.objectives.target.value == 2201.0


def test_a_date_in_a_number_is_told() -> None:
    data, where = with_cell("Population", "Population", "Years from the count to its quota", "C", datetime(2024, 5, 1))
    assert any(f"{where} (lag): found datetime 2024-05-01 00:00:00" in line for line in told(data))


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("Add carrying_capacity to [rates].", 'Add "Carrying capacity" to the block "Rates of all curves".'),
        ("Name it in a [[survey]] of record.toml (column), or not.", 'Name it in a block "Survey" (column), or not.'),
        ("a text in quotes on one line, at most 5", "a text on one line, at most 5"),
        ('Put the text in quotes: "…".', "Write a text."),
        ("Write 0.3, with a point. Numbers stand without quotes.", "Write 0.3, with a point."),
        ("Write the names in quotes, in square brackets.", "Write the names, with commas between them."),
    ],
)
def test_messages_are_put_into_the_workbooks_terms(text: str, words: str) -> None:
    assert without_toml(text) == words


@pytest.mark.parametrize("field", FIELDS, ids=lambda field: field.path)
def test_help_and_rules_are_free_of_notation(field: Field) -> None:
    assert not set("{}[]_") & set(about_field(field).split("For example")[0])
    assert not set("{}[]") & set(without_toml(field.rule()))


ANYTHING = st.sampled_from(
    [None, "x", 5, 2.5, True, 1e300, datetime(2024, 5, 1), "▸ Survey 9", "▸ Name", "▸ History", "▸", "Name", "=1+1",
     'a"b]', "", "uniform", "survey", "share of carrying capacity", "abundance, x", "format", "-", "a.b.c", "ü=\n"]
)  # fmt: skip
PLACES = st.tuples(st.sampled_from(["Read me", *form.sheets(), "History"]), st.integers(1, 60), st.integers(1, 9))


@given(st.dictionaries(PLACES, ANYTHING, min_size=1, max_size=40))
@settings(max_examples=30)
def test_whatever_is_typed_is_a_record_or_told(typed: dict[tuple[str, int, int], object]) -> None:
    def change(book: Workbook) -> None:
        for (sheet, row, column), value in typed.items():
            if not isinstance(book[sheet].cell(row, column), MergedCell):
                book[sheet].cell(row, column).value = value  # type: ignore[assignment]

    try:
        checked = check_record_workbook("herd.xlsx", edited(change))
    except SheetError as error:
        assert "is not the workbook of a record" in str(error)
        return
    assert (checked.record is None) == any(problem.severity == "error" for problem in checked.problems)
