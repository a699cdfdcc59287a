"""What a row of the table of fields is made of: sorts of values, allowed ranges, limits of the format."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any, Literal

RECORD_FILE = "record.toml"
HISTORY_FILE = "history.csv"
#: Columns of the history that do not belong to a survey.
YEAR, REMOVALS, NOTE = "year", "removals", "note"
#: Bytes; checked before a file is read.
MAX_RECORD_BYTES, MAX_HISTORY_BYTES = 1_000_000, 10_000_000
#: Characters in one text (a spreadsheet cell holds 32,767).
MAX_TEXT = 5_000
#: Largest magnitude of any number: far above any population, far below the limits of arithmetic.
MAX_NUMBER = 1e15
FIRST_YEAR, LAST_YEAR = 1600, 2200

#: The distributions and their parameters, in the order in which a :class:`Distribution` holds them.
DISTRIBUTIONS: dict[str, tuple[str, ...]] = {
    "fixed": ("value",),
    "uniform": ("low", "high"),
    "triangular": ("low", "mode", "high"),
    "normal": ("mean", "sd"),
    "lognormal": ("median", "sd_log"),
    "beta": ("a", "b"),
    "90% between": ("low", "high"),
}

Sort = Literal[
    "text",
    "long text",
    "file name",
    "whole number",
    "number",
    "proportion",
    "CV",
    "choice",
    "level",
    "distribution",
    "years and chance",
    "list of names",
]


@dataclass(frozen=True)
class Interval:
    """A range of allowed numbers; an end that is open is itself not allowed."""

    low: float
    high: float = MAX_NUMBER
    low_open: bool = False
    high_open: bool = False

    def __contains__(self, value: float) -> bool:
        above = value > self.low if self.low_open else value >= self.low
        below = value < self.high if self.high_open else value <= self.high
        return above and below

    def __str__(self) -> str:
        low = f"above {self.low:g}" if self.low_open else f"at least {self.low:g}"
        if self.high >= MAX_NUMBER:
            return low
        if self.low == self.high:
            return f"{self.low:g}"
        if not (self.low_open or self.high_open):
            return f"from {self.low:g} to {self.high:g}"
        return f"{low} and {'below' if self.high_open else 'at most'} {self.high:g}"

    @property
    def closed(self) -> Interval:
        """The same interval with both ends allowed."""
        return replace(self, low_open=False, high_open=False)


ABOVE_ZERO = Interval(0, low_open=True)
ZERO_OR_MORE = Interval(0)
PROPORTION = Interval(0, 1)
INSIDE_0_1 = Interval(0, 1, low_open=True, high_open=True)
SHARE = Interval(0, 1, low_open=True)
INSIDE_MINUS_1_1 = Interval(-1, 1, low_open=True, high_open=True)
PER_YEAR = Interval(0, 10, low_open=True)
NOISE_SD = Interval(0, 2)
#: A CV above 2 is taken for a percentage; above or below ``USUAL_CV`` it is only unusual.
CV_RANGE = Interval(0, 2, low_open=True)
USUAL_CV = Interval(0.01, 1)


@dataclass(frozen=True)
class Field:
    """One key of ``record.toml``.

    Attributes
    ----------
    section, key : str
        Table and key; the section "" is the top of the file.
    sort : str
        What the value is; one of :data:`Sort`.
    help : str
        One line for the user.
    required : bool
        Whether the key must be there (in each of its tables).
    default : object
        What stands in for a missing key; None where nothing does.
    within : Interval or None
        Allowed range: of the number, of both ends of a distribution, or of an absolute level.
    choices : tuple of str
        For a choice.
    unit : str
        Unit of the value, for help and forms.
    example : object
        The TOML value that the template shows.
    shown : bool
        Whether the template writes the key live although it is optional.
    only_for, needed_for : tuple of str
        The names (of the curve or the rule in the same table) that allow or need this key.
    within_for : tuple of (str, Interval)
        A range of its own for some of those names.
    label : str
        Its name in forms, where the key itself does not say enough.
    """

    section: str
    key: str
    sort: Sort
    help: str
    required: bool = False
    default: Any = None
    within: Interval | None = None
    choices: tuple[str, ...] = ()
    unit: str = ""
    example: Any = None
    shown: bool = False
    only_for: tuple[str, ...] = ()
    needed_for: tuple[str, ...] = ()
    within_for: tuple[tuple[str, Interval], ...] = ()
    label: str = ""

    @property
    def title(self) -> str:
        """What a form calls it: "Growth rate"."""
        return self.label or self.key.replace("_", " ").capitalize()

    @property
    def path(self) -> str:
        """Dotted path, as in "objectives.limit"."""
        return f"{self.section}.{self.key}" if self.section else self.key

    @property
    def is_proportion(self) -> bool:
        """Whether the value lies between 0 and 1, and below 1 (a "90% between" is then logit-normal)."""
        within = self.within
        return within is not None and within.low == 0 and within.high == 1 and within.high_open

    @property
    def is_positive(self) -> bool:
        """Whether the value cannot be negative (a "90% between" is then lognormal, unless a proportion)."""
        return self.within is not None and self.within.low >= 0 and not self.is_proportion

    def narrowed(self, name: str | None) -> Field:
        """The field as it reads for the curve or rule called ``name``."""
        own = dict(self.within_for)
        return replace(self, within=own[name]) if name in own else self

    def rule(self) -> str:
        """What is allowed, in words."""
        within = self.within if self.within is not None else Interval(-MAX_NUMBER)
        choices = " or ".join(f'"{c}"' for c in self.choices)
        words: dict[str, str] = {
            "text": f"a text in quotes on one line, at most {MAX_TEXT:,} characters",
            "long text": f"a text in quotes, at most {MAX_TEXT:,} characters",
            "file name": "the name of a .csv file in the record's own folder",
            "whole number": f"a whole number {within}",
            "number": f"a number {within}",
            "proportion": f"a proportion {within}",
            "CV": f"a coefficient of variation {within} (0.15 means 15 percent)",
            "choice": f"one of {choices}",
            "level": f"a number {within}, or a fraction of carrying capacity such as {{ of_capacity = 0.3 }}",
            "distribution": f'a number {within}, or a range such as {{ distribution = "uniform", low = …, high = … }}',
            "years and chance": "a table such as { years = 10, chance = 0.8 }",
            "list of names": 'a list of keys such as ["place", "plan.author"]',
        }
        return words[self.sort]

    def brief(self) -> str:
        """What is allowed, in a few words for the template; "" where the example says enough."""
        if self.choices:
            return " | ".join(f'"{c}"' for c in self.choices)
        if self.within is None:
            return ""
        if self.sort == "whole number":
            return f"whole number {self.within}"
        if self.sort == "level":
            return f"{self.within}, or a fraction of carrying capacity such as {{ of_capacity = 0.3 }}"
        return f"number or range, {self.within}" if self.sort == "distribution" else str(self.within)


@dataclass(frozen=True)
class Section:
    """One table of ``record.toml``; ``many`` for a list of tables, written with double brackets."""

    name: str
    help: str
    many: bool = False
    at_least: int = 0
    at_most: int = 1
    shown: bool = False
    label: str = ""

    @property
    def title(self) -> str:
        """What forms call it, or one of its tables: "Growth curve"."""
        return self.label or self.name.replace("_", " ").capitalize()

    @property
    def header(self) -> str:
        """The line that opens the table."""
        return f"[[{self.name}]]" if self.many else f"[{self.name}]"
