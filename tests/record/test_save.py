"""Saving keeps the old or the new record whole, whatever happens."""

from __future__ import annotations

import errno
import os
import signal
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings

from harvest.errors import RecordError, SettingsError
from harvest.record import Record, demo_folder, read_record, save_record
from harvest.record.model import History

from .interrupting import count_calls, die, interrupt
from .strategies import records

DEMO = read_record(demo_folder("deer"))


def with_more_removals(record: Record) -> Record:
    """Another record with another history."""
    removals = tuple(None if h is None else h + 1 for h in record.history.removals)
    return replace(record, name="Changed", history=History(record.history.years, removals, record.history.notes))


CHANGES = {"history": with_more_removals(DEMO), "name only": replace(DEMO, name="Changed")}


def names(folder: Path) -> set[str]:
    return {path.name for path in folder.iterdir()}


def test_a_new_folder_is_made(tmp_path: Path) -> None:
    save_record(DEMO, tmp_path / "a" / "b")
    assert read_record(tmp_path / "a" / "b") == DEMO
    assert names(tmp_path / "a" / "b") == {"record.toml", "history.csv"}


def test_a_changed_history_gets_a_fresh_name(tmp_path: Path) -> None:
    save_record(DEMO, tmp_path)
    save_record(CHANGES["history"], tmp_path)
    assert names(tmp_path) == {"record.toml", "history-2.csv"}
    assert read_record(tmp_path) == CHANGES["history"]
    save_record(DEMO, tmp_path)
    assert names(tmp_path) == {"record.toml", "history.csv"}
    assert read_record(tmp_path) == DEMO


def test_an_unchanged_history_stays(tmp_path: Path) -> None:
    save_record(DEMO, tmp_path)
    before = (tmp_path / "history.csv").stat()
    save_record(CHANGES["name only"], tmp_path)
    after = (tmp_path / "history.csv").stat()
    assert (before.st_ino, before.st_mtime_ns) == (after.st_ino, after.st_mtime_ns)
    assert read_record(tmp_path).name == "Changed"


def test_other_files_are_left_alone(tmp_path: Path) -> None:
    for name in ("history.csv", "history-2.csv", "notes.txt"):
        (tmp_path / name).write_text("mine")
    save_record(DEMO, tmp_path)
    save_record(CHANGES["history"], tmp_path)
    assert names(tmp_path) == {"history.csv", "history-2.csv", "notes.txt", "record.toml", "history-4.csv"}
    assert (tmp_path / "history.csv").read_text() == "mine"
    assert read_record(tmp_path) == CHANGES["history"]


def test_a_history_with_its_own_name_is_replaced(tmp_path: Path) -> None:
    save_record(DEMO, tmp_path)
    (tmp_path / "history.csv").rename(tmp_path / "counts.csv")
    text = (tmp_path / "record.toml").read_text()
    (tmp_path / "record.toml").write_text(text.replace("history.csv", "counts.csv"))
    save_record(CHANGES["name only"], tmp_path)
    assert names(tmp_path) == {"record.toml", "counts.csv"}
    save_record(CHANGES["history"], tmp_path)
    assert names(tmp_path) == {"record.toml", "history.csv"}


def test_a_file_outside_is_never_removed(tmp_path: Path) -> None:
    folder, outside = tmp_path / "herd", tmp_path / "outside.csv"
    save_record(DEMO, folder)
    outside.write_text("mine")
    text = (folder / "record.toml").read_text()
    (folder / "record.toml").write_text(text.replace('"history.csv"', '"../outside.csv"'))
    save_record(CHANGES["history"], folder)
    assert outside.read_text() == "mine"
    assert read_record(folder) == CHANGES["history"]


@pytest.mark.parametrize(
    "content", ["not toml at all", "a = 1", "format = 2", 'format = "1"', "format = true", "", "\0"]
)
def test_a_file_that_is_no_record_is_not_overwritten(tmp_path: Path, content: str) -> None:
    (tmp_path / "record.toml").write_text(content)
    with pytest.raises(SettingsError, match="Move it away"):
        save_record(DEMO, tmp_path)
    assert names(tmp_path) == {"record.toml"}
    assert (tmp_path / "record.toml").read_text() == content


