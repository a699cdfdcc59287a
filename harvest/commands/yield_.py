"""``harvest yield``: what the population can sustain, and where it stands."""

from __future__ import annotations

from pathlib import Path

import click

from harvest.commands.options import as_json, check_targets, drawn, load_with_rates, save, tell


@click.command("yield")
@drawn
def command(folder: Path, seed: int, draws: int, json_file: Path | None) -> None:
    """What the population of FOLDER can sustain: over draws, the median with 50% and 90% intervals."""
    check_targets(json_file)
    record, rates = load_with_rates(folder, seed, draws)
    from harvest.commands import show
    from harvest.plan import words
    from harvest.plan.json_files import yield_json
    from harvest.plan.spreads import HEADINGS
    from harvest.plan.yield_words import REMOVALS_ARE, standing, yield_rows
    from harvest.yields import summarise_yield

    summary = summarise_yield(record, rates)
    written = save(as_json(json_file, yield_json(record, rates, summary)))
    show.title(f"{record.name}: what it can sustain (rates {rates.origin}, {len(rates):,} draws, seed {seed})")
    show.grid(HEADINGS, yield_rows(record, rates, summary))
    click.echo(f"In {words.kind(record)}; {REMOVALS_ARE}.")
    show.title("Where it stands")
    for sentence in standing(record, summary):
        show.paragraph(sentence)
    show.title("Yield curve: total removals a year that hold an abundance")
    show.grid(
        ("Abundance", "median", "90% from", "to"),
        [
            [words.number(float(r[c]), record.unit) for c in ("abundance", "median", "low90", "high90")]
            for _, r in summary.curve.iloc[::4].iterrows()
        ],
        left=(),
    )
    show.caution()
    tell(written)
