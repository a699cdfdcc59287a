"""The record's page: every edit is on disk at once, right or wrong, and nothing is lost on the way."""

from __future__ import annotations

from typing import Any

import pytest
from streamlit.testing.v1 import AppTest

from harvest.record.fields import SECTIONS, fields_of
from harvest.workspace import Draft, Workspace
from harvest.workspace.sources import draft_of_demo, draft_of_upload, open_demo
from tests.pages.screen import edit_history, go_to, open_page, read, widget

DEER = draft_of_demo("deer")


@pytest.fixture
def record(space: Workspace) -> str:
    return open_demo(space, "deer")


def part(at: AppTest, name: str) -> AppTest:
    """The page with a part of the record chosen."""
    at.button_group[0].set_value(name).run()
    return at


def cell(elements: Any, section: str, index: int | None, key: str, end: str = "") -> Any:
    """The widget of a key of the record."""
    start = f"{section} {index} {key} "
    found = [e for e in elements if e.key and e.key.startswith(start) and e.key.endswith(end)]
    if len(found) != 1:
        raise AssertionError(f"{len(found)} widgets of {start!r} among {[e.key for e in elements]}")
    return found[0]


def value(space: Workspace, record: str, section: str, key: str, index: int | None = None) -> Any:
    """What is on disk."""
    found: Any = space.load(record).document
    if section:
        found = found.get(section, {})
    return (found if index is None else found[index]).get(key)


TEXTS = [
    ("Population", "", None, "name", "Other herd", "Other herd"),
    ("Population", "", None, "place", "", None),
    ("Population", "", None, "present_quota", "12.5", 12.5),
    ("Population", "", None, "lag", "1", 1),
    ("Population", "life", None, "body_mass", "80", 80),
    ("Surveys", "survey", 0, "cv_column", "", None),
    ("Surveys", "survey", 0, "detection_limit", "5", 5),
    ("Surveys", "survey_plan", None, "every", "2", 2),
    ("Growth", "curve", 1, "weight", "0.25", 0.25),
    ("Growth", "rates", None, "low_abundance", "0.1", 0.1),
    ("Growth", "correlation", 0, "value", "-0.2", -0.2),
    ("Aims", "objectives", None, "horizon", "30", 30),
    ("Take and losses", "losses", None, "implementation_cv", "0.2", 0.2),
    ("Texts", "plan", None, "office", "<b>Office</b>", "<b>Office</b>"),
]


@pytest.mark.parametrize(("group", "section", "index", "key", "typed", "saved"), TEXTS)
def test_a_cell_is_saved(
    space: Workspace, record: str, group: str, section: str, index: int | None, key: str, typed: str, saved: Any
) -> None:
    at = part(open_page("record", record), group)
    cell(at.text_input, section, index, key).set_value(typed).run()
    read(at)
    expected = DEER.with_value(section, index, key, saved)
    assert space.load(record) == expected
    assert cell(at.text_input, section, index, key).value == typed
    again = part(open_page("record", record), group)
    assert cell(again.text_input, section, index, key).value == typed


def test_every_key_has_a_widget(space: Workspace, record: str) -> None:
    at = open_page("record", record)
    keys: set[str] = set()
    for group in at.button_group[0].options[1:]:
        part(at, group.split(" · ")[0])
        for kind in ("text_input", "text_area", "selectbox", "multiselect"):
            keys |= {e.key for e in getattr(at, kind)}
    missing = [
        field.path
        for section in SECTIONS
        for field in fields_of(section.name)
        if not field.only_for
        and field.key not in ("format", "history")
        and not any(k.startswith(f"{section.name} {0 if section.many else None} {field.key} ") for k in keys)
    ]
    assert missing == []


def test_a_long_text_a_choice_and_names_are_saved(space: Workspace, record: str) -> None:
    at = part(open_page("record", record), "Texts")
    cell(at.text_area, "plan", None, "review").set_value("Each spring.\n\nBy the office.").run()
    cell(at.multiselect, "private", None, "fields").set_value(["plan.author", "place"]).run()
    assert value(space, record, "plan", "review") == "Each spring.\n\nBy the office."
    assert value(space, record, "private", "fields") == ["plan.author", "place"]
    cell(at.multiselect, "private", None, "fields").set_value([]).run()
    assert "private" not in (space.load(record).document or {})
    assert read(at).title == "The record is complete"
    part(at, "Population")
    cell(at.selectbox, "", None, "noise").set_value("median one").run()
    assert value(space, record, "", "noise") == "median one"


def test_a_number_typed_wrongly_stays_with_its_cure_until_it_is_right(space: Workspace, record: str) -> None:
    at = part(open_page("record", record), "Aims")
    cell(at.text_input, "objectives", None, "tolerance").set_value("5%").run()
    assert value(space, record, "objectives", "tolerance") == "5%"
    screen = read(at)
    assert screen.title == "The record: 1 thing to mend"
    assert screen.problems == [
        'Mend found a percentage: "5%"; it must be a proportion above 0 and below 1. '
        "Was 0.05 meant? Then write 0.05, without a percent sign."
    ]
    assert "Aims · 1 to mend" in at.button_group[0].options
    assert cell(at.text_input, "objectives", None, "tolerance").value == "5%"
    cell(at.text_input, "objectives", None, "tolerance").set_value("0.05").run()
    assert value(space, record, "objectives", "tolerance") == 0.05
    assert (read(at).title, read(at).problems) == ("The record is complete", [])
    assert "Aims" in at.button_group[0].options


