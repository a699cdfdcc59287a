"""Taking over an uploaded file: a record as it is, or a manager's own sheet by mapping, questions and preview."""

from __future__ import annotations

from collections.abc import Callable
from datetime import datetime, time
from typing import Any

import streamlit as st

from harvest.desk import show
from harvest.desk.results import results
from harvest.desk.session import open_record, tell, workspace
from harvest.errors import HarvestError
from harvest.sheets.grid import Book, Cell
from harvest.sheets.guessing import guess_mapping
from harvest.sheets.header import HeaderGuess, column_names
from harvest.sheets.numbers import is_blank
from harvest.sheets.opening import open_book
from harvest.sheets.questions import Question
from harvest.sheets.roles import COUNT, CV, ERROR, ROLES, ColumnUse, Mapping
from harvest.sheets.take_over import take_over
from harvest.sheets.taken import Taken
from harvest.sheets.view import letters, view_of
from harvest.workspace import Draft
from harvest.workspace.brought import Brought
from harvest.workspace.sources import draft_of_history, draft_of_upload, with_history

ADDRESS = "sheet"
#: Rows of a sheet that are shown as they are, and columns.
ROWS_SHOWN, COLUMNS_SHOWN = 14, 30


def brought() -> Brought:
    """The uploaded files."""
    return Brought(workspace().folder)


def settle_file() -> str | None:
    """The uploaded file that this window works on: of the address, else of before."""
    asked = st.query_params.get(ADDRESS) or st.session_state.get(ADDRESS)
    chosen = asked if brought().has(asked) else None
    choose_file(chosen)
    return chosen


def choose_file(file: str | None) -> None:
    """Work on another uploaded file, or on none."""
    st.session_state[ADDRESS] = file
    if file is None:
        st.query_params.pop(ADDRESS, None)
    elif st.query_params.get(ADDRESS) != file:
        st.query_params[ADDRESS] = file


def took_upload(key: str) -> None:
    """Keep what was uploaded; a whole record is opened at once."""
    upload = st.session_state.get(key)
    if upload is None:
        return
    name, data = upload.name, upload.getvalue()
    try:
        found = draft_of_upload(name, data)
        if found is None:
            book = open_book(name, data)  # what cannot be read is told here, where another can be chosen
            file = brought().keep(name, data)
            results().keep(("book", file), book)
            if len(brought().said(file)) > 1:
                tell(f"{name} was brought before: what you said about it then is kept.")
            choose_file(file)
            return
        draft, beyond = found
        open_record(workspace().add(draft, f"from the file {name}"))
        tell(f"{name} is a whole record and is open now: see the page Record.")
        for problem in beyond:
            tell(str(problem))
    except HarvestError as error:
        tell(str(error))


class Table:
    """The sheet being taken over: what is said about it so far, kept on disk."""

    def __init__(self, file: str):
        self.file = file
        self.said: dict[str, Any] = brought().said(file)
        self.name, data = brought().load(file)
        self.book: Book = results().get(("book", file), lambda: open_book(self.name, data))

    def say(self, **more: Any) -> None:
        """Keep what was said; a None takes back."""
        self._keep(lambda said: {k: v for k, v in {**said, **more}.items() if v is not None})

    def say_of(self, what: str, name: str, value: Any) -> None:
        """Keep one answer or the use of one column, beside those of before."""
        self._keep(lambda said: {**said, what: {**said.get(what, {}), name: value}})

    def _keep(self, alter: Callable[[dict[str, Any]], dict[str, Any]]) -> None:
        try:
            self.said = brought().say(self.file, alter)
        except HarvestError as error:
            tell(str(error))

    @property
    def state(self) -> str:
        """What widgets are keyed by: they begin anew with another sheet, header or direction."""
        return f"{self.file} {[self.said.get(name) for name in ('sheet', 'transposed', 'header')]}"

    @property
    def mapping(self) -> Mapping:
        """The guess, with everything that was said put in its place."""
        said = self.said
        header = HeaderGuess(*said["header"]) if "header" in said else None
        guess = guess_mapping(self.book, said.get("sheet"), header, said.get("transposed"))
        told = said.get("columns", {})
        guessed = {use.column: use for use in guess.columns}
        columns = []
        for column in range(len(self.names(guess))):
            use = guessed.get(column) or ColumnUse(column, ROLES[-1])
            role, survey = told.get(str(column), (use.role, use.survey))
            columns.append(ColumnUse(column, role, survey))
        return Mapping(guess.sheet, guess.header_first, guess.header_end, tuple(columns), guess.transposed)

    def names(self, mapping: Mapping) -> tuple[str, ...]:
        """Names of the columns as read."""
        seen = view_of(self.book.sheets[mapping.sheet], mapping.transposed).sheet
        return column_names(seen, mapping.header_first, mapping.header_end)

    def taken(self, mapping: Mapping) -> Taken:
        """The history that comes of it, as far as it is settled."""
        return take_over(self.book, mapping, dict(self.said.get("answers", {})))


