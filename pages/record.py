"""The record: the history in a grid, everything else in forms, each problem where it is; saved as it is typed."""

from __future__ import annotations

from datetime import datetime

import streamlit as st

from harvest.desk import frame, show
from harvest.desk.forms import section_form
from harvest.desk.handing_out import record_files
from harvest.desk.history_grid import history_grid
from harvest.desk.raw_text import raw_record
from harvest.desk.session import Hand, in_hand, move
from harvest.record.fields import SECTIONS
from harvest.workspace.document import locate

HISTORY = "History"
#: Groups of sections, in the order of work; a section that no group names goes to the last.
GROUPS: dict[str, tuple[str, ...]] = {
    "Population": ("", "life"),
    "Surveys": ("survey", "survey_plan"),
    "Growth": ("curve", "rates", "correlation"),
    "Aims": ("objectives",),
    "Take and losses": ("losses", "rule"),
    "Texts": ("plan", "private"),
}


def group_of() -> dict[str, list[str]]:
    """Every section in its group."""
    groups = {name: list(sections) for name, sections in GROUPS.items()}
    known = {s for sections in GROUPS.values() for s in sections}
    list(groups.values())[-1].extend(s.name for s in SECTIONS if s.name not in known)
    return groups


def counts(hand: Hand, groups: dict[str, list[str]]) -> dict[str, int]:
    """Errors by group."""
    told = dict.fromkeys([HISTORY, *groups], 0)
    for problem in hand.errors:
        if problem.file != "record.toml":
            told[HISTORY] += 1
        else:
            section = locate(problem.where)[0]
            told[next((name for name, sections in groups.items() if section in sections), "Population")] += 1
    return told


def standing(hand: Hand) -> None:
    """Title, state of the disk, undo and redo."""
    show.kicker(f"{hand.draft.name or 'Unnamed record'} · {hand.entry.origin}")
    warnings = len(hand.problems) - len(hand.errors)
    if hand.errors:
        show.title(f"The record: {frame.faults(hand)} to mend")
    else:
        show.title("The record is complete" + (f", with {warnings} to check" if warnings else ""))
    saved = datetime.fromisoformat(hand.entry.changed).astimezone()
    with st.container(horizontal=True, vertical_alignment="center"):
        undo = f"Undo: {hand.entry.what}" if hand.entry.before else "Nothing to undo"
        st.button(show.literal(undo), key="undo", disabled=not hand.entry.before, on_click=move, args=(True,))
        st.button("Redo", key="redo", disabled=not hand.entry.after, on_click=move, args=(False,))
        show.note(f"Saved on this computer at {saved:%H:%M:%S}; every change is kept as you make it.")


def main() -> None:
    """The page."""
    hand = in_hand()
    if hand is None:
        frame.sound_record()
        return
    standing(hand)
    if hand.draft.document is None:
        raw_record(hand)
        return
    groups = group_of()
    faults = counts(hand, groups)
    chosen = st.segmented_control(
        "Part of the record",
        list(faults),
        default=st.session_state.get("part", HISTORY),
        format_func=lambda name: f"{name} · {faults[name]} to mend" if faults[name] else name,
        key="part chosen",
        label_visibility="collapsed",
    )
    st.session_state["part"] = chosen or st.session_state.get("part", HISTORY)
    if st.session_state["part"] == HISTORY:
        history_grid(hand)
    else:
        for section in groups[st.session_state["part"]]:
            told = next(s for s in SECTIONS if s.name == section)
            if not told.many:
                show.head(told.title)
                show.note(told.help)
            section_form(hand, section)
    record_files(hand)


main()
