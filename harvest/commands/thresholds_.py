"""``harvest thresholds``: what collapses the population under a constant quota."""

from __future__ import annotations

from pathlib import Path

import click

from harvest.commands.options import as_json, check_targets, drawn, load_with_rates, save, tell


@click.command("thresholds")
@drawn
@click.option("--quota", type=float, help="Legal quota to examine; default the present one.")
def command(folder: Path, seed: int, draws: int, json_file: Path | None, quota: float | None) -> None:
    """What collapses the population of FOLDER: the fold, both equilibria, margins and times."""
    check_targets(json_file)
    record, rates = load_with_rates(folder, seed, draws)
    from harvest.commands import show
    from harvest.plan import words
    from harvest.plan.json_files import thresholds_json
    from harvest.plan.spreads import HEADINGS
    from harvest.plan.threshold_words import beyond, branch_rows, levels, threshold_rows
    from harvest.yields import find_thresholds

    found = find_thresholds(record, rates, quota)
    written = save(as_json(json_file, thresholds_json(record, rates, found)))
    asked = words.number(found.quota, record.unit)
    show.title(f"{record.name}: thresholds under a legal quota of {asked} a year ({len(rates):,} draws, seed {seed})")
    show.grid(HEADINGS, threshold_rows(record, found))
    click.echo(levels(record))
    click.echo()
    for sentence in beyond(found):
        show.paragraph(sentence)
    show.title("Equilibria against legal quota (medians over the draws that have them)")
    show.grid(("Legal quota", "draws with equilibria", "lower", "upper"), branch_rows(found, record.unit), left=())
    show.caution()
    tell(written)
