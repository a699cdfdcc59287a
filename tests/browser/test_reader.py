"""The reader's own marks on the screen, and a record's texts as nothing but texts."""

from __future__ import annotations

import csv
import re

import pytest

from harvest.workspace.sources import draft_of_demo

HOSTILE = (
    "<img src=x onerror=alert(1)>",
    "**bold**",
    ":red[x] :smile: :material/home:",
    "[l](http://example.org) www.example.org a@example.org",
    "$x$ a -> b -- c",
)
PAGES = ("", "record", "yield", "thresholds", "risk", "quota")


def test_a_german_reader_sees_a_decimal_comma_and_files_keep_the_point(window, deer, tmp_path):
    desk = window(locale="de-DE")
    desk.open("quota", record=deer)
    cells = desk.main.locator("td").all_inner_texts()
    assert "2.649" in cells and "2,649" not in cells
    assert any(re.fullmatch(r"\d,\d%", cell) for cell in cells)
    assert not [cell for cell in cells if re.fullmatch(r"\d\.\d%", cell)]
    with desk.download("Quota table (CSV)", tmp_path).open(encoding="utf-8") as stream:
        row = next(csv.DictReader(stream))
    assert row["abundance"] == "2648.85"


@pytest.fixture
def hostile(put):
    """The deer demo with hostile texts wherever a text can stand."""
    draft = draft_of_demo("deer")
    places = (
        ("", None, "name"),
        ("", None, "species"),
        ("survey", 0, "name"),
        ("plan", None, "purpose"),
        ("", None, "place"),
    )
    for (section, number, key), text in zip(places, HOSTILE, strict=True):
        draft = draft.with_value(section, number, key, text)
    grid = draft.grid
    rows = [list(row) for row in grid.rows]
    for row, text in zip(rows, HOSTILE, strict=False):
        row[-1] = text
    return draft.with_grid(type(grid)(grid.header, tuple(map(tuple, rows))))


@pytest.mark.parametrize("text", HOSTILE, ids=("html", "bold", "picture", "link", "formula"))
def test_a_record_s_texts_never_become_markup(window, put, hostile, text):
    """As name and species on every page once; the others where names stand in labels."""
    record = put(hostile.with_value("", None, "name", text).with_value("", None, "species", text))
    put(hostile.with_value("", None, "name", text))
    desk = window()
    for page in PAGES if text == HOSTILE[0] else PAGES[:2]:
        desk.open(page, record=record)
        check_literal(desk, text)
    desk.open("record", record=record)
    for part in ("Surveys", "Texts"):
        desk.part(part)
        check_literal(desk, text)


def test_texts_of_a_sheet_never_become_markup(window, put, hostile, tmp_path):
    file = tmp_path / "odd.csv"
    heads = [f'"{text}"' for text in HOSTILE]
    file.write_text("Year," + ",".join(heads) + "\n2020," + ",".join(heads) + "\n2021,1,2,3,4,5\n", encoding="utf-8")
    desk = window()
    desk.open("bring", record=put(hostile.with_value("", None, "name", HOSTILE[0])))
    desk.upload(file)
    for text in HOSTILE:
        check_literal(desk, text)


def check_literal(desk, name):
    """The text stands there as it was typed; nothing was made of it, nothing asked, nothing said."""
    shown = desk.text.replace("\u2060", "")
    page = desk.page
    assert " ".join(name.split()) in shown
    assert desk.dialogs == []
    assert page.locator("img[src='x']").count() == 0
    assert page.locator("[data-testid=stMain] a[href*='example.org']").count() == 0
    assert desk.main.locator("strong, .katex, [data-testid=stIconMaterial]").filter(has_text="bold").count() == 0
    assert desk.main.locator(".katex").count() == 0
    assert "😄" not in shown
