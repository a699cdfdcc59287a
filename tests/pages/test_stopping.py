"""The long computation shows its progress and can be stopped and taken up again."""

from __future__ import annotations

from typing import Any

import pytest
import streamlit as st

import harvest.plan
from harvest.workspace import Workspace
from harvest.workspace.sources import draft_of_demo
from tests.pages.screen import open_page, read, table, widget

PAGES = ["start", "risk", "quota"]


def new_record(space: Workspace, name: str) -> str:
    """A record of which nothing is computed yet."""
    return space.add(draft_of_demo("lake").with_value("", None, "name", name), "a test")


@pytest.mark.parametrize("page", PAGES)
def test_it_is_stopped_and_taken_up_again(space: Workspace, page: str, monkeypatch: pytest.MonkeyPatch) -> None:
    made: list[str] = []

    def slow(record: Any, rates: Any, *, report: Any) -> Any:
        made.append(record.name)
        report("the risk curve", 1, 4)
        st.stop()  # as a click does

    monkeypatch.setattr(harvest.plan, "make_quota_table", slow)
    at = open_page(page, new_record(space, f"Stopped on {page}"))
    assert not at.exception
    (bar,) = at.get("progress")
    assert (bar.proto.value, bar.proto.text) == (25, "The risk curve")
    assert any("Computing the quota and its risk" in block.value for block in at.main.get("html"))
    widget(at.button, "stop").click().run()
    assert "The computation was stopped; nothing else is lost." in read(at).said
    assert made == [f"Stopped on {page}"]
    at.run()
    assert made == [f"Stopped on {page}"]

    def quick(record: Any, rates: Any, *, report: Any) -> Any:
        made.append("again")
        return table("lake")

    monkeypatch.setattr(harvest.plan, "make_quota_table", quick)
    widget(at.button, "compute").click().run()
    assert made[1:] == ["again"]
    assert len(at.get("progress")) == 0
    assert not [b for b in at.button if b.key in ("stop", "compute")]
    at.run()
    assert made[1:] == ["again"]


def test_stopping_one_record_stops_no_other(space: Workspace, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(harvest.plan, "make_quota_table", lambda record, rates, report: table("lake"))
    first, second = new_record(space, "First"), new_record(space, "Second")
    stopped = space.load(first).check()[0]
    assert stopped is not None
    at = open_page("quota")
    at.session_state["stopped"] = {("table", stopped.digest())}
    at.query_params["record"] = first
    assert "The computation was stopped; nothing else is lost." in read(at.run()).said
    at.query_params["record"] = second
    assert "The computation was stopped; nothing else is lost." not in read(at.run()).said
