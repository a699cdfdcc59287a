"""Whatever the two files hold, problems come back and nothing else is raised."""

from __future__ import annotations

import datetime as dt
import os
import tomllib
from pathlib import Path
from typing import Any

import pytest
import tomli_w
from hypothesis import HealthCheck, example, given, settings
from hypothesis import strategies as st

from harvest.errors import Problem, RecordError
from harvest.record import check_record, read_record
from harvest.record import files as files_module
from harvest.record.files import read_text
from harvest.record.reporting import Report, show
from harvest.record.schema import MAX_HISTORY_BYTES, MAX_RECORD_BYTES

from .edits import CSV, TOML, problems_of, told

RELAXED = settings(max_examples=150, deadline=None, suppress_health_check=list(HealthCheck))


def write(folder: Path, toml: bytes | str, csv: bytes | str) -> Path:
    for name, content in (("record.toml", toml), ("history.csv", csv)):
        (folder / name).write_bytes(content if isinstance(content, bytes) else content.encode())
    return folder


def assert_well_told(problems: tuple[Problem, ...]) -> None:
    for problem in problems:
        assert problem.severity in ("error", "warning")
        assert problem.file
        assert problem.found
        assert problem.rule
        assert problem.cure
        str(problem).encode()
        assert len(str(problem)) < 2500


@st.composite
def mutations(draw: st.DrawFn, text: str) -> bytes:
    """A text with a few bytes or pieces cut out, doubled, swapped or put in."""
    data = bytearray(text.encode())
    for _ in range(draw(st.integers(1, 4))):
        start = draw(st.integers(0, len(data)))
        end = min(len(data), start + draw(st.integers(0, 30)))
        piece = draw(
            st.binary(max_size=8)
            | st.sampled_from([b"", b"\0", b"\xff", b",", b'"', b"[", b"{", b"\n", b"nan", b"1e999", b"-", b"="])
            | st.just(bytes(data[start:end]) * 2)
        )
        data[start:end] = piece
    return bytes(data)


@given(st.binary(max_size=300), st.binary(max_size=300))
@example(b"", b"")
@example(b"\xff\xfe\x00", b"\xfe\xff\x00")
@RELAXED
def test_random_bytes(tmp_path: Path, toml: bytes, csv: bytes) -> None:
    record, problems = check_record(write(tmp_path, toml, csv))
    assert record is None
    assert any(p.severity == "error" for p in problems)
    assert_well_told(problems)


@given(mutations(TOML), mutations(CSV))
@RELAXED
def test_mutated_files(tmp_path: Path, toml: bytes, csv: bytes) -> None:
    folder = write(tmp_path, toml, csv)
    record, problems = check_record(folder)
    assert (record is None) == any(p.severity == "error" for p in problems)
    assert_well_told(problems)
    if record is None:
        with pytest.raises(RecordError):
            read_record(folder)


scalars = st.one_of(
    st.integers(-(2**70), 2**70),
    st.floats(),
    st.booleans(),
    st.text(max_size=6),
    st.just("x" * 6000),
    st.dates(),
    st.just(dt.datetime(2020, 1, 1, tzinfo=dt.UTC)),
    st.just(dt.time(1, 2)),
)
anything = st.recursive(
    scalars,
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=4), inner, max_size=3),
    max_leaves=5,
)


def places(value: Any, path: tuple[Any, ...] = ()) -> list[tuple[Any, ...]]:
    """Every place in a document, tables and lists included."""
    below: list[tuple[Any, ...]] = []
    if isinstance(value, dict):
        below = [p for key, inner in value.items() for p in places(inner, (*path, key))]
    elif isinstance(value, list):
        below = [p for index, inner in enumerate(value) for p in places(inner, (*path, index))]
    return [path, *below]


@given(st.data())
@settings(max_examples=300, deadline=None, suppress_health_check=list(HealthCheck))
def test_wrong_types_anywhere(data: st.DataObject) -> None:
    text = TOML + '[[correlation]]\nbetween = ["max_growth", "process_noise"]\nvalue = 0.1\n'
    text += '[private]\nfields = ["place"]\n[life]\nbody_mass = 3\n[survey_plan]\ncv = 0.1\n'
    text += "[losses]\nother = 1\nimplementation_cv = 0.1\n[plan]\npurpose = 'a'\n"
    document = tomllib.loads(text.replace("limit = 300", "limit = 300\nrecovery = { years = 3, chance = 0.5 }"))
    *path, last = data.draw(st.sampled_from([p for p in places(document) if p]))
    holder: Any = document
    for step in path:
        holder = holder[step]
    holder[last] = data.draw(anything)
    assert_well_told(problems_of(tomli_w.dumps(document)))


