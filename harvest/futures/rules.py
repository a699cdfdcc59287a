"""Harvest rules as users name them; the arithmetic is the kernel's (``harvest.kernels.rules``)."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from harvest.errors import SettingsError
from harvest.kernels import rules as kernels
from harvest.record.model import WITHOUT_COUNT, RuleChoice

#: Kernel code and settings, in the kernel's order, of each rule.
RULES: dict[str, tuple[int, tuple[str, ...]]] = {
    "fixed quota": (kernels.FIXED_QUOTA, ("quota",)),
    "fixed share": (kernels.FIXED_SHARE, ("share",)),
    "escapement": (kernels.ESCAPEMENT, ("escapement",)),
    "ramp": (kernels.RAMP, ("lower", "upper", "share")),
}


@dataclass(frozen=True)
class Rule:
    """A harvest rule: what it sees is the estimate from the count and its own last quota.

    Attributes
    ----------
    name : str
        One of :data:`RULES`.
    settings : tuple of float
        Absolute numbers in the kernel's order: quota; share (of the count, 0..1]; escapement; or lower, upper
        and share of the ramp.
    without_count : float
        In a year without a count: this share of the last quota (0..1). A fixed quota needs no count.

    Raises
    ------
    SettingsError
        On an unknown rule or impossible settings.
    """

    name: str
    settings: tuple[float, ...]
    without_count: float = WITHOUT_COUNT

    def __post_init__(self) -> None:
        check_rule(self)

    @property
    def code(self) -> int:
        """The kernel's code."""
        return RULES[self.name][0]

    @property
    def feedback(self) -> bool:
        """Whether the quota answers to the count."""
        return self.code != kernels.FIXED_QUOTA

    def quota(self, estimate: np.ndarray | float) -> np.ndarray:
        """The legal quota for estimates of abundance, unrounded, same shape."""
        x = np.atleast_1d(np.asarray(estimate, float))
        out = np.empty(x.shape)
        kernels.fill_quota(self.code, np.array(self.settings), x, out)
        return out

    def named_settings(self) -> dict[str, float]:
        """Settings by name."""
        return dict(zip(RULES[self.name][1], self.settings, strict=True))

    def __str__(self) -> str:
        given = self.named_settings()
        if self.name == "fixed quota":
            return f"fixed quota of {given['quota']:,.10g} a year"
        if self.name == "fixed share":
            return f"fixed share: {100.0 * given['share']:.3g}% of the count"
        if self.name == "escapement":
            return f"escapement: everything counted above {given['escapement']:,.10g}"
        return (
            f"ramp: nothing below {given['lower']:,.10g}, rising to {100.0 * given['share']:.3g}% of the count "
            f"at {given['upper']:,.10g} and above"
        )


def check_rule(rule: Rule) -> None:
    """Raise SettingsError where a rule's name or settings cannot be used."""
    if rule.name not in RULES:
        raise SettingsError(f"there is no rule named {rule.name!r}: choose one of {', '.join(RULES)}")
    names = RULES[rule.name][1]
    if len(rule.settings) != len(names):
        raise SettingsError(f"the rule {rule.name} needs {', '.join(names)}: {len(rule.settings)} given")
    given = dict(zip(names, rule.settings, strict=True))
    for name, value in given.items():
        if not math.isfinite(value) or value < 0.0:
            raise SettingsError(f"{rule.name}: {name} is {value:g}; give a number from 0")
    if not 0.0 < given.get("share", 1.0) <= 1.0:
        raise SettingsError(f"{rule.name}: share is {given['share']:g}; give a share above 0 and at most 1")
    if rule.name == "ramp" and not given["lower"] < given["upper"]:
        raise SettingsError(
            f"ramp: lower is {given['lower']:g} and upper {given['upper']:g}; lower must be below upper"
        )
    if not 0.0 <= rule.without_count <= 1.0:
        raise SettingsError(f"{rule.name}: without_count is {rule.without_count:g}; give a share from 0 to 1")


def rule_from(name: str, settings: Mapping[str, float]) -> Rule:
    """A rule from named settings (``without_count`` among them if wanted).

    Raises
    ------
    SettingsError
        On an unknown rule, missing or unknown settings.
    """
    if name not in RULES:
        raise SettingsError(f"there is no rule named {name!r}: choose one of {', '.join(RULES)}")
    names = RULES[name][1]
    unknown = sorted(set(settings) - set(names) - {"without_count"})
    missing = [n for n in names if n not in settings]
    if unknown or missing:
        told = [f"{n} is missing" for n in missing] + [f"{n} is unknown" for n in unknown]
        raise SettingsError(f"the rule {name} takes {', '.join((*names, 'without_count'))}: {'; '.join(told)}")
    return Rule(name, tuple(float(settings[n]) for n in names), float(settings.get("without_count", WITHOUT_COUNT)))


def rule_of(choice: RuleChoice) -> Rule:
    """The rule that a record names."""
    return rule_from(choice.name, dict(choice.settings))


def fixed_quota(quota: float) -> Rule:
    """The rule that sets the same legal quota every year."""
    return Rule("fixed quota", (float(quota),))
