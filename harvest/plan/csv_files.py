"""The quota table and the lookup card as CSV: a point as decimal mark, text never a formula."""

from __future__ import annotations

import csv
import io
import math

import pandas as pd

from harvest.errors import CAUTION
from harvest.plan.cells import csv_text
from harvest.plan.table import QuotaTable


def _cell(value: object) -> str:
    if isinstance(value, str):
        return csv_text(value)
    if isinstance(value, float):
        if math.isnan(value):
            return ""
        return f"{value:.6g}" if not value.is_integer() else f"{value:.0f}"
    return str(value)


def csv_bytes(frame: pd.DataFrame) -> bytes:
    """A table as UTF-8 CSV with a last column ``caution``."""
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\r\n")
    writer.writerow([*frame.columns, "caution"])
    for row in frame.astype(object).itertuples(index=False):
        writer.writerow([*(_cell(v) for v in row), CAUTION])
    return stream.getvalue().encode("utf-8")


def quota_csv(table: QuotaTable) -> bytes:
    """The plan years: columns as in :attr:`QuotaTable.rows`, in the record's unit; probabilities 0..1."""
    return csv_bytes(table.rows)


def card_csv(table: QuotaTable) -> bytes:
    """The lookup card: columns as in :func:`harvest.plan.card.lookup_card`."""
    return csv_bytes(table.card)