@given(st.recursive(st.integers() | st.text() | st.floats(), lambda x: st.lists(x) | st.dictionaries(st.text(), x)))
@settings(max_examples=50, deadline=None)
def test_any_value_can_be_shown(value: object) -> None:
    assert 0 < len(show(value)) < 800


def test_deep_and_huge_values_can_be_shown() -> None:
    deep: dict[str, Any] = {}
    for _ in range(100_000):
        deep = {"a": deep}
    assert show(deep) == "a table"
    assert show(10**5000) == "a whole number of more than 18 digits"


@pytest.mark.parametrize(("name", "limit"), [("record.toml", MAX_RECORD_BYTES), ("history.csv", MAX_HISTORY_BYTES)])
def test_a_file_over_the_limit_is_not_read(
    tmp_path: Path, name: str, limit: int, monkeypatch: pytest.MonkeyPatch
) -> None:
    write(tmp_path, TOML, CSV)
    with (tmp_path / name).open("wb") as stream:
        stream.truncate(limit + 1)  # a hole: nothing is on the disk

    def refuse(self: Path, *arguments: object) -> None:
        raise AssertionError("the file was opened")

    if name == "record.toml":
        monkeypatch.setattr(Path, "open", refuse)
        (tmp_path / "history.csv").unlink()
    assert told(check_record(tmp_path)[1], "error", name, f"{limit + 1:,} bytes", f"at most {limit:,}")


def test_a_growing_file_is_cut_off(tmp_path: Path) -> None:
    (tmp_path / "a.csv").write_text("x" * 50)
    report = Report("a.csv")
    assert read_text(tmp_path, "a.csv", 50, report) == "x" * 50
    assert read_text(tmp_path, "a.csv", 49, report) is None
    assert told(tuple(report.problems), "error", "50 bytes")


@pytest.mark.parametrize("name", ["record.toml", "history.csv"])
def test_links_must_stay_in_the_folder(tmp_path: Path, name: str) -> None:
    inside, outside = tmp_path / "inside", tmp_path / "outside"
    for folder in (inside, outside):
        folder.mkdir()
        write(folder, TOML, CSV)
    (inside / name).unlink()
    (inside / name).symlink_to(outside / name)
    record, problems = check_record(inside)
    assert record is None
    assert told(problems, "error", name, "leads out of the record's folder")
    (inside / name).unlink()
    (inside / f"real-{name}").write_bytes((outside / name).read_bytes())
    (inside / name).symlink_to(f"real-{name}")
    assert check_record(inside)[1] == ()


def test_the_folder_itself_may_be_a_link(tmp_path: Path) -> None:
    (tmp_path / "real").mkdir()
    write(tmp_path / "real", TOML, CSV)
    (tmp_path / "link").symlink_to("real", target_is_directory=True)
    assert check_record(tmp_path / "link")[0] == read_record(tmp_path / "real")


@pytest.mark.parametrize("name", ["record.toml", "history.csv"])
def test_links_in_a_ring(tmp_path: Path, name: str) -> None:
    write(tmp_path, TOML, CSV)
    (tmp_path / name).unlink()
    (tmp_path / name).symlink_to(name)
    assert told(check_record(tmp_path)[1], "error", name, "cannot be read")


@pytest.mark.parametrize("name", ["record.toml", "history.csv"])
@pytest.mark.parametrize("kind", ["folder", "pipe", "missing"])
def test_something_else_in_place_of_a_file(tmp_path: Path, name: str, kind: str) -> None:
    write(tmp_path, TOML, CSV)
    (tmp_path / name).unlink()
    if kind == "folder":
        (tmp_path / name).mkdir()
    elif kind == "pipe":
        os.mkfifo(tmp_path / name)
    words = "no such file" if kind == "missing" else "must be a file"
    assert told(check_record(tmp_path)[1], "error", name, words)


