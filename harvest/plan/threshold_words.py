"""What collapses a population, in rows and sentences, for the command and the page."""

from __future__ import annotations

from harvest.plan import words
from harvest.plan.spreads import FEW, row
from harvest.record.model import Record
from harvest.yields import Thresholds


def threshold_rows(record: Record, found: Thresholds) -> list[list[str]]:
    """Rows of :func:`harvest.plan.spreads.row`."""
    s, unit, moment = found.spreads, record.unit, words.moment(record)
    return [
        row("Total removals that the quota brings, a year", s["removals"], unit),
        row("The fold: no equilibrium above these total removals", s["fold"], unit),
        row("The fold as a legal quota", s["fold_quota"], unit),
        row("Margin to the fold, total removals", s["margin_to_fold"], unit),
        row(f"Upper equilibrium (settles here), {moment}", s["upper_equilibrium"], unit),
        row(f"Lower equilibrium (declines below it), {moment}", s["lower_equilibrium"], unit),
        row("Today's abundance above the lower equilibrium by", s["margin_to_lower"], unit),
        row("Harvest rate at which persistence ends", s["persistence_share"], "rate", absent="no upper bound"),
        row("Return time to the upper equilibrium, years", s["return_time"], "years"),
        row("Years to collapse, average environment", s["years_to_collapse"], "years"),
        row("Years to the limit with the season closed", s["years_to_recover_closed"], "years"),
        row("Years to the limit with half the quota", s["years_to_recover_half"], "years"),
    ]


def levels(record: Record) -> str:
    """What the rows are in, and what collapse and limit mean."""
    return (
        f"In {words.kind(record)}. Collapse: below {words.collapse_words(record)}. "
        f"The limit: {words.limit_words(record)}."
    )


def beyond(found: Thresholds) -> list[str]:
    """The chances that the quota is too much for good."""
    return [
        f"Chance that the quota is beyond the fold: {words.probability(found.beyond_fold)}.",
        "Chance that it is within the fold, but today's abundance is below the lower equilibrium: "
        f"{words.probability(found.below_lower)}.",
    ]


def branch_rows(found: Thresholds, unit: str) -> list[list[str]]:
    """A dozen quotas, the examined one among them; no medians where fewer than one draw in twenty has equilibria."""
    step = max(1, len(found.branches) // 10)
    rows: list[list[str]] = []
    for i, (_, branch) in enumerate(found.branches.iterrows()):
        if i % step == 0 or branch["quota"] == found.quota:
            few = branch["share"] < FEW
            quota = words.number(float(branch["quota"]), unit)
            share = words.short_probability(float(branch["share"]))
            ends = ["" if few else words.number(float(branch[f"{end}_median"]), unit) for end in ("lower", "upper")]
            if not rows or rows[-1][0] != quota:
                rows.append([quota, share, *ends])
    return rows
