"""What a record keeps private: named in ``private.fields``, by its own path ("plan.author") or its table's ("plan")."""

from __future__ import annotations

from collections.abc import Callable, Collection
from dataclasses import replace

from harvest.record.model import Record

#: Stands for a name or text that is kept private.
PRIVATE = "(private)"


def is_named(path: str, names: Collection[str]) -> bool:
    """Whether names hold a path or the table that it is in."""
    return any(path == name or path.startswith(name + ".") for name in names)


def is_private(record: Record, path: str) -> bool:
    """Whether the record hides a field."""
    return is_named(path, record.private)


def with_texts(record: Record, write: Callable[[str, str], str]) -> Record:
    """The record with every name and text as ``write(path, text)`` gives it."""
    return replace(
        record,
        name=write("name", record.name),
        species=write("species", record.species),
        place=write("place", record.place),
        surveys=tuple(replace(s, name=write("survey", s.name)) for s in record.surveys),
        plan=tuple((key, write(f"plan.{key}", text)) for key, text in record.plan),
    )


def without_private(record: Record) -> Record:
    """The record with its private names and texts replaced, for everything that leaves the program."""
    return with_texts(record, lambda path, text: PRIVATE if text and is_private(record, path) else text)
