"""The demo records are what their script writes, and they have no problems."""

from __future__ import annotations

import importlib.util
import sys
from pathlib import Path

import pytest

from harvest.record import check_record, demo_folder, demo_names

SCRIPT = Path(__file__).parent.parent / "data_demo" / "make_demo.py"


def test_the_script_writes_the_demos_as_they_are(tmp_path, monkeypatch):
    spec = importlib.util.spec_from_file_location("make_demo", SCRIPT)
    module = importlib.util.module_from_spec(spec)
    monkeypatch.setitem(sys.modules, "make_demo", module)
    spec.loader.exec_module(module)
    module.HERE = tmp_path
    for make in (module.deer, module.lake, module.geese):
        make()
    assert sorted(p.name for p in tmp_path.iterdir()) == sorted(demo_names())
    for name in demo_names():
        for file in ("record.toml", "history.csv"):
            assert (tmp_path / name / file).read_bytes() == (demo_folder(name) / file).read_bytes()


@pytest.mark.parametrize("name", sorted(demo_names()))
def test_a_demo_has_no_problem(name):
    record, problems = check_record(demo_folder(name))
    assert record is not None
    assert problems == ()
