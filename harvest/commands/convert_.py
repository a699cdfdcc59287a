"""``harvest convert``: a record's folder as an Excel workbook, and back."""

from __future__ import annotations

from dataclasses import asdict
from pathlib import Path

import click

from harvest.commands.options import JSON, NOTED_SEED, as_json, check_targets, save, tell


@click.command("convert")
@click.argument("source", type=click.Path(path_type=Path))
@click.argument("target", type=click.Path(path_type=Path))
@NOTED_SEED
@JSON
def command(source: Path, target: Path, seed: int, json_file: Path | None) -> None:
    """Convert the record in SOURCE, a folder or NAME.xlsx, to TARGET, a new NAME.xlsx or a new folder.

    Nothing is lost on the way, and nothing is overwritten.
    """
    from harvest import __version__
    from harvest.errors import CAUTION, SettingsError
    from harvest.sheets.record_workbook_files import SUFFIX, folder_to_workbook, workbook_to_folder

    from_workbook = source.suffix.lower() == SUFFIX and not source.is_dir()
    if from_workbook == (target.suffix.lower() == SUFFIX):
        raise SettingsError(
            f"{str(source)!r} to {str(target)!r}: one of the two must be a workbook, a name that ends with {SUFFIX}, "
            f"and the other a folder. Write for example: harvest convert my_deer my_deer{SUFFIX}"
        )
    check_targets(json_file)
    record, warnings = (workbook_to_folder if from_workbook else folder_to_workbook)(source, target)
    for problem in warnings:
        click.echo(str(problem), err=True)
    if from_workbook:
        click.echo(f"Made {target / 'record.toml'} and {target / 'history.csv'}; next: harvest quota {target}")
    else:
        click.echo(
            f"Made {target}. It holds everything, private entries too; back again: harvest convert {target} FOLDER"
        )
    content = {
        "kind": "convert",
        "version": __version__,
        "seed": seed,
        "caution": CAUTION,
        "record_digest": record.digest(),
        "problems": [asdict(problem) for problem in warnings],
        "files": ["record.toml", "history.csv"] if from_workbook else [target.name],
    }
    tell(save(as_json(json_file, content)))
