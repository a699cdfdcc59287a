"""The way in: demos, an empty record, records of before, and addresses of records that are not there."""

from __future__ import annotations

import shutil

import pytest

from harvest.plan.sentences import headline
from harvest.record import demo_names
from harvest.workspace import Workspace
from harvest.workspace.sources import draft_of_demo, empty_draft, open_demo
from tests.pages.screen import PAGES, demo, go_to, open_page, read, table, widget


@pytest.mark.parametrize("name", demo_names())
def test_a_demo_is_opened_by_its_button(space: Workspace, name: str) -> None:
    at = open_page("start")
    widget(at.button, f"demo {name}").click().run()
    (entry,) = space.entries()
    assert at.query_params["record"] in (entry.id, [entry.id])
    assert space.load(entry.id) == draft_of_demo(name)
    assert read(at).title == headline(table(name)).removesuffix(".")


def test_the_buttons_name_the_populations() -> None:
    labels = [b.label for b in open_page("start").button if b.key.startswith("demo ")]
    assert labels == [demo(name).name for name in demo_names()]


def test_an_empty_record_is_begun(space: Workspace) -> None:
    at = open_page("start")
    widget(at.button, "empty").click().run()
    (entry,) = space.entries()
    assert space.load(entry.id) == empty_draft()
    assert read(at).title.endswith(" things to mend first")
    assert read(go_to(at, "record")).title.startswith("The record: ")


def test_a_record_is_reopened_and_taken_off_the_list(space: Workspace) -> None:
    record = space.add(empty_draft().with_value("", None, "name", "**Mine**"), "begun empty")
    at = open_page("start")
    assert widget(at.button, f"open {record}").label == r"\*\*Mine\*\*"
    widget(at.button, f"open {record}").click().run()
    assert read(at).of("hv-kicker") == ["**Mine**"]
    widget(at.button, "close").click().run()
    widget(at.button, f"remove {record}").click().run()
    assert space.entries() == []
    assert "is off the list, not deleted" in at.warning[0].value
    at.run()
    assert len(at.warning) == 0
    read(at)


def test_a_long_list_goes_on_behind_a_fold(space: Workspace) -> None:
    for number in range(10):
        space.add(empty_draft().with_value("", None, "name", f"Herd {number}"), "begun empty")
    at = open_page("start")
    assert [e.label for e in at.expander] == ["2 more"]
    assert len([b for b in at.button if b.key.startswith("open ")]) == 10


@pytest.mark.parametrize(
    ("page", "name"),
    [*((page, "abcd1234") for page in PAGES), ("start", "../../etc"), ("start", "<script>"), ("start", "**b**")],
)
def test_an_unknown_record_in_the_address_is_told(page: str, name: str) -> None:
    at = open_page(page, name)
    read(at)
    (warning,) = at.warning
    assert "open one from the list on the first page" in warning.value
    assert "<script>" not in warning.value
    assert "**b**" not in warning.value
    assert "record" not in at.query_params


@pytest.mark.parametrize("page", PAGES)
def test_a_record_that_goes_while_it_is_open(space: Workspace, page: str) -> None:
    record = open_demo(space, "deer")
    at = open_page(page, record)
    shutil.rmtree(space.folder / record)
    read(at.run())
    assert "open one from the list" in at.warning[0].value


@pytest.mark.parametrize("page", [page for page in PAGES if page != "bring"])
def test_a_record_that_cannot_be_read_while_it_is_open(space: Workspace, page: str) -> None:
    record = open_demo(space, "deer")
    at = open_page(page, record)
    (space.folder / record / "current").write_text("99")
    assert read(at.run()).title == "This cannot be computed yet"
    assert "what was saved before is still there" in " ".join(read(at).said)


def test_the_record_follows_from_page_to_page(space: Workspace) -> None:
    at = open_page("record", open_demo(space, "lake"))
    for page in PAGES:
        go_to(at, page)
        assert "Lake Orvenna whitefish" in " ".join(read(at).of("hv-kicker")) or page == "bring"


def test_a_refusing_disk_is_told_and_the_page_stands(space: Workspace, monkeypatch: pytest.MonkeyPatch) -> None:
    record = open_demo(space, "deer")
    at = open_page("record", record)
    at.button_group[0].set_value("Population").run()

    def refuse(*arguments: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr("harvest.workspace.store.write_new", refuse)
    widget(at.text_input, " None name ").set_value("Lost").run()
    assert "No space left on device" in at.warning[0].value
    read(at)
    assert space.load(record) == draft_of_demo("deer")
