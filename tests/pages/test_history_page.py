"""The history's grid: edits since the table that it was given, from one window or two, are all on disk."""

from __future__ import annotations

import pytest

from harvest.workspace import Draft, Workspace
from harvest.workspace.sources import draft_of_demo, open_demo
from tests.pages.screen import edit_history, go_to, open_page, read, widget

DEER = draft_of_demo("deer")


@pytest.fixture
def record(space: Workspace) -> str:
    return open_demo(space, "deer")


def test_the_history_is_edited(space: Workspace, record: str) -> None:
    at = open_page("record", record)
    edit_history(at, edited_rows={"0": {"removals": 251}})
    assert space.load(record).history_text == DEER.history_text.replace("2014,250,", "2014,251,", 1)
    edit_history(at, edited_rows={"0": {"removals": 252}, "1": {"note": "=late"}})
    lines = space.load(record).history_text.splitlines()
    assert (lines[1], lines[2]) == ("2014,252,3139,0.12,", "2015,260,2862,0.12,'=late")
    assert at.data_editor[0].value["removals"].iloc[0] == 250
    read(at)


def test_a_year_is_added_and_one_taken_out(space: Workspace, record: str) -> None:
    at = open_page("record", record)
    rows = DEER.history_text.splitlines()
    edit_history(at, added_rows=[{"year": 2040, "removals": 0}], deleted_rows=[0])
    assert space.load(record).history_text.splitlines() == [rows[0], *rows[2:], "2040,0,,,"]


def test_two_windows_edit_one_history(space: Workspace, record: str) -> None:
    first, second = open_page("record", record), open_page("record", record)
    edit_history(first, edited_rows={"0": {"removals": 1}})
    edit_history(second, edited_rows={"1": {"removals": 2}})
    lines = space.load(record).history_text.splitlines()
    assert (lines[1], lines[2]) == ("2014,1,3139,0.12,", "2015,2,2862,0.12,")
    edit_history(first, edited_rows={"0": {"removals": 1}, "2": {"removals": 3}})
    assert space.load(record).history_text.splitlines()[1:4] == [
        "2014,1,3139,0.12,",
        "2015,2,2862,0.12,",
        "2016,3,3238,0.14,",
    ]


def test_a_history_edited_before_and_after_leaving_the_page(space: Workspace, record: str) -> None:
    at = open_page("record", record)
    edit_history(at, edited_rows={"0": {"removals": 1}})
    go_to(go_to(at, "bring"), "record")
    assert at.data_editor[0].value["removals"].iloc[0] == 1
    edit_history(at, edited_rows={"1": {"removals": 2}})
    lines = space.load(record).history_text.splitlines()
    assert (lines[1], lines[2]) == ("2014,1,3139,0.12,", "2015,2,2862,0.12,")


def test_an_undone_edit_of_the_history_is_shown(space: Workspace, record: str) -> None:
    at = open_page("record", record)
    edit_history(at, edited_rows={"0": {"removals": 1}})
    widget(at.button, "undo").click().run()
    assert at.data_editor[0].value["removals"].iloc[0] == 250
    assert space.load(record) == DEER


def test_a_faulty_cell_is_shown_where_it_is(space: Workspace) -> None:
    history = DEER.history_text.replace("2014,250,", '2014,"1,200",', 1)
    at = open_page("record", space.add(Draft(DEER.record_text, history), "a test"))
    screen = read(at)
    assert screen.title == "The record: 1 thing to mend"
    assert screen.problems[0].startswith('Mend row 2 (year 2014), column removals: found a thousands mark: "1,200"; ')
    assert at.data_editor[0].value["removals"].iloc[0] == "1,200"
