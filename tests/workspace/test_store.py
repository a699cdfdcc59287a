"""What was saved is never lost: versions, undo, other windows, killed processes, refusing disks."""

from __future__ import annotations

import errno
import json
import os
import shutil
import signal
import threading
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from harvest.errors import SettingsError
from harvest.workspace import Draft, Workspace, default_folder, store
from tests.record import interrupting
from tests.record.edits import CSV, TOML
from tests.record.interrupting import count_calls, die, interrupt

FIRST = Draft(TOML, CSV)


def named(name: str) -> Callable[[Draft], Draft]:
    return lambda draft: draft.with_value("", None, "name", name)


@pytest.fixture
def space(tmp_path: Path) -> Workspace:
    return Workspace(tmp_path / "records")


@pytest.fixture
def record(space: Workspace) -> str:
    return space.add(FIRST, "begun empty", "test")


def test_a_new_record(space: Workspace, record: str) -> None:
    entry = space.entry(record)
    assert (entry.id, entry.name, entry.origin, entry.source) == (record, "Test herd", "begun empty", "test")
    assert (entry.version, entry.what, entry.before, entry.after) == (1, "begun empty", False, False)
    assert space.load(record) == FIRST
    assert space.entries() == [entry]
    assert space.has(record)


def test_a_version_is_a_folder_for_the_command_line(space: Workspace, record: str) -> None:
    place = space.folder / record / "version-000001"
    assert (place / "record.toml").read_bytes() == TOML.encode()
    assert (place / "history.csv").read_bytes() == CSV.encode()


def test_an_empty_workspace(space: Workspace) -> None:
    assert space.entries() == []
    assert space.find("test", FIRST) is None


def test_a_change_is_a_new_version(space: Workspace, record: str) -> None:
    assert space.change(record, named("Second"), "the name") == (1, 2)
    entry = space.entry(record)
    assert (entry.name, entry.version, entry.what, entry.before, entry.after) == ("Second", 2, "the name", True, False)
    assert space.load(record) == named("Second")(FIRST)


def test_what_changes_nothing_is_no_version(space: Workspace, record: str) -> None:
    assert space.change(record, lambda draft: draft, "nothing") == (1, 1)
    assert not space.entry(record).before


def test_undo_and_redo_go_along_the_chain(space: Workspace, record: str) -> None:
    for name in ("Second", "Third", "Fourth"):
        space.change(record, named(name), "the name")
    assert [(space.undo(record), space.load(record).name) for _ in range(4)] == [
        (True, "Third"),
        (True, "Second"),
        (True, "Test herd"),
        (False, "Test herd"),
    ]
    assert (space.entry(record).before, space.entry(record).after) == (False, True)
    assert [(space.redo(record), space.load(record).name) for _ in range(4)] == [
        (True, "Second"),
        (True, "Third"),
        (True, "Fourth"),
        (False, "Fourth"),
    ]


def test_a_change_after_an_undo_begins_a_new_chain(space: Workspace, record: str) -> None:
    space.change(record, named("Second"), "the name")
    space.undo(record)
    assert space.change(record, named("Other"), "the name") == (1, 3)
    assert not space.redo(record)
    assert not space.entry(record).after
    assert space.undo(record)
    assert space.load(record) == FIRST
    assert space.redo(record)
    assert space.load(record).name == "Other"
    assert (space.folder / record / "version-000002" / "record.toml").exists()


