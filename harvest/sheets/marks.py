"""Deciding, column by column, whether a mark in a number stands for thousands or for decimals."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from decimal import Decimal

from harvest.sheets import catalogue
from harvest.sheets.context import Context
from harvest.sheets.numbers import interpretations, plain_text
from harvest.sheets.questions import Kind

#: Below this median of a column's clear numbers, decimals are likelier than thousands.
_SMALL = 30
_MARKS = {"point": ".", "comma": ","}


@dataclass(frozen=True)
class Marks:
    """What tells the meaning of the marks in one column.

    Attributes
    ----------
    own, others : frozenset of {"point", "comma"}
        Decimal marks of the numbers that can be read in one way only: of this column, and of the whole sheet.
    small : bool
        Whether the numbers must be small ones (coefficients of variation), so that no mark can stand for thousands.
    kind : Kind
        The question where these do not tell; its first answer is the likelier one.
    """

    own: frozenset[str]
    others: frozenset[str]
    small: bool
    kind: Kind

    def decide(self, token: str) -> tuple[str | None, str]:
        """The decimal mark by which an ambiguous token is read, or None where the user has to say, with his proposal.

        Numbers elsewhere in the sheet are believed only where they make the number a whole one: a reading as
        decimals would divide by a thousand.
        """
        mark = "point" if "." in token else "comma"
        if self.small:
            return mark, ""
        if len(self.own) == 1:
            return next(iter(self.own)), ""
        if len(self.others) == 1 and mark not in self.others:
            return next(iter(self.others)), ""
        return None, mark


def find_votes(tokens: Iterable[str]) -> frozenset[str]:
    """The decimal marks of those tokens that can be read in one way only."""
    found = [interpretations(token) for token in tokens]
    return frozenset(name for values in found if len(values) == 1 for name in values)


def weigh_marks(name: str, tokens: list[str], numbers: list[Decimal], others: frozenset[str], small: bool) -> Marks:
    """What tells the meaning of the marks in a column.

    Parameters
    ----------
    name : str
        The column's name in the file.
    tokens : list of str
        Its numbers written as text.
    numbers : list of Decimal
        Its numbers that are numbers already.
    others : frozenset of str
        The votes of the whole sheet.
    small : bool
        Whether the numbers must be small ones.
    """
    kind = catalogue.THOUSANDS_OR_DECIMAL.about(name)
    clear = [abs(n) for n in numbers]
    for token in tokens:
        values = set(interpretations(token).values())
        clear += [abs(v) for v in values] if len(values) == 1 else []
    if clear and sorted(clear)[len(clear) // 2] < _SMALL:
        kind = kind.preferring("decimal")
    return Marks(find_votes(tokens), others, small, kind)


def read_token(context: Context, place: str, token: str, marks: Marks) -> Decimal | None:
    """The number that a token is, with the questions that its marks raise; None where it is no number."""
    values = interpretations(token)
    if not values:
        return None
    if len(set(values.values())) == 1:
        convention, number = next(iter(values.items()))
    else:
        decided, mark = marks.decide(token)
        if decided is None:
            return _ask(context, place, token, values, mark, marks.kind)
        convention, number = decided, values[decided]
    if "e" not in token.lower():
        _note_repairs(context, place, token, convention, number)
    return number


def _ask(context: Context, place: str, token: str, values: dict[str, Decimal], mark: str, kind: Kind) -> Decimal:
    other = "comma" if mark == "point" else "point"
    number = values[mark if context.asking.choice(kind) == "decimal" else other]
    context.asking.add(kind, place, token, plain_text(number))
    return number


def _note_repairs(context: Context, place: str, token: str, convention: str, number: Decimal) -> None:
    decimal = _MARKS[convention]
    becomes = plain_text(number)
    whole, _, part = token.lstrip("+-").partition(decimal)
    if re.search("[^0-9]", whole):
        context.asking.add(catalogue.THOUSANDS, place, token, becomes)
    if part and decimal == ",":
        context.asking.add(catalogue.DECIMAL_COMMA, place, token, becomes)
