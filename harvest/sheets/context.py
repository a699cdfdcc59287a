"""What every step of taking over a sheet needs: the sheet, the questions, the problems."""

from __future__ import annotations

from dataclasses import dataclass

from harvest.record.reporting import Report
from harvest.sheets.questions import Asking
from harvest.sheets.view import View


@dataclass(frozen=True)
class Context:
    """The sheet that is read, with the questions and problems that have come up."""

    view: View
    asking: Asking
    report: Report

    def refuse(self, row: int, column: int, found: str, rule: str, cure: str = "") -> None:
        """Report a cell that cannot be used."""
        cure = cure or "Correct the cell in the file, or leave the column out."
        self.report.error(self.view.where(row, column), found, rule, cure)

    def refuse_uncomputed(self, row: int, column: int) -> None:
        """Report a formula that has no value."""
        rule = "the value of a formula is stored when the spreadsheet program saves the file"
        cure = "Open the file in the spreadsheet program, save it there, and choose it again."
        self.refuse(row, column, "a formula without a stored value", rule, cure)
