"""A record as a workbook, from the command line."""

from __future__ import annotations

import json

import pytest
from openpyxl import load_workbook

from harvest.record import check_record, demo_names, read_record
from harvest.sheets.record_workbook import check_record_workbook
from tests.cli.conftest import harvest


@pytest.mark.parametrize("demo", demo_names())
def test_a_folder_becomes_a_workbook_and_a_folder_again(tmp_path, demo):
    folder, book, back = tmp_path / "mine", tmp_path / "books" / "mine.xlsx", tmp_path / "back"
    assert harvest("new", folder, "--demo", demo).returncode == 0
    there = harvest("convert", folder, book, "--json", tmp_path / "c.json")
    assert there.returncode == 0, there.stderr
    assert f"Made {book}" in there.stdout
    assert json.loads((tmp_path / "c.json").read_text())["files"] == ["mine.xlsx"]
    home = harvest("convert", book, back, "--json", tmp_path / "d.json")
    assert home.returncode == 0, home.stderr
    told = json.loads((tmp_path / "d.json").read_text())
    assert (told["kind"], told["files"]) == ("convert", ["record.toml", "history.csv"])
    assert told["record_digest"] == read_record(folder).digest() == read_record(back).digest()


def test_a_new_workbook_from_the_template_or_a_demo(tmp_path, deer):
    made = harvest("new", tmp_path / "fresh.xlsx", "--json", tmp_path / "n.json")
    assert made.returncode == 0, made.stderr
    assert json.loads((tmp_path / "n.json").read_text())["files"] == ["fresh.xlsx"]
    assert harvest("convert", tmp_path / "fresh.xlsx", tmp_path / "fresh").returncode == 0
    assert check_record(tmp_path / "fresh")[1] == ()
    assert harvest("new", tmp_path / "deer.xlsx", "--demo", "deer").returncode == 0
    data = (tmp_path / "deer.xlsx").read_bytes()
    assert check_record_workbook("deer.xlsx", data).record == read_record(deer)


def test_nothing_is_overwritten(tmp_path, deer):
    taken = tmp_path / "mine.xlsx"
    taken.write_text("mine")
    full = tmp_path / "full"
    full.mkdir()
    (full / "mine.txt").write_text("mine")
    assert harvest("new", tmp_path / "book.xlsx").returncode == 0
    for arguments in (
        ("new", taken),
        ("new", taken, "--demo", "deer"),
        ("convert", deer, taken),
        ("convert", tmp_path / "book.xlsx", full),
        ("convert", tmp_path / "book.xlsx", full / "mine.txt"),
    ):
        done = harvest(*arguments)
        assert done.returncode == 2, arguments
        assert "is there already" in done.stderr
    assert taken.read_text() == "mine"
    assert [p.name for p in full.iterdir()] == ["mine.txt"]


def test_an_empty_folder_may_be_filled(tmp_path):
    (tmp_path / "empty").mkdir()
    assert harvest("new", tmp_path / "book.xlsx").returncode == 0
    assert harvest("convert", tmp_path / "book.xlsx", tmp_path / "empty").returncode == 0
    assert read_record(tmp_path / "empty").unit == "animals"


def test_problems_are_listed_by_sheet_and_row_and_nothing_is_made(tmp_path):
    file = tmp_path / "herd.xlsx"
    assert harvest("new", file, "--demo", "deer").returncode == 0
    book = load_workbook(file)
    book["History"]["B6"].value = "0,3"
    book["Population"]["C6"].value = None
    book.save(file)
    done = harvest("convert", file, tmp_path / "out")
    assert done.returncode == 2
    assert 'error: herd.xlsx, sheet "History", row 6 (year 2014), column removals: found a decimal comma' in done.stderr
    assert "the record has 1 error" in done.stderr
    assert not (tmp_path / "out").exists()


def test_warnings_are_told(tmp_path):
    file = tmp_path / "herd.xlsx"
    assert harvest("new", file, "--demo", "deer").returncode == 0
    book = load_workbook(file)
    book.create_sheet("My sums").append(["what", 3])
    book.save(file)
    done = harvest("convert", file, tmp_path / "out")
    assert done.returncode == 0
    assert done.stderr.startswith('warning: herd.xlsx, sheet "My sums": found none of the record\'s headings')


@pytest.mark.parametrize(
    ("source", "target", "said"),
    [
        ("{deer}", "{tmp}/folder", "one of the two must be a workbook"),
        ("{tmp}/a.xlsx", "{tmp}/b.xlsx", "one of the two must be a workbook"),
        ("{tmp}/nothing.xlsx", "{tmp}/folder", "cannot be read: No such file"),
        ("{tmp}/nothing", "{tmp}/a.xlsx", "no such folder"),
        ("{tmp}/text.xlsx", "{tmp}/folder", "is not the workbook of a record"),
        ("{tmp}/old.xlsx", "{tmp}/folder", "a workbook of the old kind (.xls)"),
        ("{deer}", "/proc/nothing/a.xlsx", "cannot be written"),
    ],
)
def test_bad_input_ends_with_a_message(tmp_path, deer, source, target, said):
    (tmp_path / "text.xlsx").write_text("year,removals\n2020,3\n")
    (tmp_path / "old.xlsx").write_bytes(b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + "Workbook".encode("utf-16-le"))
    done = harvest("convert", source.format(deer=deer, tmp=tmp_path), target.format(tmp=tmp_path))
    assert done.returncode == 2
    assert said in done.stderr
    assert "Traceback" not in done.stderr
    assert not (tmp_path / "folder").exists()


def test_a_workbook_in_the_place_of_a_folder_is_told_how_to_convert(tmp_path):
    assert harvest("new", tmp_path / "herd.xlsx").returncode == 0
    for command in ("check", "quota"):
        done = harvest(command, tmp_path / "herd.xlsx")
        assert done.returncode == 2
        assert "Convert it first: harvest convert herd.xlsx FOLDER" in " ".join((done.stdout + done.stderr).split())
