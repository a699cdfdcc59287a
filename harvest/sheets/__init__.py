"""Spreadsheets: opening them safely, the record as a workbook, and taking over a manager's own sheet."""