@pytest.mark.parametrize("folder", ["nowhere", "file", "a\0b", "x" * 5000, ""])
def test_impossible_folders(tmp_path: Path, folder: str) -> None:
    (tmp_path / "file").write_text("")
    record, problems = check_record(f"{tmp_path}/{folder}")
    assert record is None
    assert [p.file for p in problems if p.severity == "error"] == ["record.toml"]
    with pytest.raises(RecordError, match="the record has 1 error"):
        read_record(tmp_path / folder)


def test_permission_denied(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    write(tmp_path, TOML, CSV)

    def refuse(self: Path, *arguments: object) -> None:
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(files_module.Path, "open", refuse)
    problems = check_record(tmp_path)[1]
    assert told(problems, "error", "record.toml", "may not be read")


@pytest.mark.parametrize(
    ("encoding", "words"),
    [
        ("utf-16", ["looks like UTF-16", "CSV UTF-8"]),
        ("utf-16-le", ["looks like UTF-16"]),
        ("utf-16-be", ["looks like UTF-16"]),
        ("latin-1", ["line 3", "Latin-1", "CSV UTF-8"]),
    ],
)
def test_other_encodings_are_named_and_read_through(tmp_path: Path, encoding: str, words: list[str]) -> None:
    csv = CSV.replace("no count", "brouillard à Ørsta").replace("0.14", "14%")
    problems = check_record(write(tmp_path, TOML, csv.encode(encoding)))[1]
    assert told(problems, "error", "history.csv", *words)
    assert told(problems, "error", "row 4 (year 2021), column ground_cv")
    assert len(problems) == 2


def test_a_byte_order_mark_and_other_line_ends_are_fine(tmp_path: Path) -> None:
    plain = read_record(write(tmp_path, TOML, CSV))
    for end in ("\r\n", "\r"):
        toml, csv = (b"\xef\xbb\xbf" + text.replace("\n", end).encode() for text in (TOML, CSV))
        assert read_record(write(tmp_path, toml, csv)) == plain


@pytest.mark.parametrize("content", [b"", b"\n \n", b"\xef\xbb\xbf"])
def test_empty_files(tmp_path: Path, content: bytes) -> None:
    assert told(check_record(write(tmp_path, TOML, content))[1], "error", "history.csv", "an empty file")
    assert told(check_record(write(tmp_path, content, CSV))[1], "error", "record.toml", "an empty file")


def test_nul_characters(tmp_path: Path) -> None:
    assert told(check_record(write(tmp_path, TOML, CSV + "\0"))[1], "error", "history.csv", "NUL")


def test_another_history_file_can_be_named(tmp_path: Path) -> None:
    write(tmp_path, TOML.replace("lag = 0", 'lag = 0\nhistory = "counts 2024.csv"'), CSV)
    assert told(check_record(tmp_path)[1], "error", "counts 2024.csv", "no such file")
    (tmp_path / "history.csv").rename(tmp_path / "counts 2024.csv")
    assert check_record(tmp_path)[1] == ()


def test_the_error_holds_all_problems(tmp_path: Path) -> None:
    write(tmp_path, TOML.replace("lag = 0", "lag = 9"), CSV.replace("0.14", "14"))
    with pytest.raises(RecordError) as caught:
        read_record(tmp_path)
    assert caught.value.problems == check_record(tmp_path)[1]
    assert len(caught.value.problems) == 2
    assert "the record has 2 errors" in str(caught.value)


def test_a_record_saved_between_the_reading_of_its_files_is_read_again(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    write(tmp_path, TOML, CSV)
    from harvest.record import check as check_module

    real, calls = check_module.read_text, []

    def meddle(folder: Path, name: str, limit: int, report: Report) -> str | None:
        calls.append(name)
        if len(calls) == 2:  # record.toml is read; now another process saves
            (folder / "history.csv").rename(folder / "history-2.csv")
            (folder / "new").write_text(TOML.replace("lag = 0", 'lag = 0\nhistory = "history-2.csv"'))
            (folder / "new").replace(folder / "record.toml")
        return real(folder, name, limit, report)

    monkeypatch.setattr(check_module, "read_text", meddle)
    assert check_record(tmp_path)[1] == ()
    assert calls == ["record.toml", "history.csv", "record.toml", "history-2.csv"]
