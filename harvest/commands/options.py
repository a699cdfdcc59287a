"""Options that several commands share, and what they do: seed, draws, threads, JSON, progress."""

from __future__ import annotations

import sys
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

if TYPE_CHECKING:
    from harvest.rates import Rates
    from harvest.record import Record

FOLDER = click.argument("folder", type=click.Path(path_type=Path))
SEED = click.option("--seed", type=int, default=0, show_default=True, help="Seed of all random numbers.")
NOTED_SEED = click.option(
    "--seed", type=int, default=0, show_default=True, help="Taken as everywhere; nothing is drawn here."
)
DRAWS = click.option(
    "--draws", type=int, default=10_000, show_default=True, help="States of nature to draw from the stated ranges."
)
THREADS = click.option("--threads", type=int, help="Threads to use; the results do not depend on it.")
JSON = click.option(
    "--json", "json_file", type=click.Path(path_type=Path), help="Also write the results to this JSON file."
)


def drawn(command: Callable[..., Any]) -> Callable[..., Any]:
    """A command on a record's folder with seed, draws and JSON."""
    for option in (JSON, DRAWS, SEED, FOLDER):
        command = option(command)
    return command


def simulated(command: Callable[..., Any]) -> Callable[..., Any]:
    """The same for a command that projects: with threads."""
    return drawn(THREADS(command))


def load(folder: Path) -> Record:
    """Read a record; its warnings go to standard error, its errors stop the command."""
    from harvest.errors import RecordError
    from harvest.record import check_record

    record, problems = check_record(folder)
    if record is None:
        raise RecordError(problems)
    for problem in problems:
        click.echo(str(problem), err=True)
    return record


def load_with_rates(folder: Path, seed: int, draws: int) -> tuple[Record, Rates]:
    """Read a record and draw its rates, saying so where kernels must be compiled first."""
    record = load(folder)
    tell_compiling()
    from harvest.rates import draw_rates

    rates = draw_rates(record, seed, draws)
    for note in rates.notes:
        click.echo(f"note: {note}", err=True)
    return record, rates


def tell_compiling() -> None:
    """On the very first run: say that kernels are being compiled, and for how long."""
    from harvest.kernels.compiling import is_warm

    if not is_warm():
        click.echo("First run on this machine: compiling, once, some 20 seconds ...", err=True)


class Progress:
    """Progress of long work on standard error: a bar on a terminal, a line a task elsewhere."""

    def __init__(self) -> None:
        self.task = ""
        self.bar = sys.stderr.isatty()

    def __call__(self, task: str, done: int, total: int) -> None:
        """Tell that ``done`` of ``total`` steps of a task are done."""
        if self.bar:
            width = 30 * done // total
            end = "\n" if done == total else ""
            click.echo(f"\r{task:<28} [{'#' * width}{'.' * (30 - width)}]{end}", nl=False, err=True)
        elif task != self.task:
            click.echo(f"computing: {task}", err=True)
        self.task = task


def check_targets(*files: Path | None) -> None:
    """Find out before the work begins whether the files that it is for can be written."""
    from harvest.writing import check_writable

    for file in files:
        if file is not None:
            check_writable(file)


def save(files: dict[Path, bytes]) -> list[str]:
    """Write files, each whole or not at all; the lines to print at the end."""
    from harvest.writing import write_whole

    for file, data in files.items():
        write_whole(file, data)
    return [f"Written: {file}" for file in files]


def as_json(json_file: Path | None, content: dict[str, Any]) -> dict[Path, bytes]:
    """The results as a JSON file, where one was asked for."""
    if json_file is None:
        return {}
    from harvest.plan.json_files import json_bytes

    return {json_file: json_bytes(content)}


def tell(lines: list[str]) -> None:
    """Print lines after the results."""
    for line in lines:
        click.echo(line)
