"""The first visit on a machine, with nothing compiled yet: what can be read comes first, and work can be stopped."""

from __future__ import annotations

import pytest

from harvest.workspace import Workspace
from harvest.workspace.sources import draft_of_demo
from tests.browser.running import serving


@pytest.fixture(scope="module")
def cold(tmp_path_factory, browser):
    """A server of its own with an empty folder for compiled kernels."""
    folder = tmp_path_factory.mktemp("cold")
    with serving(folder, HARVEST_CACHE=str(folder / "cache")) as running:
        yield running


def test_the_first_visit(window, cold):
    """Welcome at once; then the history before the answer, with the word that it compiles; and it can be stopped."""
    desk = window(on=cold)
    desk.open()
    assert desk.title == "How much can be taken, and how sure is that?"
    record = Workspace(cold.workspace).add(draft_of_demo("deer"), "put there by a test")
    desk.page.goto(cold.url(record=record))
    main = desk.main
    main.get_by_text("the program compiles itself first").wait_for()
    main.locator("[data-testid=stVegaLiteChart] svg").first.wait_for()
    assert main.locator("h1.hv-title").count() == 0
    main.get_by_role("button", name="Stop").click()
    main.get_by_text("The computation was stopped").wait_for(timeout=60_000)
    desk.settle()
    desk.go("Record")
    assert desk.title == "The record is complete"
    desk.go("This season")
    assert "The computation was stopped" in desk.text
    desk.press("Compute it")
    assert desk.title == "Take at most 234 red deer a year"