def test_old_versions_go_and_the_first_stays(space: Workspace, record: str, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(store, "KEPT", 3)
    for number in range(2, 9):
        space.change(record, named(f"Name {number}"), "the name")
    kept = sorted(p.name for p in (space.folder / record).glob("version-*"))
    assert kept == ["version-000001", "version-000006", "version-000007", "version-000008"]
    assert space.load(record).name == "Name 8"
    assert [space.undo(record) for _ in range(3)] == [True, True, False]
    assert space.load(record).name == "Name 6"
    assert not space.entry(record).before
    assert space.find("test", FIRST) == record


def test_a_removed_record_is_moved_aside(space: Workspace, record: str) -> None:
    aside = space.remove(record)
    assert space.entries() == []
    assert not space.has(record)
    assert (aside / "version-000001" / "record.toml").read_text("utf-8") == TOML
    assert aside.parent == space.folder / "removed"


def test_the_latest_changed_comes_first(space: Workspace, record: str, monkeypatch: pytest.MonkeyPatch) -> None:
    other = space.add(FIRST, "second")
    times = {record: "2030-01-01T00:00:00.000+00:00", other: "2020-01-01T00:00:00.000+00:00"}
    for name, time in times.items():
        about = space.folder / name / "version-000001" / "about.json"
        about.write_text(json.dumps({**json.loads(about.read_text()), "time": time}))
    assert [e.id for e in space.entries()] == [record, other]


@pytest.mark.parametrize(
    "name",
    ["../records", "..", "", None, "removed", "a/b", "/etc", "ABCDEFGH", "12345678\n", 12345678, "a" * 9, "\0" * 8],
)
def test_a_name_never_leaves_the_folder(space: Workspace, record: str, name: Any) -> None:
    assert not space.has(name)
    for action in (space.load, space.entry, space.undo, space.redo, space.remove):
        with pytest.raises(SettingsError, match=r"there is no record .*: open one from the list"):
            action(name)
    with pytest.raises(SettingsError, match="there is no record"):
        space.change(name, named("x"), "the name")
    assert space.load(record) == FIRST


def test_a_record_that_cannot_be_read_hides_no_other(space: Workspace, record: str) -> None:
    other = space.add(FIRST, "second")
    (space.folder / other / "version-000001" / "about.json").write_text("{")
    (space.folder / "a file").write_text("x")
    (space.folder / "abcd1234").mkdir()
    assert [e.id for e in space.entries()] == [record]
    with pytest.raises(SettingsError, match="cannot be read or saved"):
        space.entry(other)


@pytest.mark.parametrize("content", ["", "two", "7", "\ufeff1"])
def test_a_pointer_to_nothing_is_told(space: Workspace, record: str, content: str) -> None:
    (space.folder / record / "current").write_text(content, "utf-8")
    with pytest.raises(SettingsError, match="cannot be read or saved"):
        space.load(record)
    with pytest.raises(SettingsError, match="cannot be read or saved"):
        space.change(record, named("x"), "the name")


def test_texts_that_are_not_utf_8_are_told(space: Workspace, record: str) -> None:
    (space.folder / record / "version-000001" / "history.csv").write_bytes(b"\xff\xfe")
    with pytest.raises(SettingsError, match="cannot be read or saved"):
        space.load(record)


def test_two_windows_that_change_different_keys_lose_nothing(space: Workspace, record: str) -> None:
    def write(key: str) -> None:
        for number in range(12):
            space.change(record, lambda d, n=number: d.with_value("plan", None, key, f"{key} {n}"), key)

    threads = [threading.Thread(target=write, args=(key,)) for key in ("author", "office")]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    document = space.load(record).document or {}
    assert document["plan"] == {"author": "author 11", "office": "office 11"}
    assert space.entry(record).version == 25
    assert sum(space.undo(record) for _ in range(30)) == 24


def test_a_source_is_found_while_it_is_what_was_brought(space: Workspace, record: str) -> None:
    space.change(record, named("Second"), "the name")
    assert space.find("test", FIRST) == record
    assert space.find("test", named("Second")(FIRST)) is None
    assert space.find("other", FIRST) is None


def test_the_folder_is_stated_or_the_users(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    monkeypatch.setenv("HARVEST_WORKSPACE", str(tmp_path / "here"))
    assert default_folder() == tmp_path / "here"
    monkeypatch.setenv("HARVEST_WORKSPACE", "")
    assert default_folder().parts[-2:] == ("harvest", "records")


ACTIONS: dict[str, Callable[[Workspace, str], object]] = {
    "change": lambda space, record: space.change(record, named("Changed"), "the name"),
    "undo": lambda space, record: space.undo(record),
}


@pytest.fixture
def renaming_counts(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(interrupting, "SYSTEM_CALLS", (*interrupting.SYSTEM_CALLS, "rename"))


def two_versions(folder: Path) -> tuple[Workspace, str]:
    space = Workspace(folder)
    record = space.add(FIRST, "begun empty")
    space.change(record, named("Second"), "the name")
    return space, record


@pytest.mark.usefixtures("renaming_counts")
@pytest.mark.parametrize("action", ACTIONS)
def test_an_error_at_any_step_leaves_the_old_version(tmp_path: Path, action: str) -> None:
    space, record = two_versions(tmp_path / "counted")
    calls = count_calls(lambda: ACTIONS[action](space, record) and None)
    assert {"replace", "fsync", "open"} <= set(calls)
    for target in range(len(calls)):
        space, record = two_versions(tmp_path / str(target))

        def strike(name: str, real: Any, args: tuple[Any, ...]) -> Any:
            if name == "close":
                real(*args)
            raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

        failed = False
        with pytest.MonkeyPatch.context() as patch:
            interrupt(patch, target, strike)
            try:
                ACTIONS[action](space, record)
            except SettingsError as error:
                failed = True
                assert "No space left on device" in str(error)
        names = {False: ("Changed", "Test herd"), True: ("Second", "Changed", "Test herd")}[failed]
        assert space.load(record).name in names
        assert space.change(record, named("After"), "the name")[1] > 2
        assert space.load(record).name == "After"
        assert not [p for p in (space.folder / record).iterdir() if p.name.startswith(".")]
        shutil.rmtree(space.folder)


@pytest.mark.skipif(not hasattr(os, "fork"), reason="needs fork")
@pytest.mark.usefixtures("renaming_counts")
@pytest.mark.parametrize("after", [False, True])
@pytest.mark.filterwarnings("ignore:This process .* is multi-threaded:DeprecationWarning")
def test_a_process_killed_at_any_step_leaves_a_whole_version(tmp_path: Path, after: bool) -> None:
    space, record = two_versions(tmp_path / "counted")
    calls = count_calls(lambda: ACTIONS["change"](space, record) and None)
    for target in range(len(calls)):
        space, record = two_versions(tmp_path / str(target))
        child = os.fork()
        if child == 0:
            with pytest.MonkeyPatch.context() as patch:
                interrupt(patch, target, die(after))
                space.change(record, named("Changed"), "the name")
            os._exit(0)
        _, status = os.waitpid(child, 0)
        assert os.WIFSIGNALED(status)
        assert os.WTERMSIG(status) == signal.SIGKILL
        assert space.load(record) in (named("Second")(FIRST), named("Changed")(FIRST))
        assert space.change(record, named("After"), "the name")[1] > 2
        assert space.load(record) == named("After")(FIRST)
        shutil.rmtree(space.folder)


@pytest.mark.parametrize("name", ["file", "file/below", "a\0b", "x" * 5000])
def test_a_folder_that_cannot_be_had_is_told(tmp_path: Path, name: str) -> None:
    (tmp_path / "file").write_text("")
    with pytest.raises(SettingsError):
        Workspace(tmp_path / name).add(FIRST, "begun empty")


def test_a_folder_that_cannot_be_listed_is_told(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("")
    with pytest.raises(SettingsError, match="cannot be read or saved"):
        Workspace(tmp_path / "file").entries()


def test_texts_that_no_file_can_hold_are_told(space: Workspace, record: str) -> None:
    with pytest.raises(SettingsError, match="cannot be read or saved"):
        space.add(Draft(TOML, "\ud800"), "begun empty")
    with pytest.raises(SettingsError, match="cannot be read or saved"):
        space.change(record, lambda d: Draft(d.record_text, "\ud800"), "the history")
    assert [e.id for e in space.entries()] == [record]
    assert space.load(record) == FIRST


def test_undo_reaches_back_after_a_long_way_back_and_a_change(
    space: Workspace, record: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(store, "KEPT", 5)
    for number in range(6):
        space.change(record, named(f"Name {number}"), "the name")
    for _ in range(4):
        assert space.undo(record)
    held = space.load(record)
    space.change(record, named("Anew"), "the name")
    assert space.entry(record).before
    assert space.undo(record)
    assert space.load(record) == held
