"""Finding one's way in ``record.toml`` as plain values, and in what a problem says about its place."""

from __future__ import annotations

import re
from typing import Any

from harvest.record.document import Document
from harvest.record.fields import SECTIONS

_MANY = frozenset(s.name for s in SECTIONS if s.many)
_IN_LIST = re.compile(r"(?P<section>\w+) (?P<number>[0-9]+)( \([^)]*\))?(, (?P<rest>.+))?")


def tables_in(document: Document, section: str) -> list[dict[str, Any]]:
    """The tables of a section: one for a single section (empty where it is not there), as found for a list.

    A list that was written as a single table counts as a list of one, as in the record's check.
    """
    if not section:
        return [document]
    found = document.get(section)
    if section in _MANY:
        many = found if isinstance(found, list) else [found]
        return [t for t in many if isinstance(t, dict)]
    return [found] if isinstance(found, dict) else [{}]


def table_at(document: Document, section: str, index: int | None) -> dict[str, Any]:
    """The table that a change goes to, made where there is none; what was of another kind is replaced."""
    if not section:
        return document
    if section not in _MANY:
        if not isinstance(document.get(section), dict):
            document[section] = {}
        table: dict[str, Any] = document[section]
        return table
    tables = document[section] = tables_in(document, section)
    number = len(tables) if index is None else index
    while len(tables) <= number:
        tables.append({})
    return tables[number]


def locate(where: str) -> tuple[str, int | None, str]:
    """Section, number of the table (from 0) and key that a problem's place names; "" for what it does not name.

    Examples
    --------
    >>> locate("objectives.recovery.years"), locate("survey 2, cv"), locate("unit")
    (('objectives', None, 'recovery'), ('survey', 1, 'cv'), ('', None, 'unit'))
    """
    match = _IN_LIST.match(where)
    if match and match["section"] in _MANY:
        return match["section"], int(match["number"]) - 1, _first(match["rest"] or "")
    head, _, rest = where.partition(".")
    if head in {s.name for s in SECTIONS if s.name}:
        return head, None, _first(rest)
    return "", None, _first(where)


def _first(path: str) -> str:
    """The key that a path begins with; one that is unknown stands in quotes and may hold any sign."""
    return path[1:].rpartition('"')[0] if path.startswith('"') else path.split(".")[0]
