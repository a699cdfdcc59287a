"""``harvest quota``: the recommended quota and the quota table for the plan."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from harvest.commands.options import Progress, as_json, check_targets, load_with_rates, save, simulated, tell
from harvest.commands.rule_option import RULE, parse_rule

if TYPE_CHECKING:
    from harvest.plan import QuotaTable


@click.command("quota")
@simulated
@RULE
@click.option("--out", type=click.Path(path_type=Path), help="Folder for the CSV files and the Excel workbook.")
@click.option(
    "--question",
    type=click.Choice(["limit", "recovery", "reduction"]),
    help="What the quota must achieve; default by where the population stands.",
)
@click.option("--tolerance", type=float, help="Accepted chance of ever falling below the limit; default the record's.")
@click.option("--horizon", type=int, help="Quota years that the risk counts; default the record's.")
@click.option("--plan-years", type=int, help="Years of the table, 1 to 10; default the record's.")
@click.option("--futures", type=int, default=1, show_default=True, help="Futures a draw, 1 to 256.")
def command(
    folder: Path,
    seed: int,
    draws: int,
    threads: int | None,
    json_file: Path | None,
    rule_text: str | None,
    out: Path | None,
    question: str | None,
    tolerance: float | None,
    horizon: int | None,
    plan_years: int | None,
    futures: int,
) -> None:
    """The recommended quota of FOLDER, read off a risk curve, and the table for the management plan."""
    rule = parse_rule(rule_text)
    check_targets(json_file, out / "quota.xlsx" if out else None)
    record, rates = load_with_rates(folder, seed, draws)
    from harvest.commands import show
    from harvest.plan import make_quota_table
    from harvest.plan.assumptions import rates_words
    from harvest.plan.json_files import quota_json
    from harvest.plan.layout import parts, shown
    from harvest.plan.sentences import findings, headline

    table = make_quota_table(
        record,
        rates,
        rule,
        question=question,
        tolerance=tolerance,
        horizon=horizon,
        plan_years=plan_years,
        futures_per_draw=futures,
        threads=threads,
        report=Progress(),
    )
    written = save({**_files(table, out), **as_json(json_file, quota_json(table))})
    count = f"{rates.count_survey} of {rates.count_year}"
    click.echo(f"\n{record.name} · quota of {rates.first_year} · from the {count} · rates {rates_words(rates)}")
    show.title(headline(table))
    for sentence in findings(table):
        show.paragraph(sentence)
    for part in parts(table):
        show.title(part.title)
        show.paragraph(part.note)
        left = [i for i, kind in enumerate(part.kinds) if kind == "text"]
        rows = [[shown(v, k, record.unit) for v, k in zip(row, part.kinds, strict=True)] for row in part.rows]
        show.grid(part.headings, rows, left=left)
    show.caution()
    click.echo(f"\nSeed {seed}, {len(rates):,} draws, record {rates.record_digest[:12]}, Harvest {table.version}.")
    tell(written)


def _files(table: QuotaTable, out: Path | None) -> dict[Path, bytes]:
    """The CSV files and the workbook, where a folder was asked for."""
    if out is None:
        return {}
    from harvest.plan.csv_files import card_csv, quota_csv
    from harvest.plan.workbook import quota_workbook

    return {
        out / "quota_table.csv": quota_csv(table),
        out / "lookup_card.csv": card_csv(table),
        out / "quota.xlsx": quota_workbook(table),
    }
