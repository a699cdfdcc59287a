"""A record that is being written: the text of its two files, whatever their state, and small changes to them.

A draft holds what was typed, also where it is wrong: a number typed as "1,200" is kept as that text, so that the
record's own check finds it and tells the cure. Every function gives a new draft and leaves the old one alone.
"""

from __future__ import annotations

import csv
import io
import tomllib
from dataclasses import dataclass, replace
from typing import Any

from harvest.record.check import Checked, check_texts
from harvest.record.document import Document, render_document
from harvest.record.schema import HISTORY_FILE, NOTE, YEAR
from harvest.workspace.document import table_at, tables_in

_HEAD = "# A record of Harvest; every key is explained in the template of a new record.\n"


@dataclass(frozen=True)
class Grid:
    """The history as a table of texts, header first; every row is as long as the header. Notes keep their blanks."""

    header: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]


@dataclass(frozen=True)
class Draft:
    """The text of ``record.toml`` and of the history."""

    record_text: str
    history_text: str

    def check(self) -> Checked:
        """The record, or None, and every problem; see :func:`harvest.record.check.check_texts`."""
        return check_texts(self.record_text, self.history_text)

    @property
    def document(self) -> Document | None:
        """``record.toml`` as plain values; None where it breaks the rules of TOML."""
        try:
            return tomllib.loads(self.record_text)
        except (ValueError, RecursionError):
            return None

    @property
    def name(self) -> str:
        """The population's name, "" where there is none that can be read."""
        name = (self.document or {}).get("name")
        return name if isinstance(name, str) else ""

    @property
    def history_name(self) -> str:
        """The bare file name under which the history is handed out."""
        name = (self.document or {}).get("history", HISTORY_FILE)
        sound = isinstance(name, str) and name.lower().endswith(".csv") and name[0].isalnum()
        return name if sound and not set(name) & set("/\\:") else HISTORY_FILE

    @property
    def grid(self) -> Grid | None:
        """The history's cells; None where rows or columns cannot be told apart."""
        try:
            rows = [row for row in csv.reader(io.StringIO(self.history_text), strict=True) if any(map(str.strip, row))]
        except csv.Error:
            return None
        names = [name.strip() for name in rows[0]] if rows else []
        if YEAR not in names or len(set(names)) < len(names):
            return None
        width, note = max(map(len, rows)), names.index(NOTE) if NOTE in names else -1
        header, *body = [
            tuple(cell if place == note else cell.strip() for place, cell in enumerate(row + [""] * (width - len(row))))
            for row in [names, *rows[1:]]
        ]
        return Grid(header, tuple(body))

    def with_document(self, document: Document) -> Draft:
        """The same history with another ``record.toml``; comments of the old one are lost."""
        return replace(self, record_text=render_document(document, _HEAD))

    def with_value(self, section: str, index: int | None, key: str, value: Any) -> Draft:
        """One key set, or taken out where the value is None or ""; as it is where ``record.toml`` cannot be read.

        A single section that has no key left goes too.

        Parameters
        ----------
        section, key : str
            As in the table of fields.
        index : int or None
            Which table (from 0) of a section that has many; made where it is the next one.
        """
        document = self.document
        if document is None:
            return self
        table = table_at(document, section, index)
        if value is None or value == "":
            table.pop(key, None)
            if not table and document.get(section) is table:
                del document[section]  # a section that is there asks for its keys
        else:
            table[key] = value
        return self.with_document(document)

    def without_table(self, section: str, index: int) -> Draft:
        """One table of a section that has many taken out."""
        document = self.document
        tables = [] if document is None else tables_in(document, section)
        if document is None or not 0 <= index < len(tables):
            return self
        document[section] = [*tables[:index], *tables[index + 1 :]]
        return self.with_document(document)

    def without_section(self, section: str) -> Draft:
        """A whole section taken out."""
        document = self.document
        if document is None or section not in document:
            return self
        del document[section]
        return self.with_document(document)

    def with_grid(self, grid: Grid) -> Draft:
        """The same record with another history."""
        stream = io.StringIO(newline="")
        csv.writer(stream, lineterminator="\n").writerows([grid.header, *grid.rows])
        return replace(self, history_text=stream.getvalue())
