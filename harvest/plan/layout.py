"""The quota table's parts as headed tables of values, once, for the screen and for Excel.

A part is a title, columns (heading, kind of number) and rows of plain values; the writers only format.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from harvest.plan import words
from harvest.plan.table import QuotaTable

Value = str | float | None


@dataclass(frozen=True)
class Part:
    """One table: ``kinds`` are "text", "year", "amount", "probability", "error", "share" or "index"."""

    title: str
    note: str
    headings: tuple[str, ...]
    kinds: tuple[str, ...]
    rows: tuple[tuple[Value, ...], ...]


def _quota_part(table: QuotaTable) -> Part:
    record, what = table.record, words.kind(table.record)
    rows, feedback = table.rows, table.rule.feedback
    spread = ("90% from", "to") if feedback else ()
    headings = (
        "Year",
        "Legal quota",
        *spread,
        "Expected total removals",
        "Next count",
        "Abundance then",
        "90% from",
        "to",
        "Below limit then",
        "Ever below limit by then",
        "Ever collapsed by then",
    )
    kinds = ("year", *["amount"] * (4 if feedback else 2), "year", *["amount"] * 3, *["probability"] * 3)
    names = [n for n in rows.columns if feedback or n not in ("quota_low90", "quota_high90")]
    values = tuple(tuple(float(row[n]) for n in names) for _, row in rows.iterrows())
    note = f"In {what}; abundance {words.moment(record)}, median and 90% interval over futures. "
    note += f"The limit is {words.limit_words(record)}; collapsed is below {words.collapse_words(record)}."
    first = table.rates.first_year
    if table.awaits_count:
        note += f" The quota of {first} follows from a count that is not made yet: quotas are medians of what may come."
    elif feedback:
        note += f" {first} is the quota to set; later years are medians of what the rule will give."
    return Part(f"Quota table, {words.years_words(first, len(rows))}", note, headings, kinds, values)


def _card_note(table: QuotaTable) -> str:
    """What the card's counts are, and how the card relates to the risk that is shown."""
    note = f"The count that serves each year's quota, as counted ({words.moment(table.record)}). Rule: {table.rule}."
    if table.rule.feedback:
        if table.count_bias != 1.0:
            note += f" The rule divides a count by {table.count_bias:.3g}, the survey's stated bias."
        return note + (
            " Each band has the quota of its lower edge, so the card never gives more than the rule at the count "
            "itself; the risk shown is the rule's, and the card is on its safe side."
        )
    if len(table.card) > 2:
        reduction = table.recommendation.criterion.question == "reduction"
        level = table.record.objectives.ceiling if reduction else table.record.objectives.limit
        edge = words.number(float(table.card["count_below"].iloc[0]), table.record.unit)
        name = "ceiling" if reduction else "limit"
        told = f"the {name}, {words.level(table.record, level)}" if level is not None else f"the {name}"
        if level is not None and level.of_capacity:
            told += " at its median"
        if table.count_bias != 1.0:
            told += f", times {table.count_bias:.3g}, the survey's stated bias"
        note += f" A count under {edge} ({told}) stops the take until a review; the risk does not count on it."
    return note


def _card_part(table: QuotaTable) -> Part:
    rows: list[tuple[Value, ...]] = []
    for _, row in table.card.iterrows():
        low, high, quota, share = (float(row[n]) for n in ("count_from", "count_below", "quota", "share_of_last"))
        given: Value = quota if math.isnan(share) else f"{words.percent(share)} of last quota"
        if math.isnan(low):
            rows.append((str(row["when"]), "", given))
        else:
            rows.append((low, None if math.isnan(high) else high, given))
    kinds = ("amount", "amount", "amount")
    return Part("Lookup card", _card_note(table), ("Count from", "to below", "Legal quota"), kinds, tuple(rows))


def _steps_part(table: QuotaTable) -> Part:
    rows = tuple((r["step"], float(r["value"]), r["of"], r["why"]) for _, r in table.steps.iterrows())
    note = f"In {words.kind(table.record)}" + ("." if table.rule.feedback else " a year.")
    if not table.is_recommended and not table.rule.feedback:
        note += " The recommended quota is in the table below."
    return Part("Why this number", note, ("Step", "Value", "Of", "Why"), ("text", "amount", "text", "text"), rows)


def _compared_part(table: QuotaTable) -> Part:
    limit = words.limit_words(table.record)
    names = ["quota", "what", "ever_below_limit", "ever_below_limit_se", "ever_collapsed"]
    kinds = ["amount", "text", "probability", "error", "probability"]
    headings = ["Legal quota a year", "", "Ever below limit", "± Monte Carlo", "Ever collapsed"]
    aim = table.recommendation.criterion
    if aim.question != "limit":
        names.append("meets")
        kinds.append("probability")
        goal = "Back above limit" if aim.question == "recovery" else "Under the ceiling"
        headings.append(f"{goal} in {words.years(aim.year)}")
    rows = tuple(tuple(r[n] for n in names) for _, r in table.compared.iterrows())
    note = f"Chances within {words.years(table.horizon)} under the same quota every year; the limit is {limit}."
    return Part("Other quotas", note, tuple(headings), tuple(kinds), rows)


def parts(table: QuotaTable) -> tuple[Part, ...]:
    """Quota table, lookup card, steps, other quotas."""
    return (_quota_part(table), _card_part(table), _steps_part(table), _compared_part(table))


def shown(value: Value, kind: str, unit: str) -> str:
    """A value as text on the screen."""
    if value is None:
        return "and above"
    if isinstance(value, str):
        return value
    if kind == "year":
        return f"{value:.0f}"
    if kind == "probability":
        return words.short_probability(value)
    if kind == "error":
        return words.error(value)
    return words.number(value, unit)
