"""Drafts from folders, demos, packed folders and sheets, and what is told where there is none."""

from __future__ import annotations

import io
import zipfile
from pathlib import Path
from typing import Any

import pytest
from openpyxl import load_workbook

from harvest.errors import RecordError, SettingsError
from harvest.record import demo_folder, demo_names, read_record
from harvest.record.schema import MAX_HISTORY_BYTES, MAX_RECORD_BYTES
from harvest.record.template import blank_record_files
from harvest.sheets.record_workbook import record_workbook
from harvest.workspace import Draft, Workspace
from harvest.workspace.sources import (
    as_zip,
    draft_of_demo,
    draft_of_folder,
    draft_of_history,
    draft_of_upload,
    draft_of_zip,
    empty_draft,
    open_demo,
    open_folder,
    open_path,
    surveys_leaving,
    with_history,
)
from tests.record.edits import CSV, TOML

DRAFT = Draft(TOML, CSV)


def packed(files: dict[str, bytes], method: int = zipfile.ZIP_DEFLATED) -> bytes:
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w", method) as archive:
        for name, data in files.items():
            archive.writestr(name, data)
    return stream.getvalue()


SOUND = {"record.toml": TOML.encode(), "history.csv": CSV.encode()}


@pytest.mark.parametrize("name", demo_names())
def test_a_demo_is_its_folder_to_the_letter(name: str) -> None:
    draft = draft_of_demo(name)
    assert draft.record_text == (demo_folder(name) / "record.toml").read_text("utf-8")
    assert draft.history_text == (demo_folder(name) / "history.csv").read_text("utf-8")
    assert draft.check()[0] == read_record(demo_folder(name))


def test_the_template_is_sound_and_an_empty_record_is_not() -> None:
    assert Draft(*blank_record_files()).check()[0] is not None
    record, problems = empty_draft().check()
    assert record is None
    assert {"unit", "season", "count_when", "lag", "curve"} <= {p.where for p in problems if p.found == "nothing"}


def test_a_folder_with_faults_is_a_draft(tmp_path: Path) -> None:
    (tmp_path / "record.toml").write_text('name = \nhistory = "counts.csv"')
    (tmp_path / "history.csv").write_text("nonsense")
    assert draft_of_folder(tmp_path) == Draft('name = \nhistory = "counts.csv"', "nonsense")


def test_a_folder_with_a_history_of_its_own_name(tmp_path: Path) -> None:
    (tmp_path / "record.toml").write_text('history = "counts.csv"')
    (tmp_path / "counts.csv").write_text(CSV)
    assert draft_of_folder(tmp_path).history_text == CSV


@pytest.mark.parametrize("files", [{}, {"record.toml": TOML}, {"history.csv": CSV}])
def test_a_folder_that_lacks_a_file_is_refused(tmp_path: Path, files: dict[str, str]) -> None:
    for name, text in files.items():
        (tmp_path / name).write_text(text)
    missing = "record.toml" if "record.toml" not in files else "history.csv"
    with pytest.raises(RecordError, match=missing):
        draft_of_folder(tmp_path)


@pytest.mark.parametrize("draft", [DRAFT, Draft('history = "counts.csv"\n', CSV), Draft("name = ", "")])
def test_a_packed_folder_comes_back(draft: Draft) -> None:
    assert draft_of_zip("herd.zip", as_zip(draft)) == draft


@pytest.mark.parametrize("prefix", ["", "./", "herd/", "a/b c/"])
def test_a_packed_folder_may_stand_in_folders(prefix: str) -> None:
    data = packed({f"{prefix}{name}": text for name, text in SOUND.items()} | {"__MACOSX/._record.toml": b"\0"})
    assert draft_of_zip("herd.zip", data) == DRAFT


def test_line_ends_and_marks_of_windows_are_read() -> None:
    files = {name: b"\xef\xbb\xbf" + data.replace(b"\n", b"\r\n") for name, data in SOUND.items()}
    assert draft_of_zip("herd.zip", packed(files)) == DRAFT


