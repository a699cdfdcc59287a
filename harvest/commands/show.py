"""Tables and paragraphs on the screen."""

from __future__ import annotations

import shutil
import textwrap
from collections.abc import Sequence

import click
from tabulate import tabulate

from harvest.errors import CAUTION


def _columns() -> int:
    return min(100, shutil.get_terminal_size((100, 24)).columns)


def title(text: str) -> None:
    """A heading with a line under it, wrapped."""
    lines = textwrap.wrap(text, _columns())
    click.echo("\n" + "\n".join(lines) + "\n" + "-" * max(map(len, lines)))


def paragraph(text: str) -> None:
    """Wrapped text."""
    click.echo(textwrap.fill(text, _columns()))


def grid(headings: Sequence[str], rows: Sequence[Sequence[str]], *, left: Sequence[int] = (0,)) -> None:
    """A table of texts: columns in ``left`` to the left, the others to the right; long texts wrapped."""
    align = ["left" if i in left else "right" for i in range(len(headings))]
    wrapped = [[textwrap.fill(str(cell), 48) if i in left else str(cell) for i, cell in enumerate(row)] for row in rows]
    heads = [textwrap.fill(h, 14 if len(headings) < 8 else 9) for h in headings]
    click.echo(tabulate(wrapped, heads, tablefmt="simple", colalign=align, disable_numparse=True))


def caution() -> None:
    """The caution that goes with every number."""
    click.echo()
    paragraph(CAUTION)
