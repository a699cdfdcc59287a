"""Forms made of the table of fields: one widget for each key, saved when it changes, its problems under it.

A widget writes to disk in its callback and shows what is on disk; nothing that was typed is dropped because it is
wrong.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

import streamlit as st

from harvest.desk import show
from harvest.desk.session import Hand, begin_anew, change, generation
from harvest.desk.typed import allowed, in_blocks, in_form, text_of, value_of
from harvest.errors import Problem
from harvest.record.fields import CORRELATED, OWN_UNIT, SECTIONS, fields_of, private_names
from harvest.record.schema import DISTRIBUTIONS, Field, Section
from harvest.workspace.document import locate, tables_in

UNSET, SHARED = "not stated", "as for all curves"
EXACT, IN_UNIT, OF_CAPACITY = "exactly", "as an abundance", "as a share of carrying capacity"
#: What a parameter of a range is called in a form.
PARAMETERS = {
    "value": "Value",
    "low": "from",
    "high": "to",
    "mode": "most likely",
    "mean": "mean",
    "sd": "standard deviation",
    "median": "median",
    "sd_log": "standard deviation of the logarithm",
    "a": "a",
    "b": "b",
}
RANGES = {EXACT: "fixed", **{name: name for name in DISTRIBUTIONS if name != "fixed"}}
#: Kept by the program itself.
HIDDEN = ("format", "history")
#: Keys that a record needs although no single place of them is needed.
SOMEWHERE = {
    "rates.growth_rate": "this or max growth",
    "rates.max_growth": "this or growth rate",
    "rates.carrying_capacity": "here, or in each curve",
    "rates.process_noise": "here, or in each curve",
}
_MIDDLES = ("value", "mode", "median", "mean")


#: A problem with its section, table and key.
Placed = tuple[tuple[str, int | None, str], Problem]


@dataclass(frozen=True)
class Slot:
    """One key of one table on the form."""

    field: Field
    index: int | None
    raw: Any
    key: str
    #: What abundances and removals are in: "red deer".
    kind: str

    def save(self, value: Any) -> None:
        """Write a value of this key to disk."""
        section, index, name = self.field.section, self.index, self.field.key
        change(self.field.title, lambda draft: draft.with_value(section, index, name, value))


def section_form(hand: Hand, name: str) -> None:
    """All keys of a section: once, or for each of its tables with buttons to add and to take out."""
    section = next(s for s in SECTIONS if s.name == name)
    document = hand.draft.document or {}
    tables = tables_in(document, name)
    found = [(locate(p.where), p) for p in hand.problems if p.file == "record.toml"]
    mine = [(place, p) for place, p in found if place[0] == name]
    for _, problem in [pair for pair in mine if not pair[0][2]]:
        show.problem(in_blocks(problem, name), "")
    if not section.many:
        if section.name and tables[0] and any(f.required for f in fields_of(name)):
            label = f"Take out: {section.title.lower()}"
            st.button(label, key=f"out {name} {generation()}", on_click=_take_section_out, args=(name,))
        _table_form(section, None, tables[0], mine, _kind(document))
        return
    for number, table in enumerate(tables):
        with st.container(border=True):
            told = table.get("name")
            show.head(f"{section.title} {number + 1}" + (f": {told}" if isinstance(told, str) else ""))
            own = [(place, p) for place, p in mine if place[1] == number]
            _table_form(section, number, table, own, _kind(document))
            label = f"Take {section.title.lower()} {number + 1} out"
            st.button(label, key=f"out {name} {number} {generation()}", on_click=_take_out, args=(name, number))
    if len(tables) < section.at_most:
        label = f"Add a {section.title.lower()}"
        st.button(label, key=f"add {name} {generation()}", on_click=_add, args=(name, len(tables)))


def _title(name: str) -> str:
    return next(s.title for s in SECTIONS if s.name == name)


def _add(section: str, number: int) -> None:
    first = next(f for f in fields_of(section) if f.required)
    value = [] if first.sort == "list of names" else first.choices[0] if first.choices else f"{section} {number + 1}"
    change(f"add a {_title(section).lower()}", lambda draft: draft.with_value(section, number, first.key, value))


def _take_section_out(section: str) -> None:
    change(f"take out: {_title(section).lower()}", lambda draft: draft.without_section(section))
    begin_anew()


def _take_out(section: str, number: int) -> None:
    change(f"take out {_title(section).lower()} {number + 1}", lambda draft: draft.without_table(section, number))
    begin_anew()


def _table_form(section: Section, index: int | None, table: dict[str, Any], mine: list[Placed], kind: str) -> None:
    name = table.get("name") if isinstance(table.get("name"), str) else None
    shown_keys = set()
    for general in fields_of(section.name):
        field = general.narrowed(name)
        unfit = bool(field.only_for) and (name not in field.only_for or (section.name == "rule" and name is None))
        if (field.key in HIDDEN and not section.name) or (unfit and field.key not in table):
            continue
        shown_keys.add(field.key)
        raw = table.get(field.key)
        slot = Slot(field, index, raw, f"{section.name} {index} {field.key} {generation()}", kind)
        _WIDGETS.get(field.sort, _number)(slot)
        for _, problem in [pair for pair in mine if pair[0][2] == field.key]:
            show.problem(in_form(problem, field, raw), "")
    for place, problem in mine:
        if place[2] and place[2] not in shown_keys:
            show.problem(in_blocks(problem, section.name))
            if place[2] in table and place[2] not in HIDDEN:
                label = f"Take out {place[2]}"
                st.button(
                    show.literal(label),
                    key=f"unknown {section.name} {index} {place[2]} {generation()}",
                    on_click=_drop,
                    args=(section.name, index, place[2]),
                )


def _drop(section: str, index: int | None, key: str) -> None:
    change(f"take out {key}", lambda draft: draft.with_value(section, index, key, None))


def _label(slot: Slot) -> str:
    field = slot.field
    unit = slot.kind if field.unit == OWN_UNIT else field.unit
    told = "" if field.required else SOMEWHERE.get(field.path, "optional")
    return show.literal(f"{field.title}{f' ({unit})' if unit else ''}{f' · {told}' if told else ''}")


def _kind(document: dict[str, Any]) -> str:
    """What is counted, as far as the record says it by now."""
    unit, species = (str(document.get(name) or "") for name in ("unit", "species"))
    return f"tonnes of {species}" if unit == "tonnes" and species else species or unit or OWN_UNIT


def _help(field: Field) -> str:
    default = f" Left out: {text_of(field.default)}." if field.default not in (None, "") else ""
    return show.literal(f"{field.help} Allowed: {allowed(field)}.{default}")


def _cell(slot: Slot, part: str, label: str, value: Any, save: Callable[[str], None], **more: Any) -> None:
    """A cell for one text or number, saved by ``save`` when it changes."""
    key = f"{slot.key} {part}"
    st.text_input(
        label,
        text_of(value),
        key=key,
        on_change=lambda: save(st.session_state[key]),
        **{"help": _help(slot.field), **more},
    )


def _number(slot: Slot) -> None:
    example = text_of(slot.field.example) if not isinstance(slot.field.example, dict) else None
    hint = f"for example {example}" if example else None
    _cell(slot, "", _label(slot), slot.raw, lambda text: slot.save(value_of(text)), placeholder=hint)


def _text(slot: Slot) -> None:
    _cell(slot, "", _label(slot), slot.raw, slot.save, placeholder=f"for example {slot.field.example}")


def _long_text(slot: Slot) -> None:
    key = slot.key
    st.text_area(
        _label(slot),
        text_of(slot.raw),
        key=key,
        help=_help(slot.field),
        on_change=lambda: slot.save(st.session_state[key]),
        height=90,
    )


def _choice(slot: Slot) -> None:
    field, key = slot.field, slot.key
    options = [*([] if field.required else [UNSET]), *field.choices]
    if slot.raw is not None and slot.raw not in options:
        options.append(text_of(slot.raw))
    place = options.index(text_of(slot.raw)) if slot.raw is not None else None
    st.selectbox(
        _label(slot),
        options,
        index=place,
        key=key,
        help=_help(field),
        placeholder="choose" if field.required else text_of(field.default) or UNSET,
        on_change=lambda: slot.save(None if st.session_state[key] == UNSET else st.session_state[key]),
    )


def _names(slot: Slot) -> None:
    key = slot.key
    given = [text_of(n) for n in slot.raw] if isinstance(slot.raw, list) else []
    known = CORRELATED if slot.field.section == "correlation" else private_names()
    options = [*known, *(n for n in given if n not in known)]
    keep_empty = slot.field.section == "correlation"
    st.multiselect(
        _label(slot),
        options,
        given,
        key=key,
        help=_help(slot.field),
        on_change=lambda: slot.save(st.session_state[key] or ([] if keep_empty else None)),
    )


def _level(slot: Slot) -> None:
    raw = slot.raw
    share = isinstance(raw, dict)
    how_key = f"{slot.key} how"
    left, right = st.columns([3, 2], vertical_alignment="bottom")
    with left:
        value = raw.get("of_capacity") if share else raw

        def save(text: str) -> None:
            number = value_of(text)
            of = st.session_state[how_key] == OF_CAPACITY
            slot.save({"of_capacity": number} if of and number is not None else number)

        _cell(slot, "value", _label(slot), value, save)
    with right:
        st.selectbox(
            f"{slot.field.title}: how it is given",
            [IN_UNIT, OF_CAPACITY],
            index=int(share),
            key=how_key,
            label_visibility="collapsed",
            on_change=lambda: save(st.session_state[f"{slot.key} value"]),
        )


def _by_year(slot: Slot) -> None:
    raw = slot.raw if isinstance(slot.raw, dict) else {}
    keys = {part: f"{slot.key} {part}" for part in ("years", "chance")}

    def save(_: str) -> None:
        given = {part: value_of(st.session_state[key]) for part, key in keys.items()}
        told = {part: value for part, value in given.items() if value is not None}
        slot.save(told or None)

    left, right = st.columns(2, vertical_alignment="bottom")
    with left:
        _cell(slot, "years", show.literal(f"{slot.field.title}, within years · optional"), raw.get("years"), save)
    with right:
        _cell(slot, "chance", "with a chance of at least", raw.get("chance"), save, help=None)


def _distribution(slot: Slot) -> None:
    field, raw = slot.field, slot.raw
    unset = SHARED if field.section == "curve" and field.key != "shape" else UNSET
    kinds = list(RANGES) if field.required else [unset, *RANGES]
    kind_key = f"{slot.key} kind"
    table = raw if isinstance(raw, dict) else {} if raw is None else {"value": raw}
    stated = table.get("distribution", "fixed") if table else None
    names = {kind: name for name, kind in RANGES.items()}
    now = unset if stated is None else names.get(text_of(stated), text_of(stated))
    if now not in kinds:
        kinds.append(now)
    kind = st.session_state.get(kind_key, now)
    parameters = DISTRIBUTIONS.get(RANGES.get(kind, ""), ())
    columns = st.columns([2] + [1] * max(3, len(parameters)), vertical_alignment="bottom")

    def save(_: str = "") -> None:
        chosen = RANGES.get(st.session_state[kind_key])
        if chosen is None:
            slot.save(None)
            return
        old = carried(table, DISTRIBUTIONS[chosen])
        cells = {n: st.session_state.get(f"{slot.key} {n}", text_of(old.get(n))) for n in DISTRIBUTIONS[chosen]}
        given = {n: value for n, text in cells.items() if (value := value_of(text)) is not None}
        slot.save(given.get("value") if chosen == "fixed" else {"distribution": chosen, **given})

    with columns[0]:
        st.selectbox(_label(slot), kinds, kinds.index(now), key=kind_key, help=_help(field), on_change=save)
    for place, name in zip(columns[1:], parameters, strict=False):
        with place:
            _cell(slot, name, PARAMETERS[name], table.get(name), save, help=None)


def carried(table: dict[str, Any], names: Sequence[str]) -> dict[str, Any]:
    """The parameters of a range under another kind of range: those of the same name, and the middle for the middle."""
    kept = {name: table[name] for name in names if name in table}
    middle = next((table[name] for name in _MIDDLES if name in table), table.get("low"))
    wanted = next((name for name in _MIDDLES if name in names), "low" if "low" in names else None)
    if wanted is not None and wanted not in kept and middle is not None:
        kept[wanted] = middle
    return kept


_WIDGETS: dict[str, Callable[[Slot], None]] = {
    "text": _text,
    "file name": _text,
    "long text": _long_text,
    "choice": _choice,
    "list of names": _names,
    "level": _level,
    "years and chance": _by_year,
    "distribution": _distribution,
}
