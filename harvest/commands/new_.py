"""``harvest new``: make a record from a template or a demo, as a folder or as an Excel workbook."""

from __future__ import annotations

from pathlib import Path

import click

from harvest.commands.options import JSON, NOTED_SEED, as_json, save, tell


@click.command("new")
@click.argument("folder", metavar="FOLDER|NAME.xlsx", type=click.Path(path_type=Path))
@click.option("--demo", help="Copy a demo record: deer, lake or geese; without it, a commented template.")
@NOTED_SEED
@JSON
def command(folder: Path, demo: str | None, seed: int, json_file: Path | None) -> None:
    """Make a new record: a FOLDER with record.toml, which explains itself, and history.csv; or a workbook NAME.xlsx."""
    from harvest import __version__
    from harvest.errors import CAUTION

    files = _make_workbook(folder, demo) if folder.suffix.lower() == ".xlsx" else _make_folder(folder, demo)
    content = {
        "kind": "new",
        "version": __version__,
        "seed": seed,
        "caution": CAUTION,
        "demo": demo,
        "files": files,
    }
    tell(save(as_json(json_file, content)))


def _make_folder(folder: Path, demo: str | None) -> list[str]:
    from harvest.record import make_record

    make_record(folder, demo)
    click.echo(f"Made {folder / 'record.toml'} and {folder / 'history.csv'}: edit them, then: harvest check {folder}")
    return ["record.toml", "history.csv"]


def _make_workbook(path: Path, demo: str | None) -> list[str]:
    from harvest.sheets.record_workbook_files import make_record_workbook

    make_record_workbook(path, demo)
    click.echo(f"Made {path}: fill it in, then: harvest convert {path} FOLDER")
    return [path.name]
