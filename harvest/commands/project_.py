"""``harvest project``: what a rule does in the years ahead."""

from __future__ import annotations

from pathlib import Path

import click

from harvest.commands.options import Progress, as_json, check_targets, load_with_rates, save, simulated, tell
from harvest.commands.rule_option import RULE, parse_rule

_CHANCES = ("below_limit", "ever_below_limit", "ever_collapsed", "closed")


@click.command("project")
@simulated
@RULE
@click.option("--years", type=int, help="Quota years ahead; default the record's horizon.")
@click.option("--futures", type=int, default=1, show_default=True, help="Futures a draw, 1 to 256.")
def command(
    folder: Path,
    seed: int,
    draws: int,
    threads: int | None,
    json_file: Path | None,
    rule_text: str | None,
    years: int | None,
    futures: int,
) -> None:
    """What a rule does to the population of FOLDER: the record's rule, else the present quota every year."""
    rule = parse_rule(rule_text)
    check_targets(json_file)
    record, rates = load_with_rates(folder, seed, draws)
    from harvest.commands import show
    from harvest.errors import SettingsError
    from harvest.futures import fixed_quota, project
    from harvest.futures.rules import rule_of
    from harvest.plan import words
    from harvest.plan.json_files import future_json

    if rule is None and record.rule is not None:
        rule = rule_of(record.rule)
    if rule is None and record.present_quota is not None:
        rule = fixed_quota(record.present_quota)
    if rule is None:
        raise SettingsError("there is no rule and no present quota in the record: give one with --rule")
    progress = Progress()
    future = project(
        record,
        rates,
        rule,
        years,
        futures_per_draw=futures,
        threads=threads,
        progress=lambda done, total: progress("the years ahead", done, total),
    )
    written = save(as_json(json_file, future_json(record, rates, future)))
    unit, table = record.unit, future.by_year
    show.title(f"{record.name}: {rule} ({len(rates) * futures:,} futures, seed {seed})")
    show.grid(
        ("Quota year", "Legal quota, median", "Total removals, mean", "Next count", "Abundance then", "90% from", "to",
         "Below limit", "Ever below", "Ever collapsed", "Closed"),
        [
            [
                str(int(r["quota_year"])),
                words.number(r["quota_median"], unit),
                words.number(r["removals_mean"], unit),
                str(int(r["count_year"])),
                words.number(r["abundance_median"], unit),
                words.number(r["abundance_low90"], unit),
                words.number(r["abundance_high90"], unit),
                *(words.short_probability(r[c]) for c in _CHANCES),
            ]
            for _, r in table.iterrows()
        ],
        left=(),
    )  # fmt: skip
    click.echo(f"In {words.kind(record)}; abundance {words.moment(record)}. Limit: {words.limit_words(record)}.")
    show.title(f"Over the {len(table)} years under this rule")
    show.grid(
        ("Measure", "value", "± Monte Carlo"),
        [_measure(str(m), v, e) for m, v, e in future.measures.itertuples(index=False)],
    )
    show.caution()
    tell(written)


def _measure(name: str, value: float, error: float) -> list[str]:
    """A measure as a row: chances and shares as percentages, quantities in the record's unit."""
    from harvest.plan import words

    if name.startswith(("ever", "share")):
        return [name.capitalize(), words.short_probability(value), words.error(error)]
    return [name.capitalize(), f"{float(f'{value:.4g}'):,.10g}", f"±{float(f'{error:.1g}'):,.10g}"]
