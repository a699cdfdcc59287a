"""Years as people write them: numbers, texts, dates, seasons."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date, datetime, timedelta
from itertools import pairwise

from harvest.record.numbers import find_date_year
from harvest.record.schema import FIRST_YEAR, LAST_YEAR
from harvest.sheets.grid import Cell
from harvest.sheets.numbers import is_blank, number_of
from harvest.sheets.roles import is_summary

_FOUR_DIGITS = re.compile("[0-9]{4}")
_SEASON = re.compile(r"(\D*)\b([0-9]{4})\s*[/–—-]\s*([0-9]{4}|[0-9]{2})\b(\D*)")
_IN_TEXT = re.compile(r"([^0-9]*)([0-9]{4})([^0-9]*)")
#: Longer remarks beside a year, in a row without numbers, make the row a footnote.
SHORT_REMARK = 12
#: A spreadsheet counts days from here: the number 2019 shown as a date is 11 July 1905.
_DAY_ZERO = date(1899, 12, 30)
_SHOWN_AS_DATE = (_DAY_ZERO + timedelta(1900), _DAY_ZERO + timedelta(2100))


@dataclass(frozen=True)
class YearCell:
    """What a cell of the year column says.

    Attributes
    ----------
    kind : {"empty", "year", "date", "shown as date", "season", "text", "summary", "other"}
        "text" is one year with words around it; "summary" the label of a total or mean, or several years.
    year : int
        The year, the first one of a season; 0 where there is none.
    remark : str
        The words around it.
    """

    kind: str
    year: int = 0
    remark: str = ""


def read_year(cell: Cell) -> YearCell:
    """What a cell of the year column says."""
    if is_blank(cell):
        return YearCell("empty")
    if isinstance(cell, date):
        return _read_date(cell.date() if isinstance(cell, datetime) else cell)
    number = number_of(cell)
    if number is not None:
        whole = number == number.to_integral_value() and FIRST_YEAR <= number <= LAST_YEAR
        return YearCell("year", int(number)) if whole else YearCell("other")
    return _read_text(cell.strip()) if isinstance(cell, str) else YearCell("other")


def _read_date(day: date) -> YearCell:
    first, last = _SHOWN_AS_DATE
    if first <= day <= last:
        return YearCell("shown as date", (day - _DAY_ZERO).days)
    return YearCell("date", day.year) if FIRST_YEAR <= day.year <= LAST_YEAR else YearCell("other")


def _read_text(text: str) -> YearCell:
    if re.fullmatch(r"[0-9]{4}(\.0+)?", text) and FIRST_YEAR <= int(text[:4]) <= LAST_YEAR:
        return YearCell("year", int(text[:4]))
    if is_summary(text):
        return YearCell("summary")
    dated = find_date_year(text)
    if dated is not None and FIRST_YEAR <= int(dated) <= LAST_YEAR:
        return YearCell("date", int(dated))
    season = _SEASON.fullmatch(text)
    if season is not None:
        return _read_season(season)
    match = _IN_TEXT.fullmatch(text)
    if match is not None and FIRST_YEAR <= int(match[2]) <= LAST_YEAR:
        return YearCell("text", int(match[2]), f"{match[1].strip()} {match[3].strip()}".strip())
    return YearCell("other")


def _read_season(match: re.Match[str]) -> YearCell:
    first, second = int(match[2]), match[3]
    follows = str(first + 1)[-len(second) :] == second
    remark = f"{match[1].strip()} {match[4].strip()}".strip()
    if follows and FIRST_YEAR <= first < LAST_YEAR:
        return YearCell("season", first, remark)
    return YearCell("summary", remark=remark) if len(second) == 4 and int(second) > first else YearCell("other")


def score_years(cells: Sequence[Cell]) -> int:
    """How much a row or column looks like years: each year counts one, each that follows its neighbour two more."""
    read = [read_year(cell) for cell in cells if _could_be_year(cell)]
    years = [y.year for y in read if y.year and len(y.remark) <= SHORT_REMARK]
    follow = sum(abs(b - a) <= 1 for a, b in pairwise(years))
    return len(years) + 2 * follow


def _could_be_year(cell: Cell) -> bool:
    return cell is not None and (not isinstance(cell, str) or _FOUR_DIGITS.search(cell) is not None)
