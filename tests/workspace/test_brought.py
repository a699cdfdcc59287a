"""Uploaded files are kept by their content, with what was said about them."""

from __future__ import annotations

import os
from pathlib import Path
from typing import Any

import pytest

from harvest.errors import SettingsError
from harvest.workspace import brought as module
from harvest.workspace.brought import Brought


def test_a_file_is_kept_with_what_is_said(tmp_path: Path) -> None:
    kept = Brought(tmp_path)
    file = kept.keep("häufig, <b>.xlsx", b"\0data")
    assert kept.has(file)
    assert kept.load(file) == ("häufig, <b>.xlsx", b"\0data")
    kept.say(file, lambda said: {**said, "answers": {"thousands": "yes"}})
    assert kept.keep("häufig, <b>.xlsx", b"\0data") == file
    assert kept.said(file)["answers"] == {"thousands": "yes"}
    assert Brought(tmp_path).load(file) == ("häufig, <b>.xlsx", b"\0data")


def test_name_and_content_tell_files_apart(tmp_path: Path) -> None:
    kept = Brought(tmp_path)
    assert len({kept.keep("a", b"bc"), kept.keep("ab", b"c"), kept.keep("a", b"b"), kept.keep("b", b"bc")}) == 4


@pytest.mark.parametrize("name", ["", None, "../x", "0" * 16, "A" * 16, "0" * 15, 5, "0" * 16 + "\n"])
def test_what_is_no_file_is_not_there(tmp_path: Path, name: Any) -> None:
    assert not Brought(tmp_path).has(name)


def test_a_file_that_went_is_told(tmp_path: Path) -> None:
    kept = Brought(tmp_path)
    file = kept.keep("a.csv", b"x")
    for path in (tmp_path / "brought").iterdir():
        path.unlink()
    assert not kept.has(file)
    with pytest.raises(SettingsError, match="upload it again"):
        kept.load(file)


def test_the_oldest_files_go(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "KEPT", 2)
    kept = Brought(tmp_path)
    files = []
    for number in range(4):
        files.append(kept.keep(f"{number}.csv", b"x"))
        os.utime(tmp_path / "brought" / f"{files[-1]}.data", (number, number))
    kept.keep("3.csv", b"x")
    assert [kept.has(file) for file in files] == [False, False, True, True]
    assert len(list((tmp_path / "brought").iterdir())) == 4


def test_a_folder_that_cannot_be_written_is_told(tmp_path: Path) -> None:
    (tmp_path / "brought").write_text("")
    with pytest.raises(SettingsError, match="cannot be written"):
        Brought(tmp_path).keep("a.csv", b"x")


def test_two_windows_answer_different_questions(tmp_path: Path) -> None:
    one, other = Brought(tmp_path), Brought(tmp_path)
    file = one.keep("counts.csv", b"year")
    before = other.said(file)
    one.say(file, lambda said: {**said, "one": 1})
    assert before == {"name": "counts.csv"}
    assert other.say(file, lambda said: {**said, "two": 2}) == {"name": "counts.csv", "one": 1, "two": 2}


def test_what_was_said_and_is_broken_counts_as_gone(tmp_path: Path) -> None:
    kept = Brought(tmp_path)
    file = kept.keep("counts.csv", b"year")
    (tmp_path / "brought" / f"{file}.json").write_text('{"name": "cou')
    assert not kept.has(file)
    with pytest.raises(SettingsError, match="upload it again"):
        kept.said(file)
    assert kept.keep("counts.csv", b"year") == file
    assert kept.load(file) == ("counts.csv", b"year")
