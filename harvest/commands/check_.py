"""``harvest check``: every problem of a record, in one pass."""

from __future__ import annotations

from dataclasses import asdict
from pathlib import Path

import click

from harvest.commands.options import FOLDER, JSON, NOTED_SEED, as_json, check_targets, save, tell


@click.command("check")
@FOLDER
@NOTED_SEED
@JSON
def command(folder: Path, seed: int, json_file: Path | None) -> None:
    """Check the record in FOLDER and tell every problem with its cure."""
    from harvest import __version__
    from harvest.commands import show
    from harvest.errors import CAUTION
    from harvest.record import check_record
    from harvest.record.counts import supports_quota

    check_targets(json_file)
    record, problems = check_record(folder)
    errors = [p for p in problems if p.severity == "error"]
    warnings = [p for p in problems if p.severity == "warning"]
    for name, some in (("Errors", errors), ("Warnings", warnings)):
        if some:
            show.title(name)
            for problem in some:
                place = f"{problem.file}, {problem.where}" if problem.where else problem.file
                show.paragraph(f"* {place}: found {problem.found}; {problem.rule}. {problem.cure}")
    click.echo()
    if record is None:
        click.echo(f"{len(errors)} error(s), {len(warnings)} warning(s): the record cannot be used yet.")
    else:
        years = record.history.years
        counts = ", ".join(f"{s.name}: {sum(v is not None for v in s.values)} counts" for s in record.surveys)
        click.echo(f"{record.name}: {years[0]} to {years[-1]}, {counts or 'no survey'}; {len(warnings)} warning(s).")
        if supports_quota(record):
            click.echo(f"The record can be used; it asks for the quota of {record.quota_year}.")
        else:
            click.echo(
                f"The record can be read, but the quota of {record.quota_year} cannot be worked out yet (see above)."
            )
    show.caution()
    content = {
        "kind": "check",
        "version": __version__,
        "seed": seed,
        "caution": CAUTION,
        "usable": record is not None,
        "supports_quota": record is not None and supports_quota(record),
        "record_digest": None if record is None else record.digest(),
        "problems": [asdict(p) for p in problems],
    }
    tell(save(as_json(json_file, content)))
    if record is None:
        raise SystemExit(2)
