"""``harvest app``: the browser app on this computer."""

from __future__ import annotations

from pathlib import Path

import click


@click.command("app")
@click.argument("folder", type=click.Path(path_type=Path), required=False)
@click.option("--demo", help="Open a demonstration record: deer, geese or lake.")
@click.option("--port", type=click.IntRange(1, 65535), help="Port to use; default the first free one from 8600.")
@click.option("--browser/--no-browser", default=True, help="Whether to open the browser; it is opened by default.")
def command(folder: Path | None, demo: str | None, port: int | None, browser: bool) -> None:
    """Do the whole job in the browser, on this computer only; with FOLDER or a demo, on a copy of that record."""
    from harvest.desk.launch import launch
    from harvest.errors import SettingsError
    from harvest.workspace import Workspace, default_folder
    from harvest.workspace.sources import open_demo, open_path

    if folder is not None and demo is not None:
        raise SettingsError("both a folder and a demo were given: give one of the two")
    space = Workspace(default_folder())
    record = open_path(space, folder) if folder is not None else open_demo(space, demo) if demo is not None else None
    launch(record, port, browser, click.echo)
