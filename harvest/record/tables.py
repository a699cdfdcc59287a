"""Walking through a parsed ``record.toml`` along the table of fields."""

from __future__ import annotations

import re
import tomllib
from typing import Any

from harvest.record.fields import FIELDS, SECTIONS, fields_of
from harvest.record.model import CURVES, FORMAT
from harvest.record.reporting import Report, nearest, show
from harvest.record.schema import Field, Section
from harvest.record.values import FAULTY, check_value

#: The checked values: per section a dict of key to value, or a list of such dicts.
Values = dict[str, Any]

#: More of one kind are not listed singly.
_MOST_UNKNOWN = 20
_MOST_DOTS = re.compile(r"""(?:(?:[\w-]{1,200}|"[^"\n]{0,200}"|'[^'\n]{0,200}')[ \t]*\.[ \t]*){60}""")
_SYNTAX_CURES = (
    ("Cannot overwrite a value", "Each key may stand only once in its table: take out one of the two."),
    (
        "Cannot declare",
        "Each table may stand only once: put the two together. A list of tables is written [[…]].",
    ),
    ("Invalid value", "Put texts in quotes; write numbers with a point (0.5) and without thousands marks."),
    (
        "Expected newline or end of document",
        "Write one key per line, and numbers with a point (0.5), not a comma.",
    ),
    ("Expected '=' after a key", "Write: key = value."),
    ("Illegal character", "Close the quotes on the same line, and take out hidden characters."),
    ("Unterminated string", "Close the quotes."),
    ("Unclosed", "Close the bracket."),
)


def parse_toml(text: str, report: Report) -> dict[str, Any] | None:
    """The document, or None with the syntax error in ``report``."""
    rule = "the file must follow the rules of TOML"
    deep = "tables or lists nested too deeply"
    if _MOST_DOTS.search(text):
        report.error("", deep, rule, "A record has at most two levels: take out what does not belong to it.")
        return None
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        _explain_syntax(str(error), text, report)
    except RecursionError:
        report.error("", deep, rule, "A record has at most two levels: take out what does not belong to it.")
    except (ValueError, OverflowError):  # a whole number of thousands of digits
        report.error("", "a number of far too many digits", rule, "Write a number of a usual size.")
    return None


def _explain_syntax(message: str, text: str, report: Report) -> None:
    match = re.search(r"\(at line (\d+), column (\d+)\)", message)
    lines = text.split("\n")
    number = int(match[1]) if match else len(lines)
    line = lines[number - 1].strip() if 0 < number <= len(lines) else ""
    cure = next((c for start, c in _SYNTAX_CURES if start in message), "Compare the line with the sample record.")
    if line.startswith("[") and "Cannot" in message:
        cure = dict(_SYNTAX_CURES)["Cannot declare"]
    if any(mark in line for mark in "“”„‘’«»"):
        cure = 'Use straight quotes ("), not the curly ones of a word processor.'
    reason = re.sub(r"\s*\(at .*\)", "", message)
    report.error(f"line {number}", show(line), f"the file must follow the rules of TOML ({show(reason)})", cure)


def check_format(document: dict[str, Any], report: Report) -> bool:
    """Whether this program knows the record's format; if not, nothing else is worth checking."""
    found = document.get("format")
    if isinstance(found, int) and not isinstance(found, bool) and found > FORMAT:
        report.error(
            "format",
            show(found),
            f"this program knows record formats up to {FORMAT}",
            "The record was written by a newer version: update the program.",
        )
        return False
    return True


def check_tables(document: dict[str, Any], report: Report) -> Values:
    """Check every key on its own.

    Returns
    -------
    dict
        Per section a dict (or, for a list of tables, a list of dicts) of the keys that were given; a value
        that cannot be used is ``FAULTY``. Nothing is filled in for keys left out.
    """
    values: Values = {}
    for section in SECTIONS:
        if not section.name:
            names = [s.name for s in SECTIONS if s.name]
            values[""] = _check_table(section, document, "", report, also=names)
        elif section.many:
            values[section.name] = _check_list(section, document.get(section.name), report)
        else:
            values[section.name] = _check_single(section, document.get(section.name), report)
    return values


