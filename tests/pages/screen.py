"""Pages without a browser: opening one, and reading what stands on it."""

from __future__ import annotations

import json
from collections.abc import Iterable
from functools import cache
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

from streamlit.testing.v1 import AppTest

import harvest
from harvest.plan import make_quota_table
from harvest.plan.table import QuotaTable
from harvest.rates import Rates, draw_rates
from harvest.record import Record, demo_folder, read_record
from harvest.yields import Thresholds, find_thresholds

APP = Path(harvest.__file__).parent / "app.py"
PAGES = ("start", "record", "bring", "sustain", "collapse", "risk", "quota")
#: Seconds that a run may take: the first computes the quota table.
PATIENCE = 120


def open_page(page: str, record: str | None = None, **address: str) -> AppTest:
    """A window on a page, with a record and more in its address."""
    at = AppTest.from_file(str(APP), default_timeout=PATIENCE)
    if page != PAGES[0]:  # pages are known after a first run, which is quick without a record
        at.run().switch_page(f"../pages/{page}.py")
    for key, value in {**({"record": record} if record else {}), **address}.items():
        at.query_params[key] = value
    return at.run()


def go_to(at: AppTest, page: str) -> AppTest:
    """The same window on another page."""
    return at.switch_page(f"../pages/{page}.py").run()


class Screen(HTMLParser):
    """What the page's own HTML says: texts by class, tables, cards; each in order."""

    def __init__(self, at: AppTest):
        super().__init__()
        self.texts: list[tuple[str, str]] = []
        self.tables: list[list[list[str]]] = []
        self._open: list[tuple[str, str]] = []
        for element in at.main.get("html"):
            if "hv-" in element.value and not element.value.lstrip().startswith("<style"):
                self.feed(element.value)
        self.close()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        kind = dict(attrs).get("class") or tag
        self._open.append((tag, kind))
        if tag == "table":
            self.tables.append([])
        elif tag == "tr":
            self.tables[-1].append([])
        elif tag in ("td", "th"):
            self.tables[-1][-1].append("")
        elif tag in ("p", "h1", "h2", "h3", "dt", "dd"):
            self.texts.append((kind, ""))

    def handle_endtag(self, tag: str) -> None:
        self._open.pop()

    def handle_data(self, data: str) -> None:
        tags = [tag for tag, _ in self._open]
        if tags and tags[-1] in ("td", "th"):
            self.tables[-1][-1][-1] += data
        elif self.texts and {"p", "h1", "h2", "h3", "dt", "dd"} & set(tags):
            kind, text = self.texts[-1]
            self.texts[-1] = kind, text + data

    def of(self, kind: str) -> list[str]:
        """The texts of a class."""
        return [text for found, text in self.texts if found == kind]

    @property
    def title(self) -> str:
        """The one title."""
        (title,) = self.of("hv-title")
        return title

    @property
    def said(self) -> list[str]:
        return self.of("hv-text")

    @property
    def problems(self) -> list[str]:
        return [text for kind, text in self.texts if kind.startswith("hv-problem")]

    @property
    def cards(self) -> list[tuple[str, str, str]]:
        found = [text for kind, text in self.texts if kind in ("dt", "hv-figure", "dd")]
        return [(found[n], found[n + 1], found[n + 2]) for n in range(0, len(found), 3)]


def read(at: AppTest) -> Screen:
    """What stands on the page, once it is seen that nothing went wrong."""
    wrong = [(e.value, e.stack_trace) for e in at.exception]
    if wrong:
        raise AssertionError(f"the page failed: {wrong}")
    return Screen(at)


def widget(elements: Iterable[Any], *words: str) -> Any:
    """The one widget with these words in its key or label."""
    found = [e for e in elements if all(w in f"{e.key} {getattr(e, 'label', '')}" for w in words)]
    if len(found) != 1:
        raise AssertionError(f"{len(found)} widgets with {words} among {[(e.key, e.label) for e in elements]}")
    return found[0]


def edit_history(at: AppTest, **state: Any) -> AppTest:
    """Send what the editor of the history would send."""
    (editor,) = at.data_editor
    states = at._tree.get_widget_states()
    sent = states.widgets.add()
    sent.id = editor.proto.id
    sent.string_value = json.dumps({"edited_rows": {}, "added_rows": [], "deleted_rows": [], **state})
    return at._run(states)


@cache
def demo(name: str) -> Record:
    return read_record(demo_folder(name))


@cache
def draws(name: str) -> Rates:
    return draw_rates(demo(name), 0, 10_000)


@cache
def present_thresholds(name: str) -> Thresholds:
    """The thresholds of a demo under its present quota."""
    return find_thresholds(demo(name), draws(name))


@cache
def table(name: str) -> QuotaTable:
    """The quota table of a demo as the library gives it."""
    return make_quota_table(demo(name), draws(name))
