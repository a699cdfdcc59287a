"""The README shows what the program really prints, and its commands are the ones that are run."""

from __future__ import annotations

from pathlib import Path

from harvest.record import read_record
from tests.cli.conftest import harvest

README = (Path(__file__).parents[2] / "README.md").read_text(encoding="utf-8")


def block(after):
    """The fenced block that follows a comment."""
    fenced = README.split(f"<!-- {after} -->", 1)[1].split("```", 2)[1]
    return fenced.split("\n", 1)[1].rstrip("\n")


def test_the_walk_shows_the_real_output(deer):
    done = harvest("quota", deer)
    assert done.stdout.strip("\n") == block("output of: harvest quota data_demo/deer")


def test_the_python_example_runs(monkeypatch, capsys):
    code = README.split("```python\n", 1)[1].split("```", 1)[0]
    monkeypatch.chdir(Path(__file__).parents[2])
    exec(compile(code, "README.md", "exec"), {})
    assert capsys.readouterr().out.startswith("2")
    assert read_record("data_demo/deer").name == "Ostrel Ridge red deer"


def test_the_two_commands_need_only_venv_and_pip():
    for name in ("main command", "test command"):
        assert block(name).startswith("python3 -m venv .venv && .venv/bin/pip install -q -c constraints.txt ")
        assert "\n" not in block(name)
