"""``record.toml`` as text, for a record that breaks the rules of TOML."""

from __future__ import annotations

import streamlit as st

from harvest.desk import show
from harvest.desk.session import Hand, begin_anew, change, generation
from harvest.workspace import Draft


def raw_record(hand: Hand) -> None:
    """The text to mend, with what is wrong in it."""
    show.say("This record's file breaks the rules of its format, so it is shown as the text that it is.")
    for problem in hand.problems:
        show.problem(problem)
    key = f"record text {generation()}"
    lines = hand.draft.record_text.count("\n")
    st.text_area("record.toml, as text", hand.draft.record_text, key=key, height=min(900, 80 + 24 * lines))

    def save() -> None:
        change("the record's text", lambda draft: Draft(st.session_state[key], draft.history_text))
        begin_anew()

    st.button("Save and look again", key="save text", on_click=save, type="primary")
