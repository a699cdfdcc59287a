"""What the XML of one sheet tells besides its values: where content ends, formulas, hidden and merged cells."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import IO
from xml.parsers import expat

from openpyxl.utils.cell import coordinate_to_tuple, range_boundaries

_HIDDEN = ("1", "true")


@dataclass
class Scan:
    """The layout of a sheet; rows and columns from 0.

    Attributes
    ----------
    rows, columns : int
        One past the last cell with content: a value or a formula.
    formulas : set of (int, int)
        Every cell whose value a formula gives.
    texts : set of (int, int)
        Those whose stored value is a text, which may be an empty one.
    merged : list of (int, int, int, int)
        First row, first column, last row, last column.
    hidden_rows : set of int
    hidden_spans : list of (int, int)
        First and last hidden column of each span.
    """

    rows: int = 0
    columns: int = 0
    formulas: set[tuple[int, int]] = field(default_factory=set)
    texts: set[tuple[int, int]] = field(default_factory=set)
    merged: list[tuple[int, int, int, int]] = field(default_factory=list)
    hidden_rows: set[int] = field(default_factory=set)
    hidden_spans: list[tuple[int, int]] = field(default_factory=list)


def scan_layout(stream: IO[bytes]) -> Scan:
    """Read the XML of a sheet once, without keeping it.

    Raises
    ------
    expat.ExpatError, ValueError
        When it is no XML, or names cells that cannot be.
    """
    reader = _Reader()
    parser = expat.ParserCreate(namespace_separator=" ")
    parser.StartElementHandler = reader.start
    parser.ParseFile(stream)
    return reader.scan


class _Reader:
    def __init__(self) -> None:
        self.scan = Scan()
        self.row = self.column = -1
        self.kind = self.reference = ""
        self.handlers = {
            "row": self._row,
            "c": self._cell,
            "v": self._content,
            "is": self._content,
            "f": self._formula,
            "mergeCell": self._merge,
            "col": self._hide_columns,
        }

    def start(self, tag: str, attributes: dict[str, str]) -> None:
        handler = self.handlers.get(tag.rpartition(" ")[2])
        if handler is not None:
            handler(attributes)

    def _row(self, attributes: dict[str, str]) -> None:
        row = int(attributes["r"]) - 1 if "r" in attributes else self.row + 1
        if row <= self.row:
            raise ValueError("rows out of order")
        self.row, self.column, self.reference = row, -1, ""
        if attributes.get("hidden") in _HIDDEN:
            self.scan.hidden_rows.add(self.row)

    def _cell(self, attributes: dict[str, str]) -> None:
        self.kind = attributes.get("t", "")
        if "r" in attributes:
            self.reference = attributes["r"]
        else:
            self._find_column()
            self.column += 1

    def _find_column(self) -> None:
        """Read the cell's name, which is left alone where the cell is empty: there can be millions."""
        if self.reference:
            row, column = coordinate_to_tuple(self.reference)
            if row - 1 != self.row:
                raise ValueError("a cell of another row")
            self.column, self.reference = column - 1, ""

    def _content(self, attributes: dict[str, str]) -> None:
        self._find_column()
        self.scan.rows = max(self.scan.rows, self.row + 1)
        self.scan.columns = max(self.scan.columns, self.column + 1)

    def _formula(self, attributes: dict[str, str]) -> None:
        self._content(attributes)
        place = self.row, self.column
        self.scan.formulas.add(place)
        if self.kind == "str":
            self.scan.texts.add(place)

    def _merge(self, attributes: dict[str, str]) -> None:
        left, top, right, bottom = range_boundaries(attributes["ref"])
        self.scan.merged.append((top - 1, left - 1, bottom - 1, right - 1))

    def _hide_columns(self, attributes: dict[str, str]) -> None:
        if attributes.get("hidden") in _HIDDEN:
            self.scan.hidden_spans.append((int(attributes["min"]) - 1, int(attributes["max"]) - 1))
