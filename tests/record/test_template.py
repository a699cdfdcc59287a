"""The template passes its own checks, and new records never overwrite anything."""

from __future__ import annotations

import errno
import os
import signal
import subprocess
import sys
import tomllib
from pathlib import Path
from typing import Any

import pytest

from harvest.errors import SettingsError
from harvest.record import check_record, demo_folder, demo_names, make_record, read_record
from harvest.record import template as template_module
from harvest.record.check import check_texts
from harvest.record.fields import FIELDS, SECTIONS, field_at, fields_of
from harvest.record.schema import INSIDE_0_1, Interval
from harvest.record.template import blank_record_files

from .interrupting import count_calls, die, interrupt


def test_the_template_passes_every_check() -> None:
    record, problems = check_texts(*blank_record_files())
    assert problems == ()
    assert record is not None
    assert record.quota_year == 2024
    assert "INVENTED" in blank_record_files()[0].split("\n")[0]


def test_the_template_shows_every_key_once() -> None:
    lines = blank_record_files()[0].split("\n")
    keys = [line.lstrip("#").split(" = ")[0] for line in lines if " = " in line and not line.startswith("# ")]
    assert keys == [field.key for section in SECTIONS for field in fields_of(section.name)]
    assert max(map(len, lines)) <= 116


def test_every_line_of_the_template_can_be_switched_on() -> None:
    text = blank_record_files()[0]
    switched = "\n".join(
        line[1:] if line[:1] == "#" and line[1:2] not in (" ", "") else line for line in text.split("\n")
    )
    document = tomllib.loads(switched)
    for field in FIELDS:
        table = document[field.section] if field.section else document
        assert field.key in (table[0] if isinstance(table, list) else table)
    _, problems = check_texts(switched, blank_record_files()[1])
    assert not any("unknown" in str(problem) for problem in problems)


def test_a_record_from_the_template(tmp_path: Path) -> None:
    folder = make_record(tmp_path / "new" / "herd")
    assert check_record(folder)[1] == ()
    with pytest.raises(SettingsError, match="not empty"):
        make_record(folder)


@pytest.mark.parametrize("demo", [None, "deer"])
@pytest.mark.parametrize("after", [False, True])
def test_a_killed_process_leaves_no_half_made_record(tmp_path: Path, demo: str | None, after: bool) -> None:
    calls = count_calls(lambda: make_record(tmp_path / "trial", demo))
    assert calls.count("fsync") >= 2
    whole = {path.name: path.read_bytes() for path in (tmp_path / "trial").iterdir()}
    seen = set()
    for target in range(len(calls)):
        folder = tmp_path / str(target)
        child = os.fork()
        if child == 0:
            interrupt(pytest.MonkeyPatch(), target, die(after))
            make_record(folder, demo)
            os._exit(0)
        assert os.waitstatus_to_exitcode(os.waitpid(child, 0)[1]) == -signal.SIGKILL
        there = (folder / "record.toml").exists()
        seen.add(there)
        if there:
            assert {p.name: p.read_bytes() for p in folder.iterdir() if not p.name.startswith(".")} == whole
    assert seen == {False, True}


@pytest.mark.parametrize("demo", [None, "deer"])
@pytest.mark.parametrize("error", [OSError(errno.ENOSPC, "No space left on device"), KeyboardInterrupt()])
def test_a_failing_call_leaves_a_whole_record_or_nothing(
    tmp_path: Path, demo: str | None, error: BaseException
) -> None:
    def strike(name: str, real: Any, args: tuple[Any, ...]) -> Any:
        if name == "close":
            real(*args)
        raise error

    calls = count_calls(lambda: make_record(tmp_path / "trial", demo))
    for target in range(len(calls)):
        folder = tmp_path / str(target)
        failed = False
        with pytest.MonkeyPatch.context() as patch:
            interrupt(patch, target, strike)
            try:
                make_record(folder, demo)
            except (SettingsError, KeyboardInterrupt):
                failed = True
        if failed and not (folder / "record.toml").exists():
            assert not folder.exists() or not any(folder.iterdir())
        else:
            assert sorted(p.name for p in folder.iterdir()) == sorted(p.name for p in (tmp_path / "trial").iterdir())
            assert check_record(folder)[1] == ()


