"""Words, figures and tables on the screen. Text of a record is escaped here, so that it never becomes markup."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from html import escape as escape
from pathlib import Path

import streamlit as st

from harvest.desk.marks import Marks, marks_of
from harvest.errors import CAUTION, Problem
from harvest.plan.layout import Part, Value, shown

_STYLE = Path(__file__).parent / "style.css"
#: Marks of Markdown only where they could mean one: screen readers read the backslash of a label aloud.
_MARKDOWN = re.compile(r"(^\d{1,9}(?=[.)]))|([\\`*_{}\[\]<>#$~|!&@^=]|\.(?=[^\s\d])|^[-+])")
#: What Streamlit makes a picture, arrow or link of in spite of a backslash; an invisible word joiner stops it.
_REPLACED = re.compile(r":(?=\S)|[-<>~=](?=[-<>=])|(?i:www)(?=\.)|@")


def style() -> None:
    """The style sheet of the pages."""
    st.html(_STYLE)


def literal(text: str) -> str:
    """Text for a label that Streamlit reads as Markdown: every mark escaped, on one line."""
    return _MARKDOWN.sub(r"\1\\\2", _REPLACED.sub("\\g<0>\u2060", " ".join(text.split())))


def kicker(text: str) -> None:
    """The line above a title: what population, what year."""
    _paragraph("hv-kicker", text)


def title(text: str) -> None:
    """The page's finding."""
    st.html(f'<h1 class="hv-title">{escape(text.removesuffix("."))}</h1>')


def head(text: str) -> None:
    """The head of a part of a page."""
    st.html(f'<h2 class="hv-head">{escape(text)}</h2>')


def say(*texts: str) -> None:
    """Sentences; each text is a paragraph of its own."""
    st.html("".join(f'<p class="hv-text">{escape(text)}</p>' for text in texts))


def note(text: str) -> None:
    """What is only said beside."""
    _paragraph("hv-note", text)


def caution() -> None:
    """The line that ends every page."""
    _paragraph("hv-caution", CAUTION)


def _paragraph(kind: str, text: str) -> None:
    st.html(f'<p class="{kind}">{escape(text)}</p>')


def figures(cards: Iterable[tuple[str, str, str]]) -> None:
    """Figures side by side: what it is, the number, its uncertainty or unit."""
    told = "".join(
        f'<dl class="hv-card"><dt>{escape(name)}</dt><dd class="hv-figure">{escape(number)}</dd>'
        f"<dd>{escape(more)}</dd></dl>"
        for name, number, more in cards
    )
    st.html(f'<div class="hv-cards">{told}</div>')


def marks() -> Marks:
    """The reader's decimal and thousands marks."""
    return marks_of(st.context.locale)


def table(headings: Sequence[str], rows: Iterable[Sequence[str]], left: Iterable[int] = (), caption: str = "") -> None:
    """A table of texts: a real one, which scrolls inside itself and reads aloud.

    Parameters
    ----------
    left : iterable of int
        Columns of words; the others are numbers, to the right.
    """
    words = set(left)

    def cell(tag: str, place: int, text: str) -> str:
        side = ' class="hv-left"' if place in words else ""
        scope = ' scope="col"' if tag == "th" else ""
        return f"<{tag}{scope}{side}>{escape(text)}</{tag}>"

    lines = ["".join(cell("th", i, h) for i, h in enumerate(headings))]
    lines += ["".join(cell("td", i, v) for i, v in enumerate(row)) for row in rows]
    first, *rest = (f"<tr>{line}</tr>" for line in lines)
    told = f"<caption>{escape(caption)}</caption>" if caption else ""
    label = escape(caption or ", ".join(h for h in headings if h), quote=True)
    st.html(
        f'<div class="hv-scroll" tabindex="0" role="region" aria-label="{label}"><table class="hv-table">{told}'
        f"<thead>{first}</thead><tbody>{''.join(rest)}</tbody></table></div>"
    )


def typed_table(
    headings: Sequence[str], kinds: Sequence[str], rows: Iterable[Sequence[Value]], unit: str, caption: str = ""
) -> None:
    """A table of values by their kind (see :mod:`harvest.plan.layout`), numbers in the reader's marks."""
    mark = marks()

    def told(value: Value, kind: str) -> str:
        text = shown(value, kind, unit)
        return text if kind == "text" or isinstance(value, str) else mark.turn(text)

    cells = [[told(v, k) for v, k in zip(row, kinds, strict=True)] for row in rows]
    table(headings, cells, [i for i, kind in enumerate(kinds) if kind == "text"], caption)


def spread_table(headings: Sequence[str], rows: Iterable[Sequence[str]]) -> None:
    """A table of :func:`harvest.plan.spreads.row`: words first, then numbers in the reader's marks."""
    mark = marks()
    table(headings, [[name, *map(mark.turn, numbers)] for name, *numbers in rows], left=(0,))


def part(given: Part, unit: str) -> None:
    """One part of the quota table's document: head, note and table."""
    head(given.title)
    note(given.note)
    typed_table(given.headings, given.kinds, given.rows, unit)


def problem(given: Problem, place: str | None = None) -> None:
    """A problem where it is: what was found, what is allowed, the cure."""
    kind = "Mend" if given.severity == "error" else "Check"
    where = given.where or given.file if place is None else place
    at = f"{escape(where)}: " if where else ""
    found = f"{at}found {escape(given.found)}; {escape(given.rule)}."
    side = "" if given.severity == "error" else " hv-warning"
    st.html(f'<p class="hv-problem{side}"><b>{kind}</b> {found} {escape(given.cure)}</p>')
