"""Opening a record: demos, an empty one, and those that were worked on before."""

from __future__ import annotations

from datetime import datetime

import streamlit as st

from harvest.desk import frame, show
from harvest.desk.session import ADDRESS, begin_anew, open_record, tell, workspace
from harvest.errors import HarvestError
from harvest.record import demo_names
from harvest.workspace import Entry
from harvest.workspace.sources import draft_of_demo, empty_draft, open_demo

#: Records listed before the rest goes behind a fold.
LISTED = 8


def welcome() -> None:
    """The first page of somebody new."""
    show.title("How much can be taken, and how sure is that?")
    show.say(
        "From yearly counts and removals of one population, Harvest works out the quota that the population can carry, "
        "with the risk written beside it: what would collapse it, what the present quota does, and a table and a "
        "lookup card for the management plan. Everything stays on this computer."
    )
    show.head("Look at a demo")
    show.note("Three invented populations in places that do not exist.")
    with st.container(horizontal=True):
        for name in demo_names():
            label = results_name(name)
            st.button(show.literal(label), key=f"demo {name}", on_click=_open_demo, args=(name,))
    show.head("Or bring your own data")
    with st.container(horizontal=True, vertical_alignment="center"):
        frame.link(frame.BRING, "Upload a sheet, a record's workbook or the filled-in template")
        st.button("Start with an empty record", key="empty", on_click=_open_empty)
    other_records()


def results_name(demo: str) -> str:
    """The population's name of a demo."""
    from harvest.desk.results import results

    return results().get(("demo", demo), lambda: draft_of_demo(demo).name)


def other_records() -> None:
    """The records on this computer, to reopen or take off the list; demos and a new one behind a fold."""
    here = st.session_state.get(ADDRESS)
    others = [entry for entry in workspace().entries() if entry.id != here]
    if others:
        show.head("Other records on this computer" if here else "Go on with a record")
        for entry in others[:LISTED]:
            _row(entry)
        if len(others) > LISTED:
            with st.expander(f"{len(others) - LISTED} more"):
                for entry in others[LISTED:]:
                    _row(entry)
    if here:
        with st.expander("Open something else"):
            with st.container(horizontal=True):
                for name in demo_names():
                    label = f"Demo: {results_name(name)}"
                    st.button(show.literal(label), key=f"demo {name}", on_click=_open_demo, args=(name,))
                st.button("An empty record", key="empty", on_click=_open_empty)
                st.button("None: back to the welcome", key="close", on_click=open_record, args=(None,))
            frame.link(frame.BRING, "Bring your own sheet")


def _row(entry: Entry) -> None:
    changed = datetime.fromisoformat(entry.changed).astimezone()
    with st.container(horizontal=True, vertical_alignment="center"):
        name = show.literal(entry.name or "Unnamed record")
        st.button(name, key=f"open {entry.id}", on_click=open_record, args=(entry.id,))
        show.note(f"{entry.origin}; last changed {changed:%Y-%m-%d %H:%M}")
        label = f"Take {name} off this list"
        st.button(
            "Take off the list", key=f"remove {entry.id}", on_click=_remove, args=(entry,), type="tertiary", help=label
        )


def _remove(entry: Entry) -> None:
    try:
        place = workspace().remove(entry.id)
    except HarvestError as error:
        tell(str(error))
        return
    tell(f"{entry.name or 'The record'} is off the list, not deleted: its files are in {place}.")


def _open_demo(name: str) -> None:
    try:
        open_record(open_demo(workspace(), name))
    except HarvestError as error:
        tell(str(error))


def _open_empty() -> None:
    try:
        open_record(workspace().add(empty_draft(), "begun empty"))
        begin_anew()
    except HarvestError as error:
        tell(str(error))