def sheet_and_header(table: Table, mapping: Mapping) -> None:
    """Which sheet, which rows are the header, and the first rows as they are."""
    show.head("1 · Which rows are the header?")
    for text in table.book.notes:
        show.note(text)
    names = [sheet.name + (" (hidden)" if sheet.hidden else "") for sheet in table.book.sheets]
    view = view_of(table.book.sheets[mapping.sheet], mapping.transposed)
    *first, header_from, header_rows, turned = st.columns(3 + (len(names) > 1), vertical_alignment="bottom")
    key = table.state

    def anew(**more: Any) -> None:
        table.say(**{"columns": None, "answers": None, "header": None, **more})

    chosen = f"{key} sheet"
    for place in first:
        with place:
            st.selectbox(
                "Sheet",
                range(len(names)),
                mapping.sheet,
                format_func=lambda n: names[n],
                key=chosen,
                on_change=lambda: anew(sheet=st.session_state[chosen], transposed=None),
            )
    first_key, end_key, turned_key = f"{key} first", f"{key} end", f"{key} turned"

    def header() -> None:
        first, rows = st.session_state[first_key] - 1, st.session_state[end_key]
        anew(sheet=mapping.sheet, transposed=mapping.transposed, header=(first, min(first + rows, most)))

    most = max(1, view.sheet.size[0])
    with header_from:
        st.number_input("Header begins in row", 1, most, mapping.header_first + 1, key=first_key, on_change=header)
    with header_rows:
        height = mapping.header_end - mapping.header_first
        st.number_input("Rows of the header", 0, min(5, most), min(height, 5), key=end_key, on_change=header)
    with turned:
        st.checkbox(
            "Years run from left to right",
            mapping.transposed,
            key=turned_key,
            on_change=lambda: anew(sheet=mapping.sheet, transposed=st.session_state[turned_key]),
        )
    cells = view.sheet.cells[:ROWS_SHOWN]
    wide = min(COLUMNS_SHOWN, view.sheet.size[1])
    heads = ["", *(view.column(c).removeprefix("column ").removeprefix("row ") for c in range(wide))]
    rows = [
        [view.row(r).removeprefix("row ").removeprefix("column "), *(_shown(cell) for cell in row[:wide])]
        for r, row in enumerate(cells)
    ]
    more = view.sheet.size[0] - len(rows)
    told = f'The first rows of "{view.sheet.name}" as they are' + (f"; {more:,} more follow" if more > 0 else "")
    show.table(heads, rows, range(wide + 1), told)


def _shown(cell: Cell) -> str:
    if isinstance(cell, datetime) and cell.time() == time():
        cell = cell.date()
    return "" if is_blank(cell) else str(cell).strip()[:40]


