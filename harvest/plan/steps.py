"""Why this number: the steps from the greatest sustainable yield to the printed quota, as a small table."""

from __future__ import annotations

import numpy as np
import pandas as pd

from harvest.futures.engine import stated_bias
from harvest.futures.recommend import Recommendation, read_off
from harvest.futures.risk import RiskCurve
from harvest.futures.rules import Rule
from harvest.plan import words
from harvest.rates import Rates
from harvest.rates.approach import absolute_counts
from harvest.record.model import Record
from harvest.yields.reference import sustainable_today

COLUMNS = ["step", "value", "of", "why"]


def quota_steps(record: Record, rates: Rates, advice: Recommendation, without_losses: RiskCurve) -> pd.DataFrame:
    """Steps to a recommended constant quota.

    Parameters
    ----------
    without_losses : RiskCurve
        The same curve as if every dead animal were a reported one.

    Returns
    -------
    DataFrame
        ``step``, ``value`` (record's unit a year), ``of`` ("total removals" or "legal take"), ``why``.
    """
    question, aim = advice.criterion.question, advice.criterion
    lossless, found, _ = read_off(without_losses, aim)
    msy = rates.closed_form("msy")
    rows: list[tuple[str, float, str, str]] = []
    if question == "limit":
        rows.append(("Greatest sustainable yield", float(np.median(msy)), "total removals", "median over draws of MSY"))
        rows.append(
            (
                "Uncertain rates",
                float(np.quantile(msy, aim.bound)),
                "total removals",
                f"all but {words.percent(aim.bound)} of the draws can sustain this",
            )
        )
        why = f"chance of ever falling below {words.limit_words(record)} in {aim.year} years at most "
        why += words.percent(aim.bound) + ", with this year's abundance and the environment's noise"
        if lossless > float(np.quantile(msy, aim.bound)):
            why += " (more than the step above: within so few years a decline need not reach the limit)"
        rows.append(("Limit, abundance and bad years", lossless, "total removals", why))
    else:
        held = float(np.median(sustainable_today(record, rates)))
        rows.append(("Yield that holds today's abundance", held, "total removals", "median over draws"))
        goal = "back above the limit" if question == "recovery" else "under the ceiling"
        why = f"{words.percent(aim.bound)} chance of being {goal} within {aim.year} years"
        name = "Recovery" if question == "recovery" else "Reduction"
        rows.append((name, lossless, "total removals", why if found else why + ": no quota reaches it"))
    rows.append(("Losses", advice.exact, "legal take", _losses_words(record)))
    direction = "up" if question == "reduction" else "down"
    how = "whole animals" if record.unit == "animals" else "three significant figures"
    rows.append(("Rounding", advice.quota, "legal take", f"{how}, rounded {direction}"))
    return pd.DataFrame(rows, columns=COLUMNS)


def rule_steps(record: Record, rates: Rates, rule: Rule, first_quota: float) -> pd.DataFrame:
    """Steps from the count on record to the first year's quota under a rule with feedback; columns as above.

    Parameters
    ----------
    first_quota : float
        Legal quota of the first year, rounded.
    """
    how = "whole animals" if record.unit == "animals" else "three significant figures"
    counted = rates.first_year - record.lag
    rows: list[tuple[str, float, str, str]] = []
    found = absolute_counts(record).get(counted)
    if found is not None:
        bias = stated_bias(found.survey)
        seen = f"{found.survey.name}, coefficient of variation {words.percent(found.cv)}"
        rows.append((f"Count of {counted}", found.count, "abundance", seen))
        if bias != 1.0:
            rows.append(("Corrected for survey bias", found.count / bias, "abundance", f"divided by {bias:.3g}"))
        why = str(rule)
    else:
        last = float(record.present_quota or 0.0)
        rows.append(("Present quota", last, "legal take", f"no count of {counted} is on record"))
        why = f"{words.percent(rule.without_count)} of the last quota in a year without a count"
    rows.append(("The rule", first_quota, "legal take", f"{why}; {how}, rounded down"))
    return pd.DataFrame(rows, columns=COLUMNS)


def _losses_words(record: Record) -> str:
    losses = record.losses
    told = [
        f"{name} {d}"
        for name, d in (
            ("wounding", losses.wounding),
            ("unreported", losses.unreported),
            ("other deaths", losses.other),
        )
        if str(d) != "0"
    ]
    if losses.implementation_cv:
        told.append(f"yearly implementation error {words.percent(losses.implementation_cv)}")
    return "; ".join(told) if told else "none stated"