def test_impossible_folders(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("")
    (tmp_path / "taken" / "record.toml").mkdir(parents=True)
    for folder in ("file", "file/below", "a\0b", "x" * 5000, "taken"):
        with pytest.raises(SettingsError):
            save_record(DEMO, tmp_path / folder)
    assert names(tmp_path) == {"file", "taken"}


def test_an_impossible_record_leaves_no_trace(tmp_path: Path) -> None:
    with pytest.raises(RecordError):
        save_record(replace(DEMO, lag=99), tmp_path / "new")
    assert names(tmp_path) == set()


@given(records())
@settings(max_examples=25, deadline=None, suppress_health_check=list(HealthCheck))
def test_any_record_can_be_saved_over_any_other(tmp_path: Path, record: Record) -> None:
    save_record(record, tmp_path)
    assert read_record(tmp_path) == record
    assert len(names(tmp_path)) == 2


@pytest.mark.parametrize("change", sorted(CHANGES))
@pytest.mark.parametrize("after", [False, True])
def test_a_killed_process_leaves_the_old_or_the_new_record(tmp_path: Path, change: str, after: bool) -> None:
    new, seen = CHANGES[change], set()
    save_record(DEMO, tmp_path / "trial")
    calls = count_calls(lambda: save_record(new, tmp_path / "trial"))
    assert "replace" in calls
    for target in range(len(calls)):
        folder = tmp_path / str(target)
        save_record(DEMO, folder)
        child = os.fork()
        if child == 0:
            interrupt(pytest.MonkeyPatch(), target, die(after))
            save_record(new, folder)
            os._exit(0)
        assert os.waitstatus_to_exitcode(os.waitpid(child, 0)[1]) == -signal.SIGKILL
        found = read_record(folder)
        assert found in (DEMO, new)
        seen.add(found == new)
        save_record(new, folder)
        assert read_record(folder) == new
    assert seen == {False, True}


@pytest.mark.parametrize("change", sorted(CHANGES))
@pytest.mark.parametrize("error", [OSError(errno.ENOSPC, "No space left on device"), KeyboardInterrupt()])
def test_a_failing_call_leaves_the_old_or_the_new_record_and_no_rubbish(
    tmp_path: Path, change: str, error: BaseException
) -> None:
    new = CHANGES[change]

    def strike(name: str, real: Any, args: tuple[Any, ...]) -> Any:
        if name == "close":
            real(*args)
        raise error

    save_record(DEMO, tmp_path / "trial")
    calls = count_calls(lambda: save_record(new, tmp_path / "trial"))
    for target, name in enumerate(calls):
        folder = tmp_path / str(target)
        save_record(DEMO, folder)
        raised: BaseException | None = None
        with pytest.MonkeyPatch.context() as patch:
            interrupt(patch, target, strike)
            try:
                save_record(new, folder)
            except (SettingsError, KeyboardInterrupt) as caught:
                raised = caught
        found = read_record(folder)
        assert found in (DEMO, new)
        if isinstance(raised, SettingsError) and name != "close":
            assert "nothing was changed" in str(raised)
            assert found == DEMO
        if raised is None:
            assert found == new
        assert ".record.toml.unfinished" not in names(folder)
        assert len(names(folder)) <= (2 if raised and found == DEMO else 3)


def test_two_processes_may_save_while_a_third_reads(tmp_path: Path) -> None:
    save_record(DEMO, tmp_path)
    children = []
    for turn in range(2):
        child = os.fork()
        if child == 0:
            for number in range(25):
                save_record((DEMO, CHANGES["history"])[(turn + number) % 2], tmp_path)
            os._exit(0)
        children.append(child)
    seen = 0
    while children:
        assert read_record(tmp_path) in (DEMO, CHANGES["history"])
        seen += 1
        done, status = os.waitpid(children[0], os.WNOHANG)
        if done:
            assert status == 0
            children.pop(0)
    assert seen > 1
    assert len(names(tmp_path)) == 2
