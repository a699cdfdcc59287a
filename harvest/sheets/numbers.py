"""A number as people write it into a cell: with marks, signs, units and remarks around it."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from datetime import date
from decimal import Decimal

from harvest.record.numbers import parse_number
from harvest.record.schema import MAX_NUMBER
from harvest.sheets.grid import Cell

_SPACES = " \u00a0\u2007\u2009\u202f"
_APOSTROPHES = "'’"
_TOKEN = rf"[0-9](?:[0-9.,{_APOSTROPHES}{_SPACES}]*[0-9])?|[.,][0-9]+"
_DRESSED = re.compile(
    r"(?P<doubt>(?:(?:ca|circa|c|about|approx|etwa|rund|env|aprox)\b\.?|[~≈<>≤≥])\s*)?"
    rf"(?P<sign>[+-]?)(?P<token>{_TOKEN})\s*(?P<percent>%?)"
    rf"(?:\s*\(?\s*(?:±|\+/-|\+-)\s*(?P<error>{_TOKEN})\s*(?P<error_percent>%?)\s*\)?)?"
    r"\s*(?P<rest>.*)",
    re.DOTALL | re.IGNORECASE,
)
_RUNS_ON = re.compile(r"[-–—−/:.,%±+_^=]\s*[0-9]|[0-9]")
_MULTIPLIER = re.compile(
    r"(?:[x×*]\s*10+|(?:k|tsd|thousands?|tausend|mio|mln|millions?|millionen|m|hundreds?|dozens?|mille|mil|tusen)\b)",
    re.IGNORECASE,
)
_UNIT = re.compile(r"[^\W\d_]+\.?(?:\s[^\W\d_]+\.?){0,2}")
#: Words after a number that are a remark on it, not its unit.
_REMARKS = (
    "est estimated estimate approx approximately provisional prov preliminary prelim partial incomplete minimum min "
    "only maybe geschätzt vorläufig unvollständig estimé provisoire estimado ungefähr e p r a b c"
)
_LONGEST = 200
_LONGEST_UNIT = 25
_LONGEST_NUMBER = 40
_CV_DIGITS = (2, 3)

NOT_KNOWN = frozenset(
    {"n/a", "na", "n.a.", "#n/a", "nan", "nd", "n.d.", "null", "missing", "unknown", "tbd", "x", "?", "??", "???"}
    | {"k.a.", "k. a.", "ka", "keine angabe", "unbekannt", "n.b.", "s/d", "sin datos", "inconnu", "ukjent", "okänd"}
    | {"no count", "no data", "not counted", "not done", "no survey", "nicht gezählt", ".", "..", "...", "…", "*"}
)
#: These may mean nothing taken or seen, or nothing known.
NONE = frozenset(
    {"-", "--", "---", "–", "—", "−", "/", "none", "nil", "no", "keine", "kein", "aucun", "aucune", "néant"}
    | {"ninguno", "ninguna", "nada", "ingen", "inga", "ingenting"}
)


@dataclass(frozen=True)
class Written:
    """A text taken apart: the number's own signs, and what stands around them.

    Attributes
    ----------
    token : str
        The number with its marks and its sign.
    doubt : str
        What stands before it, such as "<" or "ca.".
    error : str
        What follows "±", with its marks; "" where there is none.
    percent, error_percent : bool
    unit, remark : str
        What stands after it.
    """

    token: str
    doubt: str = ""
    error: str = ""
    percent: bool = False
    error_percent: bool = False
    unit: str = ""
    remark: str = ""


def take_apart(text: str) -> Written | None:
    """The number that a text begins with and what is around it, or None where it does not begin with one number."""
    bare = text.strip()
    if parse_number(bare) is not None:
        return Written(bare)
    match = _DRESSED.fullmatch(bare) if len(bare) <= _LONGEST else None
    if match is None:
        return None
    rest = match["rest"].strip()
    if _RUNS_ON.match(rest) or _MULTIPLIER.match(rest):
        return None
    unit = rest if is_unit(rest) else ""
    return Written(
        token=match["sign"] + match["token"],
        doubt=(match["doubt"] or "").strip(),
        error=match["error"] or "",
        percent=bool(match["percent"]),
        error_percent=bool(match["error_percent"]),
        unit=unit,
        remark="" if unit else rest,
    )


def is_unit(rest: str) -> bool:
    """Whether what stands after a number reads as its unit rather than as a remark."""
    if len(rest) > _LONGEST_UNIT or not _UNIT.fullmatch(rest):
        return False
    return not {word.strip(".").casefold() for word in rest.split()} & set(_REMARKS.split())


def interpretations(token: str) -> dict[str, Decimal]:
    """The numbers that a token can be, by what its decimal mark then is.

    Parameters
    ----------
    token : str
        Digits with marks, such as "1.234" or "-1 234,5".

    Returns
    -------
    dict
        Keys "point" and "comma"; one where only one reading is possible, none where it is no number.
    """
    if len(token) > _LONGEST_NUMBER:
        return {}
    if parse_number(token) is not None and ("e" in token.lower() or token.endswith(".")):
        return {"point": Decimal(token)}
    sign, bare = (token[0], token[1:]) if token[:1] in "+-" else ("", token)
    found = {}
    for name, decimal, thousands in (("point", ".", ","), ("comma", ",", ".")):
        plain = _read(bare, decimal, thousands)
        if plain is not None:
            found[name] = Decimal(sign + plain)
    return found


def _read(bare: str, decimal: str, thousands: str) -> str | None:
    grouped = rf"[1-9][0-9]{{0,2}}(?P<mark>[{thousands}{_SPACES}{_APOSTROPHES}])[0-9]{{3}}(?:(?P=mark)[0-9]{{3}})*"
    match = re.fullmatch(rf"(?P<whole>[0-9]+|{grouped})?(?:{re.escape(decimal)}(?P<part>[0-9]+))?", bare)
    if match is None or not bare:
        return None
    whole = re.sub("[^0-9]", "", match["whole"] or "0")
    return f"{whole}.{match['part']}" if match["part"] else whole


def number_of(cell: Cell) -> Decimal | None:
    """The number that a cell holds as a number, or None; no more digits than the shortest that tell it apart."""
    if isinstance(cell, bool) or not isinstance(cell, int | float) or not math.isfinite(cell):
        return None
    return Decimal(int(cell)) if float(cell).is_integer() else Decimal(repr(cell))


def holds_number(cell: Cell) -> bool:
    """Whether a cell holds a number or a text that begins with one."""
    return number_of(cell) is not None or (isinstance(cell, str) and take_apart(cell) is not None)


def is_bare_number(cell: Cell) -> bool:
    """Whether a cell holds a number and nothing else."""
    written = take_apart(cell) if isinstance(cell, str) else None
    return number_of(cell) is not None or (written is not None and not written.unit and not written.remark)


def is_blank(cell: Cell) -> bool:
    """Whether nothing stands in a cell."""
    return cell is None or (isinstance(cell, str) and not cell.strip())


def text_of(cell: Cell) -> str:
    """What a cell shows, for notes and messages."""
    if cell is None:
        return ""
    number = number_of(cell)
    if number is not None:
        return plain_text(number)
    if isinstance(cell, bool):
        return "TRUE" if cell else "FALSE"
    if isinstance(cell, date):
        return cell.isoformat()[:10]
    return str(cell).replace("\r\n", "\n").replace("\r", "\n").strip()


def plain_text(number: Decimal) -> str:
    """A number for the history: digits and a decimal point; a very small one in scientific notation."""
    text = format(number, "f")
    return text if len(text) <= _LONGEST_NUMBER else str(number)


def is_too_large(number: Decimal) -> bool:
    """Whether a number lies beyond what a record may hold."""
    return abs(number) > Decimal(MAX_NUMBER)


def round_cv(cv: Decimal, error: Decimal) -> Decimal:
    """A computed CV with as many significant digits as the error that it comes from: two or three."""
    digits = min(max(len(error.as_tuple().digits), _CV_DIGITS[0]), _CV_DIGITS[1])
    return cv if cv == 0 else round(cv, digits - 1 - cv.adjusted())
