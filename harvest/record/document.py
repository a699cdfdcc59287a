"""``record.toml`` written from plain values, right or wrong: what the check refuses is written all the same."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from harvest.record.fields import SECTIONS, fields_of
from harvest.record.write import render_key, render_pair

#: ``record.toml`` as plain values.
Document = dict[str, Any]


def render_document(document: Mapping[str, Any], head: str) -> str:
    """The text of a ``record.toml``: keys in the order of the table of fields, what is unknown after them.

    Parameters
    ----------
    document : mapping
        Values as TOML holds them; a table or list of tables that is no value of a key at the top is a section.
    head : str
        Comment lines that open the file.
    """
    sections = {name: tables for name, value in document.items() if (tables := _tables(name, value)) is not None}
    parts = [head, _render_table("", "", {k: v for k, v in document.items() if k not in sections})]
    known = [s.name for s in SECTIONS if s.name in sections]
    for name in [*known, *(n for n in sections if n not in known)]:
        key = render_key(name)
        header = f"[[{key}]]" if isinstance(document[name], list) else f"[{key}]"
        parts += [_render_table(name, header, table) for table in sections[name]]
    return "\n".join(part for part in parts if part)


def _tables(name: str, value: Any) -> list[Mapping[str, Any]] | None:
    """The tables of a section; None for a value at the top of the file."""
    if name in {f.key for f in fields_of("")}:
        return None
    if isinstance(value, list) and value and all(isinstance(table, dict) for table in value):
        return value
    return [value] if isinstance(value, dict) else None


def _render_table(section: str, header: str, table: Mapping[str, Any]) -> str:
    order = [f.key for f in fields_of(section)]
    keys = [*(k for k in order if k in table), *(k for k in table if k not in order)]
    lines = [header] if header else []
    return "".join(f"{line}\n" for line in [*lines, *(render_pair(k, table[k]) for k in keys)])
