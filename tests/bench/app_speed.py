"""Speed of the app, printed as a table: ``python -m tests.bench.app_speed``; needs Chromium."""

from __future__ import annotations

import os
import statistics
import tempfile
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from playwright.sync_api import sync_playwright
from streamlit.testing.v1 import AppTest
from tabulate import tabulate

import harvest
from harvest.workspace import Workspace
from harvest.workspace.sources import draft_of_demo
from tests.browser.desk import Desk
from tests.browser.running import chromium, serving, start_browser

MOVES, ROUNDS = 30, 5
#: Seconds that were asked for.
MOVE_TARGET, SCREEN_TARGET = 0.3, 3.0
APP = Path(harvest.__file__).parent / "app.py"
#: Milliseconds from a key's press to the frame that shows another text in the sentence under the slider.
_MOVE = """() => {
  const said = () => [...document.querySelectorAll('.hv-text')].find(e => e.innerText.startsWith('With '))?.innerText;
  window.hvMoved = new Promise(done => addEventListener('keydown', () => {
    const before = said(), start = performance.now();
    const look = () => said() !== before ? done(performance.now() - start) : requestAnimationFrame(look);
    look();
  }, { once: true, capture: true }));
}"""
#: The first picture, or the headline: what a person can begin with.
_USEFUL = "[data-testid=stVegaLiteChart] svg, h1.hv-title"


def percentile95(values: list[float]) -> float:
    """The 95th percentile."""
    return statistics.quantiles(values, n=20, method="inclusive")[-1]


def moves_in_browser(desk: Desk, record: str) -> list[float]:
    """Seconds from each key press on the slider to the new sentence."""
    desk.open("risk", record=record)
    desk.main.get_by_role("slider").first.focus()
    taken = []
    for _ in range(MOVES):
        desk.page.evaluate(_MOVE)
        desk.page.keyboard.press("ArrowLeft")
        taken.append(desk.page.evaluate("() => window.hvMoved") / 1000)
        desk.settle()
    return taken


def moves_in_apptest(folder: Path) -> list[float]:
    """Seconds of a whole run of the page after a move of the slider, without a browser and without its fragment."""
    os.environ["HARVEST_WORKSPACE"] = str(folder)
    record = Workspace(folder).add(draft_of_demo("deer"), "speed")
    test = AppTest.from_file(str(APP), default_timeout=120)
    test.query_params["record"] = record
    test.run()
    test.switch_page(str(APP.parent.parent / "pages" / "risk.py")).run()
    taken = []
    for move in range(MOVES):
        slider = test.slider[0]
        slider.set_value(slider.value - 2 * (1 + move % 2))
        start = time.perf_counter()
        test.run()
        taken.append(time.perf_counter() - start)
    return taken


def first_screen(desk: Desk, address: str) -> float:
    """Seconds from opening an address to the first picture or headline."""
    start = time.perf_counter()
    desk.page.goto(address, wait_until="commit")
    desk.page.locator(_USEFUL).first.wait_for(timeout=60_000)
    return time.perf_counter() - start


@contextmanager
def desks(server) -> Iterator[Desk]:
    """A fresh window in a fresh Chromium, nothing of the app in its cache."""
    with sync_playwright() as playwright:
        browser = start_browser(playwright, chromium())
        yield Desk(browser.new_page(viewport={"width": 1366, "height": 900}), server)
        browser.close()


def screens_of_running_server(server) -> list[float]:
    """Seconds to the first useful screen of a record that was never computed, kernels compiled."""
    taken = []
    for number in range(ROUNDS):
        draft = draft_of_demo("deer").with_value("", None, "present_quota", 300 + number)
        record = Workspace(server.workspace).add(draft, "speed")
        with desks(server) as desk:
            taken.append(first_screen(desk, server.url(record=record)))
    return taken


def screens_from_the_command() -> list[float]:
    """Seconds from typing the command to the first useful screen: server and address, the browser being open."""
    taken = []
    for _ in range(ROUNDS):
        with tempfile.TemporaryDirectory() as place, desks(None) as desk:
            start = time.perf_counter()
            with serving(Path(place), "--demo", "deer") as server:
                record = Workspace(server.workspace).entries()[0].id
                first_screen(desk, server.url(record=record))
                taken.append(time.perf_counter() - start)
    return taken


def measure() -> list[tuple[str, float, float, float]]:
    """Name, median, 95th percentile and target of each, seconds."""
    with tempfile.TemporaryDirectory() as place:
        with serving(Path(place)) as server:
            record = Workspace(server.workspace).add(draft_of_demo("deer"), "speed")
            with desks(server) as desk:
                desk.open(record=record)
                moves = moves_in_browser(desk, record)
            screens = screens_of_running_server(server)
        reruns = moves_in_apptest(Path(place) / "apptest")
    told = (
        ("slider, key press to new sentence, browser", moves, MOVE_TARGET),
        ("slider, page rerun, AppTest", reruns, MOVE_TARGET),
        ("first useful screen, server running", screens, SCREEN_TARGET),
        ("first useful screen, from the command", screens_from_the_command(), SCREEN_TARGET),
    )
    return [(name, statistics.median(taken), percentile95(taken), target) for name, taken, target in told]


if __name__ == "__main__":
    print(tabulate(measure(), ("seconds", "median", "95th percentile", "target"), floatfmt=".3f"))
