"""The README's pictures: ``python -m tests.browser.screenshots`` makes each page of the deer demo, and a phone's."""

from __future__ import annotations

import io
import tempfile
from pathlib import Path

from PIL import Image
from playwright.sync_api import sync_playwright

from harvest.workspace import Workspace
from harvest.workspace.sources import draft_of_demo
from tests.browser.desk import Desk
from tests.browser.running import chromium, serving, start_browser
from tests.browser.test_walk import write_sheet

FOLDER = Path(__file__).parent.parent / "screenshots"
PAGES = {
    "season": "",
    "record": "record",
    "yield": "yield",
    "thresholds": "thresholds",
    "risk": "risk",
    "quota": "quota",
}
WIDTH, PHONE = 1366, 390
#: Enough for text and charts, and a third of the bytes.
COLOURS, LARGEST = 128, 200_000
#: Clock times change from day to day: they are taken out of the pictures.
TIMELESS = """() => document.querySelectorAll('.hv-note').forEach(note => {
  note.textContent = note.textContent.replace(/ at \\d\\d:\\d\\d:\\d\\d/, '');
})"""


def shoot(desk: Desk, name: str, width: int) -> None:
    """A page at its full height, without the places that change from day to day."""
    page = desk.page
    page.evaluate(TIMELESS)
    page.mouse.move(width - 1, 899)
    height = page.get_by_test_id("stMain").evaluate("e => e.scrollHeight")
    page.set_viewport_size({"width": width, "height": height})
    desk.settle(quiet=800)
    picture = Image.open(io.BytesIO(page.screenshot(animations="disabled")))
    page.set_viewport_size({"width": width, "height": 900})
    target = FOLDER / f"{name}.png"
    picture.convert("RGB").quantize(COLOURS).save(target, optimize=True)
    if target.stat().st_size > LARGEST:
        raise SystemExit(f"{target} has {target.stat().st_size:,} bytes: at most {LARGEST:,} go into the repository")


def main() -> None:
    """Make all pictures."""
    FOLDER.mkdir(exist_ok=True)
    with tempfile.TemporaryDirectory() as place, serving(Path(place)) as server, sync_playwright() as playwright:
        browser = start_browser(playwright, chromium())
        looks = {"locale": "en-GB", "reduced_motion": "reduce"}
        desk = Desk(browser.new_page(viewport={"width": WIDTH, "height": 900}, **looks), server)
        desk.open()
        shoot(desk, "welcome", WIDTH)
        desk.open("bring")
        sheets = Path(place) / "northern part"
        sheets.mkdir()
        desk.upload(write_sheet(sheets))
        shoot(desk, "bring", WIDTH)
        record = Workspace(server.workspace).add(draft_of_demo("deer"), "the demo deer (invented)")
        for name, page in PAGES.items():
            desk.open(page, record=record)
            shoot(desk, name, WIDTH)
        desk.open("record", record=record)
        desk.part("Growth")
        shoot(desk, "growth", WIDTH)
        desk = Desk(browser.new_page(viewport={"width": PHONE, "height": 844}, has_touch=True, **looks), server)
        desk.open(record=record)
        shoot(desk, "phone", PHONE)
        browser.close()


if __name__ == "__main__":
    main()
