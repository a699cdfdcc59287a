"""A commented record to start from, and copies of the demonstration records."""

from __future__ import annotations

import os
import textwrap
from contextlib import suppress
from pathlib import Path

from harvest.errors import SettingsError
from harvest.record.fields import SECTIONS, field_at, fields_of
from harvest.record.reporting import listed, nearest
from harvest.record.schema import HISTORY_FILE, NOTE, RECORD_FILE, REMOVALS, YEAR, Field, Section
from harvest.record.write import render_pair
from harvest.writing import write_new, write_whole

_WIDTH = 100
_HEAD = """\
# A new record. ALL NUMBERS AND NAMES BELOW ARE INVENTED EXAMPLES: replace every one of them.
#
# A line that begins with "# " explains the line below it. A line that begins with "#" and no space is a
# key that may be left out: take the # away to use it.
# Write 12.5 with a point, 1200 without a thousands mark, and proportions as 0.15, not 15 percent.
# Abundances and removals are in the record's unit. A rate is a number, or a range of values:
#   { distribution = "90% between", low = 0.2, high = 0.4 }          nine chances in ten to lie between
#   { distribution = "uniform", low = 0.2, high = 0.4 }              anywhere between, equally likely
#   { distribution = "triangular", low = 0.2, mode = 0.3, high = 0.4 }
#   { distribution = "normal", mean = 0.3, sd = 0.05 }
#   { distribution = "lognormal", median = 0.3, sd_log = 0.2 }       sd_log: of the natural logarithm
#   { distribution = "beta", a = 4, b = 8 }                          between 0 and 1"""
_EXAMPLE_YEARS = (
    (2020, 80, 690, 0.15, ""),
    (2021, 85, None, None, "no flight: fog"),
    (2022, 90, 720, 0.14, ""),
    (2023, 90, 700, 0.16, ""),
    (2024, None, 735, 0.15, ""),
)


def blank_record_files() -> tuple[str, str]:
    """The text of a commented ``record.toml`` and of a history, with invented numbers that pass every check."""
    parts = [_HEAD, *(_render_section(section) for section in SECTIONS)]
    return "\n\n".join(parts) + "\n", _render_history()


def _comment(text: str) -> str:
    return textwrap.fill(text, _WIDTH, initial_indent="# ", subsequent_indent="# ", break_long_words=False)


def _render_section(section: Section) -> str:
    lines = [_comment(f"---- {section.help}")]
    live = section.shown or not section.name
    if section.name:
        lines.append(section.header if live else f"#{section.header}")
    for field in fields_of(section.name):
        lines.append(_comment(_explain(field)))
        pair = render_pair(field.key, field.example)
        lines.append(pair if live and (field.required or field.shown) else f"#{pair}")
    return "\n".join(lines)


def _explain(field: Field) -> str:
    facts = [field.unit, field.brief(), "" if field.required else "optional"]
    known = "; ".join(fact for fact in facts if fact)
    return f"{field.help} ({known})" if known else field.help


def _render_history() -> str:
    count, cv = field_at("survey.column").example, field_at("survey.cv_column").example
    rows = [(YEAR, REMOVALS, count, cv, NOTE), *_EXAMPLE_YEARS]
    return "".join(",".join("" if cell is None else str(cell) for cell in row) + "\n" for row in rows)


def make_record(folder: str | os.PathLike[str], demo: str | None = None) -> Path:
    """Make a new record folder, from the template or as a copy of a demonstration record.

    Parameters
    ----------
    folder : path
        Must not exist yet, or be empty.
    demo : str or None
        One of :func:`demo_names`; None for the template.

    Returns
    -------
    Path
        The folder.

    Raises
    ------
    SettingsError
        When the folder holds something already or cannot be written, or there is no such demonstration.
    """
    source = None if demo is None else demo_folder(demo)
    place = Path(folder)
    try:
        if os.path.lexists(place) and not (place.is_dir() and not any(place.iterdir())):
            raise SettingsError(
                f"{str(place)!r} is there already and not empty; nothing was changed. Give a new folder's name."
            )
        files = _blank_files() if source is None else _files_of(source)
        place.mkdir(parents=True, exist_ok=True)
        _fill(place, files)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise SettingsError(
            f"a record cannot be made in {str(place)!r}: {reason}. Check the name and the right to write there."
        ) from error
    return place


def _blank_files() -> dict[str, bytes]:
    record_text, history_text = blank_record_files()
    return {HISTORY_FILE: history_text.encode(), RECORD_FILE: record_text.encode()}


def _files_of(source: Path) -> dict[str, bytes]:
    """The content of a folder's files, but for hidden ones, by name."""
    found = (path for path in sorted(source.iterdir()) if path.is_file() and not path.name.startswith("."))
    return {path.name: path.read_bytes() for path in found}


def _fill(place: Path, files: dict[str, bytes]) -> None:
    """Write files into an empty folder, ``record.toml`` last and in one step: there is a whole record or none."""
    written: list[Path] = []
    try:
        for name in (name for name in files if name != RECORD_FILE):
            write_new(place / name, files[name])
            written.append(place / name)
        write_whole(place / RECORD_FILE, files[RECORD_FILE])
    except BaseException:
        if not os.path.lexists(place / RECORD_FILE):  # else the record is whole already
            for path in written:
                with suppress(OSError):
                    path.unlink(missing_ok=True)
        raise


def demo_names() -> tuple[str, ...]:
    """The demonstration records that come with the program, in alphabetical order."""
    home = _demo_home()
    if home is None:
        return ()
    return tuple(sorted(path.name for path in home.iterdir() if (path / RECORD_FILE).is_file()))


def demo_folder(name: str) -> Path:
    """The folder of a demonstration record; not to be written to.

    Raises
    ------
    SettingsError
        When there is no such demonstration.
    """
    home, names = _demo_home(), demo_names()
    if home is None or name not in names:
        guess = nearest(name, names)
        hint = f" Was {guess!r} meant?" if guess else ""
        raise SettingsError(f"there is no demonstration {name!r}; there are: {listed(names) or 'none'}.{hint}")
    return home / name


def _demo_home() -> Path | None:
    """Beside the modules in an installed copy, else at the top of the source tree."""
    package = Path(__file__).resolve().parents[1]
    return next((p for p in (package / "data_demo", package.parent / "data_demo") if p.is_dir()), None)
