"""A phone of 390 × 844: no page scrolls sideways, wide things scroll inside themselves, the sidebar opens."""

from __future__ import annotations

import pytest
from playwright.sync_api import expect

from tests.browser.test_walk import write_sheet

PAGES = ("", "record", "bring", "yield", "thresholds", "risk", "quota")
PARTS = ("Population", "Surveys", "Growth", "Aims", "Take and losses", "Texts")
PHONE = {"viewport": {"width": 390, "height": 844}, "has_touch": True, "is_mobile": True}
#: What sticks out to the right although nothing around it scrolls.
STICKING_OUT = """() => [...document.querySelectorAll('[data-testid=stMain] *')].filter(e => {
  const box = e.getBoundingClientRect();
  if (box.width === 0 || box.right <= innerWidth + 1) return false;
  for (let p = e.parentElement; p && p.dataset.testid !== 'stMain'; p = p.parentElement)
    if (['auto', 'scroll', 'hidden', 'clip'].includes(getComputedStyle(p).overflowX)) return false;
  return getComputedStyle(e).position !== 'fixed' && !e.closest('svg');
}).map(e => e.outerHTML.slice(0, 200))"""


def check_width(desk):
    width = "({tag}) => document.querySelector(tag).scrollWidth"
    assert desk.page.evaluate("document.scrollingElement.scrollWidth") <= 390
    assert desk.page.evaluate(width, {"tag": "[data-testid=stMain]"}) <= 390
    assert desk.page.evaluate(STICKING_OUT) == []


@pytest.mark.parametrize("page", PAGES, ids=lambda page: page or "season")
def test_no_page_scrolls_sideways(window, deer, page):
    desk = window(**PHONE)
    desk.open(page, record=deer)
    check_width(desk)
    for part in PARTS if page == "record" else ():
        desk.part(part)
        check_width(desk)


def test_the_welcome_and_a_sheet_fit(window, tmp_path):
    desk = window(**PHONE)
    desk.open()
    check_width(desk)
    desk.open("bring")
    desk.upload(write_sheet(tmp_path))
    check_width(desk)


def test_figures_stand_two_by_two_and_tables_scroll_inside(window, deer):
    desk = window(**PHONE)
    desk.open("yield", record=deer)
    boxes = [card.bounding_box() for card in desk.main.locator(".hv-card").all()]
    assert len(boxes) == 4
    assert [len({round(box[side]) for box in boxes}) for side in ("x", "y")] == [2, 2]
    desk.go_by_menu("Quota table")
    tables = desk.main.locator(".hv-scroll").first
    assert tables.evaluate("e => e.scrollWidth > e.clientWidth + 50 && getComputedStyle(e).overflowX === 'auto'")
    tables.evaluate("e => { e.scrollLeft = 100; }")
    assert tables.evaluate("e => e.scrollLeft") == 100


def test_the_sidebar_opens_leads_on_and_closes(window, deer):
    desk = window(**PHONE)
    desk.open(record=deer)
    sidebar = desk.page.get_by_test_id("stSidebar")
    expect(sidebar).to_have_attribute("data-collapsed", "true")
    desk.go_by_menu("Thresholds")
    assert "decline without return" in desk.title
    expect(sidebar).to_have_attribute("data-collapsed", "true")
