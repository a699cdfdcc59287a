"""The record itself as files: its workbook, and its folder for the command line."""

from __future__ import annotations

import streamlit as st

from harvest.desk import show
from harvest.desk.names import file_name
from harvest.desk.session import Hand
from harvest.workspace.sources import as_zip

EXCEL = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet"
WORD = "application/vnd.openxmlformats-officedocument.wordprocessingml.document"


def record_files(hand: Hand) -> None:
    """Downloads of the record; they hold everything, private texts too."""
    from harvest.sheets.record_workbook import record_workbook

    show.head("Take the record with you")
    record, stem = hand.record, file_name(hand.draft.name, "record")
    with st.container(horizontal=True):
        if record is not None:
            st.download_button(
                "Workbook (Excel)",
                data=lambda: record_workbook(record),
                file_name=f"{stem}.xlsx",
                mime=EXCEL,
                key="save record xlsx",
                on_click="ignore",
            )
        st.download_button(
            "Folder (.zip), for the command line",
            data=lambda: as_zip(hand.draft),
            file_name=f"{stem}.zip",
            mime="application/zip",
            key="save record zip",
            on_click="ignore",
        )
    show.note("Both hold the whole record, its private texts too: they are yours, not for others.")