def column_roles(table: Table, mapping: Mapping) -> None:
    """What each column is: the guess, to be corrected."""
    show.head("2 · What is each column?")
    show.note("Several columns of removals are added up. A CV or standard error belongs to the count that you name.")
    names = table.names(mapping)
    sheet = view_of(table.book.sheets[mapping.sheet], mapping.transposed).sheet
    surveys = [use.survey or names[use.column] for use in mapping.columns if use.role == COUNT]
    for use in mapping.columns:
        body = [_shown(row[use.column]) for row in sheet.cells[mapping.header_end :]]
        seen = [text for text in body if text]
        if not seen and not names[use.column]:
            continue
        left, middle, right = st.columns([5, 3, 3], vertical_alignment="center")
        with left:
            label = names[use.column] or f"column {letters(use.column)}, without a name"
            show.note(f"{label}: {', '.join(seen[:4])}{' …' if len(seen) > 4 else ''}")
        role_key, survey_key = f"{table.state} {use.column} role", f"{table.state} {use.column} survey"
        with middle:
            st.selectbox(
                f"What {show.literal(label)} is",
                ROLES,
                ROLES.index(use.role),
                key=role_key,
                label_visibility="collapsed",
                on_change=_set_role(table, use, role_key),
            )
        with right:
            if use.role in (CV, ERROR) and surveys:
                options = [*surveys] if use.survey in surveys else ["", *surveys]
                st.selectbox(
                    f"Survey that {show.literal(label)} belongs to",
                    options,
                    options.index(use.survey) if use.survey in options else 0,
                    key=survey_key,
                    label_visibility="collapsed",
                    on_change=_set_survey(table, use, survey_key),
                )


def _set_role(table: Table, use: ColumnUse, key: str) -> Callable[[], None]:
    def took() -> None:
        table.say_of("columns", str(use.column), (st.session_state[key], use.survey))

    return took


def _set_survey(table: Table, use: ColumnUse, key: str) -> Callable[[], None]:
    def took() -> None:
        table.say_of("columns", str(use.column), (use.role, st.session_state[key]))

    return took


def questions(table: Table, taken: Taken) -> None:
    """Every repair that needs a word, with its examples."""
    if not taken.questions:
        return
    open_ones = sum(q.answer is None for q in taken.questions)
    state = f"{open_ones} still open" if open_ones else "all answered"
    show.head(f"3 · What may be changed in reading it? ({state})")
    for question in taken.questions:
        _question(table, question)


def _question(table: Table, question: Question) -> None:
    labels = dict(question.options)
    values = list(labels)
    key = f"{table.state} answer {question.id}"

    def took() -> None:
        table.say_of("answers", question.id, st.session_state[key])

    with st.container(border=True):
        st.radio(
            show.literal(question.text),
            values,
            index=values.index(question.answer) if question.answer in values else None,
            format_func=lambda value: show.literal(labels[value]),
            key=key,
            on_change=took,
            horizontal=len(values) <= 2,
        )
        more = question.count - len(question.examples)
        show.note("; ".join(question.examples) + (f"; and {more:,} more" if more > 0 else ""))


def preview(taken: Taken) -> None:
    """The history as it would be taken over, and what stands against it."""
    show.head("The history that comes of it")
    for problem in taken.problems:
        show.problem(problem)
    if not taken.rows:
        show.say("No year can be read yet: name the column of the years above.")
        return
    words = [i for i, name in enumerate(taken.header) if name == "note"]
    show.table([name.replace("_", " ") for name in taken.header], taken.rows, words, f"{len(taken.rows)} years")


def taken_surveys(taken: Taken) -> list[dict[str, str]]:
    """The surveys of a history as the record states them."""
    return [
        {"name": s.name, "column": s.column, **({"cv_column": s.cv_column} if s.cv_column else {})}
        for s in taken.surveys
    ]


def take(table: Table, taken: Taken, into: str | None, name: str) -> None:
    """Make a record of the history, or put it into the open one."""
    surveys = taken_surveys(taken)
    try:
        if into is None:
            draft = draft_of_history(name, taken.history_text, surveys)
            open_record(workspace().add(draft, f"from the sheet {table.name}"))
        else:

            def alter(draft: Draft) -> Draft:
                return with_history(draft, taken.history_text, surveys)

            workspace().change(into, alter, f"the history, from {table.name}")
            open_record(into)
    except HarvestError as error:
        tell(str(error))
        return
    choose_file(None)
    st.session_state["part"] = "Population" if into is None else "History"
    st.session_state["go"] = "record.py"
