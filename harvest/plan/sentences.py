"""The answer in words: what to take, how sure, and what would change it."""

from __future__ import annotations

from harvest.futures.recommend import Recommendation
from harvest.plan import words
from harvest.plan.table import QuotaTable
from harvest.record.model import Record


def headline(table: QuotaTable) -> str:
    """The finding in one sentence."""
    record, advice = table.record, table.recommendation
    what, quota = words.kind(record), words.number(table.first_quota, record.unit)
    year = table.rates.first_year
    if table.rule.feedback:
        return f"The rule gives a legal quota of {quota} {what} in {year}."
    stated = table.rule.settings[0] != advice.quota
    if stated:
        return f"A legal quota of {quota} {what} a year, as asked."
    if advice.criterion.question == "reduction":
        if advice.qualifies:
            return f"Take at least {quota} {what} a year to get under the ceiling in time."
        return f"No cull examined (up to {quota} {what} a year) gets under the ceiling in time."
    if not advice.qualifies or advice.quota == 0.0:
        return f"Close the season: no quota of {what} is within what you accept."
    at_least = " (the largest examined; more may qualify)" if advice.at_edge else ""
    return f"Take at most {quota} {what} a year{at_least}."


def _aim_words(record: Record, advice: Recommendation) -> str:
    """The criterion's event, as "the chance of …"."""
    aim = advice.criterion
    if aim.question == "limit":
        return f"ever falling below {words.limit_words(record)} in {aim.year} years"
    if aim.question == "recovery":
        return f"being back above {words.limit_words(record)} within {aim.year} years"
    stated = record.objectives.ceiling
    ceiling = words.level(record, stated) if stated is not None else "the ceiling"
    return f"being under {ceiling} within {aim.year} years"


def findings(table: QuotaTable) -> list[str]:
    """The sentences under the headline: the risk, the comparison with no take and the present quota."""
    record, advice = table.record, table.recommendation
    aim = advice.criterion
    event = _aim_words(record, advice)
    asked = (
        f"you ask for at least {words.percent(aim.bound)}"
        if aim.at_least
        else (f"your tolerance is {words.percent(aim.bound)}")
    )
    quota = words.number(advice.quota, record.unit)
    told = []
    if table.rule.feedback or table.rule.settings[0] != advice.quota:
        p, se = table.rule_risk
        against = "within" if p <= record.objectives.tolerance else "above"
        under = (
            "Under the rule" if table.rule.feedback else f"With {words.number(table.first_quota, record.unit)} a year"
        )
        told.append(
            f"{under} the chance of ever falling below {words.limit_words(record)} in {table.horizon} years "
            f"is {words.probability(p)} ({words.error(se)} Monte Carlo), {against} your tolerance of "
            f"{words.percent(record.objectives.tolerance)}."
        )
        told.append(f"For comparison, the recommended constant legal quota is {quota} a year.")
    told.append(
        f"With {quota} a year the chance of {event} is {words.probability(advice.probability)} "
        f"({words.error(advice.se)} Monte Carlo); {asked}."
    )
    if not advice.qualifies:
        way = "short" if aim.at_least else "above it"
        told.append(
            f"That misses by {words.percent(advice.miss)}"
            + (": the best of the quotas examined." if aim.question == "reduction" else f" {way} even without a take.")
        )
    compared = [f"{words.probability(advice.zero[1])} without a take"]
    if advice.present is not None:
        present = words.number(advice.present[0], record.unit)
        compared.append(f"{words.probability(advice.present[1])} with the present quota of {present}")
    told.append(f"That chance is {' and '.join(compared)}.")
    if aim.question != "limit":
        told.append(_limit_sentence(table))
    for low, high in advice.further_runs:
        told.append(
            f"Quotas from {words.number(low, record.unit)} to {words.number(high, record.unit)} would qualify as "
            "well; a risk that falls as more is taken calls for a second look at the rates."
        )
    return told


def _limit_sentence(table: QuotaTable) -> str:
    """What the recommended quota does to the lower limit, within the aim's years and if it goes on."""
    record, advice = table.record, table.recommendation
    year = advice.criterion.year
    soon, _ = table.curve.at("ever_below_limit", advice.quota, year)
    later, later_se = advice.limit_risk
    told = (
        f"The chance of ever falling below {words.limit_words(record)} is {words.probability(soon)} in those "
        f"{year} years, and {words.probability(later)} ({words.error(later_se)}) if the same quota goes on "
        f"for {table.horizon}."
    )
    if advice.criterion.question == "reduction" and later > record.objectives.tolerance:
        told += " Stop this cull as soon as the count is under the ceiling: it is not a quota to keep."
    return told
