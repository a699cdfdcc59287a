"""A number written as text: plain decimal or scientific notation with a point, nothing else."""

from __future__ import annotations

import math
import re

from harvest.record.schema import MAX_NUMBER

_NUMBER = re.compile(r"[+-]?([0-9]+(\.[0-9]*)?|\.[0-9]+)([eE][+-]?[0-9]{1,4})?")
_SPACES = "\u0020\u00a0\u2009\u202f"
_GROUPED = re.compile(rf"[+-]?[0-9]{{1,3}}([,'’{_SPACES}][0-9]{{3}})+(\.[0-9]+)?")
_DECIMAL_COMMA = re.compile(r"[+-]?[0-9]*,[0-9]+")
_CONTINENTAL = re.compile(r"[+-]?[0-9]{1,3}(\.[0-9]{3})+,[0-9]+")
_WITH_UNIT = re.compile(r"[+-]?[0-9]+(\.[0-9]+)?\s*[^\W\d_].{0,20}")
_DATE = re.compile(r"([0-9]{1,4})[-/. ]([0-9]{1,2}|[A-Za-z]{3,9})[-/. ]([0-9]{1,4})([ T].*)?")
_NOTHING = frozenset(
    {"n/a", "na", "nan", "#n/a", "nd", "n.d.", "nil", "none", "null", "missing", "unknown", "tbd", "x", "?"}
    | {"-", "--", "–", "—", ".", "..", "*", "/", "no count", "no data", "not counted", "not done"}
)
#: Longer texts are not numbers; also keeps the patterns fast.
_LONGEST = 60


def parse_number(text: str) -> float | None:
    """The number that ``text`` is, or None; infinite and oversized numbers are None as well."""
    bare = text.strip()
    if len(bare) > _LONGEST or not _NUMBER.fullmatch(bare):
        return None
    value = float(bare) + 0.0
    return value if math.isfinite(value) and abs(value) <= MAX_NUMBER else None


def explain_number(text: str) -> tuple[str, str]:
    """Why ``text`` is no number.

    Returns
    -------
    found, cure : str
        What it looks like ("" where that is plain to see), and what to do.
    """
    bare = text.strip()
    if len(bare) > _LONGEST:
        return "", "Write only the number; a remark belongs in the column note."
    return next(
        (told for told in (_missing(bare), _separated(bare), _dressed(bare)) if told),
        ("", "Write a plain number such as 1250 or 12.5, or leave the cell empty."),
    )


def find_date_year(text: str) -> str | None:
    """The four-digit year of a text that looks like a date, or None."""
    match = _DATE.fullmatch(text.strip()[:_LONGEST])
    if match is None:
        return None
    return next((part for part in match.groups()[:3] if part and len(part) == 4 and part.isdecimal()), None)


def _missing(bare: str) -> tuple[str, str] | None:
    if bare.lower() in _NOTHING:
        return "a mark for a missing value", "Leave the cell empty; the reason can go into the column note."
    return None


def _separated(bare: str) -> tuple[str, str] | None:
    if _CONTINENTAL.fullmatch(bare):
        plain = bare.replace(".", "").replace(",", ".")
        return "a thousands mark and a decimal comma", f"Write {plain}, with a point and no thousands mark."
    if _GROUPED.fullmatch(bare):
        plain = re.sub(rf"[,'’{_SPACES}]", "", bare)
        doubt = f" (or {bare.replace(',', '.')} if the comma was a decimal comma)" if bare.count(",") == 1 else ""
        return "a thousands mark", f"Write {plain}, without a thousands mark{doubt}."
    if _DECIMAL_COMMA.fullmatch(bare):
        return "a decimal comma", f"Write {bare.replace(',', '.')}, with a point."
    return None


def _dressed(bare: str) -> tuple[str, str] | None:
    """Percent signs, formulas, units, guesses and other things around a number."""
    if bare.endswith("%"):
        return _percent(bare)
    if bare.startswith("="):
        return "a formula", "Write the value of the formula, not the formula."
    if bare[:1] in "<>~≈±":
        return (
            "a number with a sign of doubt",
            "Write the number alone; the doubt belongs in the CV and the note.",
        )
    if "_" in bare or bare.lower().startswith(("0x", "0b", "0o")):
        return "a programmer's notation", "Write a plain number such as 1250 or 12.5."
    if bare.lower().lstrip("+-") in ("inf", "infinity"):
        return "infinity", "Write a plain number, or leave the cell empty."
    if any(c.isdigit() and not c.isascii() for c in bare):
        return "digits of another script", "Write the digits 0 to 9."
    if _NUMBER.fullmatch(bare):
        return "a number beyond all bounds", f"Write a number up to {MAX_NUMBER:g}."
    if find_date_year(bare):
        return "a date", "Write a plain number; spreadsheets turn some numbers into dates."
    if _WITH_UNIT.fullmatch(bare):
        return "a number with a unit", "Write the number alone, without its unit."
    return None


def _percent(bare: str) -> tuple[str, str]:
    share = parse_number(bare[:-1].replace(",", "."))
    if share is None:
        return "a percent sign", "Write the number as a proportion, without a percent sign."
    return "a percentage", f"Was {share / 100:g} meant? Then write {share / 100:g}, without a percent sign."
