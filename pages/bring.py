"""Bring your own sheet: upload, say what is what, answer what may be changed, look, take over."""

from __future__ import annotations

from pathlib import Path

import streamlit as st

from harvest.desk import bringing, show
from harvest.desk.handing_out import EXCEL
from harvest.desk.session import in_hand
from harvest.sheets.record_workbook import blank_record_workbook
from harvest.workspace.sources import surveys_leaving


def upload() -> None:
    """The place for a file, and the template."""
    key = f"upload {st.session_state.get('uploads', 0)}"
    st.file_uploader(
        "An Excel file (.xlsx) or a text table (.csv) as you have it; a record's workbook or its packed folder (.zip)",
        key=key,
        on_change=bringing.took_upload,
        args=(key,),
    )
    with st.container(horizontal=True, vertical_alignment="center"):
        st.download_button(
            "The template to fill in (Excel)",
            data=blank_record_workbook,
            file_name="harvest-template.xlsx",
            mime=EXCEL,
            key="template",
            on_click="ignore",
        )
        show.note("It holds invented numbers and explains every cell.")


def another() -> None:
    """Put the file away and take another."""
    bringing.choose_file(None)
    st.session_state["uploads"] = st.session_state.get("uploads", 0) + 1


def map_and_take(file: str) -> None:
    """The steps from the sheet to the record."""
    top = st.container()
    with top:
        show.kicker(str(bringing.brought().said(file)["name"]))
    st.button("Put this file away and take another", key="another", on_click=another)
    table = bringing.Table(file)
    mapping = table.mapping
    bringing.sheet_and_header(table, mapping)
    bringing.column_roles(table, mapping)
    taken = table.taken(mapping)
    bringing.questions(table, taken)
    bringing.preview(taken)
    ready = taken.ready and bool(taken.rows)
    with top:
        show.title("Ready to take over" if ready else "Say what is what, then take it over")
        show.say("Nothing is changed in your file, and nothing is read other than it stands there without your yes.")
    show.head("Take it over")
    name = st.text_input("Name of the population", Path(table.name).stem, key=f"{file} name")
    hand = in_hand()
    with st.container(horizontal=True):
        st.button(
            "As a new record",
            key="take new",
            type="primary",
            disabled=not ready,
            on_click=bringing.take,
            args=(table, taken, None, name),
        )
        if hand is not None:
            st.button(
                show.literal(f"Into {hand.draft.name or 'the open record'}, in place of its history"),
                key="take into",
                disabled=not ready,
                on_click=bringing.take,
                args=(table, taken, hand.entry.id, name),
            )
        leaving = [] if hand is None else surveys_leaving(hand.draft, bringing.taken_surveys(taken))
    if leaving:
        show.note(f"Into the open record: its surveys without a column here leave it: {', '.join(leaving)}.")
    if not ready:
        show.note("The buttons wake up once every question is answered and nothing is left to mend.")


def main() -> None:
    """The page."""
    file = bringing.settle_file()
    if st.session_state.pop("go", None):
        st.switch_page(st.session_state["pages"]["record.py"])
    if file is None:
        show.title("Bring your own sheet")
        show.say("Upload the file as you have it. You will see what was found and say what each column is.")
        upload()
        return
    map_and_take(file)


main()
