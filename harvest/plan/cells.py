"""Text that goes into a cell of a CSV or Excel file never becomes a formula."""

from __future__ import annotations

from harvest.record.history import RISKY


def is_risky(text: str) -> bool:
    """Whether a spreadsheet would read the text as a formula or a command."""
    return text.startswith(tuple(RISKY))


def csv_text(text: str) -> str:
    """The text for a CSV cell: with an apostrophe in front where a spreadsheet would run it."""
    return "'" + text if is_risky(text) else text