def _check_single(section: Section, raw: Any, report: Report) -> Values:
    if raw is None:
        return {}
    if not isinstance(raw, dict):
        report.error(
            section.name,
            show(raw),
            f"it must be a table {section.header}",
            f"Write {section.header} on a line.",
        )
        return {}
    return _check_table(section, raw, section.name, report)


def _check_list(section: Section, raw: Any, report: Report) -> list[Values]:
    if isinstance(raw, dict):
        report.error(section.name, show(raw), f"it is a list of tables {section.header}", "Double the brackets.")
        raw = [raw]
    tables = [] if raw is None else raw
    if not isinstance(tables, list) or not all(isinstance(t, dict) for t in tables):
        report.error(
            section.name,
            show(raw),
            f"it must be tables {section.header}",
            f"Write {section.header} on a line.",
        )
        return []
    if len(tables) < section.at_least:
        cure = (
            f'Add {section.header} with name = "{CURVES[0]}".' if section.name == "curve" else f"Add {section.header}."
        )
        report.error(section.name, "nothing", f"at least {section.at_least} {section.header} is needed", cure)
    if len(tables) > section.at_most:
        report.error(section.name, show(tables), f"at most {section.at_most} tables {section.header}", "Take some out.")
    return [
        _check_table(section, table, f"{section.name} {number}", report)
        for number, table in enumerate(tables[: section.at_most], start=1)
    ]


def place(prefix: str, key: str) -> str:
    """Where a key stands: "rates.growth_rate", or "survey 2, cv" in a list of tables."""
    if not prefix:
        return key
    return f"{prefix}, {key}" if " " in prefix else f"{prefix}.{key}"


def _check_table(
    section: Section, raw: dict[str, Any], prefix: str, report: Report, also: list[str] | None = None
) -> Values:
    values: Values = {}
    for general in fields_of(section.name):
        name = values.get("name") if isinstance(values.get("name"), str) else None
        field, where = general.narrowed(name), place(prefix, general.key)
        if _check_presence(field, raw, name, where, report):
            values[field.key] = check_value(field, raw[field.key], where, report)
    known = [f.key for f in fields_of(section.name)] + (also or [])
    _check_unknown(raw, known, section, prefix, report)
    return values


def _check_presence(field: Field, raw: dict[str, Any], name: str | None, where: str, report: Report) -> bool:
    """Whether the key is there and belongs there; a fault is noted where it should and does not."""
    if field.key not in raw:
        if field.required or (name is not None and name in field.needed_for):
            whose = f' for "{name}"' if field.needed_for else ""
            hint = f": {field.rule()}" if field.sort != "choice" else f", {field.rule()}"
            report.error(where, "nothing", f"this key is needed{whose}", f"Add {field.key} = …{hint}. {field.help}")
        return False
    if field.only_for and name is not None and name not in field.only_for:
        names = " and ".join(f'"{n}"' for n in field.only_for)
        report.error(where, show(raw[field.key]), f'"{name}" has no {field.key}; it is for {names}', "Take it out.")
        return False
    return True


def _check_unknown(raw: dict[str, Any], known: list[str], section: Section, prefix: str, report: Report) -> None:
    unknown = [key for key in raw if key not in known]
    for key in unknown[:_MOST_UNKNOWN]:
        home = next((f.section for f in FIELDS if f.key == key and f.section != section.name), None)
        guess = nearest(key, known)
        if home is not None:
            head = next(s.header for s in SECTIONS if s.name == home) if home else "the top of the file"
            cure = f"This key belongs in {head}: move it there."
        else:
            cure = f"Was {guess} meant?" if guess else f"Take it out. Known here: {', '.join(known)}."
        report.error(place(prefix, show(key)), show(raw[key]), "this key is unknown here", cure)
    if len(unknown) > _MOST_UNKNOWN:
        more = len(unknown) - _MOST_UNKNOWN
        report.error(prefix, f"{more:,} more unknown keys", "unknown keys are not allowed", "Take them out.")


def get(values: Values, key: str) -> Any:
    """A value that was given and can be used, else None."""
    found = values.get(key)
    return None if found is FAULTY else found
