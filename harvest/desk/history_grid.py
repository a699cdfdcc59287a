"""The history in a grid that can be edited: rows are years, every cell is kept as it was typed.

Streamlit's editor tells its edits since the table that it was given. It is given the same table until the history
comes from elsewhere, and each state is written to disk once, in the callback.
"""

from __future__ import annotations

from typing import Any, Literal

import pandas as pd
import streamlit as st

from harvest.desk import show
from harvest.desk.session import Hand, begin_anew, change, generation, tell
from harvest.desk.typed import text_of
from harvest.record.history import guard_note, unguard_note
from harvest.record.numbers import parse_number
from harvest.record.schema import NOTE, RECORD_FILE, REMOVALS, YEAR
from harvest.workspace import Grid
from harvest.workspace.document import tables_in
from harvest.workspace.draft import Draft
from harvest.workspace.merging import merged

_WIDTH: dict[str, Literal["small", "medium", "large"]] = {YEAR: "small", NOTE: "large"}


def history_grid(hand: Hand) -> None:
    """The editor, the columns that the surveys still need, and every problem of the history."""
    grid = hand.draft.grid
    if grid is None:
        raw_history(hand)
        return
    number = generation()
    frame = _frame(grid)
    key = f"history {number} {'|'.join(grid.header)} {[str(t) for t in frame.dtypes]}"
    if key not in st.session_state:  # a new editor: of a new state, or of a page that was left
        st.session_state["history baseline"] = (key, grid, grid)
    kept, baseline, _ = st.session_state["history baseline"]
    if kept != key:
        st.session_state["history baseline"] = (key, grid, grid)
        baseline = grid
    st.data_editor(
        _frame(baseline),
        key=key,
        num_rows="dynamic",
        hide_index=True,
        width="stretch",
        height=36 * min(len(baseline.rows) + 2, 26),
        placeholder="",
        column_config=_columns(_frame(baseline)),
        on_change=_save,
        args=(key,),
    )
    show.note(
        "A new year goes into the last row; rows marked at the left can be taken out. Empty: not known."
        " It is never taken for zero."
    )
    _problems(hand)
    _missing_columns(hand, grid)


def _frame(grid: Grid) -> pd.DataFrame:
    """The grid as the editor takes it: numbers where every cell of a column is one, else texts."""
    columns: dict[str, Any] = {}
    for place, name in enumerate(grid.header):
        cells = [row[place] for row in grid.rows]
        numbers = [parse_number(c) for c in cells]
        sound = all(n is not None or not c for n, c in zip(numbers, cells, strict=True))
        if name == NOTE:
            columns[name] = pd.Series([unguard_note(c) for c in cells], dtype=object)
        elif sound:
            whole = name == YEAR and all(n is None or n.is_integer() for n in numbers)
            columns[name] = pd.Series(numbers, dtype="Int64" if whole else "Float64")
        else:
            columns[name] = pd.Series(cells, dtype=object)
    return pd.DataFrame(columns)


def _columns(frame: pd.DataFrame) -> dict[str, Any]:
    told = {}
    for name in frame:
        label = name.replace("_", " ")
        if pd.api.types.is_numeric_dtype(frame[name]):
            style = "%d" if name == YEAR else "localized"
            told[name] = st.column_config.NumberColumn(label, format=style, width=_WIDTH.get(name))
        else:
            told[name] = st.column_config.TextColumn(label, width=_WIDTH.get(name))
    return told


def _save(key: str) -> None:
    """Write the editor's table to disk, onto what another window may have written meanwhile."""
    kept, baseline, last = st.session_state["history baseline"]
    state = st.session_state.get(key)
    if kept != key or state is None:
        return
    mine = edited(baseline, state)
    st.session_state["history baseline"] = (key, baseline, mine)

    def alter(draft: Draft) -> Draft:
        theirs = draft.grid
        together = mine if theirs is None else merged(last, mine, theirs)
        if together is None:
            tell(
                "Another window changed this history too, and the two do not fit together. Yours holds; Undo shows it."
                " as it was before."
            )
        return draft.with_grid(mine if together is None else together)

    change("the history", alter)


def edited(baseline: Grid, state: dict[str, Any]) -> Grid:
    """The table after the editor's changes: cells by row and column, rows added, rows taken out."""
    rows = [list(row) for row in baseline.rows]
    places = {name: place for place, name in enumerate(baseline.header)}

    def put(row: list[str], cells: dict[str, Any]) -> None:
        for name, value in cells.items():
            if name in places:
                text = text_of(value)
                row[places[name]] = guard_note(text) if name == NOTE else text

    for number, cells in state.get("edited_rows", {}).items():
        put(rows[int(number)], cells)
    gone = set(state.get("deleted_rows", []))
    rows = [row for number, row in enumerate(rows) if number not in gone]
    for cells in state.get("added_rows", []):
        row = [""] * len(baseline.header)
        put(row, cells)
        if any(row):
            rows.append(row)
    return Grid(baseline.header, tuple(tuple(row) for row in rows))


def _missing_columns(hand: Hand, grid: Grid) -> None:
    """Buttons for columns that a survey names and the history lacks, and for those that nothing names."""
    wanted = [REMOVALS]
    for survey in tables_in(hand.draft.document or {}, "survey"):
        wanted += [survey[k] for k in ("column", "cv_column") if isinstance(survey.get(k), str) and survey[k]]
    missing = [name for name in dict.fromkeys(wanted) if name not in grid.header]
    extra = [name for name in grid.header if name and name not in (*wanted, YEAR, NOTE)]
    with st.container(horizontal=True):
        for name in missing:
            label = show.literal(f"Add the column {name}")
            st.button(label, key=f"column {name}", on_click=_add_column, args=(name,))
        if NOTE not in grid.header:
            st.button("Add a column for notes", key="column note", on_click=_add_column, args=(NOTE,))
        for name in extra:
            label = show.literal(f"Take out the column {name}")
            st.button(label, key=f"without {name}", on_click=_drop_column, args=(name,))


def _add_column(name: str) -> None:
    def alter(draft: Draft) -> Draft:
        grid = draft.grid
        if grid is None or name in grid.header:
            return draft
        return draft.with_grid(Grid((*grid.header, name), tuple((*row, "") for row in grid.rows)))

    change(f"add the column {name}", alter)
    begin_anew()


def _drop_column(name: str) -> None:
    def alter(draft: Draft) -> Draft:
        grid = draft.grid
        if grid is None or name not in grid.header:
            return draft
        keep = [i for i, column in enumerate(grid.header) if column != name]
        return draft.with_grid(
            Grid(tuple(grid.header[i] for i in keep), tuple(tuple(row[i] for i in keep) for row in grid.rows))
        )

    change(f"take out the column {name}", alter)
    begin_anew()


def raw_history(hand: Hand) -> None:
    """The history as text, where its rows and columns cannot be told apart."""
    show.say("The rows of the history cannot be told apart, so it is shown as the text that it is.")
    key = f"history text {generation()}"
    st.text_area(
        "History, as text: a header, then a row for each year, cells separated by commas",
        hand.draft.history_text,
        key=key,
        height=300,
        on_change=lambda: change("the history's text", lambda d: Draft(d.record_text, st.session_state[key])),
    )
    _problems(hand)


def _problems(hand: Hand) -> None:
    """What is wrong with the history."""
    for problem in hand.problems:
        if problem.file != RECORD_FILE:
            show.problem(problem)
