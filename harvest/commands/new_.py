"""``harvest new``: make a record from a template or a demo."""

from __future__ import annotations

from pathlib import Path

import click

from harvest.commands.options import FOLDER, JSON, NOTED_SEED, as_json, save, tell


@click.command("new")
@FOLDER
@click.option("--demo", help="Copy a demo record: deer, lake or geese; without it, a commented template.")
@NOTED_SEED
@JSON
def command(folder: Path, demo: str | None, seed: int, json_file: Path | None) -> None:
    """Make a new record in FOLDER: record.toml, which explains itself, and history.csv."""
    from harvest import __version__
    from harvest.errors import CAUTION
    from harvest.record import make_record

    make_record(folder, demo)
    click.echo(f"Made {folder / 'record.toml'} and {folder / 'history.csv'}: edit them, then: harvest check {folder}")
    content = {
        "kind": "new",
        "version": __version__,
        "seed": seed,
        "caution": CAUTION,
        "demo": demo,
        "files": ["record.toml", "history.csv"],
    }
    tell(save(as_json(json_file, content)))
