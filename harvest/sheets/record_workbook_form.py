"""The form of a record's workbook: which sheet, row and cell stand for which key; shared by writing and reading."""

from __future__ import annotations

from harvest.record.fields import FIELDS, SECTIONS, fields_of
from harvest.record.schema import DISTRIBUTIONS, Field, Section

READ_ME, HISTORY = "Read me", "History"
#: The row of the sheet "Read me" that holds the version of the record's format; it marks the workbook as a record.
FORMAT_LABEL = "Format of this record"
#: Stands before the heading of each block of rows.
MARK = "▸ "
HEADINGS = ("Item", "How it is stated", "Value, or low", "Most likely", "High", "Unit", "What it is, what is allowed")
#: Columns from 0; ``VALUES`` are those that the manager fills in.
ITEM, HOW, FIRST, MIDDLE, LAST, UNIT, HELP = range(7)
VALUES = (HOW, FIRST, MIDDLE, LAST)
#: Keys that belong to the files of a folder.
FILE_KEYS = ("format", "history")

#: Sections that share a sheet; a section that stands in none gets a sheet of its own.
_SHEETS = (
    ("Population", ("", "life")),
    ("Surveys", ("survey", "survey_plan")),
    ("Growth", ("rates", "curve", "correlation")),
    ("Objectives", ("objectives", "losses", "rule")),
    ("Plan", ("plan", "private")),
)

#: How a distribution is called in the drop-down, and what its numbers are.
KINDS = {
    "fixed": ("exactly", "known exactly: one value"),
    "90% between": ("90% between", "nine chances in ten to lie between low and high"),
    "uniform": ("uniform", "anywhere between low and high, equally likely"),
    "triangular": ("triangular", "between low and high, with a most likely value"),
    "normal": ("normal", "mean in the first cell, standard deviation in the last"),
    "lognormal": ("lognormal", "median in the first cell, standard deviation of the natural logarithm in the last"),
    "beta": ("beta", "between 0 and 1: a in the first cell, b in the last"),
}
#: How a level is stated: whether it is a fraction of carrying capacity.
LEVELS = {"abundance": False, "share of carrying capacity": True}
BY_YEAR = "years, and chance"


def sheets() -> dict[str, tuple[Section, ...]]:
    """The sheets between "Read me" and "History" with their sections, in order."""
    known = {section.name: section for section in SECTIONS}
    found = {title: tuple(known.pop(name) for name in names if name in known) for title, names in _SHEETS}
    return found | {label(section.name): (section,) for section in known.values()}


def label(key: str) -> str:
    """A name without a title of its own as the workbook shows it: "max_growth" is "Max growth"."""
    words = key.replace("_", " ").split(" ")
    words = ["CV" if word == "cv" else word for word in words]
    return " ".join([words[0][:1].upper() + words[0][1:], *words[1:]])


def key_of(text: str) -> str:
    """The key that a label stands for."""
    return "_".join(text.lower().split())


def block_title(section: Section, number: int) -> str:
    """The heading of a block of rows: of the section, or of its table with this number from 1."""
    return f"{MARK}{section.title}" + (f" {number}" if section.many else "")


def split_title(text: str) -> str:
    """The section that a heading names, known or not: "▸ Growth curve 2" is "curve"."""
    key = key_of(text.strip().removeprefix(MARK.strip()).rstrip("0123456789"))
    names = {key_of(section.title): section.name for section in SECTIONS}
    return names.get(key, key)


def section_named(name: str) -> Section | None:
    """The section, or None."""
    return next((section for section in SECTIONS if section.name == name), None)


def field_named(section: str, text: str) -> Field | None:
    """The field of a section that an item names, by its title or its key; None where there is none."""
    key = key_of(text)
    return next((f for f in fields_of(section) if is_shown(f) and key in (f.key, key_of(f.title))), None)


def key_named(text: str) -> str:
    """The key of any section that an item names, else the text as a key."""
    return next((f.key for f in FIELDS if key_of(f.title) == key_of(text)), key_of(text))


def is_shown(field: Field) -> bool:
    """Whether the key has a row: all but those that only the files of a folder need."""
    return bool(field.section) or field.key not in FILE_KEYS


def parameter_columns(kind: str) -> dict[str, int]:
    """The cells of a distribution's parameters: the first, a most likely one, the last."""
    names = DISTRIBUTIONS[kind]
    columns = (FIRST,) if len(names) == 1 else (FIRST, LAST) if len(names) == 2 else (FIRST, MIDDLE, LAST)
    return dict(zip(names, columns, strict=True))