def test_a_file_that_appears_meanwhile_is_not_overwritten(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Two processes that make the same record: the slower one is told, and the quicker one's files stay."""
    real = template_module.write_new

    def late(path: Path, data: bytes) -> None:
        path.write_text("mine")
        real(path, data)

    monkeypatch.setattr(template_module, "write_new", late)
    with pytest.raises(SettingsError, match="exists"):
        make_record(tmp_path / "herd")
    assert [p.read_text() for p in (tmp_path / "herd").iterdir()] == ["mine"]


def test_an_empty_folder_may_be_filled(tmp_path: Path) -> None:
    assert read_record(make_record(tmp_path)).unit == "animals"


@pytest.mark.parametrize("name", demo_names())
def test_a_copy_of_a_demo(tmp_path: Path, name: str) -> None:
    assert read_record(make_record(tmp_path / name, name)) == read_record(demo_folder(name))
    (tmp_path / "full").mkdir()
    (tmp_path / "full" / "mine.txt").write_text("mine")
    with pytest.raises(SettingsError, match="not empty"):
        make_record(tmp_path / "full", name)
    assert [p.name for p in (tmp_path / "full").iterdir()] == ["mine.txt"]


@pytest.mark.parametrize("name", ["dear", "", "..", "../deer", "deer/../deer", "/", "a\0b"])
def test_an_unknown_demo_is_refused(tmp_path: Path, name: str) -> None:
    with pytest.raises(SettingsError, match="there is no demonstration"):
        make_record(tmp_path / "x", name)
    assert not (tmp_path / "x").exists()


def test_the_nearest_demo_is_named() -> None:
    with pytest.raises(SettingsError, match="'deer' meant"):
        demo_folder("dear")


def test_without_demos_the_message_says_so(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(template_module, "_demo_home", lambda: None)
    assert demo_names() == ()
    with pytest.raises(SettingsError, match="there are: none"):
        demo_folder("deer")


@pytest.mark.parametrize("folder", ["file", "file/below", "a\0b", "x" * 5000])
def test_impossible_folders(tmp_path: Path, folder: str) -> None:
    (tmp_path / "file").write_text("mine")
    with pytest.raises(SettingsError):
        make_record(tmp_path / folder)
    assert (tmp_path / "file").read_text() == "mine"


def test_paths_of_fields_are_unique() -> None:
    paths = [field.path for field in FIELDS]
    assert len(set(paths)) == len(paths)
    assert field_at("objectives.limit").unit == "the record's unit"
    assert {field.section for field in FIELDS} == {section.name for section in SECTIONS}


def test_what_90_percent_between_means_follows_from_the_range() -> None:
    assert field_at("rates.max_growth").is_positive
    assert not field_at("rates.autocorrelation").is_positive
    shape = field_at("curve.shape")
    assert shape.narrowed("theta-logistic").is_positive
    assert shape.narrowed("allee").is_proportion


@pytest.mark.parametrize(
    ("interval", "words", "inside", "outside"),
    [
        (Interval(0, 1), "from 0 to 1", [0, 1], [-0.1, 1.1]),
        (INSIDE_0_1, "above 0 and below 1", [0.5], [0, 1]),
        (Interval(0), "at least 0", [0, 1e15], [-1, 1e16]),
        (Interval(0, 2, low_open=True), "above 0 and at most 2", [2], [0]),
        (Interval(0, 2, high_open=True), "at least 0 and below 2", [0], [2]),
        (Interval(1, 1), "1", [1], [2]),
    ],
)
def test_intervals(interval: Interval, words: str, inside: list[float], outside: list[float]) -> None:
    assert str(interval) == words
    assert all(value in interval for value in inside)
    assert not any(value in interval for value in outside)


def test_reading_a_record_loads_no_heavy_library() -> None:
    code = (
        "import sys; from harvest.record import demo_folder, read_record; read_record(demo_folder('deer')); "
        "print([m for m in ('numpy', 'pandas', 'scipy', 'numba', 'openpyxl') if m in sys.modules])"
    )
    root = Path(template_module.__file__).parents[2]
    done = subprocess.run([sys.executable, "-c", code], cwd=root, capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"
