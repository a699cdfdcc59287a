"""No page has a violation of accessibility that axe calls serious or critical."""

from __future__ import annotations

import pytest
from axe_playwright_python.base import AXE_FILE_PATH

from harvest.workspace.sources import draft_of_demo, empty_draft
from tests.browser.test_walk import write_sheet

PAGES = ("", "record", "bring", "yield", "thresholds", "risk", "quota")
PARTS = ("Population", "Surveys", "Growth", "Aims", "Take and losses", "Texts")
_RUN = """async () => {
  const found = await axe.run(document, { resultTypes: ['violations'] });
  return found.violations.filter(v => ['serious', 'critical'].includes(v.impact)).flatMap(
    v => v.nodes.map(n => [v.impact, v.id, n.target.join(' '), n.html.slice(0, 200), n.failureSummary]));
}"""


def violations(desk):
    """What axe finds."""
    desk.page.evaluate(AXE_FILE_PATH.read_text(encoding="utf-8"))
    return desk.page.evaluate(_RUN)


def test_the_check_sees_a_violation(window):
    desk = window()
    desk.open()
    desk.main.evaluate("e => e.insertAdjacentHTML('beforeend', '<img src=\"data:,\"><button></button>')")
    assert sorted({v[1] for v in violations(desk)}) == ["button-name", "image-alt"]


@pytest.mark.parametrize("page", PAGES, ids=lambda page: page or "season")
def test_every_page_of_a_demo(window, deer, page):
    desk = window(reduced_motion="reduce")
    desk.open(page, record=deer)
    assert violations(desk) == []
    for part in PARTS if page == "record" else ():
        desk.part(part)
        assert violations(desk) == []


@pytest.mark.parametrize("page", PAGES, ids=lambda page: page or "season")
def test_every_page_without_a_record(window, page):
    desk = window(reduced_motion="reduce")
    desk.open(page)
    assert violations(desk) == []


@pytest.mark.parametrize("fault", ["empty", "value", "format"])
def test_pages_of_a_broken_record(window, put, fault):
    draft = {
        "empty": empty_draft,
        "value": lambda: draft_of_demo("lake").with_value("objectives", None, "limit", "1,200"),
        "format": lambda: type(empty_draft())("name = [", "year,removals\n"),
    }[fault]()
    record = put(draft)
    desk = window(reduced_motion="reduce")
    for page in ("", "record", "risk"):
        desk.open(page, record=record)
        assert violations(desk) == []
        if page == "record" and fault == "value":
            desk.part("Aims")
            assert "thousands mark" in desk.text
            assert violations(desk) == []


def test_a_sheet_in_the_middle_of_its_mapping(window, tmp_path):
    desk = window(reduced_motion="reduce")
    desk.open("bring")
    desk.upload(write_sheet(tmp_path))
    assert violations(desk) == []
