"""Judging a workbook's zip archive before anything in it is parsed."""

from __future__ import annotations

import io
import re
import zipfile

from harvest.record.reporting import show
from harvest.sheets.grid import SheetError
from harvest.sheets.limits import MAX_UNPACKED, in_megabytes

_MAX_PARTS = 2_000
#: A part larger than this may be packed by at most this factor.
_LARGE_PART, _MAX_FACTOR = 10_000_000, 200
_CHUNK = 1_000_000
#: A drawing names its kind in a DOCTYPE, which does no harm by itself.
_DRAWING = re.compile(r"xl/media/[^/]+\.svg", re.IGNORECASE)
_ENCODING = re.compile(rb"""<\?xml[^>]{0,200}?encoding\s*=\s*["']([^"']{0,60})["']""")
_KNOWN_ENCODINGS = (b"utf-8", b"utf-16", b"utf8", b"utf16", b"us-ascii", b"ascii", b"iso-8859-1")
_DECLARATIONS = (b"<!DOCTYPE", b"<!ENTITY")
_SAVE_AGAIN = "Open it in the spreadsheet program, save it again as .xlsx, and choose that file."
_AS_XLSX = 'Open it in the program that made it, choose "Save as" and the type "Excel workbook (.xlsx)" or CSV.'


def check_archive(name: str, data: bytes) -> None:
    """Find out that a zip archive is a workbook without macros, and can be unpacked and parsed without harm.

    The sizes are judged by the list of contents, and again while every part is unpacked once.

    Raises
    ------
    SheetError
        When it is another kind of file, encrypted, damaged, or made to harm.
    """
    try:
        with zipfile.ZipFile(io.BytesIO(data)) as archive:
            parts = archive.infolist()
            _check_list(name, parts)
            _check_kind(name, [part.filename for part in parts], archive)
            unpacked = 0
            for part in parts:
                unpacked = _check_part(name, archive, part, unpacked)
    except SheetError:
        raise
    except Exception as error:  # damaged on purpose or not: the zip library raises nearly everything
        raise SheetError(f"{show(name)} is damaged: it cannot be unpacked. {_SAVE_AGAIN}") from error


def _check_list(name: str, parts: list[zipfile.ZipInfo]) -> None:
    title = show(name)
    if any(part.flag_bits & 1 for part in parts):
        raise SheetError(f"{title} is protected by a password. Take the password off, save it, and choose it again.")
    if len(parts) > _MAX_PARTS:
        raise SheetError(f"{title} has {len(parts):,} parts; a workbook has at most {_MAX_PARTS:,}. {_SAVE_AGAIN}")
    if sum(part.file_size for part in parts) > MAX_UNPACKED:
        _refuse_bomb(name)
    for part in parts:
        if part.file_size > _LARGE_PART and part.file_size > _MAX_FACTOR * part.compress_size:
            _refuse_bomb(name)
    if len({part.filename for part in parts}) < len(parts):
        raise SheetError(f"{title} is damaged: two of its parts have the same name. {_SAVE_AGAIN}")


def _refuse_bomb(name: str) -> None:
    raise SheetError(
        f"{show(name)} grows to an unusual size when it is unpacked; at most {in_megabytes(MAX_UNPACKED)} are "
        "unpacked. Copy the rows and columns of the yearly history into a new file, and choose that one."
    )


def _check_kind(name: str, parts: list[str], archive: zipfile.ZipFile) -> None:
    """Refuse archives that are no workbook, and workbooks with macros or with links to other files."""
    title, lower = show(name), [part.lower() for part in parts]
    if "mimetype" in lower:
        kind = (
            "a spreadsheet of the kind .ods" if b"spreadsheet" in archive.open("mimetype").read(200) else "a document"
        )
        raise SheetError(f"{title} is {kind}, which is not read. {_AS_XLSX}")
    if "xl/workbook.bin" in lower:
        raise SheetError(f"{title} is a binary workbook (.xlsb), which is not read. {_AS_XLSX}")
    if "word/document.xml" in lower or "ppt/presentation.xml" in lower:
        raise SheetError(f"{title} is a text document or a presentation, not a spreadsheet. {_AS_XLSX}")
    if "[content_types].xml" not in lower or not any(part.startswith("xl/") for part in lower):
        raise SheetError(f"{title} is a zip archive, not a workbook. Unpack it, and choose the spreadsheet in it.")
    if any(part.endswith("vbaproject.bin") or part.startswith("xl/macrosheets/") for part in lower):
        raise SheetError(f"{title} holds macros (small programs), which are not read. {_AS_XLSX}")
    if any(part.startswith("xl/externallinks/") for part in lower):
        raise SheetError(
            f"{title} holds links to other files, whose values cannot be checked. In the spreadsheet program choose "
            '"Edit links" and break them (this keeps the values), save it, and choose it again.'
        )


def _check_part(name: str, archive: zipfile.ZipFile, part: zipfile.ZipInfo, unpacked: int) -> int:
    """Unpack one part, piece by piece, and throw it away; the bytes unpacked so far."""
    declarations = _DECLARATIONS[1:] if _DRAWING.fullmatch(part.filename) else _DECLARATIONS
    tail, first = b"", True
    with archive.open(part) as stream:
        while chunk := stream.read(_CHUNK):
            unpacked += len(chunk)
            if unpacked > MAX_UNPACKED:
                _refuse_bomb(name)
            text = tail + chunk.replace(b"\0", b"")  # whether UTF-8 or UTF-16
            if first:
                _check_encoding(name, text)
            if any(declaration in text for declaration in declarations):
                raise SheetError(
                    f"{show(name)} holds definitions (DTD) that no spreadsheet program writes, and that can be made "
                    f"to harm. {_SAVE_AGAIN}"
                )
            tail, first = text[-20:], False
    return unpacked


def _check_encoding(name: str, text: bytes) -> None:
    stated = _ENCODING.search(text[:400])
    if stated and stated[1].lower() not in _KNOWN_ENCODINGS:
        raise SheetError(f"{show(name)} uses a character set that no spreadsheet program writes. {_SAVE_AGAIN}")
