"""The quota table as files: Word, Excel, CSV and JSON, made when they are asked for; private texts stay out."""

from __future__ import annotations

import streamlit as st

from harvest.desk import frame, show
from harvest.desk.handing_out import EXCEL, WORD
from harvest.desk.names import file_name
from harvest.plan.table import QuotaTable
from harvest.record.model import Record

#: Pixels of a picture in the Word document, beside the usual width.
PICTURE_HEIGHT = 340


def word_file(table: QuotaTable) -> bytes:
    """The Word document with the pictures of history and risk."""
    from harvest.charts import draw_history, draw_risk, files
    from harvest.plan.document import quota_document

    risk = draw_risk(table.record, table.curve, table.recommendation, public=True)
    history = draw_history(table.record, public=True)
    return quota_document(
        table,
        risk_png=files.png(risk, height=PICTURE_HEIGHT, bare=True),
        risk_caption=risk.sentence,
        risk_description=risk.description,
        history_png=files.png(history, height=PICTURE_HEIGHT, bare=True),
        history_caption=history.sentence,
        history_description=history.description,
    )


def quota_files(record: Record, table: QuotaTable) -> None:
    """The downloads."""
    from harvest.plan.csv_files import card_csv, quota_csv
    from harvest.plan.json_files import json_bytes, quota_json
    from harvest.plan.workbook import quota_workbook

    name = frame.population(record)
    files = (
        ("Word document", "quota", "docx", WORD, lambda: word_file(table)),
        ("Excel workbook", "quota", "xlsx", EXCEL, lambda: quota_workbook(table)),
        ("Quota table (CSV)", "quota table", "csv", "text/csv", lambda: quota_csv(table)),
        ("Lookup card (CSV)", "lookup card", "csv", "text/csv", lambda: card_csv(table)),
        ("All numbers (JSON)", "quota", "json", "application/json", lambda: json_bytes(quota_json(table))),
    )
    with st.container(horizontal=True):
        for place, (label, what, ending, kind, make) in enumerate(files):
            st.download_button(
                label,
                data=make,
                file_name=f"{file_name(name, what)}.{ending}",
                mime=kind,
                key=f"file {what} {ending}",
                on_click="ignore",
                type="primary" if place == 0 else "secondary",
            )
    if record.private:
        show.note("What the record keeps private is left out of these files.")
