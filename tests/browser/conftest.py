"""One server and one Chromium for all browser tests; every window's requests are watched."""

from __future__ import annotations

from collections.abc import Callable, Iterator

import pytest
from playwright.sync_api import Browser, sync_playwright

from harvest.workspace import Draft, Workspace
from harvest.workspace.sources import draft_of_demo
from tests.browser.desk import Desk
from tests.browser.running import Server, chromium, is_foreign, record_requests, serving, start_browser


@pytest.fixture(scope="session")
def browser() -> Iterator[Browser]:
    executable = chromium()
    with sync_playwright() as playwright:
        browser = start_browser(playwright, executable)
        yield browser
        browser.close()


@pytest.fixture(scope="session")
def server(tmp_path_factory: pytest.TempPathFactory, browser: Browser) -> Iterator[Server]:
    with serving(tmp_path_factory.mktemp("server")) as running:
        yield running


@pytest.fixture
def window(browser: Browser, server: Server) -> Iterator[Callable[..., Desk]]:
    """Make a window, with settings of its context; afterwards nothing may have been asked of another computer."""
    contexts = []

    def make(on: Server = server, **settings) -> Desk:
        context = browser.new_context(**{"viewport": {"width": 1366, "height": 900}, "locale": "en-GB"} | settings)
        context.set_default_timeout(15_000)
        contexts.append((context, record_requests(context)))
        return Desk(context.new_page(), on)

    yield make
    asked = []
    for context, urls in contexts:
        asked += urls
        context.close()
    assert asked, "no request was seen: the watch is broken"
    assert not [url for url in asked if is_foreign(url)]


@pytest.fixture
def put(server: Server) -> Callable[[Draft], str]:
    """Put a draft into the workspace of the server; its id."""
    return lambda draft: Workspace(server.workspace).add(draft, "put there by a test")


@pytest.fixture
def deer(put: Callable[[Draft], str]) -> str:
    """A copy of the deer demo, of this test alone."""
    return put(draft_of_demo("deer"))
