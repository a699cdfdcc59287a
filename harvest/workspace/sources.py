"""Where a draft comes from: a demo, the template, a record's folder, its workbook or its two files."""

from __future__ import annotations

import io
import zipfile
import zlib
from pathlib import Path

from harvest.errors import Problem, RecordError, SettingsError
from harvest.record.files import read_text
from harvest.record.reporting import Report
from harvest.record.schema import MAX_HISTORY_BYTES, MAX_RECORD_BYTES, RECORD_FILE
from harvest.record.template import demo_folder
from harvest.sheets.record_workbook import check_record_workbook, is_record_workbook
from harvest.sheets.record_workbook_files import read_workbook_file
from harvest.workspace.draft import Draft
from harvest.workspace.store import Workspace

#: What reading a .zip file raises where it is broken, encrypted, of an unknown kind or no text.
_UNREADABLE = (zipfile.BadZipFile, zlib.error, NotImplementedError, RuntimeError, EOFError, OSError, ValueError)
#: What an empty record begins with: the rest is asked for where it is missing.
_FIRST = 'format = 1\nname = "New population"\n'


def draft_of_folder(folder: Path) -> Draft:
    """The draft in a record's folder, faults and all.

    Raises
    ------
    RecordError
        Where its files cannot be read at all.
    """
    report = Report(RECORD_FILE)
    record = read_text(folder, RECORD_FILE, MAX_RECORD_BYTES, report)
    if record is None:
        raise RecordError(report.problems)
    name = Draft(record, "").history_name
    history = Report(name)
    text = read_text(folder, name, MAX_HISTORY_BYTES, history)
    if text is None:
        raise RecordError(history.problems)
    return Draft(record, text)


def draft_of_demo(name: str) -> Draft:
    """A demonstration record."""
    return draft_of_folder(demo_folder(name))


def empty_draft() -> Draft:
    """A record of which nothing is known yet: the check tells what it needs."""
    return Draft(_FIRST, "year,removals\n")


def draft_of_history(name: str, history_text: str, surveys: list[dict[str, str]]) -> Draft:
    """A draft that has a history and its surveys, and lacks the rest, whether they are indices among it.

    Parameters
    ----------
    surveys : list of dict
        Each with ``name``, ``column`` and, where there is one, ``cv_column``.
    """
    draft = Draft(_FIRST, history_text).with_value("", None, "name", name)
    for number, survey in enumerate(surveys):
        for key, value in survey.items():
            draft = draft.with_value("survey", number, key, value)
    return draft


def surveys_leaving(draft: Draft, surveys: list[dict[str, str]]) -> list[str]:
    """Names of the surveys that :func:`with_history` takes out, as no column is theirs any more."""
    old, new = _unmatched(draft, surveys)
    return [] if len(old) == len(new) == 1 else [str(_surveys(draft)[n].get("name", "?")) for n in old]


def with_history(draft: Draft, history_text: str, surveys: list[dict[str, str]]) -> Draft:
    """A draft with another history.

    A survey stays where its column does; where just one survey on each side has no partner, the old one takes the
    new column and keeps all else that is known of it. Others go, and new ones come (:func:`surveys_leaving`).
    """
    draft = Draft(draft.record_text, history_text)
    old, new = _unmatched(draft, surveys)
    if len(old) == len(new) == 1:
        draft = draft.with_value("survey", old[0], "column", new[0]["column"])
        old = []
    for number in reversed(old):
        draft = draft.without_table("survey", number)
    for survey in surveys:
        columns = [s.get("column") for s in _surveys(draft)]
        if survey["column"] not in columns:
            draft = draft.with_value("survey", len(columns), "name", survey["name"])
            draft = draft.with_value("survey", len(columns), "column", survey["column"])
            columns.append(survey["column"])
        draft = draft.with_value("survey", columns.index(survey["column"]), "cv_column", survey.get("cv_column"))
    return draft


def _unmatched(draft: Draft, surveys: list[dict[str, str]]) -> tuple[list[int], list[dict[str, str]]]:
    """Numbers of the draft's surveys whose column is not among the new ones, and the new ones that it lacks."""
    columns = [s.get("column") for s in _surveys(draft)]
    named = [survey["column"] for survey in surveys]
    old = [n for n, column in enumerate(columns) if column not in named]
    return old, [survey for survey in surveys if survey["column"] not in columns]