def test_another_kind_of_range_keeps_the_middle(space: Workspace, record: str) -> None:
    at = part(open_page("record", record), "Take and losses")
    cell(at.selectbox, "losses", None, "wounding", "kind").set_value("normal").run()
    assert value(space, record, "losses", "wounding") == {"distribution": "normal", "mean": 0.06}
    assert len(read(at).problems) == 1
    cell(at.text_input, "losses", None, "wounding", "sd").set_value("0.02").run()
    assert value(space, record, "losses", "wounding") == {"distribution": "normal", "mean": 0.06, "sd": 0.02}
    assert read(at).problems == []
    cell(at.selectbox, "losses", None, "wounding", "kind").set_value("exactly").run()
    assert value(space, record, "losses", "wounding") == 0.06
    cell(at.text_input, "losses", None, "wounding", "value").set_value("0.07").run()
    assert value(space, record, "losses", "wounding") == 0.07
    cell(at.selectbox, "losses", None, "wounding", "kind").set_value("not stated").run()
    assert value(space, record, "losses", "wounding") is None
    assert read(at).problems == []


def test_a_level_as_a_share_of_carrying_capacity(space: Workspace, record: str) -> None:
    at = part(open_page("record", record), "Aims")
    cell(at.selectbox, "objectives", None, "collapse", "how").set_value("as an abundance").run()
    assert value(space, record, "objectives", "collapse") == 0.1
    cell(at.text_input, "objectives", None, "collapse", "value").set_value("400").run()
    assert value(space, record, "objectives", "collapse") == 400
    cell(at.selectbox, "objectives", None, "limit", "how").set_value("as a share of carrying capacity").run()
    cell(at.text_input, "objectives", None, "limit", "value").set_value("0.3").run()
    assert value(space, record, "objectives", "limit") == {"of_capacity": 0.3}
    cell(at.text_input, "objectives", None, "limit", "value").set_value("").run()
    assert value(space, record, "objectives", "limit") is None


def test_years_and_a_chance(space: Workspace, record: str) -> None:
    at = part(open_page("record", record), "Aims")
    cell(at.text_input, "objectives", None, "recovery", "years").set_value("12").run()
    assert value(space, record, "objectives", "recovery") == {"years": 12, "chance": 0.8}
    cell(at.text_input, "objectives", None, "recovery", "chance").set_value("").run()
    assert value(space, record, "objectives", "recovery") == {"years": 12}
    assert len(read(at).problems) == 1
    cell(at.text_input, "objectives", None, "recovery", "years").set_value("").run()
    assert value(space, record, "objectives", "recovery") is None
    assert read(at).problems == []


def test_a_survey_is_added_and_taken_out(space: Workspace, record: str) -> None:
    at = part(open_page("record", record), "Surveys")
    widget(at.button, "Add a survey").click().run()
    assert value(space, record, "survey", "name", 1) == "survey 2"
    assert "Survey 2: survey 2" in read(at).of("hv-head")
    cell(at.text_input, "survey", 1, "column").set_value("pellets").run()
    cell(at.selectbox, "survey", 1, "kind").set_value("index").run()
    cell(at.text_input, "survey", 1, "cv").set_value("0.3").run()
    assert (space.load(record).document or {})["survey"][1] == {
        "name": "survey 2",
        "column": "pellets",
        "kind": "index",
        "cv": 0.3,
    }
    widget(part(at, "History").button, "Add the column pellets").click().run()
    assert space.load(record).history_text.startswith("year,removals,aerial_count,aerial_cv,note,pellets\n2014,250,")
    widget(part(at, "Surveys").button, "Take survey 1 out").click().run()
    assert [s["name"] for s in (space.load(record).document or {})["survey"]] == ["survey 2"]
    assert cell(at.text_input, "survey", 0, "name").value == "survey 2"
    widget(part(at, "History").button, "Take out the column aerial", "count").click().run()
    assert space.load(record).history_text.startswith("year,removals,aerial_cv,note,pellets\n2014,250,0.12,")


def test_an_unknown_key_is_taken_out_by_a_button(space: Workspace) -> None:
    draft = DEER.with_value("rates", None, "speed", 3).with_value("survey", 0, "colour", 3)
    record = space.add(draft, "a test")
    at = part(open_page("record", record), "Growth")
    widget(at.button, "Take out speed").click().run()
    widget(part(at, "Surveys").button, "Take out colour").click().run()
    assert space.load(record) == DEER.with_document(DEER.document or {})
    assert read(at).title == "The record is complete"


