from __future__ import annotations

import csv
import io
import json
import math
import zipfile
from dataclasses import replace

import pytest
from openpyxl import load_workbook

from harvest.errors import CAUTION, SettingsError
from harvest.futures import Rule
from harvest.plan.cells import csv_text
from harvest.plan.csv_files import card_csv, quota_csv
from harvest.plan.json_files import future_json, json_bytes, quota_json, thresholds_json, yield_json
from harvest.plan.workbook import quota_workbook
from harvest.record.history import RISKY
from harvest.writing import write_new, write_whole
from harvest.yields import find_thresholds, summarise_yield
from tests.plan.conftest import table_of

SHEETS = [
    "Quota table",
    "Lookup card",
    "Why this number",
    "Other quotas",
    "Assumptions",
    "Record",
    "History",
    "Provenance",
]


def opened(table):
    return load_workbook(io.BytesIO(quota_workbook(table)))


@pytest.mark.parametrize("demo", ["deer", "lake", "geese"])
def test_csv_excel_and_json_hold_the_same_numbers(tables, demo):
    table = tables[demo]
    told = json.loads(json_bytes(quota_json(table)))
    rows = list(csv.DictReader(io.StringIO(quota_csv(table).decode())))
    sheet = opened(table)["Quota table"]
    numbers = [r for r in sheet.iter_rows(values_only=True) if isinstance(r[0], int)]
    assert len(rows) == len(numbers) == len(told["quota_table"]) == len(table.rows)
    feedback = table.rule.feedback
    for mine, shown, kept in zip(told["quota_table"], numbers, rows, strict=True):
        assert shown[0] == mine["quota_year"] == int(kept["quota_year"])
        assert shown[1] == mine["quota"] == float(kept["quota"])
        assert shown[-1] == pytest.approx(mine["ever_collapsed"])
        column = 4 if feedback else 2
        assert shown[column] == pytest.approx(mine["removals"])
        assert float(kept["removals"]) == pytest.approx(mine["removals"], rel=1e-5)
        assert kept["caution"] == CAUTION


@pytest.mark.parametrize("demo", ["deer", "lake"])
def test_the_card_is_the_same_in_csv_and_json(tables, demo):
    table = tables[demo]
    told = json.loads(json_bytes(quota_json(table)))["lookup_card"]
    rows = list(csv.DictReader(io.StringIO(card_csv(table).decode())))
    for mine, kept in zip(told, rows, strict=True):
        for key, value in mine.items():
            if key == "when":
                assert kept[key] == value
            elif value is None:
                assert kept[key] == ""
            else:
                assert float(kept[key]) == pytest.approx(value, rel=1e-5)


def test_every_sheet_carries_the_caution_and_no_formula(tables):
    for table in tables.values():
        book = opened(table)
        assert book.sheetnames == SHEETS
        for sheet in book:
            cells = [c for row in sheet.iter_rows() for c in row if c.value is not None]
            assert any(c.value == CAUTION for c in cells), sheet.title
            assert all(c.data_type != "f" for c in cells), sheet.title
            assert sheet.oddFooter.left.text.startswith("A decision aid")


def test_texts_that_a_spreadsheet_would_run_stay_texts(secretive):
    table = table_of(secretive)
    book = opened(table)
    cells = [c for sheet in book for row in sheet.iter_rows() for c in row if isinstance(c.value, str)]
    risky = [c for c in cells if c.value[:1] in RISKY and c.value]
    assert {"=1+1", "@sum", "-2+3"} <= {c.value for c in risky}
    assert all(c.data_type == "s" and c.quotePrefix for c in risky)


@pytest.mark.parametrize("start", list(RISKY), ids=lambda s: f"U+{ord(s):04X}")
def test_every_start_that_a_spreadsheet_would_run_is_guarded(secretive, start):
    """Full-width signs and a line break among them: Excel in some languages runs those too."""
    assert csv_text(f"{start}1+1") == f"'{start}1+1"
    assert csv_text(f"1{start}1") == f"1{start}1"
    if start == "\r":
        return  # a record holds no such text, and a workbook reads it as a line break
    book = opened(table_of(replace(secretive, species=f"{start}sum", plan=(("purpose", f"{start}2+3"),))))
    cells = {c.value: c for sheet in book for row in sheet.iter_rows() for c in row if isinstance(c.value, str)}
    for text in (f"{start}sum", f"{start}2+3"):
        assert (cells[text].data_type, cells[text].quotePrefix) == ("s", True)


def test_the_list_of_starts_holds_the_full_width_signs_and_the_line_break():
    assert set(RISKY) == set("=+-@\t\r\n＝＋－＠")


