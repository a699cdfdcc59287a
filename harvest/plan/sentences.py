"""The answer in words: what to take, how sure, and what would change it."""

from __future__ import annotations

from harvest.futures.recommend import Criterion, Recommendation
from harvest.plan import words
from harvest.plan.rows import least_risk
from harvest.plan.table import QuotaTable
from harvest.record.model import Level, Record


def headline(table: QuotaTable) -> str:
    """The finding in one sentence; a quota that breaks a bound is never told without saying so."""
    what, quota = words.kind(table.record), words.number(table.first_quota, table.record.unit)
    if table.rule.feedback:
        return _rule_headline(table, f"{quota} {what}")
    if table.given and not table.is_recommended:
        return f"A legal quota of {quota} {what} a year, as asked{_failing(table)}."
    if table.recommendation.criterion.question == "reduction":
        return _reduction_headline(table, what)
    return _recommended_headline(table, f"{quota} {what}")


def _failing(table: QuotaTable) -> str:
    """What to add where the rule in force does not do what is asked of it."""
    record, aim = table.record, table.recommendation.criterion
    if aim.question != "limit":
        chance, _ = table.rule_chance(aim.event, aim.year)
        if chance < aim.bound:
            return (
                f", but its chance of {_event_words(record, aim)} is {words.probability(chance)} and not "
                f"{words.percent(aim.bound)}"
            )
    p, _ = table.rule_risk
    if aim.question == "recovery" or p <= table.tolerance:
        return ""
    return f", but its risk of {words.probability(p)} is above your tolerance of {words.percent(table.tolerance)}"


def _rule_headline(table: QuotaTable, quota: str) -> str:
    year = table.rates.first_year
    if table.awaits_count:
        told = f"The quota of {year} follows from the count of {year - table.record.lag}, by the lookup card"
        return told + _failing(table) + "."
    return f"The rule gives a legal quota of {quota} in {year}{_failing(table)}."


def _reduction_headline(table: QuotaTable, what: str) -> str:
    advice, unit = table.recommendation, table.record.unit
    quota = words.number(advice.quota, unit)
    if not advice.qualifies:
        return f"No cull examined (up to {quota} {what} a year) gets under the ceiling in time."
    if advice.quota == 0.0:
        return "No cull is needed to get under the ceiling in time."
    told = f"Take at least {quota} {what} a year to get under the ceiling in time"
    soon, _ = table.rule_chance("ever_below_limit", advice.criterion.year)
    if soon > table.tolerance:
        level = "the lower limit" if table.record.objectives.limit is not None else "the collapse level"
        told += (
            f", but that risks falling below {level}: {words.probability(soon)}, above your tolerance of "
            f"{words.percent(table.tolerance)}"
        )
    return told + "."


def _recommended_headline(table: QuotaTable, quota: str) -> str:
    advice, what = table.recommendation, words.kind(table.record)
    if advice.qualifies and advice.quota > 0.0:
        at_least = " (the largest examined; more may qualify)" if advice.at_edge else ""
        span = f" for {words.years(table.horizon)}" if table.horizon < 5 else ""
        return f"Take at most {quota} a year{span}{at_least}."
    if advice.qualifies:
        one = "one animal" if table.record.unit == "animals" else f"the least printable amount of {what}"
        return f"Close the season: what you accept allows less than {one} a year."
    if advice.further_runs or least_risk(table.curve, table.horizon) > 0.0:
        return (
            "Even without a take what you accept is not met, but risk falls as more is taken: look at the rates first."
        )
    return f"Close the season: no quota of {what}, and not even closure, meets what you accept."


def _event_words(record: Record, aim: Criterion) -> str:
    """The criterion's event, as "the chance of …"."""
    span = words.years(aim.year)
    if aim.question == "limit":
        return f"{_below_words(record)} in {span}"
    if aim.question == "recovery":
        return f"being back above {words.limit_words(record)} within {span}"
    stated = record.objectives.ceiling
    ceiling = words.level(record, stated) if stated is not None else "the ceiling"
    return f"being under {ceiling} within {span}"


def _below_words(record: Record) -> str:
    return f"ever being below {words.limit_words(record)}"


def _asked_words(aim: Criterion) -> str:
    if aim.assumed:
        return f"the record states no aim, so at least {words.percent(aim.bound)} is assumed"
    if aim.at_least:
        return f"you ask for at least {words.percent(aim.bound)}"
    return f"your tolerance is {words.percent(aim.bound)}"


def findings(table: QuotaTable) -> list[str]:
    """The sentences under the headline: the risk, the comparison with no take and the present quota."""
    told = []
    if not table.is_recommended:
        told += _rule_sentences(table)
    told += _advice_sentences(table)
    if table.recommendation.criterion.question != "limit" and table.is_recommended:
        recovery = table.recommendation.criterion.question == "recovery"
        told.append(_collapse_sentence(table) if recovery else _limit_sentence(table))
    target = table.record.objectives.target
    if target is not None:
        told.append(_target_sentence(table, target))
    return told + _warnings(table)


