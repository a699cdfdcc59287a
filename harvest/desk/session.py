"""The record in hand: which one this window shows, read from disk at every run, changed on disk at every edit.

The work lives in the workspace on disk and its name in the address, so that a refresh, a closed window or a second
window loses nothing. ``generation`` numbers the states that came from elsewhere (another window, an undo): widgets
carry it in their key and begin anew with it.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import streamlit as st

from harvest.desk.results import results
from harvest.errors import HarvestError, Problem
from harvest.record.model import Record
from harvest.workspace import Draft, Entry, Workspace, default_folder

ADDRESS = "record"


@dataclass(frozen=True)
class Hand:
    """The record in hand, as it is on disk now; ``record`` is None where it has an error."""

    entry: Entry
    draft: Draft
    record: Record | None
    problems: tuple[Problem, ...]

    @property
    def errors(self) -> list[Problem]:
        """The problems that stop the work."""
        return [p for p in self.problems if p.severity == "error"]


def workspace() -> Workspace:
    """The records on this computer."""
    return Workspace(default_folder())


def settle() -> None:
    """Find out which record this window shows: the one of the address, else the one of before; keep both in step."""
    asked, here = st.query_params.get(ADDRESS), st.session_state.get(ADDRESS)
    space = workspace()
    if asked and not space.has(asked):
        tell(f"There is no record {asked!r} on this computer: open one from the list on the first page.")
        del st.query_params[ADDRESS]
        asked = None
    chosen = asked or (here if space.has(here) else None)
    if chosen != here:
        st.session_state["generation"] = generation() + 1
    st.session_state[ADDRESS] = chosen
    if chosen and st.query_params.get(ADDRESS) != chosen:
        st.query_params[ADDRESS] = chosen


def open_record(record: str | None) -> None:
    """Show another record in this window, or none."""
    st.session_state[ADDRESS] = record
    st.session_state["generation"] = generation() + 1
    if record is None:
        st.query_params.pop(ADDRESS, None)
    else:
        st.query_params[ADDRESS] = record


def generation() -> int:
    """Which state of the record the widgets show."""
    number: int = st.session_state.get("generation", 0)
    return number


def in_hand() -> Hand | None:
    """The record that this window shows; None where there is none yet."""
    name = st.session_state.get(ADDRESS)
    if name is None:
        return None
    space = workspace()
    entry = space.entry(name)
    if st.session_state.get("seen") != (name, entry.version):
        st.session_state["seen"] = (name, entry.version)
        st.session_state["generation"] = generation() + 1
    draft = space.load(name)
    record, problems = results().get(("check", draft), draft.check)
    return Hand(entry, draft, record, problems)


def change(what: str, alter: Callable[[Draft], Draft]) -> None:
    """Alter the record on disk; for widgets' callbacks, so a refusal is kept for the top of the page."""
    name = st.session_state[ADDRESS]
    try:
        before, version = workspace().change(name, alter, what)
    except HarvestError as error:
        tell(str(error))
        return
    if st.session_state.get("seen") == (name, before):
        st.session_state["seen"] = (name, version)


def move(back: bool) -> None:
    """Undo the last change, or redo it; the widgets begin anew."""
    name = st.session_state[ADDRESS]
    try:
        workspace().undo(name) if back else workspace().redo(name)
    except HarvestError as error:
        tell(str(error))


def begin_anew() -> None:
    """Let the widgets begin anew from what is on disk."""
    st.session_state["generation"] = generation() + 1


def tell(text: str) -> None:
    """Keep a message for the top of the next page."""
    st.session_state.setdefault("messages", []).append(text)


def messages() -> list[str]:
    """The messages that were kept, once."""
    kept: list[str] = st.session_state.pop("messages", [])
    return kept
