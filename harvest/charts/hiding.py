"""The record as it is drawn: names made short, and what is private left out of pictures that leave the program."""

from __future__ import annotations

from collections.abc import Collection

from harvest.charts.phrases import plain
from harvest.record.model import Record
from harvest.record.private import PRIVATE, is_named, with_texts


def hidden_names(record: Record, hidden: Collection[str], public: bool) -> frozenset[str]:
    """What is left out: what was asked for, and for others to see what the record keeps private."""
    return frozenset(hidden) | (frozenset(record.private) if public else frozenset())


def shareable(record: Record, hidden: Collection[str]) -> Record:
    """The record as it is drawn: its names in one short line each, those that are left out replaced."""
    return with_texts(record, lambda path, text: PRIVATE if text and is_named(path, hidden) else plain(text))


def drawable(record: Record, public: bool) -> Record:
    """The record as it is drawn, for others to see or for its keeper."""
    return shareable(record, record.private if public else ())
