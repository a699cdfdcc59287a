"""How the record's workbook looks: colours, cells that are filled in, page set-up."""

from __future__ import annotations

import re
from typing import Any

from openpyxl.cell import Cell
from openpyxl.styles import Alignment, Border, Font, PatternFill, Side
from openpyxl.utils import get_column_letter
from openpyxl.worksheet.datavalidation import DataValidation
from openpyxl.worksheet.worksheet import Worksheet

from harvest.errors import CAUTION
from harvest.record.history import RISKY

INK, MUTED, RULE, ABUNDANCE, RISK = "22292D", "5C656A", "D9D4C7", "1B6B72", "7A2E5D"
_PAPER, _BAND, _WHITE = "F6F3EC", "DCE9E8", "FFFFFF"
_LINE = Side(style="thin", color=RULE)
_BOX = Side(style="thin", color="9AA5A8")
#: A text that would read as a character's code has its first mark written so; see ``excel_opening``.
_CODED = re.compile(r"_(?=x[0-9A-Fa-f]{4}_)")
_LONGEST_LIST = 255
_FONT = "Calibri"


def put(cell: Cell, value: Any) -> None:
    """Write a value exactly: a text as text whatever it begins with, a number with all its digits."""
    if isinstance(value, str):
        cell.value = _CODED.sub("_x005F_", value)
        cell.data_type = "s"
        cell.quotePrefix = value.startswith(tuple(RISKY))
    elif isinstance(value, float):
        cell.value = repr(value)  # openpyxl would write 16 digits of a float
        cell.data_type = "n"
    else:
        cell.value = value


def write_text(
    cell: Cell, text: str, *, bold: bool = False, color: str = INK, size: int = 10, wrap: bool = True, indent: int = 0
) -> None:
    """A text of the form itself; one that is not wrapped runs on over the empty cells beside it."""
    put(cell, text)
    cell.font = Font(name=_FONT, bold=bold, color=color, size=size)
    cell.alignment = Alignment(vertical="top" if wrap else "center", horizontal="left", wrap_text=wrap, indent=indent)


def write_heading(sheet: Worksheet, row: int, headings: tuple[str, ...]) -> None:
    """The row of column headings, under which the sheet is frozen."""
    for column, text in enumerate(headings, start=1):
        cell = sheet.cell(row, column)
        write_text(cell, text, bold=True, color=_WHITE)
        cell.fill = PatternFill("solid", fgColor=ABUNDANCE)
        cell.alignment = Alignment(vertical="center", wrap_text=True)
    sheet.row_dimensions[row].height = 30
    sheet.freeze_panes = sheet.cell(row + 1, 2)
    sheet.print_title_rows = f"{row}:{row}"


def write_band(sheet: Worksheet, row: int, title: str, about: str, columns: int) -> None:
    """The heading of a block of rows."""
    for column in range(1, columns + 1):
        sheet.cell(row, column).fill = PatternFill("solid", fgColor=_BAND)
    write_text(sheet.cell(row, 1), title, bold=True, color=ABUNDANCE, size=11, wrap=False)
    write_text(sheet.cell(row, 2), about, color=MUTED, wrap=False)
    sheet.merge_cells(start_row=row, start_column=2, end_row=row, end_column=columns)
    sheet.row_dimensions[row].height = 20


def as_input(cell: Cell, *, text: bool, invented: bool) -> None:
    """A white cell that is filled in."""
    cell.fill = PatternFill("solid", fgColor=_WHITE)
    cell.border = Border(left=_BOX, right=_BOX, top=_BOX, bottom=_BOX)
    cell.font = Font(name=_FONT, color=RISK if invented else INK, italic=invented, size=10)
    cell.alignment = Alignment(vertical="top", wrap_text=text, horizontal="left" if text else "right", indent=int(text))
    if text:
        cell.number_format = "@"


def as_paper(cell: Cell) -> None:
    """A cell that is not filled in."""
    cell.fill = PatternFill("solid", fgColor=_PAPER)
    cell.border = Border(bottom=_LINE)


def offer(sheet: Worksheet, cell: Cell, choices: tuple[str, ...], hint: str = "") -> None:
    """A drop-down of choices, with a hint where the cell is chosen."""
    listed = ",".join(choices)
    if len(listed) > _LONGEST_LIST or any("," in choice for choice in choices):
        return
    rule = DataValidation(type="list", formula1=f'"{listed}"', allow_blank=True, showErrorMessage=True)
    rule.errorTitle, rule.error = "Not one of the choices", "Choose one of the list, or leave the cell empty."
    if hint:
        rule.promptTitle, rule.prompt, rule.showInputMessage = "How it is stated", hint, True
    rule.add(cell)
    sheet.add_data_validation(rule)


def set_widths(sheet: Worksheet, widths: tuple[float, ...]) -> None:
    """Column widths in characters, from the first."""
    for column, width in enumerate(widths, start=1):
        sheet.column_dimensions[get_column_letter(column)].width = width


def set_page(sheet: Worksheet) -> None:
    """Print across one landscape page, with the caution and the page number below."""
    sheet.sheet_view.showGridLines = False
    sheet.page_setup.orientation = "landscape"
    sheet.page_setup.paperSize = sheet.PAPERSIZE_A4
    sheet.page_setup.fitToWidth, sheet.page_setup.fitToHeight = 1, 0
    sheet.sheet_properties.pageSetUpPr.fitToPage = True
    sheet.page_margins.left = sheet.page_margins.right = 0.4
    sheet.page_margins.top, sheet.page_margins.bottom = 0.5, 0.7
    sheet.oddFooter.left.text = CAUTION.replace("&", "&&")
    sheet.oddFooter.left.size = 8
    sheet.oddFooter.right.text = "&A, page &P of &N"
    sheet.oddFooter.right.size = 8


def height_of(text: str, width: float) -> float:
    """Points that a text wrapped to so many characters takes."""
    lines = sum(max(1, -(-len(line) // max(1, int(width)))) for line in text.split("\n"))
    return min(400.0, 13.5 * lines + 2)