def test_undo_and_redo(space: Workspace, record: str) -> None:
    at = part(open_page("record", record), "Population")
    assert widget(at.button, "undo").disabled
    for name in ("Second", "Third"):
        cell(at.text_input, "", None, "name").set_value(name).run()
    assert widget(at.button, "undo").label == "Undo: Name"
    assert widget(at.button, "redo").disabled
    names = []
    for move in ("undo", "undo", "redo"):
        widget(at.button, move).click().run()
        names.append(cell(at.text_input, "", None, "name").value)
    assert names == ["Second", "Ostrel Ridge red deer", "Second"]
    assert value(space, record, "", "name") == "Second"
    assert not widget(at.button, "redo").disabled


def test_a_change_of_another_window_appears(space: Workspace, record: str) -> None:
    at = part(open_page("record", record), "Population")
    space.change(record, lambda d: d.with_value("", None, "name", "From elsewhere"), "name")
    at.run()
    assert cell(at.text_input, "", None, "name").value == "From elsewhere"
    cell(at.text_input, "", None, "place").set_value("Here").run()
    assert (value(space, record, "", "name"), value(space, record, "", "place")) == ("From elsewhere", "Here")


def test_two_windows_change_two_keys(space: Workspace, record: str) -> None:
    first, second = (part(open_page("record", record), "Population") for _ in range(2))
    cell(first.text_input, "", None, "name").set_value("Mine").run()
    cell(second.text_input, "", None, "place").set_value("Yours").run()
    assert (value(space, record, "", "name"), value(space, record, "", "place")) == ("Mine", "Yours")
    assert cell(second.text_input, "", None, "name").value == "Mine"


def test_leaving_the_page_keeps_everything(space: Workspace, record: str) -> None:
    at = part(open_page("record", record), "Aims")
    cell(at.text_input, "objectives", None, "horizon").set_value("thirty").run()
    go_to(go_to(at, "bring"), "record")
    assert at.button_group[0].value == "Aims"
    assert cell(at.text_input, "objectives", None, "horizon").value == "thirty"
    again = open_page("record", record)
    assert "Aims · 1 to mend" in again.button_group[0].options


def test_a_record_that_breaks_its_format_is_mended_as_text(space: Workspace) -> None:
    record = space.add(Draft(DEER.record_text.replace("lag = 0", "lag = "), DEER.history_text), "a test")
    at = open_page("record", record)
    assert read(at).title == "The record: 1 thing to mend"
    assert read(at).problems[0].startswith("Mend line ")
    at.text_area[0].set_value("still = ").run()
    widget(at.button, "save text").click().run()
    assert space.load(record).record_text == "still = "
    assert at.text_area[0].value == "still = "
    at.text_area[0].set_value(DEER.record_text).run()
    widget(at.button, "save text").click().run()
    assert space.load(record) == DEER
    assert read(at).title == "The record is complete"


def test_a_history_that_is_no_table_is_mended_as_text(space: Workspace) -> None:
    record = space.add(Draft(DEER.record_text, 'year,"removals\n'), "a test")
    at = open_page("record", record)
    read(at)
    at.text_area[0].set_value(DEER.history_text).run()
    assert space.load(record) == DEER
    assert len(at.data_editor) == 1
    assert read(at).title == "The record is complete"


def test_an_empty_record_is_filled_in_by_its_forms(space: Workspace) -> None:
    record = space.add(Draft('format = 1\nname = "New"\n', "year,removals\n"), "a test")
    at = open_page("record", record)
    edit_history(at, added_rows=[{"year": 2024, "removals": 5}])
    part(at, "Population")
    for key, chosen in (("unit", "animals"), ("season", "short"), ("count_when", "before")):
        cell(at.selectbox, "", None, key).set_value(chosen).run()
    cell(at.text_input, "", None, "lag").set_value("0").run()
    widget(part(at, "Growth").button, "Add a growth curve").click().run()
    for key, number in (("max_growth", "0.3"), ("carrying_capacity", "1000"), ("process_noise", "0.1")):
        cell(at.selectbox, "rates", None, key, "kind").set_value("exactly").run()
        cell(at.text_input, "rates", None, key, "value").set_value(number).run()
    assert read(at).title.startswith("The record is complete")
    found = space.load(record).check()[0]
    assert found is not None
    assert (found.history.years, found.history.removals, found.lag) == ((2024,), (5.0,), 0)


def test_the_record_is_handed_out(space: Workspace, record: str, monkeypatch: pytest.MonkeyPatch) -> None:
    given: dict[str, Any] = {}
    monkeypatch.setattr(
        "streamlit.download_button", lambda label, *, data, file_name, **more: given.update({file_name: data})
    )
    open_page("record", record)
    assert set(given) == {"ostrel-ridge-red-deer-record.xlsx", "ostrel-ridge-red-deer-record.zip"}
    for name, make in given.items():
        found = draft_of_upload(name, make())
        assert found is not None
        back, beyond = found
        assert (back.check()[0], beyond) == (DEER.check()[0], ())
