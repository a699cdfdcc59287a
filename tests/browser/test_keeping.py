"""Nothing is lost: a refresh, a closed window, a second window on the same record or on another one."""

from __future__ import annotations

import pytest

from harvest.workspace import Workspace
from harvest.workspace.sources import draft_of_demo, empty_draft
from tests.browser.desk import Sheet
from tests.browser.test_walk import write_sheet


def value_of(server, record, section, key):
    """A value as it stands on disk."""
    document = Workspace(server.workspace).load(record).document
    return (document[section] if section else document).get(key)


def again(desk, how):
    """Refresh the window, or close it and open its address in a new one."""
    if how == "refresh":
        desk.reload()
        return
    address, context = desk.page.url, desk.page.context
    desk.page.close()
    desk.take(context.new_page())
    desk.after(lambda: desk.page.goto(address))


@pytest.mark.parametrize("how", ["refresh", "close"])
def test_a_half_filled_form_is_kept(window, server, put, how):
    record = put(empty_draft())
    desk = window()
    desk.open("record", record=record)
    desk.part("Population")
    desk.type("Species", "roe deer")
    desk.type("Years from the count to its quota", "soon")
    again(desk, how)
    desk.part("Population")
    assert desk.cell("Species").input_value() == "roe deer"
    assert desk.cell("Years from the count to its quota").input_value() == "soon"
    assert value_of(server, record, "", "species") == "roe deer"


def test_a_text_that_is_typed_is_kept_when_the_page_is_left_by_the_sidebar(window, server, deer):
    desk = window()
    desk.open("record", record=deer)
    desk.part("Population")
    desk.cell("Species").fill("sika")
    desk.go("Yield")
    assert value_of(server, deer, "", "species") == "sika"
    desk.go("Record")
    desk.part("Population")
    assert desk.cell("Species").input_value() == "sika"


@pytest.mark.parametrize("how", ["refresh", "close"])
def test_a_half_answered_mapping_is_kept(window, tmp_path, how):
    desk = window()
    desk.open("bring")
    desk.upload(write_sheet(tmp_path))
    desk.choose("What Bemerkung is", "leave out")
    desk.main.get_by_role("radiogroup").first.locator("label").first.click()
    desk.settle()
    heading = desk.main.get_by_role("heading", name="What may be changed in reading it?").inner_text()
    open_ones = desk.main.get_by_role("radiogroup").count() - 1
    assert heading.endswith(f"({open_ones} still open)")
    again(desk, how)
    assert desk.main.get_by_role("combobox", name="What Bemerkung is").input_value() == "leave out"
    assert desk.main.get_by_role("heading", name="What may be changed in reading it?").inner_text() == heading
    assert desk.main.get_by_role("radiogroup").first.get_by_role("radio").first.is_checked()


def test_two_windows_on_one_record_keep_each_other_s_fields(window, server, deer):
    one, two = window(), window()
    for desk, label, text in ((one, "Species", "wapiti"), (two, "Place", "The other ridge")):
        desk.open("record", record=deer)
        desk.part("Population")
        desk.cell(label).fill(text)
    for desk, label in ((one, "Species"), (two, "Place")):
        desk.cell(label).press("Enter")
        desk.settle()
    assert value_of(server, deer, "", "species") == "wapiti"
    assert value_of(server, deer, "", "place") == "The other ridge"
    one.part("Aims")
    one.part("Population")
    for desk in (one, two):
        assert desk.cell("Species").input_value() == "wapiti"
        assert desk.cell("Place").input_value() == "The other ridge"


def test_two_windows_on_one_record_keep_each_other_s_cells(window, server, deer):
    one, two = Sheet(window()), Sheet(window())
    for sheet in (one, two):
        sheet.desk.open("record", record=deer)
    for sheet, row, text in ((one, 0, "251"), (two, 1, "261"), (one, 2, "271")):
        sheet.begin(1, row)
        sheet.type(text)
        sheet.desk.settle()
    rows = Workspace(server.workspace).load(deer).grid.rows
    assert [row[1] for row in rows[:4]] == ["251", "261", "271", "280"]
    two.desk.part("Aims")
    two.desk.part("History")
    assert [two.shown(1, row) for row in range(4)] == ["251", "261", "271", "280"]


def test_two_windows_on_two_records_do_not_mix(window, server, put):
    records = [put(draft_of_demo(name)) for name in ("deer", "lake")]
    desks = [window(), window()]
    for desk, record in zip(desks, records, strict=True):
        desk.open("record", record=record)
        desk.part("Population")
    for desk, name in zip(desks, ("The first", "The second"), strict=True):
        desk.type("Name", name)
    assert [value_of(server, record, "", "name") for record in records] == ["The first", "The second"]
    for desk, name in zip(desks, ("The first", "The second"), strict=True):
        desk.go("Yield")
        assert name in desk.text