@pytest.fixture(scope="module")
def hidden(demos):
    """The deer with every name and text private and recognisable, and a zero count after the last one used."""
    deer = demos["deer"]
    survey = replace(deer.surveys[0], name="SECRET-SURVEY", values=(*deer.surveys[0].values[:-1], 0.0))
    notes = tuple("SECRET-NOTE" for _ in deer.history.years)
    return replace(
        deer,
        name="SECRET-NAME",
        species="SECRET-SPECIES",
        place="SECRET-PLACE",
        surveys=(survey,),
        history=replace(deer.history, notes=notes),
        plan=(("author", "SECRET-AUTHOR"),),
        private=("name", "species", "place", "survey", "plan", "history.note", "history.removals"),
    )


@pytest.mark.parametrize("rule", [None, Rule("ramp", (1200.0, 2200.0, 0.1))], ids=["constant", "ramp"])
def test_private_fields_leave_in_no_file(hidden, rule):
    table = table_of(hidden, rule=rule)
    archive = zipfile.ZipFile(io.BytesIO(quota_workbook(table)))
    everything = b"".join(archive.read(name) for name in archive.namelist())
    everything += json_bytes(quota_json(table)) + quota_csv(table) + card_csv(table)
    rates = table.rates
    summary, found = summarise_yield(hidden, rates), find_thresholds(hidden, rates)
    told = [yield_json(hidden, rates, summary), thresholds_json(hidden, rates, found)]
    told.append(future_json(hidden, rates, table.future))
    everything += b"".join(json_bytes(t) for t in told)
    assert rates.notes
    assert b"SECRET" not in everything
    assert b"(private)" in everything
    assert told[0]["present_removals"] is None


def test_probabilities_are_never_printed_as_certain(tables):
    sheet = opened(tables["deer"])["Quota table"]
    formats = {c.number_format for row in sheet.iter_rows() for c in row if "%" in str(c.number_format)}
    assert formats == {'[<0.001]"<0.1%";[>0.999]">99.9%";0.0%'}


def test_the_workbook_says_where_the_numbers_come_from(tables):
    table = tables["geese"]
    pairs = {r[0]: r[1] for r in opened(table)["Provenance"].iter_rows(values_only=True) if r[0]}
    assert pairs["Record digest (SHA-256)"] == table.record.digest()
    assert pairs["Seed of the rates"] == pairs["Seed of the futures"] == "7"
    assert pairs["Harvest version"] == table.version
    assert "Date" in pairs
    assert b"Date" not in json_bytes(quota_json(table))


def test_json_has_no_dates_and_no_nan(tables):
    text = json_bytes(quota_json(tables["lake"])).decode()

    def refuse(name):
        raise AssertionError(name)

    told = json.loads(text, parse_constant=refuse)
    assert told["caution"] == CAUTION
    assert told["lookup_card"][-1]["count_from"] is None
    assert math.isclose(told["recommendation"]["quota"], tables["lake"].recommendation.quota)


def test_a_file_is_written_whole_or_not_at_all(tmp_path, monkeypatch):
    target = tmp_path / "sub" / "a.csv"
    write_whole(target, b"old")
    assert target.read_bytes() == b"old"

    def full(*_):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr("os.fsync", full)
    with pytest.raises(SettingsError, match="nothing was changed"):
        write_whole(target, b"new")
    assert target.read_bytes() == b"old"
    assert [p.name for p in target.parent.iterdir()] == ["a.csv"]


def test_a_file_of_any_length_of_name_is_written_and_others_stay(tmp_path):
    (tmp_path / ".other.unfinished").write_text("mine")
    target = tmp_path / ("x" * 250 + ".csv")
    for data in (b"old", b"new"):
        write_whole(target, data)
        assert target.read_bytes() == data
    assert {p.name for p in tmp_path.iterdir()} == {target.name, ".other.unfinished"}
    assert target.stat().st_mode & 0o777 == (tmp_path / ".other.unfinished").stat().st_mode & 0o777


def test_a_rename_that_fails_leaves_the_old_file_and_no_rubbish(tmp_path, monkeypatch):
    target = tmp_path / "a.csv"
    write_whole(target, b"old")

    def refuse(*_):
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr("os.replace", refuse)
    with pytest.raises(SettingsError, match="Permission denied"):
        write_whole(target, b"new")
    assert [(p.name, p.read_bytes()) for p in tmp_path.iterdir()] == [("a.csv", b"old")]
    with pytest.raises(SettingsError, match="cannot be written"):
        write_whole(tmp_path / "a\0b", b"new")


def test_a_new_file_never_replaces_one(tmp_path):
    write_new(tmp_path / "a", b"first")
    with pytest.raises(FileExistsError):
        write_new(tmp_path / "a", b"second")
    assert (tmp_path / "a").read_bytes() == b"first"
