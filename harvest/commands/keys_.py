"""``harvest keys``: what every key of the JSON files means."""

from __future__ import annotations

import textwrap
from pathlib import Path

import click

from harvest.commands.options import JSON, NOTED_SEED, as_json, save, tell


@click.command("keys")
@NOTED_SEED
@JSON
def command(seed: int, json_file: Path | None) -> None:
    """Explain every key of the JSON files that the other commands write with --json."""
    from harvest.commands.json_keys import KEYS

    for key, meaning in KEYS.items():
        click.echo(f"{key}")
        click.echo(textwrap.indent(textwrap.fill(meaning, 96), "    "))
    tell(save(as_json(json_file, dict(KEYS))))
