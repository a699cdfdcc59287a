"""One value of a record as the cells of its row, and back: what is written is read as it was."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

from harvest.record.reporting import listed, show
from harvest.record.schema import MAX_NUMBER, Field
from harvest.sheets.record_workbook_form import (
    BY_YEAR,
    FIRST,
    HOW,
    KINDS,
    LAST,
    LEVELS,
    MIDDLE,
    VALUES,
    key_of,
    label,
    parameter_columns,
)

_TEXTS = ("text", "long text", "choice")
_KIND_OF = {name: kind for kind, (name, _) in KINDS.items()}
#: What numbers beside an unnamed distribution are called.
_UNNAMED = {FIRST: "low", MIDDLE: "mode", LAST: "high"}

#: Filled cells of one row, by column.
Cells = Mapping[int, Any]


def to_cells(field: Field, value: Any) -> dict[int, Any]:
    """The cells that state a value of ``record.toml``; none for a range that is the default anyway."""
    if field.sort == "distribution":
        return {} if value == field.default else _from_distribution(value)
    if field.sort == "level":
        shares = {share: name for name, share in LEVELS.items()}
        share = isinstance(value, Mapping)
        return {HOW: shares[share], FIRST: value["of_capacity"] if share else value}
    if field.sort == "years and chance":
        return {HOW: BY_YEAR, FIRST: value["years"], LAST: value["chance"]}
    if field.sort == "list of names":
        return {FIRST: listed_names(value)}
    if isinstance(value, str):
        return {} if value == field.default == "" else {FIRST: quote(value)}
    return {FIRST: value}


def listed_names(names: Iterable[str]) -> str:
    """Names of items as one cell holds them."""
    return ", ".join(name if "." in name else label(name) for name in names)


def _from_distribution(value: Any) -> dict[int, Any]:
    if not isinstance(value, Mapping):
        return {HOW: KINDS["fixed"][0], FIRST: value}
    kind = value["distribution"]
    return {HOW: KINDS[kind][0], **{column: value[name] for name, column in parameter_columns(kind).items()}}


def quote(text: str) -> str:
    """A text as its cell holds it: in quotes where it is blank, or in quotes by itself."""
    return f'"{text}"' if not text.strip() or _is_quoted(text) else text


def unquote(text: str) -> str:
    """The text that a cell holds."""
    return text[1:-1] if _is_quoted(text) else text


def _is_quoted(text: str) -> bool:
    return len(text) >= 2 and text[0] == text[-1] == '"'


def tidy(value: Any) -> Any:
    """A whole number as such: a spreadsheet does not tell 20 from 20.0."""
    return int(value) if isinstance(value, float) and value.is_integer() and abs(value) <= MAX_NUMBER else value


def from_cells(field: Field, cells: Cells) -> Any:
    """The value of ``record.toml`` that the filled cells state, right or wrong; None where there is none.

    Whatever is wrong is carried, so that the check of the record tells it: a text in the place of a number stays
    a text, a range lacks what was not filled in.
    """
    if field.sort == "distribution":
        return _to_distribution(cells)
    if field.sort == "level":
        return _to_level(cells)
    if field.sort == "years and chance":
        pair = {"years": cells.get(FIRST), "chance": cells.get(LAST)}
        return {key: value for key, value in pair.items() if value is not None} or None
    value = cells.get(FIRST)
    if field.sort == "list of names" and isinstance(value, str):
        return [key_of(name) for name in value.replace(";", ",").replace("\n", ",").split(",") if name.strip()]
    if field.sort in _TEXTS:
        return _to_text(value)
    return value


def _to_text(value: Any) -> Any:
    if isinstance(value, str):
        return unquote(value)
    is_number = isinstance(value, int | float) and not isinstance(value, bool)
    return str(value) if is_number else value


def _to_distribution(cells: Cells) -> Any:
    numbers = {column: cells[column] for column in (FIRST, MIDDLE, LAST) if column in cells}
    if not numbers:
        return None
    how = _how(cells)
    kind = _KIND_OF.get(how, how) if how else None
    if kind in (None, "fixed") and set(numbers) == {FIRST}:
        return numbers[FIRST]
    names = {column: name for name, column in parameter_columns(kind).items()} if kind in KINDS and kind else _UNNAMED
    stated = {names[column]: value for column, value in numbers.items() if column in names}
    return stated if kind is None else {"distribution": kind, **stated}


def _to_level(cells: Cells) -> Any:
    value, how = cells.get(FIRST), _how(cells)
    if value is None or not how or how == "abundance":
        return value
    return {"of_capacity" if LEVELS.get(how) else key_of(how): value}


def _how(cells: Cells) -> str:
    return str(cells.get(HOW, "")).strip()


def find_unused(field: Field, cells: Cells) -> tuple[tuple[int, ...], str]:
    """The filled cells that the value has no use for, and the rule that says so."""
    how = _how(cells)
    if field.sort == "distribution":
        kind = _KIND_OF.get(how, "fixed" if how else "")
        if not kind or (how and how not in _KIND_OF):
            return (), ""
        used: tuple[int, ...] = (HOW, *parameter_columns(kind).values())
        rule = f'"{how}" means: {KINDS[kind][1]}'
    elif field.sort == "years and chance":
        used, rule = (HOW, FIRST, LAST), "the years stand in the first cell and the chance in the last"
    else:
        used, rule = (HOW, FIRST) if field.sort == "level" else (FIRST,), "the value stands in one cell, the first"
    return tuple(column for column in VALUES if column in cells and column not in used), rule


def found_in(cells: Cells, columns: tuple[int, ...]) -> str:
    """Cells as a message shows them."""
    return listed(show(cells[column]) for column in columns)
