"""From a manager's own sheet to a record: upload, roles, questions, taking over."""

from __future__ import annotations

import pytest
from streamlit.testing.v1 import AppTest

from harvest.record import demo_folder, read_record
from harvest.sheets.record_workbook import record_workbook
from harvest.workspace import Workspace
from harvest.workspace.brought import Brought
from harvest.workspace.sources import as_zip, draft_of_demo, open_demo
from tests.pages.screen import open_page, read, widget
from tests.sheets.make_messy import FOLDER
from tests.sheets.test_messy_sheets import EXPECTED

READY, ASKING = "Ready to take over", "Say what is what, then take it over"


def upload(at: AppTest, name: str, data: bytes) -> AppTest:
    at.file_uploader[0].set_value((name, data, "application/octet-stream"))
    return at.run()


def bring(name: str, record: str | None = None) -> AppTest:
    return upload(open_page("bring", record), name, (FOLDER / name).read_bytes())


def answer_all(at: AppTest, answers: dict[str, str]) -> None:
    for _ in answers:
        for radio in at.radio:
            question = radio.key.partition(" answer ")[2]
            if radio.value is None and question in answers:
                radio.set_value(answers[question]).run()
                break


@pytest.mark.parametrize("name", EXPECTED)
def test_a_messy_sheet_becomes_a_record(space: Workspace, name: str) -> None:
    answers, history = EXPECTED[name]
    at = bring(name)
    assert read(at).title == (ASKING if answers else READY)
    assert widget(at.button, "take new").disabled == bool(answers)
    answer_all(at, answers)
    assert read(at).title == READY
    assert {r.key.partition(" answer ")[2]: r.value for r in at.radio} == answers
    widget(at.text_input, " name").set_value("<b>Herd</b>").run()
    widget(at.button, "take new").click().run()
    (entry,) = space.entries()
    draft = space.load(entry.id)
    assert (draft.history_text, draft.name) == (history, "<b>Herd</b>")
    assert (entry.origin, entry.source) == (f"from the sheet {name}", "")
    assert read(at).title.startswith("The record: ")
    assert at.button_group[0].value == "Population"
    assert "sheet" not in at.query_params


def test_what_was_said_survives_a_refresh(space: Workspace) -> None:
    at = bring("valley_deer.xlsx")
    answer_all(at, {"footnotes": "yes"})
    again = open_page("bring", sheet=at.session_state["sheet"])
    assert read(again).of("hv-kicker") == ["valley_deer.xlsx"]
    assert {r.key.partition(" answer ")[2]: r.value for r in again.radio}["footnotes"] == "yes"


def test_a_role_is_changed(space: Workspace) -> None:
    file = Brought(space.folder).keep("herd.csv", b"year,taken,count,remarks\n2020,5,100,x\n2021,6,110,y\n")
    at = open_page("bring", sheet=file)
    assert read(at).tables[-1][0] == ["year", "removals", "count", "note"]
    role = widget(at.selectbox, "3 role")
    role.set_value("ignore" if "ignore" in role.options else role.options[-1]).run()
    assert read(at).tables[-1] == [["year", "removals", "count"], ["2020", "5", "100"], ["2021", "6", "110"]]
    assert list(Brought(space.folder).said(file)["columns"]) == ["3"]


def test_a_history_goes_into_the_open_record(space: Workspace) -> None:
    record = open_demo(space, "deer")
    at = bring("winter_seasons.csv", record)
    answers, history = EXPECTED["winter_seasons.csv"]
    answer_all(at, answers)
    widget(at.button, "take into").click().run()
    assert space.load(record).history_text == history
    assert space.load(record).name == "Ostrel Ridge red deer"
    assert [entry.id for entry in space.entries()] == [record]
    assert at.button_group[0].value == "History"
    widget(at.button, "undo").click().run()
    assert space.load(record) == draft_of_demo("deer")


@pytest.mark.parametrize("kind", ["xlsx", "zip"])
def test_a_whole_record_is_opened_at_once(space: Workspace, kind: str) -> None:
    record = read_record(demo_folder("lake"))
    data = record_workbook(record) if kind == "xlsx" else as_zip(draft_of_demo("lake"))
    at = upload(open_page("bring"), f"herd.{kind}", data)
    (entry,) = space.entries()
    assert space.load(entry.id).check()[0] == record
    assert "is a whole record and is open now" in at.warning[0].value
    read(at)


@pytest.mark.parametrize(
    ("name", "data", "told"),
    [
        ("herd.zip", b"PK no archive", "a .zip file that cannot be read"),
        ("herd.pdf", b"%PDF-1.4", "is a PDF document"),
        ("herd.xls", b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", "is an old office document"),
        ("empty.csv", b"", "is an empty file"),
        ("blank.csv", b"\n\n\n", "has only empty cells"),
        ("<script>.csv", b"\0\xff\xfe", "holds characters that no table saved as text has"),
    ],
)
def test_a_file_that_cannot_be_read_is_told_and_another_can_be_chosen(
    space: Workspace, name: str, data: bytes, told: str
) -> None:
    at = upload(open_page("bring"), name, data)
    assert read(at).title == "Bring your own sheet"
    (warning,) = at.warning
    assert told in warning.value.replace("\\", "")
    assert "<script>" not in warning.value
    assert (space.entries(), "sheet" in at.query_params) == ([], False)
    upload(at, "letter.csv", (FOLDER / "letter.csv").read_bytes())
    assert read(at).of("hv-kicker") == ["letter.csv"]


@pytest.mark.parametrize("data", [b"PK no workbook", b"x", b"a,b\na,b\n"])
def test_a_table_without_years_is_told_and_can_be_put_away(data: bytes) -> None:
    at = upload(open_page("bring"), "herd.csv", data)
    screen = read(at)
    assert screen.title == ASKING
    assert screen.problems[0].startswith('Mend sheet "herd": found no column of years; ')
    assert widget(at.button, "take new").disabled
    widget(at.button, "another").click().run()
    assert read(at).title == "Bring your own sheet"


def test_a_file_is_put_away(space: Workspace) -> None:
    at = bring("letter.csv")
    widget(at.button, "another").click().run()
    assert read(at).title == "Bring your own sheet"
    assert "sheet" not in at.query_params


@pytest.mark.parametrize("file", ["../../etc/passwd", "0" * 16, "x"])
def test_an_unknown_file_in_the_address_is_let_go(file: str) -> None:
    at = open_page("bring", sheet=file)
    assert read(at).title == "Bring your own sheet"
    assert "sheet" not in at.query_params


def test_a_header_beyond_the_sheet_is_held_within_it(space: Workspace) -> None:
    data = b"year,removals,count\n2020,5,90\n2021,6,80\n2022,7,85\n"
    at = upload(open_page("bring"), "herd.csv", data)
    widget(at.number_input, "end").set_value(2).run()
    widget(at.number_input, "first").set_value(4).run()
    assert read(at).title == ASKING
    widget(at.number_input, "first").set_value(1).run()
    widget(at.number_input, "end").set_value(1).run()
    assert read(at).title == READY


def test_an_index_alone_says_what_is_missing_and_leads_on(space: Workspace) -> None:
    draft = draft_of_demo("lake").with_value("survey", 1, "kind", "index")
    at = open_page("start", space.add(draft, "a test"))
    assert read(at).title == "This cannot be computed yet"
    assert len(at.get("progress")) == 0
    assert any("absolute count" in text for text in read(at).said)