def _rule_sentences(table: QuotaTable) -> list[str]:
    """What the rule in force does, where it is not the recommended quota."""
    record, aim = table.record, table.recommendation.criterion
    quota = words.number(table.first_quota, record.unit)
    under = "Under the rule" if table.rule.feedback else f"With {quota} a year"
    told = []
    if aim.question != "limit":
        chance, se = table.rule_chance(aim.event, aim.year)
        told.append(
            f"{under} the chance of {_event_words(record, aim)} is {words.probability(chance)} "
            f"({words.error(se)} Monte Carlo); {_asked_words(aim)}."
        )
    if aim.question == "recovery":
        return [*told, _collapse_sentence(table)]
    p, se = table.rule_risk
    against = "within" if p <= table.tolerance else "above"
    told.append(
        f"{under} the chance of {_below_words(record)} in {words.years(table.horizon)} is {words.probability(p)} "
        f"({words.error(se)} Monte Carlo), {against} your tolerance of {words.percent(table.tolerance)}."
    )
    return told


def _advice_sentences(table: QuotaTable) -> list[str]:
    """The recommended constant quota, no take, and the present quota."""
    record, advice = table.record, table.recommendation
    aim, quota = advice.criterion, words.number(advice.quota, record.unit)
    start = f"With {quota} a year" if table.is_recommended else f"For comparison: with a constant {quota} a year"
    if advice.quota == 0.0:
        start = "Without a take" if table.is_recommended else "For comparison: without a take"
    told = [
        f"{start} the chance of {_event_words(record, aim)} is {words.probability(advice.probability)} "
        f"({words.error(advice.se)} Monte Carlo); {_asked_words(aim)}."
    ]
    if not advice.qualifies:
        side = "below what is asked" if aim.at_least else "above the tolerance"
        told.append(f"That is {100.0 * advice.miss:.3g} percentage points {side}.")
    others = [] if advice.quota == 0.0 else [f"{words.probability(advice.zero[1])} without a take"]
    if advice.present is not None and advice.present[0] not in (0.0, advice.quota):
        present = words.number(advice.present[0], record.unit)
        others.append(f"{words.probability(advice.present[1])} with the present quota of {present}")
    if others:
        told.append(f"That chance is {' and '.join(others)}.")
    return told


def _limit_sentence(table: QuotaTable) -> str:
    """What the recommended cull does to the lower limit, within the aim's years and if it goes on."""
    record, advice = table.record, table.recommendation
    year = advice.criterion.year
    soon, _ = table.curve.at("ever_below_limit", advice.quota, year)
    told = f"The chance of {_below_words(record)} is {words.probability(soon)} in {words.years(year)}"
    later, _ = advice.limit_risk
    if table.horizon > year:
        told += f", and {words.probability(later)} if the same quota goes on for {words.years(table.horizon)}"
    told += f"; your tolerance is {words.percent(table.tolerance)}."
    if later > table.tolerance:
        told += " Stop this cull as soon as the count is under the ceiling: it is not a quota to keep."
    return told


def _collapse_sentence(table: QuotaTable) -> str:
    """Below its limit already, what a population risks is collapse."""
    p, se = table.rule_chance("ever_collapsed", table.horizon)
    return (
        f"The chance of collapse (below {words.collapse_words(table.record)}) in {words.years(table.horizon)} is "
        f"{words.probability(p)} ({words.error(se)})."
    )


def _target_sentence(table: QuotaTable, target: Level) -> str:
    """The chance of standing at the target at the end of the horizon."""
    p, _ = table.rule_chance("at_target", table.horizon)
    when = "after 1 year" if table.horizon == 1 else f"at the end of {words.years(table.horizon)}"
    level = words.level(table.record, target)
    return f"The chance of being at or above the target of {level} {when} is {words.probability(p)}."


def _warnings(table: QuotaTable) -> list[str]:
    """What makes the answer doubtful: a growth curve that crashes, risk that falls as more is taken."""
    record, advice, told = table.record, table.recommendation, []
    crashed = table.future.ever_bounded
    if crashed >= 0.01:
        told.append(
            f"Warning: in {words.probability(crashed)} of the futures the growth curve itself falls to zero, far above "
            "the carrying capacity; part of the risk is the curve's and not the quota's."
        )
    told += _falling_risk(record, advice, least_risk(table.curve, table.horizon))
    if table.horizon < record.objectives.plan_years:
        told.append(f"Risk is counted over {words.years(table.horizon)} only, so the table ends there.")
    return told


def _falling_risk(record: Record, advice: Recommendation, best: float) -> list[str]:
    told = []
    if best > 0.0:
        told.append(
            f"Warning: the risk is least at a quota of {words.number(best, record.unit)}, not without a take; a risk "
            "that falls as more is taken calls for a second look at the growth rate and the shape."
        )
    for low, high in advice.further_runs:
        low_text, high_text = words.number(low, record.unit), words.number(high, record.unit)
        told.append(f"Quotas from {low_text} to {high_text} would meet what you accept, and are not recommended.")
    return told
