"""``harvest thresholds``: what collapses the population under a constant quota."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from harvest.commands.options import as_json, check_targets, drawn, load_with_rates, save, tell

if TYPE_CHECKING:
    from harvest.yields import Thresholds


@click.command("thresholds")
@drawn
@click.option("--quota", type=float, help="Legal quota to examine; default the present one.")
def command(folder: Path, seed: int, draws: int, json_file: Path | None, quota: float | None) -> None:
    """What collapses the population of FOLDER: the fold, both equilibria, margins and times."""
    check_targets(json_file)
    record, rates = load_with_rates(folder, seed, draws)
    from harvest.commands import show
    from harvest.commands.spreads import row, table
    from harvest.plan import words
    from harvest.plan.json_files import thresholds_json
    from harvest.yields import find_thresholds

    found = find_thresholds(record, rates, quota)
    written = save(as_json(json_file, thresholds_json(record, rates, found)))
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
            row("Harvest rate at which persistence ends", s["persistence_share"], "rate", absent="no upper bound"),
            row("Return time to the upper equilibrium, years", s["return_time"], "years"),
            row("Years to collapse, average environment", s["years_to_collapse"], "years"),
            row("Years to the limit with the season closed", s["years_to_recover_closed"], "years"),
            row("Years to the limit with half the quota", s["years_to_recover_half"], "years"),
        ]
    )
    click.echo(
        f"In {words.kind(record)}. Collapse: below {words.collapse_words(record)}. "
        f"The limit: {words.limit_words(record)}."
    )
    click.echo()
    show.paragraph(f"Chance that the quota is beyond the fold: {words.probability(found.beyond_fold)}.")
    show.paragraph(
        "Chance that it is within the fold, but today's abundance is below the lower equilibrium: "
        f"{words.probability(found.below_lower)}."
    )
    show.title("Equilibria against legal quota (medians over the draws that have them)")
    show.grid(("Legal quota", "draws with equilibria", "lower", "upper"), _branch_rows(found, unit), left=())
    show.caution()
    tell(written)


def _branch_rows(found: Thresholds, unit: str) -> list[list[str]]:
    """A dozen quotas, the examined one among them; no medians where fewer than one draw in twenty has equilibria."""
    from harvest.commands.spreads import FEW
    from harvest.plan import words

    step = max(1, len(found.branches) // 10)
    rows: list[list[str]] = []
    for i, (_, branch) in enumerate(found.branches.iterrows()):
        if i % step == 0 or branch["quota"] == found.quota:
            few = branch["share"] < FEW
            quota = words.number(float(branch["quota"]), unit)
            share = words.short_probability(float(branch["share"]))
            ends = ["" if few else words.number(float(branch[f"{end}_median"]), unit) for end in ("lower", "upper")]
            if not rows or rows[-1][0] != quota:
                rows.append([quota, share, *ends])
    return rows
