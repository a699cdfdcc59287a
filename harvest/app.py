"""The browser app: its pages in the order of a manager's year. To add a page: a file in pages/ and a line in ``PAGES``.

Started by the command ``harvest app``; a page is widgets in, one call of an analysis, display out.
"""

from __future__ import annotations

from itertools import groupby
from pathlib import Path

import streamlit as st

from harvest.desk import frame, show
from harvest.desk.session import messages, settle
from harvest.errors import HarvestError

HOME = Path(__file__).resolve().parent
#: Beside the modules in an installed copy, else at the top of the source tree.
FOLDER = next(p for p in (HOME / "pages", HOME.parent / "pages") if p.is_dir())
MARK = str(HOME / "desk" / "mark.svg")

#: Group, file, name in the sidebar, address.
PAGES = (
    ("The population", "start.py", "This season", "season"),
    ("The population", "record.py", "Record", "record"),
    ("The population", "bring.py", "Bring your own sheet", "bring"),
    ("What it can carry", "sustain.py", "Yield", "yield"),
    ("What it can carry", "collapse.py", "Thresholds", "thresholds"),
    ("What to take", "risk.py", "Risk and quota", "risk"),
    ("What to take", "quota.py", "Quota table", "quota"),
)


def main() -> None:
    """One run: the frame, the page that is asked for, the caution."""
    st.set_page_config(
        "Harvest", MARK, layout="wide", menu_items={"About": "Harvest: a quota with its risk beside it."}
    )
    show.style()
    st.logo(MARK, size="large")
    pages = {
        file: st.Page(FOLDER / file, title=name, url_path=address, default=file == PAGES[0][1])
        for _, file, name, address in PAGES
    }
    st.session_state["pages"] = pages
    page = st.navigation(list(pages.values()), position="hidden")
    try:
        settle()
        _sidebar()
        for text in messages():
            st.warning(show.literal(text))
        page.run()
    except HarvestError as error:
        frame.cannot(str(error))
        frame.link(frame.RECORD, "Look at the record")
    show.caution()


def _sidebar() -> None:
    """Links to the pages in their groups; they carry the record along, also into a new window."""
    with st.sidebar:
        for group, pages in groupby(PAGES, key=lambda page: page[0]):
            st.html(f'<p class="hv-group">{group}</p>')
            for _, file, name, _ in pages:
                frame.link(file, name, icon=None)


main()
