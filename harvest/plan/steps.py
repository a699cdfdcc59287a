"""Why this number: the steps from the greatest sustainable yield to the printed quota, as a small table."""

from __future__ import annotations

import numpy as np
import pandas as pd

from harvest.futures.recommend import Recommendation
from harvest.futures.rounding import precision_words
from harvest.futures.rules import Rule
from harvest.kernels.codes import RECORDED, SIMULATED
from harvest.plan import words
from harvest.rates import Rates
from harvest.rates.approach import absolute_counts, stated_bias
from harvest.record.model import Record
from harvest.yields.reference import sustainable_today

COLUMNS = ["step", "value", "of", "why"]


def quota_steps(record: Record, rates: Rates, advice: Recommendation, lossless: float, found: bool) -> pd.DataFrame:
    """Steps to a recommended constant quota.

    Parameters
    ----------
    lossless : float
        The unrounded quota if every dead animal were a reported one.
    found : bool
        Whether there is one that qualifies.

    Returns
    -------
    DataFrame
        ``step``, ``value`` (record's unit a year), ``of`` ("total removals" or "legal take"), ``why``.
    """
    question, aim = advice.criterion.question, advice.criterion
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
        why = f"chance of ever falling below {words.limit_words(record)} in {words.years(aim.year)} at most "
        why += words.percent(aim.bound) + ", with this year's abundance and the environment's noise"
        if lossless > float(np.quantile(msy, aim.bound)):
            why += f" (more than the step above: in {words.years(aim.year)} a decline need not reach the limit)"
        rows.append(("Limit, abundance and bad years", lossless, "total removals", why))
    else:
        held = float(np.median(sustainable_today(record, rates)))
        rows.append(("Yield that holds today's abundance", held, "total removals", "median over draws"))
        goal = "back above the limit" if question == "recovery" else "under the ceiling"
        why = f"{words.percent(aim.bound)} chance of being {goal} within {words.years(aim.year)}"
        name = "Recovery" if question == "recovery" else "Reduction"
        rows.append((name, lossless, "total removals", why if found else why + ": no quota reaches it"))
    rows.append(("Losses", advice.exact, "legal take", _losses_words(record)))
    direction = "up" if question == "reduction" else "down"
    how = precision_words(record.unit)
    rows.append(("Rounding", advice.quota, "legal take", f"{how}, rounded {direction}"))
    return pd.DataFrame(rows, columns=COLUMNS)


def rule_steps(record: Record, rates: Rates, rule: Rule, first_quota: float, first_count: int) -> pd.DataFrame:
    """Steps to the first year's quota under a rule that was given; columns as above.

    Parameters
    ----------
    first_quota : float
        Legal quota of the first year, rounded (a median where the count is not made yet).
    first_count : int
        What the rule has in the first year: RECORDED, SIMULATED or MISSING.
    """
    how = precision_words(record.unit)
    counted = rates.first_year - record.lag
    rows: list[tuple[str, float, str, str]] = []
    name, why = "The rule", f"{rule}; {how}, rounded down"
    if not rule.feedback:
        rows.append(("The quota as given", first_quota, "legal take", "not read off the risk curve"))
        return pd.DataFrame(rows, columns=COLUMNS)
    if first_count == RECORDED:
        seen = absolute_counts(record)[counted]
        bias = stated_bias(seen.survey)
        survey = f"{seen.survey.name}, coefficient of variation {words.percent(seen.cv)}"
        rows.append((f"Count of {counted}", seen.count, "abundance", survey))
        if bias != 1.0:
            rows.append(("Corrected for survey bias", seen.count / bias, "abundance", f"divided by {bias:.3g}"))
    elif first_count == SIMULATED:
        median = float(np.median(rates.column("counted")))
        told = f"median over draws; the count of {counted} is not on record yet"
        rows.append(("Abundance that the count may find", median, "abundance", told))
        name = "The rule, median over counts that may come"
    else:
        last = float(record.present_quota or 0.0)
        rows.append(("Present quota", last, "legal take", f"no count was made in {counted}"))
        share = words.percent(rule.without_count)
        why = f"{share} of the last quota in a year without a count; {how}, rounded down"
    rows.append((name, first_quota, "legal take", why))
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
