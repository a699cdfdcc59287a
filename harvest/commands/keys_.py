"""``harvest keys``: what every key of the JSON files means."""

from __future__ import annotations

import textwrap

import click


@click.command("keys")
def command() -> None:
    """Explain every key of the JSON files that the other commands write with --json."""
    from harvest.plan.json_keys import KEYS

    for key, meaning in KEYS.items():
        click.echo(f"{key}")
        click.echo(textwrap.indent(textwrap.fill(meaning, 96), "    "))
