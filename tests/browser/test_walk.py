"""The whole way once: from a messy sheet to the files of the quota, which hold what the command writes."""

from __future__ import annotations

import csv
import json
import re
import subprocess
import sys
import zipfile
from pathlib import Path

import docx
import openpyxl
import pytest

from harvest.errors import CAUTION
from harvest.plan import make_quota_table, words
from harvest.plan.layout import shown
from harvest.rates import draw_rates
from harvest.record import read_record
from tests.browser.desk import Desk

SHEET = """\
Rehe im Ostermoor ({});;;;
Jahr;Abschuss;Zählung;Variationskoeffizient;Bemerkung
2018;210;2140;0,12;
2019;225;2055;0,14;nass, früh gezählt
2020;k.A.;;;kein Flug
2021;218;2110;0,11;
2022;231;2090;0,12;
Summe;884;;;
"""
RANGES = (
    ("Greatest growth per head", "0.28", "0.44"),
    ("Carrying capacity", "2600", "3900"),
    ("Good and bad years", "0.05", "0.12"),
)


def write_sheet(folder: Path) -> Path:
    """A sheet that no other test brings: the app goes on with what was said about a file that it knows."""
    file = folder / "moor.csv"
    file.write_bytes(SHEET.format(folder.name).encode("latin-1"))
    return file


def answer_questions(desk: Desk) -> None:
    """Agree to everything that is asked: the first answer of each question."""
    groups = desk.main.get_by_role("radiogroup")
    for number in range(groups.count()):
        groups.nth(number).locator("label").first.click()
        desk.settle()


def fill_in(desk: Desk) -> None:
    desk.choose("Counted in", "animals")
    desk.choose("Season", "short")
    desk.choose("When counts happen", "before")
    desk.type("Years from the count to its quota", "0")
    desk.part("Surveys")
    desk.choose("Kind", "absolute")
    desk.part("Growth")
    desk.press("Add a growth curve")
    for number, (name, low, high) in enumerate(RANGES):
        desk.choose(name, "90% between")
        desk.type("from", low, number)
        desk.type("to", high, number)
    desk.part("Aims")
    desk.type("Limit: never below", "1,200")


def move_slider(desk: Desk, steps: int) -> None:
    thumb = desk.main.get_by_role("slider").first
    thumb.focus()
    for _ in range(steps):
        desk.page.keyboard.press("ArrowLeft")
    desk.settle()


@pytest.fixture(scope="module")
def files(tmp_path_factory):
    """A folder for everything that is downloaded on the way."""
    return tmp_path_factory.mktemp("downloads")


def test_the_walk_from_a_sheet_to_the_files(window, files, tmp_path):
    desk = window()
    desk.open("bring")
    desk.upload(write_sheet(tmp_path))
    assert desk.title == "Say what is what, then take it over"
    assert "früh gezählt" in desk.text
    desk.choose("What Bemerkung is", "leave out")
    assert "note" not in desk.main.get_by_role("table").last.inner_text()
    assert desk.main.get_by_role("button", name="As a new record").is_disabled()
    answer_questions(desk)
    assert desk.title == "Ready to take over"
    desk.type("Name of the population", "Roe deer of the moor")
    desk.press("As a new record")
    assert desk.title == "The record: 6 things to mend"
    assert "Population · 4 to mend" in desk.text

    fill_in(desk)
    assert desk.title == "The record: 1 thing to mend"
    problem = desk.main.locator(".hv-problem")
    assert 'found a thousands mark: "1,200"' in problem.inner_text()
    assert "Write 1200, without a thousands mark" in problem.inner_text()
    desk.type("Limit: never below", "1200")
    assert desk.title.startswith("The record is complete")
    assert problem.filter(has_text="1,200").count() == 0
    folder = unpack(desk.download("Folder (.zip), for the command line", files), files)

    desk.go("This season")
    assert re.fullmatch(r"Take at most [\d,]+ animals a year", desk.title)
    advised = desk.title
    desk.go("Risk and quota")
    move_slider(desk, 30)
    check_sentence(desk, folder)
    desk.go("Quota table")
    assert desk.title == advised
    told = by_command(folder)
    assert told["headline"] == f"{advised}."
    check_files(desk, files, told)