@pytest.mark.parametrize(
    ("files", "told"),
    [
        ({}, "found no record.toml"),
        ({"history.csv": CSV.encode()}, "found no record.toml"),
        ({"record.toml": TOML.encode()}, "found no history"),
        ({"record.toml": TOML.encode(), "other/history.csv": CSV.encode()}, "found no history"),
        ({"a/record.toml": b"", "a/history.csv": b"", "b/record.toml": b"", "b/history.csv": b""}, "found 2 record"),
        ({**SOUND, "record.toml": b"\xff\xfe"}, "cannot be read"),
        ({**SOUND, "record.toml": b"#" * (MAX_RECORD_BYTES + 1)}, "unpacks to more than 1,000,000 bytes"),
        ({**SOUND, "history.csv": b"\0" * (MAX_HISTORY_BYTES + 1)}, "unpacks to more than 10,000,000 bytes"),
    ],
)
def test_a_packed_file_that_is_no_record_is_told(files: dict[str, bytes], told: str) -> None:
    with pytest.raises(SettingsError, match=told):
        draft_of_zip("herd.zip", packed(files))


def test_a_packed_bomb_is_not_unpacked() -> None:
    data = packed({**SOUND, "history.csv": b"0" * 300_000_000})
    assert len(data) < 1_000_000
    with pytest.raises(SettingsError, match="unpacks to more than"):
        draft_of_zip("herd.zip", data)


@pytest.mark.parametrize("method", [zipfile.ZIP_BZIP2, zipfile.ZIP_LZMA])
def test_what_is_packed_in_an_unusual_way_is_told(method: int) -> None:
    with pytest.raises(SettingsError, match="unusual"):
        draft_of_zip("herd.zip", packed(SOUND, method))


@pytest.mark.parametrize("method", [zipfile.ZIP_STORED, zipfile.ZIP_DEFLATED])
def test_a_broken_packed_file_is_told(method: int) -> None:
    sound = packed({"record.toml": TOML.encode() * 20, "history.csv": CSV.encode()}, method)
    assert draft_of_zip("herd.zip", sound).history_text == CSV
    cuts = [sound[:n] for n in range(0, len(sound), 37)]
    turned = [sound[:n] + bytes([sound[n] ^ 0xFF]) + sound[n + 1 :] for n in range(0, len(sound), 5)]
    outcomes = set()
    for data in [*cuts, *turned]:
        try:
            draft_of_zip("herd.zip", data)
            outcomes.add("read")
        except SettingsError as error:
            assert "herd.zip" in str(error)
            outcomes.add("told")
    assert "told" in outcomes


@pytest.mark.parametrize("data", [b"", b"PK", b"year,removals\n"])
def test_what_is_no_packed_file_is_told(data: bytes) -> None:
    with pytest.raises(SettingsError, match="cannot be read"):
        draft_of_upload("herd.zip", data)
    assert draft_of_upload("herd.csv", data) is None


def test_an_upload_is_told_by_what_it_is() -> None:
    record = read_record(demo_folder("deer"))
    found = draft_of_upload("any name.xlsx", record_workbook(record))
    assert found is not None
    draft, beyond = found
    assert (draft.check()[0], beyond) == (record, ())
    assert draft_of_upload("HERD.ZIP", as_zip(DRAFT)) == (DRAFT, ())


def test_a_sheet_becomes_a_draft() -> None:
    draft = draft_of_history("Hares", CSV, [{"name": "strip", "column": "strip", "cv_column": "strip_cv"}])
    assert draft.document == {
        "format": 1,
        "name": "Hares",
        "survey": [{"name": "strip", "column": "strip", "cv_column": "strip_cv"}],
    }
    assert draft.history_text == CSV


def surveys_after(document: dict[str, Any] | None, surveys: list[dict[str, str]]) -> Any:
    draft = DRAFT if document is None else DRAFT.with_document(document)
    found = with_history(draft, "year,removals\n", surveys)
    assert found.history_text == "year,removals\n"
    rest = {key: value for key, value in (draft.document or {}).items() if key != "survey"}
    assert {key: value for key, value in (found.document or {}).items() if key != "survey"} == rest
    return (found.document or {}).get("survey")


GROUND = {"name": "ground", "column": "ground", "kind": "absolute", "cv_column": "ground_cv"}
PELLETS = {"name": "pellets", "column": "pellets", "kind": "index", "cv": 0.3}


