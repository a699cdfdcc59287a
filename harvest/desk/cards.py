"""The few figures under an answer: what it is, the number, its uncertainty."""

from __future__ import annotations

from harvest.plan import words
from harvest.plan.spreads import FEW
from harvest.plan.table import QuotaTable
from harvest.rates.spread import Spread
from harvest.record.model import Record
from harvest.yields import Thresholds, YieldSummary
from harvest.yields.summary import standing_year

Card = tuple[str, str, str]


def between(spread: Spread, unit: str) -> str:
    """The 90% interval in words."""
    if spread.share < FEW:
        return f"in {words.short_probability(spread.share)} of the draws"
    some = f", in the {words.short_probability(spread.share)} of draws that have one" if spread.share < 1.0 else ""
    return f"90% between {words.number(spread.low90, unit)} and {words.number(spread.high90, unit)}{some}"


def season_cards(record: Record, table: QuotaTable, yields: YieldSummary, found: Thresholds) -> list[Card]:
    """Today's abundance, the yield that holds it, the present quota and the margin to the fold."""
    unit, kind = record.unit, words.kind(record)
    today, held, margin = (
        yields.spreads["abundance"],
        yields.spreads["sustainable_today"],
        found.spreads["margin_to_fold"],
    )
    when = f"{words.moment(record)}, {standing_year(record, table.rates)}"
    cards = [
        (f"Abundance {when}", words.number(today.median, unit), between(today, unit)),
        ("Removals that hold it, a year", words.number(held.median, unit), between(held, unit)),
    ]
    present = table.recommendation.present
    if present is not None:
        aim = table.recommendation.criterion
        risk, _ = table.curve.at("ever_below_limit", present[0], table.horizon)
        level = "the limit" if record.objectives.limit is not None else "the collapse level"
        told = f"chance of falling below {level} {words.short_probability(risk)}"
        if aim.question != "limit":
            told = f"chance of meeting the aim {words.short_probability(present[1])}"
        cards.append(("Present quota, a year", words.number(present[0], unit), told))
    else:
        cards.append(("Present quota", "not stated", f"{kind} a year"))
    cards.append(("From this quota to the fold", words.number(margin.median, unit), between(margin, unit)))
    return cards
