"""A rule on the command line: its name, then its settings, as in "ramp lower=1200 upper=2200 share=0.16"."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from harvest.errors import SettingsError

if TYPE_CHECKING:
    from harvest.futures import Rule

RULE = click.option(
    "--rule",
    "rule_text",
    help='A rule with its settings: "fixed quota quota=300", "fixed share share=0.1", "escapement escapement=2000", '
    '"ramp lower=1200 upper=2200 share=0.16"; each may add without_count=0.8.',
)


def parse_rule(text: str | None) -> Rule | None:
    """The rule that a text names; None for None.

    Raises
    ------
    SettingsError
        Where the text is not a rule.
    """
    if text is None:
        return None
    from harvest.futures import rule_from

    words = text.split()
    name = " ".join(w for w in words if "=" not in w)
    settings = {}
    for word in (w for w in words if "=" in w):
        key, _, value = word.partition("=")
        try:
            settings[key] = float(value)
        except ValueError:
            raise SettingsError(f"--rule: {key} is {value!r}; give a number such as {key}=0.1") from None
    return rule_from(name, settings)
