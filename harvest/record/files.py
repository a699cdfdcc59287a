"""Reading the two files of a record: never out of the folder, never more than the size limit, UTF-8 only."""

from __future__ import annotations

import stat
from pathlib import Path

from harvest.record.reporting import Report, show

_SAVE_AS_UTF8 = (
    'Save the file as UTF-8: in a spreadsheet choose "Save as" and the type "CSV UTF-8" '
    '(or the character set "Unicode (UTF-8)"); in a text editor choose the encoding UTF-8.'
)


def read_text(folder: Path, name: str, limit: int, report: Report) -> str | None:
    """The text of one file of a record, with line ends made "\\n" and a byte-order mark taken off.

    Parameters
    ----------
    folder : Path
        The record folder (may itself be a symbolic link).
    name : str
        Plain file name.
    limit : int
        Size limit, bytes.
    report : Report
        Takes every fault.

    Returns
    -------
    str or None
        None where nothing could be read. A text in another encoding is an error, and is still returned as
        far as it can be guessed, so that the other faults can be told as well.
    """
    data = _read_bytes(folder, name, limit, report)
    if data is None:
        return None
    text = _decode(data, report)
    if text is None:
        return None
    text = text.removeprefix("\ufeff").replace("\r\n", "\n").replace("\r", "\n")
    if not text.strip():
        report.error("", "an empty file", "the file must hold the record", "Write the file, or start anew.")
        return None
    if "\0" in text:
        report.error("", "NUL characters", "the file must be plain text", _SAVE_AS_UTF8)
        return None
    return text


def _read_bytes(folder: Path, name: str, limit: int, report: Report) -> bytes | None:
    must = "the file must be readable"
    try:
        path = _find_file(folder, name, limit, report)
        if path is None:
            return None
        with path.open("rb") as stream:
            data = stream.read(limit + 1)
    except FileNotFoundError:
        report.error("", "no such file", f"the folder must hold {name}", "Check the file's name, or start anew.")
        return None
    except PermissionError:
        report.error("", "a file that may not be read", must, "Ask for the right to read it.")
        return None
    except (OSError, ValueError, RuntimeError) as error:  # too long a name, links in a ring, a NUL in a name, ...
        report.error("", f"a file that cannot be read ({show(str(error))})", must, "Check its name.")
        return None
    if len(data) > limit:
        _too_large(len(data), limit, report)
        return None
    return data


def _find_file(folder: Path, name: str, limit: int, report: Report) -> Path | None:
    """The file's true path, once it is seen to be a file of the folder within the size limit."""
    home = folder.resolve()
    path = (home / name).resolve()
    if not home.is_dir():
        what = "something that is not a folder" if home.exists() else "no such folder"
        rule = "a record is a folder with record.toml and a history"
        workbook = home.suffix.lower() == ".xlsx" and home.exists()
        cure = f"Convert it first: harvest convert {folder.name} FOLDER" if workbook else "Check the folder's name."
        report.error("", what, rule, cure)
        return None
    if home not in path.parents:
        report.error(
            "",
            "a link that leads out of the record's folder",
            "all files of a record lie in its own folder",
            "Put a copy of the file into the folder, in place of the link.",
        )
        return None
    status = path.stat()
    if not stat.S_ISREG(status.st_mode):
        report.error("", "a folder or device", "this must be a file", f"Put a file called {name} in its place.")
        return None
    if status.st_size > limit:
        _too_large(status.st_size, limit, report)
        return None
    return path


def _too_large(size: int, limit: int, report: Report) -> None:
    report.error(
        "",
        f"{size:,} bytes",
        f"at most {limit:,} bytes",
        "Check that this is the right file, and take out what does not belong to it.",
    )


def _decode(data: bytes, report: Report) -> str | None:
    """Decode UTF-8, or note the fault and decode what it most likely is."""
    pairs = data[:400]
    nuls = pairs.count(0)
    if data[:2] in (b"\xff\xfe", b"\xfe\xff") or nuls > len(pairs) // 4:
        report.error("", "text that looks like UTF-16", "the file must be UTF-8 text", _SAVE_AS_UTF8)
        order = "utf-16-be" if data[:2] == b"\xfe\xff" or (pairs[:1] == b"\0") else "utf-16-le"
        text = data.decode(order, errors="replace")
        return None if "\0" in text else text
    try:
        return data.decode("utf-8")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        report.error(
            f"line {line}",
            f"the byte {data[error.start]:#04x}, not UTF-8 (probably Latin-1 or Windows-1252)",
            "the file must be UTF-8 text",
            _SAVE_AS_UTF8,
        )
        return data.decode("latin-1")