@pytest.mark.parametrize(
    ("brought", "surveys"),
    [
        ([], []),
        ([{"name": "x", "column": "pellets"}], [PELLETS]),
        ([{"name": "x", "column": "pellets"}, {"name": "x", "column": "ground", "cv_column": "cv"}], None),
        ([{"name": "new", "column": "new"}], [{"name": "new", "column": "new"}]),
    ],
)
def test_another_history_keeps_the_surveys_that_it_has(brought: list[dict[str, str]], surveys: Any) -> None:
    both = [{**GROUND, "cv_column": "cv"}, PELLETS]
    assert surveys_after(None, brought) == (both if surveys is None else surveys)


def test_a_survey_whose_column_has_another_name_keeps_what_is_known_of_it() -> None:
    document = {"name": "herd", "survey": [{**GROUND, "detection_limit": 5}]}
    renamed = surveys_after(document, [{"name": "x", "column": "drive", "cv_column": "drive_cv"}])
    assert renamed == [{**GROUND, "column": "drive", "cv_column": "drive_cv", "detection_limit": 5}]
    draft = Draft("", "").with_document(document)
    assert surveys_leaving(draft, [{"name": "x", "column": "drive"}]) == []
    assert surveys_leaving(draft, []) == ["ground"]


def test_another_history_for_surveys_that_are_faulty() -> None:
    faulty = {"name": "herd", "survey": [{"column": ["a"]}, {"name": "x"}, GROUND]}
    assert surveys_after(faulty, [{"name": "g", "column": "ground", "cv_column": "ground_cv"}]) == [GROUND]


def test_another_history_for_a_broken_record() -> None:
    assert with_history(Draft("name = ", CSV), "year\n", [{"name": "x", "column": "x"}]) == Draft("name = ", "year\n")


def test_a_demo_is_opened_once_until_it_is_changed(tmp_path: Path) -> None:
    space = Workspace(tmp_path)
    first = open_demo(space, "lake")
    assert open_demo(space, "lake") == first
    space.change(first, lambda d: d.with_value("", None, "name", "Mine"), "the name")
    second = open_demo(space, "lake")
    assert second != first
    assert space.load(second) == draft_of_demo("lake")
    assert space.load(first).name == "Mine"


def test_a_folder_is_opened_anew_when_it_changed(tmp_path: Path) -> None:
    space, folder = Workspace(tmp_path / "space"), tmp_path / "herd"
    folder.mkdir()
    for name, data in SOUND.items():
        (folder / name).write_bytes(data)
    first = open_folder(space, folder)
    space.change(first, lambda d: d.with_value("", None, "name", "Mine"), "the name")
    assert open_folder(space, folder) == first
    assert open_path(space, folder) == first
    assert space.load(first).name == "Mine"
    (folder / "history.csv").write_text("year,removals\n2024,5\n")
    assert space.load(open_folder(space, folder)).history_text == "year,removals\n2024,5\n"


def test_a_workbook_is_opened_by_its_path(tmp_path: Path) -> None:
    space, path = Workspace(tmp_path / "space"), tmp_path / "deer.xlsx"
    record = read_record(demo_folder("deer"))
    path.write_bytes(record_workbook(record))
    first = open_path(space, path)
    assert space.load(first).check()[0] == record
    assert open_path(space, path) == first
    with pytest.raises(SettingsError, match=r"missing\.xlsx' cannot be read"):
        open_path(space, tmp_path / "missing.xlsx")


def test_a_workbook_that_would_lose_a_value_is_refused(tmp_path: Path) -> None:
    """A formula without a stored value: taken over, the limit would silently be gone."""
    record = draft_of_demo("deer").check()[0]
    assert record is not None
    book = load_workbook(io.BytesIO(record_workbook(record)))
    (cell,) = [c for sheet in book for row in sheet.iter_rows() for c in row if c.value == 1200]
    cell.value = "=1000+200"
    stream = io.BytesIO()
    book.save(stream)
    with pytest.raises(RecordError, match="formula"):
        draft_of_upload("deer.xlsx", stream.getvalue())
    path = tmp_path / "deer.xlsx"
    path.write_bytes(stream.getvalue())
    with pytest.raises(RecordError, match="formula"):
        open_path(Workspace(tmp_path / "space"), path)
