"""``harvest thresholds``: what collapses the population under a constant quota."""

from __future__ import annotations

from pathlib import Path

import click

from harvest.commands.options import drawn, load_with_rates, write_json


@click.command("thresholds")
@drawn
@click.option("--quota", type=float, help="Legal quota a year to examine; default the present quota.")
def command(folder: Path, seed: int, draws: int, json_file: Path | None, quota: float | None) -> None:
    """What collapses the population of FOLDER: the fold, both equilibria, margins and times."""
    record, rates = load_with_rates(folder, seed, draws)
    from harvest.commands import show
    from harvest.commands.spreads import row, table
    from harvest.plan import words
    from harvest.plan.json_files import thresholds_json
    from harvest.yields import find_thresholds

    found = find_thresholds(record, rates, quota)
    s, unit, moment = found.spreads, record.unit, words.moment(record)
    asked = words.number(found.quota, unit)
    show.title(f"{record.name}: thresholds under a legal quota of {asked} a year ({len(rates):,} draws, seed {seed})")
    table(
        [
            row("Total removals that the quota brings, a year", s["removals"], unit),
            row("The fold: no equilibrium above these total removals", s["fold"], unit),
            row("The fold as a legal quota", s["fold_quota"], unit),
            row("Margin to the fold, total removals", s["margin_to_fold"], unit),
            row(f"Upper equilibrium (settles here), {moment}", s["upper_equilibrium"], unit),
            row(f"Lower equilibrium (declines below it), {moment}", s["lower_equilibrium"], unit),
            row("Today's abundance above the lower equilibrium by", s["margin_to_lower"], unit),
            row("Harvest rate at which persistence ends", s["persistence_share"], "rate"),
            row("Return time to the upper equilibrium, years", s["return_time"], "years"),
            row("Years to collapse, average environment", s["years_to_collapse"], "years"),
            row("Years to the limit with the season closed", s["years_to_recover_closed"], "years"),
            row("Years to the limit with half the quota", s["years_to_recover_half"], "years"),
        ]
    )
    click.echo(f"In {words.kind(record)}. Collapse level: {words.collapse_words(record)}.")
    click.echo()
    show.paragraph(f"Chance that the quota is beyond the fold: {words.probability(found.beyond_fold)}.")
    show.paragraph(
        "Chance that it is within the fold, but today's abundance is below the lower equilibrium: "
        f"{words.probability(found.below_lower)}."
    )
    show.title("Equilibria against legal quota (medians over the draws that have them)")
    step = max(1, len(found.branches) // 10)
    show.grid(
        ("Legal quota", "draws with equilibria", "lower", "upper"),
        [
            [
                words.number(float(r["quota"]), unit),
                words.short_probability(float(r["share"])),
                words.number(float(r["lower_median"]), unit),
                words.number(float(r["upper_median"]), unit),
            ]
            for i, (_, r) in enumerate(found.branches.iterrows())
            if i % step == 0 or r["quota"] == found.quota
        ],
        left=(),
    )
    show.caution()
    write_json(json_file, thresholds_json(record, rates, found))
