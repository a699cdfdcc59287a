"""Opening a spreadsheet that somebody hands in: what it is follows from its content, not from its name alone."""

from __future__ import annotations

from harvest.record.reporting import show
from harvest.sheets.grid import Book, SheetError
from harvest.sheets.limits import MAX_BYTES, in_megabytes

_ZIP = (b"PK\x03\x04", b"PK\x05\x06", b"PK\x07\x08")
_OLD_BINARY = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"
_OLD_STREAMS = {name.encode("utf-16-le") for name in ("Workbook", "Book")}
_SAVE_AS = 'Open it in the spreadsheet program, choose "Save as" and the type "Excel workbook (.xlsx)" or CSV.'
_MACRO_SUFFIXES = (".xlsm", ".xltm", ".xlam")
#: How the content of files begins that are no spreadsheets, or not of a kind that is read here.
_OTHERS = (
    (b"%PDF", "a PDF document"),
    (b"{\\rtf", "a text document (.rtf)"),
    (b"\x89PNG", "a picture"),
    (b"\xff\xd8\xff", "a picture"),
    (b"GIF8", "a picture"),
    (b"\x1f\x8b", "a compressed file (.gz)"),
    (b"7z\xbc\xaf", "a compressed file (.7z)"),
    (b"Rar!", "a compressed file (.rar)"),
)
_MARKUP = (
    (b"<!doctype", "a web page, whatever its name says"),
    (b"<html", "a web page, whatever its name says"),
    (b"<table", "a web page, whatever its name says"),
    (b"<?xml", "an XML file"),
)


def open_book(name: str, data: bytes) -> Book:
    """The sheets of an Excel workbook (.xlsx) or of a text table (.csv, .tsv, .txt).

    Parameters
    ----------
    name : str
        The file's name, for messages; a path is cut down to its last part.
    data : bytes
        The file's content.

    Returns
    -------
    Book
        With notes on all that was guessed. Formulas are never computed, links never followed.

    Raises
    ------
    SheetError
        When it is of another kind, encrypted, damaged, too large, or made to harm; the message tells the cure.
    """
    short = name.replace("\\", "/").rsplit("/", 1)[-1]
    title = show(short)
    if not data:
        raise SheetError(f"{title} is an empty file. Save the spreadsheet again, and choose that file.")
    if len(data) > MAX_BYTES:
        raise SheetError(
            f"{title} has {in_megabytes(len(data))}; at most {in_megabytes(MAX_BYTES)} are read. "
            "Save the sheet with the history in a file of its own, without pictures."
        )
    if short.lower().endswith(_MACRO_SUFFIXES):
        raise SheetError(f"{title} is a workbook for macros, which are not read. {_SAVE_AS}")
    if data.startswith(_ZIP):
        from harvest.sheets.excel_opening import open_excel

        return open_excel(short, data)
    _refuse_others(title, data)
    from harvest.sheets.csv_opening import open_csv

    return open_csv(short, data)


def _refuse_others(title: str, data: bytes) -> None:
    """Name a file of another kind for what it is."""
    if data.startswith(_OLD_BINARY):
        if "EncryptedPackage".encode("utf-16-le") in data:
            raise SheetError(
                f"{title} is protected by a password. Take the password off, save it, and choose it again."
            )
        old = any(name in data for name in _OLD_STREAMS)
        kind = "a workbook of the old kind (.xls)" if old else "an old office document"
        raise SheetError(f"{title} is {kind}, which is not read. {_SAVE_AS}")
    head = data[:1000].removeprefix(b"\xef\xbb\xbf").lstrip().lower()
    for start, kind in (*_OTHERS, *_MARKUP):
        if data.startswith(start) or head.startswith(start):
            raise SheetError(f"{title} is {kind}, not a spreadsheet of a kind that is read. {_SAVE_AS}")
