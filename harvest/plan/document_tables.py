"""Parts as Word tables: column widths from what stands in the columns, header rows that repeat."""

from __future__ import annotations

from collections.abc import Sequence

from docx.document import Document as DocumentObject
from docx.enum.table import WD_CELL_VERTICAL_ALIGNMENT
from docx.oxml import OxmlElement
from docx.oxml.ns import qn
from docx.shared import Mm
from docx.table import Table, _Row

from harvest.plan.document_styles import TABLE_STYLE, add_text
from harvest.plan.layout import Part, shown

#: Average width of a character and both margins of a cell, mm; the widest a column of text asks for.
CHARACTER, MARGINS, WIDEST = 1.65, 2.6, 110.0
#: What a column may get beyond what it asks for, mm.
SPARE = 12.0
#: Tables up to this many rows stay on one page.
_TOGETHER = 20
#: A row with a longer text may break over pages.
_LONG_TEXT, _MANY_LINES = 1_500, 20


def part_texts(part: Part, unit: str) -> list[list[str]]:
    """The part's rows as they are shown."""
    return [[shown(v, kind, unit) for v, kind in zip(row, part.kinds, strict=True)] for row in part.rows]


def least_widths(part: Part, rows: list[list[str]]) -> list[float]:
    """The width below which a number, or a word of a heading or a text, would break: mm by column."""
    columns = zip(part.headings, part.kinds, zip(*rows, strict=True), strict=True)
    least = []
    for heading, kind, texts in columns:
        whole = [word for text in texts for word in (text.split() if kind == "text" else [text])]
        longest = max(map(len, [*heading.split(), *whole]), default=0)
        least.append(min(WIDEST / 4.0 if kind == "text" else WIDEST, longest * CHARACTER + MARGINS))
    return least


def column_widths(part: Part, rows: list[list[str]], width: float) -> list[float]:
    """Widths of the columns in mm, together at most ``width``.

    Each column gets what its longest cell asks for and some more; where that is too much, each gets its
    :func:`least_widths` and a share of the rest in proportion to what it lacks.
    """
    least = least_widths(part, rows)
    cells = zip(*rows, strict=True)
    asked = [max(map(len, texts)) * CHARACTER + MARGINS for texts in cells]
    wanted = [max(low, min(WIDEST, ask)) for low, ask in zip(least, asked, strict=True)]
    if sum(wanted) <= width:
        spare = min(SPARE, (width - sum(wanted)) / len(wanted))
        return [w + spare for w in wanted]
    rest, lack = width - sum(least), sum(wanted) - sum(least)
    if rest <= 0.0:
        return [low * width / sum(least) for low in least]
    return [low + rest * (want - low) / lack for low, want in zip(least, wanted, strict=True)]


def add_table(document: DocumentObject, part: Part, unit: str, width: float) -> Table:
    """Add a part as a table.

    Parameters
    ----------
    document : Document
    part : Part
        At least one row.
    unit : {"animals", "tonnes"}
        Of the amounts.
    width : float
        Width of the text, mm.
    """
    rows = part_texts(part, unit)
    widths = column_widths(part, rows, width)
    table = document.add_table(rows=1 + len(rows), cols=len(widths), style=TABLE_STYLE)
    table.autofit = False
    _describe(table, part.title, sum(widths))
    for column, millimetres in zip(table.columns, widths, strict=True):
        column.width = Mm(millimetres)
    numbers = [kind != "text" for kind in part.kinds]
    styles = [("Harvest number", "Harvest text")[not n] for n in numbers]
    headings = [("Harvest number heading", "Harvest heading")[not n] for n in numbers]
    together = len(rows) <= _TOGETHER
    lines = list(table.rows)
    _fill(lines[0], part.headings, widths, headings, keep=True)
    _mark(lines[0], "w:cantSplit", "w:tblHeader")
    for line, texts in zip(lines[1:], rows, strict=True):
        _fill(line, texts, widths, styles, keep=together and line is not lines[-1])
        if all(len(text) <= _LONG_TEXT and text.count("\n") <= _MANY_LINES for text in texts):
            _mark(line, "w:cantSplit")
    return table


def _fill(row: _Row, texts: Sequence[str], widths: list[float], styles: list[str], *, keep: bool) -> None:
    """Write one row; ``keep`` holds it on the page of the next."""
    for cell, text, millimetres, style in zip(row.cells, texts, widths, styles, strict=True):
        cell.width = Mm(millimetres)
        cell.vertical_alignment = WD_CELL_VERTICAL_ALIGNMENT.TOP
        paragraph = cell.paragraphs[0]
        paragraph.style = style
        add_text(paragraph, text)
        if keep:
            paragraph.paragraph_format.keep_with_next = True


def _mark(row: _Row, *tags: str) -> None:
    """Switch on properties of a row."""
    properties = row._tr.get_or_add_trPr()
    for tag in tags:
        properties.append(OxmlElement(tag))


def _describe(table: Table, title: str, width: float) -> None:
    """The table's whole width, and its name for a screen reader."""
    properties = table._tbl.tblPr
    whole = properties.find(qn("w:tblW"))
    whole.set(qn("w:type"), "dxa")
    whole.set(qn("w:w"), str(Mm(width).twips))
    caption = OxmlElement("w:tblCaption")
    caption.set(qn("w:val"), title)
    properties.append(caption)