def unpack(packed: Path, files: Path) -> Path:
    folder = files / "record"
    with zipfile.ZipFile(packed) as archive:
        archive.extractall(folder)
    return folder


def check_sentence(desk: Desk, folder: Path) -> None:
    """The page's sentence has the library's numbers for the quota of the slider."""
    record = read_record(folder)
    table = make_quota_table(record, draw_rates(record, 0, 10_000))
    quota = float(desk.main.get_by_role("slider").first.input_value())
    assert quota == float(desk.main.get_by_role("spinbutton", name="Exactly").input_value())
    assert quota not in (0.0, table.first_quota)
    risk, error = table.curve.at("ever_below_limit", quota, table.horizon)
    sentence = (
        f"With {words.number(quota, record.unit)} animals a year the chance of ever being below 1,200 animals in 20 "
        f"years is {words.probability(risk)} ({words.error(error)} Monte Carlo)"
    )
    assert sentence in desk.text


def by_command(folder: Path) -> dict:
    """What the command writes for the record that was downloaded."""
    target = folder.parent / "command.json"
    command = [sys.executable, "-m", "harvest", "quota", str(folder), "--json", str(target)]
    subprocess.run(command, check=True, capture_output=True)
    return json.loads(target.read_bytes())


def check_files(desk: Desk, files: Path, told: dict) -> None:
    """Every file holds the command's numbers and the caution."""
    page = json.loads(desk.download("All numbers (JSON)", files).read_bytes())
    assert page == told and page["caution"] == CAUTION
    for button, name in (("Quota table (CSV)", "quota_table"), ("Lookup card (CSV)", "lookup_card")):
        check_csv(desk.download(button, files), told[name])
    check_workbook(desk.download("Excel workbook", files), told["quota_table"])
    check_document(desk.download("Word document", files), told)


def check_csv(file: Path, rows: list[dict]) -> None:
    with file.open(encoding="utf-8", newline="") as stream:
        found = list(csv.DictReader(stream))
    assert len(found) == len(rows) > 0
    for row, wanted in zip(found, rows, strict=True):
        assert row.pop("caution") == CAUTION
        assert list(row) == list(wanted)
        for text, value in zip(row.values(), wanted.values(), strict=True):
            if isinstance(value, float | int):
                assert float(text) == pytest.approx(value, rel=6e-6)
            else:
                assert text == (value or "")


COLUMNS = ("quota_year", "quota", "removals", "count_year", "abundance", "abundance_low90", "abundance_high90")
CHANCES = ("below_limit", "ever_below_limit", "ever_collapsed")


def check_workbook(file: Path, rows: list[dict]) -> None:
    sheet = openpyxl.load_workbook(file)["Quota table"]
    cells = [[c for c in row if c is not None] for row in sheet.iter_rows(values_only=True)]
    found = [row for row in cells if row and row[0] in {r["quota_year"] for r in rows}]
    wanted = [[row[name] for name in (*COLUMNS, *CHANCES)] for row in rows]
    assert len(found) == len(wanted)
    for row, numbers in zip(found, wanted, strict=True):
        assert row == pytest.approx(numbers, rel=1e-9)
    assert [CAUTION] in cells


def check_document(file: Path, told: dict) -> None:
    document = docx.Document(file)
    table = next(t for t in document.tables if t.cell(0, 1).text == "Legal quota")
    found = [[cell.text for cell in row.cells] for row in table.rows[1:]]
    kinds = ["year", "amount", "amount", "year", *["amount"] * 3, *["probability"] * 3]
    wanted = [
        [shown(row[name], kind, "animals") for name, kind in zip((*COLUMNS, *CHANCES), kinds, strict=True)]
        for row in told["quota_table"]
    ]
    assert found == wanted
    paragraphs = [p.text for p in document.paragraphs]
    assert CAUTION in paragraphs
    assert told["headline"].removesuffix(".") in " ".join(paragraphs)
