"""Text of a record as it may stand in a chart: one line, of bounded length, never more than text."""

from __future__ import annotations

import unicodedata
from collections.abc import Iterable
from typing import TYPE_CHECKING

from harvest.plan import words
from harvest.record.model import Level, Record

if TYPE_CHECKING:
    from harvest.futures import Rule
    from harvest.rates.spread import Spread

#: Characters of a species or a survey's name in a sentence, and of what is counted on an axis.
MOST, MOST_ON_AXIS = 40, 24


def plain(text: str, most: int = MOST) -> str:
    """The text in one line without control characters, cut after ``most`` characters."""
    visible = "".join(" " if unicodedata.category(c)[0] in "CZ" else c for c in text)
    line = " ".join(visible.split())
    return line if len(line) <= most else line[: most - 1].rstrip() + "…"


def label_width(text: str, size: int = 12) -> int:
    """Pixels that a text takes up at most in either font: narrow, plain and wide letters."""
    ems = sum(0.3 if c in " .,:;'|!ilj" else 0.95 if c in "MW@%…mw" or ord(c) > 0x2E7F else 0.58 for c in text)
    return round(ems * size) + 2


def what(record: Record) -> str:
    """What is counted, in one short line: "red deer", "tonnes of whitefish"."""
    return plain(words.kind(record), MOST + len("tonnes of "))


def axis_what(record: Record) -> str:
    """The same for the title of an axis."""
    return plain(words.kind(record), MOST_ON_AXIS)


def capital(text: str) -> str:
    """The text with a capital at its start."""
    return text[:1].upper() + text[1:]


def abundance_title(record: Record) -> str:
    """Title of an axis of abundance: "Red deer before the season"."""
    return f"{capital(axis_what(record))} {words.moment(record)}"


def amount(record: Record, value: float) -> str:
    """A quantity in the record's unit without the unit's name."""
    return words.number(value, record.unit)


def between(record: Record, low: float, high: float) -> str:
    """An interval: "1,200 to 3,400"."""
    return f"{amount(record, low)} to {amount(record, high)}"


def levels(record: Record) -> dict[str, Level]:
    """The levels that the record states, by name: limit, target, ceiling, collapse."""
    aims = record.objectives
    stated = {"limit": aims.limit, "target": aims.target, "ceiling": aims.ceiling, "collapse": aims.collapse}
    return {name: level for name, level in stated.items() if level is not None}


def limit_name(record: Record) -> str:
    """The limit, or the collapse level, which stands in where none is stated."""
    return "the limit" if record.objectives.limit is not None else "the collapse level"


def under(record: Record, rule: Rule) -> str:
    """A rule at the start of a sentence: "With a legal quota of 412 a year", "Under the rule (ramp: ...)"."""
    if rule.feedback:
        return f"Under the rule ({rule})"
    return f"With a legal quota of {amount(record, rule.settings[0])} a year"


def listed(parts: Iterable[str]) -> str:
    """Parts of a sentence: "a", "a and b", "a, b and c"."""
    *first, last = parts
    return f"{', '.join(first)} and {last}" if first else last


def spread_words(record: Record, spread: Spread) -> str:
    """Median and intervals of a quantity: "505 (50%: 420 to 580; 90%: 330 to 700)"."""
    middle, wide = between(record, spread.low50, spread.high50), between(record, spread.low90, spread.high90)
    return f"{amount(record, spread.median)} (50%: {middle}; 90%: {wide})"


def with_interval(record: Record, spread: Spread) -> str:
    """Median and 90% interval of a quantity: "505 (90%: 330 to 700)"; the number alone where it is certain."""
    told = amount(record, spread.median)
    if spread.low90 == spread.high90:
        return told
    return f"{told} (90%: {between(record, spread.low90, spread.high90)})"
