"""The history's editor, by its keys: every edit counts, rows come and go, and an undo takes the last one back."""

from __future__ import annotations

import pytest

from harvest.workspace import Workspace
from tests.browser.desk import Sheet

YEAR, REMOVALS, COUNT = 0, 1, 2


@pytest.fixture
def sheet(window, deer):
    desk = window()
    desk.open("record", record=deer)
    return Sheet(desk)


@pytest.fixture
def rows(server, deer):
    """The rows on disk."""
    return lambda: Workspace(server.workspace).load(deer).grid.rows


def test_edits_one_after_another_are_all_kept(sheet, rows):
    """Both waiting for each and typing on while the one before is being saved."""
    sheet.begin(REMOVALS, 0)
    for number in range(6):
        sheet.type(f"{500 + number}")
        if number % 2:
            sheet.desk.settle()
    sheet.desk.settle()
    kept = [row[REMOVALS] for row in rows()]
    assert kept[:7] == ["500", "501", "502", "503", "504", "505", "300"]
    assert [sheet.shown(REMOVALS, row) for row in range(7)] == kept[:7]


def test_a_row_is_added_filled_and_taken_out(sheet, rows):
    before = rows()
    sheet.begin(YEAR, len(before))
    keys = sheet.desk.page.keyboard
    keys.press("Enter")
    sheet.desk.page.locator("#portal input").wait_for()
    keys.type("2027", delay=40)
    keys.press("Enter")
    sheet.desk.settle()
    sheet.begin(COUNT, len(before))
    sheet.type("2300")
    sheet.desk.settle()
    assert rows() == (*before, ("2027", "", "2300", "", ""))
    sheet.begin(YEAR, 1)
    keys.press("Shift+Space")
    keys.press("Delete")
    sheet.desk.settle()
    assert [row[YEAR] for row in rows()] == ["2014", *(str(year) for year in range(2016, 2028))]


def test_undo_takes_back_one_edit_and_redo_brings_it_again(sheet, rows):
    sheet.begin(REMOVALS, 0)
    sheet.type("999")
    sheet.desk.settle()
    sheet.type("998")
    sheet.desk.settle()
    sheet.desk.press("Undo: the history")
    assert [row[REMOVALS] for row in rows()[:2]] == ["999", "260"]
    assert [sheet.shown(REMOVALS, row) for row in (0, 1)] == ["999", "260"]
    sheet.desk.press("Redo")
    assert [row[REMOVALS] for row in rows()[:2]] == ["999", "998"]
    assert [sheet.shown(REMOVALS, row) for row in (0, 1)] == ["999", "998"]
    sheet.begin(REMOVALS, 2)
    sheet.type("997")
    sheet.desk.settle()
    assert [row[REMOVALS] for row in rows()[:3]] == ["999", "998", "997"]


def test_a_word_in_a_column_of_numbers_is_not_taken(sheet, rows):
    """The editor of a column of numbers takes digits only; nothing else reaches the disk."""
    before = rows()
    sheet.begin(REMOVALS, 0)
    sheet.desk.page.keyboard.type("many", delay=40)
    sheet.desk.page.keyboard.press("Escape")
    sheet.desk.settle()
    assert rows() == before
