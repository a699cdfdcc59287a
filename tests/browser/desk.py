"""One window on the app: open a page, wait until its script is done, read what stands there, use its widgets."""

from __future__ import annotations

import time
from collections.abc import Callable
from pathlib import Path

from playwright.sync_api import Download, Locator, Page, WebSocket
from streamlit.proto.ForwardMsg_pb2 import ForwardMsg

from tests.browser.running import Server

#: The script is done, nothing stands there from the run before, and that for a while: a widget may still be waiting
#: to report itself (a slider does so after 200 ms).
_DONE = """([quiet]) => {
  const app = document.querySelector('[data-testid=stApp]');
  const busy = !app || app.getAttribute('data-test-script-state') !== 'notRunning'
    || app.getAttribute('data-test-connection-state') !== 'CONNECTED'
    || !document.querySelector('.hv-caution') || document.querySelector('[data-stale=true]')
    || document.querySelector('[data-testid=stSkeleton]');
  if (busy) { window.hvSince = undefined; return false; }
  window.hvSince ??= performance.now();
  if (performance.now() - window.hvSince < quiet) return false;
  window.hvSince = undefined;
  return true;
}"""
#: Milliseconds: compiling for the first time on a busy machine takes most of them.
PATIENCE = 120_000


class Desk:
    """A tab of the browser on the app."""

    def __init__(self, page: Page, server: Server):
        self.server = server
        self.dialogs: list[str] = []
        self.runs = 0
        self.take(page)

    def take(self, page: Page) -> None:
        """Be this tab."""
        self.page = page
        page.on("dialog", self._dismiss)
        page.on("websocket", self._watch)

    def _dismiss(self, dialog) -> None:
        self.dialogs.append(dialog.message)
        dialog.dismiss()

    def _watch(self, socket: WebSocket) -> None:
        socket.on("framereceived", self._count)

    def _count(self, frame: str | bytes) -> None:
        if isinstance(frame, bytes) and ForwardMsg.FromString(frame).WhichOneof("type") == "script_finished":
            self.runs += 1

    def after(self, action: Callable[[], object]) -> None:
        """Do what makes the script run, and wait until it has run and all stands."""
        before, end = self.runs, time.monotonic() + PATIENCE / 1000
        action()
        while self.runs == before:
            if time.monotonic() > end:
                raise TimeoutError("the script did not run")
            self.page.wait_for_timeout(20)
        self.settle()

    def open(self, page: str = "", **query: str) -> None:
        """Go to a page's address and wait until it stands."""
        self.after(lambda: self.page.goto(self.server.url(page, **query)))

    def reload(self) -> None:
        """Refresh the window."""
        self.after(self.page.reload)

    def settle(self, quiet: int = 300) -> None:
        """Wait until the script is done and no widget has anything left to report; no page may show an exception."""
        self.page.wait_for_function(_DONE, arg=[quiet], timeout=PATIENCE, polling=50)
        failed = self.page.locator('[data-testid="stException"]')
        assert failed.count() == 0, failed.first.inner_text()

    @property
    def main(self) -> Locator:
        """The page without its sidebar."""
        return self.page.get_by_test_id("stMain")

    @property
    def title(self) -> str:
        """The page's finding."""
        return self.page.locator("h1.hv-title").inner_text()

    @property
    def text(self) -> str:
        """Everything that stands in the page."""
        return self.main.inner_text()

    def cell(self, label: str) -> Locator:
        """The text cells whose label begins so."""
        return self.main.locator(f'input[aria-label^="{label}"]')

    def type(self, label: str, text: str, number: int = 0) -> None:
        """Put a text into a cell (of those with this label the one with this number) and leave it."""
        cell = self.cell(label).nth(number)
        cell.fill(text)
        self.after(lambda: cell.press("Enter"))

    def choose(self, label: str, option: str) -> None:
        """Choose from a list (where several have this label, the last); a list that opens while it scrolls closes."""
        cell = self.main.get_by_role("combobox", name=label).last
        cell.focus()
        self.settle()
        cell.press("ArrowDown")
        self.after(self.page.get_by_role("option", name=option, exact=True).click)

    def press(self, name: str) -> None:
        """Press a button and wait."""
        self.after(self.main.get_by_role("button", name=name, exact=True).click)

    def part(self, name: str) -> None:
        """Show a part of the record."""
        self.after(self.main.get_by_role("radio", name=name).first.click)

    def go(self, name: str) -> None:
        """Go to another page by the sidebar."""
        self.after(self.page.get_by_test_id("stSidebar").get_by_role("link", name=name, exact=True).click)

    def go_by_menu(self, name: str) -> None:
        """Go to another page where the sidebar is closed, on a phone, and close it again."""
        self.page.get_by_test_id("stExpandSidebarButton").click()
        self.go(name)
        self.page.get_by_role("button", name="Collapse sidebar").click()
        self.page.get_by_test_id("stExpandSidebarButton").wait_for()

    def upload(self, file: Path) -> None:
        """Upload a file on the page for sheets and wait for what is made of it."""
        self.main.locator('input[type="file"]').set_input_files(file)
        self.main.get_by_text("What is each column?").wait_for(timeout=PATIENCE)
        self.settle()

    def download(self, name: str, folder: Path) -> Path:
        """Press a download button; where the file was put."""
        with self.page.expect_download(timeout=PATIENCE) as waited:
            self.main.get_by_role("button", name=name, exact=True).click()
        return kept(waited.value, folder)


def kept(download: Download, folder: Path) -> Path:
    """A download under the name that the app gave it."""
    folder.mkdir(exist_ok=True)
    place = folder / download.suggested_filename
    download.save_as(place)
    return place


class Sheet:
    """The history's editor: a picture of a grid, used by its keys and read by the table behind it."""

    def __init__(self, desk: Desk):
        self.desk = desk
        self.canvas = desk.page.get_by_test_id("data-grid-canvas")

    def shown(self, column: int, row: int) -> str:
        """What stands in a cell; column and row count from 0."""
        return self.canvas.get_by_test_id(f"glide-cell-{column + 1}-{row}").inner_text()

    def begin(self, column: int, row: int) -> None:
        """Stand in a cell, by the keys alone."""
        keys = self.desk.page.keyboard
        self.canvas.focus()
        keys.press("Control+Home")
        for key in ["ArrowDown"] * row + ["ArrowRight"] * column:
            keys.press(key)

    def type(self, text: str) -> None:
        """Type over the cell where one stands and go on to the one below, as a person does: key by key."""
        first, rest = text[0], text[1:]
        keys = self.desk.page.keyboard
        keys.press(first)
        self.desk.page.locator("#portal").locator("input, textarea").first.wait_for()
        keys.type(rest, delay=40)
        keys.press("Enter")
        self.desk.page.locator("#portal").locator("input, textarea").first.wait_for(state="detached")
