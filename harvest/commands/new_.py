"""``harvest new``: make a record from a template or a demo."""

from __future__ import annotations

from pathlib import Path

import click

from harvest.commands.options import FOLDER


@click.command("new")
@FOLDER
@click.option("--demo", help="Copy a demo record: deer, lake or geese; without it, a commented template.")
def command(folder: Path, demo: str | None) -> None:
    """Make a new record in FOLDER: record.toml, which explains itself, and history.csv."""
    from harvest.record import make_record

    make_record(folder, demo)
    click.echo(f"Made {folder / 'record.toml'} and {folder / 'history.csv'}: edit them, then: harvest check {folder}")
