from __future__ import annotations

import csv
import io
import json
import math
import zipfile

import pytest
from openpyxl import load_workbook

from harvest.errors import CAUTION, SettingsError
from harvest.plan.csv_files import card_csv, quota_csv
from harvest.plan.json_files import json_bytes, quota_json
from harvest.plan.workbook import quota_workbook
from harvest.writing import write_whole
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
            assert (kept[key] == "") if value is None else (float(kept[key]) == pytest.approx(value, rel=1e-5))


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
    risky = [c for c in cells if c.value[0] in "=+-@"]
    assert {"=1+1", "@sum", "-2+3"} <= {c.value for c in risky}
    assert all(c.data_type == "s" and c.quotePrefix for c in risky)


def test_private_fields_leave_in_no_file(secretive):
    table = table_of(secretive)
    archive = zipfile.ZipFile(io.BytesIO(quota_workbook(table)))
    everything = b"".join(archive.read(name) for name in archive.namelist())
    everything += json_bytes(quota_json(table)) + quota_csv(table) + card_csv(table)
    assert b"SECRET" not in everything
    assert b"(private)" in everything


def test_probabilities_are_never_printed_as_certain(tables):
    sheet = opened(tables["deer"])["Quota table"]
    formats = {c.number_format for row in sheet.iter_rows() for c in row if "%" in str(c.number_format)}
    assert formats == {'[<0.001]"<0.1%";[>0.999]">99.9%";0.0%'}


def test_the_workbook_says_where_the_numbers_come_from(tables):
    table = tables["geese"]
    pairs = {r[0]: r[1] for r in opened(table)["Provenance"].iter_rows(values_only=True) if r[0]}
    assert pairs["Record digest (SHA-256)"] == table.record.digest()
    assert pairs["Seed"] == "7"
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
