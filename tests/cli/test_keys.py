"""Every key of every JSON file is documented, and every documented key occurs."""

from __future__ import annotations

import json

from harvest.commands.json_keys import KEYS
from tests.cli.conftest import harvest

FREE = {"spreads", "by_year[]", "branches[]", "rule.settings", "risk_curve.probability", "risk_curve.se"}


def paths(value, at=""):
    if isinstance(value, dict):
        for key, inner in value.items():
            path = f"{at}.{key}" if at else key
            yield path
            yield from paths(inner, path)
    elif isinstance(value, list):
        for inner in value:
            if isinstance(inner, dict):
                yield from paths(inner, at + "[]")


def documented(path):
    """The documented path that covers a path: itself, or with one part replaced by a star where names are free."""
    parts = path.split(".")
    for i in range(len(parts)):
        starred = ".".join([*parts[:i], "*", *parts[i + 1 :]])
        if ".".join(parts[:i]) in FREE and starred in KEYS and path not in KEYS:
            return starred
    return path if path in KEYS else None


def test_keys_and_files_agree(tmp_path, deer):
    seen = set()
    broken = tmp_path / "broken"
    assert harvest("new", broken, "--demo", "deer").returncode == 0
    text = (broken / "record.toml").read_text()
    (broken / "record.toml").write_text(text.replace("limit = 1200", "limit = 1200\nlimits = 1"))
    for number, (command, folder) in enumerate(
        [
            ("new", tmp_path / "fresh"),
            ("convert", deer),
            ("check", broken),
            ("yield", deer),
            ("thresholds", deer),
            ("project", deer),
            ("quota", deer),
        ]
    ):
        file = tmp_path / f"{number}.json"
        more = {"new": (), "check": (), "convert": (tmp_path / "deer.xlsx",)}
        harvest(command, folder, *more.get(command, ("--draws", "500")), "--json", file)
        told = json.loads(file.read_text())
        assert told["kind"] == command
        for path in set(paths(told)):
            key = documented(path)
            assert key is not None, f"{command} writes {path}, which is not documented"
            seen.add(key)
    assert set(KEYS) - seen == set(), "documented, but never written"


def test_each_name_of_a_free_set_is_told_in_its_meaning(tmp_path, deer):
    for command, group in (("yield", "spreads"), ("thresholds", "spreads")):
        file = tmp_path / f"{command}.json"
        harvest(command, deer, "--draws", "500", "--json", file)
        for name in json.loads(file.read_text())[group]:
            assert name in KEYS["spreads.*"], name


def test_the_keys_command_prints_them_all(tmp_path):
    done = harvest("keys", "--json", tmp_path / "keys.json")
    assert all(f"\n{key}\n" in f"\n{done.stdout}" for key in KEYS)
    assert json.loads((tmp_path / "keys.json").read_text()) == KEYS
