"""Quota table: what goes into the management plan, and its files."""

from __future__ import annotations

import streamlit as st

from harvest.desk import frame, show
from harvest.desk.answers import table_of
from harvest.desk.documents import quota_files
from harvest.plan.assumptions import assumptions, provenance
from harvest.plan.layout import parts
from harvest.plan.sentences import findings, headline


def main() -> None:
    """The page."""
    record = frame.sound_record()
    if record is None:
        return
    frame.kicker(record)
    table = table_of(record)
    if table is None:
        return
    show.title(headline(table))
    show.say(*findings(table))
    quota_files(record, table)
    for part in parts(table):
        show.part(part, record.unit)
    with st.expander("What it rests on"):
        show.table(("Topic", "What is assumed"), assumptions(table), left=(0, 1))
    with st.expander("Where each number comes from, to run it again"):
        show.table(("Item", "Value"), provenance(table), left=(0, 1))
        show.note(
            "The same numbers from the command line: take the record's folder from the page Record, then "
            f"harvest quota FOLDER --seed {table.seed} --draws {len(table.rates)} --out OUT --json OUT.json"
        )


main()
