"""What the workbook says to the manager: how to fill it in, and what each key is and may be."""

from __future__ import annotations

import re

from harvest.record.fields import CORRELATED, FIELDS, fields_of, private_names
from harvest.record.schema import MAX_TEXT, Field, Section
from harvest.sheets.record_workbook_form import FIRST, KINDS, label, section_named
from harvest.sheets.record_workbook_values import listed_names, to_cells

#: Keys of one word are words like any other.
_KEY = re.compile(r"\b[a-z]+(?:_[a-z]+)+\b")
_KNOWN = re.compile(r"(?<=Known here: )[a-z_]+(?:, [a-z_]+)*")
_LARGE = re.compile(r"\d+e\+\d+")
_SAYS_TOML = re.compile(r" such as (\{[^}]*\}|\[[^\]]*\])")
_HEADER = re.compile(r"(\[\[?)([a-z_]+)\]\]?")
#: The notation of ``record.toml`` in messages, and what the workbook says in its place.
_NOTATION = (
    (r" Numbers stand without quotes\.", ""),
    (r'Put the text in quotes: "…"\.', "Write a text."),
    (r",? (in|without) quotes", ""),
    (r", in square brackets", ", with commas between them"),
    (r"a table such as \{ years = 10, chance = 0\.8 \}", "the years in the first cell and the chance in the last"),
    (r" such as (\{[^}]*\}|\[[^\]]*\])", ""),
    (r"\{ of_capacity = … \}", '"share of carrying capacity"'),
    (r"\{ of_capacity = ([^}]*) \}", r'\1 as "share of carrying capacity"'),
    (r'\{ distribution = "([^"]*)"[^}]*\}', r'"\1", with low and high'),
    (r" of record\.toml", ""),
    (r"\b(\w+) = …", r"\1"),
)
#: What a list of names may name.
_NAMES = {"correlation.between": CORRELATED, "private.fields": private_names()}
INVENTED = "ALL NUMBERS AND NAMES HERE ARE INVENTED EXAMPLES: replace every one of them."
ABOUT = (
    "This workbook holds the record of one population: what is known of it, its yearly history, and what the quota "
    "must respect.",
    "Fill in the white cells. Leave a cell empty where nothing is known; rows in grey letters may be left out.",
    "Write numbers plainly: 12.5 (with the decimal mark of your spreadsheet program), 1200, and proportions as 0.15, "
    "not 15 percent. No formulas: only their last values would be read.",
    "To add a survey, a growth curve or a correlation, fill in the empty block that waits for it; for more, copy a "
    "block with its heading. An empty block counts for nothing.",
    "Keep the names in the column Item and in the first row of the history's table: the program finds everything by "
    "them. Columns and sheets of your own are not read.",
    'A text that is meant to be empty is written as two quotes: "".',
    "When it is filled in, open it in the program, or turn it into a record's folder: harvest convert NAME.xlsx FOLDER",
)
HISTORY_HELP = (
    "One row for each year, the earliest first, no year left out. A cell stays empty where nothing is known;",
    "0 means that nothing was taken or seen. The sheet Surveys names the columns of counts and of their CVs.",
)
PRIVATE = "It holds everything that is known, also what the record calls private: think before passing it on."


def about_section(section: Section) -> str:
    """One line on a block of rows."""
    if not section.many:
        return section.help
    text = section.help.split(";")[0].rstrip(".").replace("table", "block")
    return f"{text}; an empty block counts for nothing."


def about_field(field: Field) -> str:
    """What a key is and what is allowed, without the notation of ``record.toml``."""
    text = name_items(_SAYS_TOML.sub("", field.help).rstrip("."), field.section)
    parts = text, allowed(field), _example(field), _if_left_out(field), _for_whom(field)
    return " ".join(f"{part[0].upper()}{part[1:]}." for part in parts if part)


def allowed(field: Field) -> str:
    """What is allowed in the cells of a key, in words."""
    within = "" if field.within is None else " " + _LARGE.sub(lambda m: f"{float(m[0]):,.0f}", str(field.within))
    words = {
        "text": "one line of text",
        "long text": f"text, at most {MAX_TEXT:,} characters",
        "choice": " or ".join(f'"{choice}"' for choice in field.choices),
        "whole number": f"whole number{within}",
        "number": f"number{within}",
        "proportion": f"proportion{within}",
        "CV": f"coefficient of variation{within}; 0.15 means 15 percent",
        "level": f"number{within}, or a share of carrying capacity",
        "distribution": f"value or range,{within}" if within else "value or range",
        "years and chance": "years in the first cell, chance (such as 0.8) in the last",
        "list of names": f"names, with commas between them, of: {listed_names(_NAMES.get(field.path, ()))}",
    }
    return words.get(field.sort, field.rule())


def without_toml(text: str, section: str = "") -> str:
    """A rule or a cure for ``record.toml`` as it reads for the workbook: blocks and items, no quotes, no braces."""
    text = _HEADER.sub(lambda match: _block(match[1], match[2]), text)
    for pattern, words in _NOTATION:
        text = re.sub(pattern, words, text)
    return name_items(text, section)


def _block(bracket: str, name: str) -> str:
    section = section_named(name)
    title = label(name) if section is None else section.title
    return f'block "{title}"' if bracket == "[[" else f'the block "{title}"'


def _example(field: Field) -> str:
    if field.sort in ("choice", "long text") or isinstance(field.example, dict | None):
        return ""
    if isinstance(field.example, list):
        return f"for example {to_cells(field, field.example)[FIRST]}"
    return f"for example {field.example}"


def _if_left_out(field: Field) -> str:
    if field.required:
        return "needed where this block is filled in" if field.section else "needed"
    if field.default in (None, ""):
        return ""
    return f"left out: {field.default:g}" if isinstance(field.default, int | float) else f"left out: {field.default}"


def _for_whom(field: Field) -> str:
    return f"only for {' and '.join(field.only_for)}" if field.only_for else ""


def name_items(text: str, section: str) -> str:
    """Keys in a message as the workbook's items; a key of several sections as that of the section at hand."""
    titles = {field.key: field.title for field in (*FIELDS, *fields_of(section))}
    text = _KNOWN.sub(lambda match: ", ".join(f'"{titles.get(k, k)}"' for k in match[0].split(", ")), text)
    return _KEY.sub(lambda match: f'"{titles[match[0]]}"' if match[0] in titles else match[0], text)


def kinds_prompt() -> str:
    """The drop-down's hint for a range."""
    return (
        "exactly: first cell. 90% between, uniform: low, high. triangular: low, most likely, high. Others: see Read me."
    )


def kind_rows() -> list[tuple[str, str]]:
    """Each kind of range with its meaning."""
    return list(KINDS.values())
