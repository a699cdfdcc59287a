"""Quantities over draws as rows of a table, for commands and pages."""

from __future__ import annotations

import math

from harvest.plan import words
from harvest.rates.spread import Spread

#: Shares of draws below this are not summarised.
FEW = 0.05
HEADINGS = ("", "median", "50% from", "to", "90% from", "to")


def row(label: str, spread: Spread, unit: str, absent: str = "none") -> list[str]:
    """Label, median, 50% and 90% interval; ``unit`` is the record's unit, "rate", or "years"; ``absent`` for no value.

    Where fewer than one draw in twenty has a value, intervals would tell of survivors only, and are left out.
    """

    def text(value: float) -> str:
        if unit == "rate":
            return words.small(value)
        if unit == "years":
            whole = math.isinf(value) or value.is_integer()
            return words.number(value) if whole else f"{value:.1f}"
        return words.number(value, unit)

    if spread.share == 0.0:
        return [label, absent, "", "", "", ""]
    if spread.share < FEW:
        return [label, f"{absent} in {words.short_probability(1.0 - spread.share)} of draws", "", "", "", ""]
    values = (spread.median, spread.low50, spread.high50, spread.low90, spread.high90)
    if spread.share < 1.0:
        other = "" if absent == "none" else f"; else {absent}"
        label += f" (in the {words.short_probability(spread.share)} of draws that have one{other})"
    return [label, *(text(v) for v in values)]