def _surveys(draft: Draft) -> list[dict[str, object]]:
    found = (draft.document or {}).get("survey", [])
    return [s for s in found if isinstance(s, dict)] if isinstance(found, list) else []


def draft_of_upload(name: str, data: bytes) -> tuple[Draft, tuple[Problem, ...]] | None:
    """The draft in a file that is a whole record, its workbook or its packed folder; None for any other file.

    With it come warnings that the draft itself does not show, such as formulas whose last values were read.

    Raises
    ------
    HarvestError
        Where it is one and cannot be read, or holds what the draft would lose, such as a formula without a value.
    """
    if is_record_workbook(data):
        return _draft_of_workbook(name, data)
    return (draft_of_zip(name, data), ()) if name.lower().endswith(".zip") else None


def _draft_of_workbook(name: str, data: bytes) -> tuple[Draft, tuple[Problem, ...]]:
    checked = check_record_workbook(name, data)
    if any(problem.severity == "error" for problem in checked.beyond):
        raise RecordError(checked.beyond)
    return Draft(checked.record_text, checked.history_text), checked.beyond


def draft_of_zip(name: str, data: bytes) -> Draft:
    """The draft in a record's folder that was packed as a .zip file.

    Raises
    ------
    SettingsError
        Where it is no such file, or unpacks to more than a record may hold.
    """
    cure = f"Pack one record's folder, with its {RECORD_FILE} and its history."
    try:
        with zipfile.ZipFile(io.BytesIO(data)) as archive:
            records = [n for n in archive.namelist() if Path(n).name == RECORD_FILE]
            if len(records) != 1:
                raise SettingsError(f"{name}: found {len(records) or 'no'} {RECORD_FILE} in the .zip file. {cure}")
            record = _unpack(archive, records[0], MAX_RECORD_BYTES)
            history = records[0].removesuffix(RECORD_FILE) + Draft(record, "").history_name
            if history not in archive.namelist():
                raise SettingsError(f"{name}: found no history beside the {RECORD_FILE} in the .zip file. {cure}")
            return Draft(record, _unpack(archive, history, MAX_HISTORY_BYTES))
    except _UNREADABLE as error:
        raise SettingsError(f"{name}: found a .zip file that cannot be read ({error}). {cure}") from error


def _unpack(archive: zipfile.ZipFile, member: str, limit: int) -> str:
    if archive.getinfo(member).compress_type not in (zipfile.ZIP_STORED, zipfile.ZIP_DEFLATED):
        raise zipfile.BadZipFile("it is packed in an unusual way")
    with archive.open(member) as stream:
        data = stream.read(limit + 1)
    if len(data) > limit:
        raise SettingsError(f"{member!r} unpacks to more than {limit:,} bytes: check that this is the right file")
    return data.decode("utf-8").removeprefix("\ufeff").replace("\r\n", "\n")


def as_zip(draft: Draft) -> bytes:
    """The draft as a packed record folder."""
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr(RECORD_FILE, draft.record_text)
        archive.writestr(draft.history_name, draft.history_text)
    return stream.getvalue()


def open_folder(workspace: Workspace, folder: Path) -> str:
    """A copy of a record's folder in the workspace: the one made before, where the folder has not changed since."""
    draft, source = draft_of_folder(folder), str(folder.resolve())
    found = workspace.find(source, draft)
    return found or workspace.add(draft, f"a copy of the folder {folder.name}", source)


def open_path(workspace: Workspace, path: Path) -> str:
    """A copy of a record given as a folder or as a workbook; see :func:`open_folder`.

    Raises
    ------
    HarvestError
        Where it cannot be read.
    """
    if path.suffix.lower() != ".xlsx":
        return open_folder(workspace, path)
    data = read_workbook_file(path)
    draft, source = _draft_of_workbook(path.name, data)[0], str(path.resolve())
    found = workspace.find(source, draft)
    return found or workspace.add(draft, f"a copy of the workbook {path.name}", source)


def open_demo(workspace: Workspace, name: str) -> str:
    """A copy of a demonstration record in the workspace; the one that is there already, if it is unchanged."""
    draft, source = draft_of_demo(name), f"demo:{name}"
    found = workspace.find(source, draft)
    if found is not None and workspace.load(found) == draft:
        return found
    return workspace.add(draft, f"the demo {name} (invented)", source)
