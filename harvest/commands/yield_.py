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
    from harvest.commands.spreads import row, table
    from harvest.plan import words
    from harvest.plan.json_files import yield_json
    from harvest.yields import summarise_yield
    from harvest.yields.summary import standing_year

    summary = summarise_yield(record, rates)
    written = save(as_json(json_file, yield_json(record, rates, summary)))
    s, unit, what = summary.spreads, record.unit, words.kind(record)
    show.title(f"{record.name}: what it can sustain (rates {rates.origin}, {len(rates):,} draws, seed {seed})")
    moment = words.moment(record)
    table(
        [
            row(f"Abundance {moment}, {standing_year(record, rates)}", s["abundance"], unit),
            row("Carrying capacity", s["K"], unit),
            row("Greatest per-head growth, a year", s["greatest_growth"], "rate", absent="no upper bound"),
            row("Greatest sustainable yield (MSY), total removals a year", s["msy"], unit),
            row(f"Abundance that gives it, {moment}", s["msy_abundance"], unit),
            row("Harvest rate that gives it (share of the season's start)", s["msy_share"], "rate"),
            row("At least 80% of it: abundance from", s["good_low"], unit),
            row("... to", s["good_high"], unit),
            row("Total removals that hold today's abundance", s["sustainable_today"], unit),
        ]
    )
    click.echo(f"In {what}; removals are all deaths that people cause, legal take and losses together.")
    show.title("Where it stands")
    show.paragraph(
        f"Chance that abundance is below the one that gives MSY: {words.probability(summary.below_msy_abundance)}."
    )
    if summary.above_msy_rate is not None and summary.present_removals is not None:
        present = words.number(summary.present_removals, unit)
        show.paragraph(
            f"Chance that present removals (latest legal take, {present} a year, with losses) are above the rate "
            f"that gives MSY: {words.probability(summary.above_msy_rate)}."
        )
    if summary.declines_unharvested > 0.0005:
        show.paragraph(
            "Chance that the population declines even unharvested (above its carrying capacity, or below an Allee "
            f"threshold): {words.probability(summary.declines_unharvested)}."
        )
    if summary.unstable >= 0.001:
        show.paragraph(
            f"Warning: in {words.probability(summary.unstable)} of the draws growth is so strong that the yearly "
            "step overshoots and does not settle (May 1976); check the growth rate and the shape."
        )
    bound = summary.removal_bound
    show.paragraph(
        f"Potential biological removal (Wade 1998): {words.number(bound.value, unit)} {what} a year of all "
        f"human-caused deaths = {words.number(bound.n_min, unit)} (20th percentile of the count of {bound.year}) "
        f"× ½ × {bound.r_max:.3g} × {bound.recovery_factor:g}."
    )
    show.title("Yield curve: total removals a year that hold an abundance")
    show.grid(
        ("Abundance", "median", "90% from", "to"),
        [
            [words.number(float(r[c]), unit) for c in ("abundance", "median", "low90", "high90")]
            for _, r in summary.curve.iloc[::4].iterrows()
        ],
        left=(),
    )
    show.caution()
    tell(written)
