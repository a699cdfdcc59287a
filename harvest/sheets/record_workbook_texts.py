"""The text of a history, from what a workbook says, right or wrong."""

from __future__ import annotations

import csv
import io
from collections.abc import Sequence


def history_text(rows: Sequence[Sequence[str]]) -> str:
    """The text of a history with these rows; an empty row is an empty line."""
    stream = io.StringIO(newline="")
    writer = csv.writer(stream, lineterminator="\n")
    for row in rows:
        writer.writerow(row if any(row) else [])
    return stream.getvalue()
