"""What the numbers rest on, and where they come from: assumptions, the record in words, provenance."""

from __future__ import annotations

import platform
from dataclasses import replace
from datetime import date
from importlib.metadata import version as installed

from harvest.futures.prepared import survey_error
from harvest.plan import words
from harvest.plan.table import QuotaTable
from harvest.rates import Rates
from harvest.rates.approach import latest_usable_count
from harvest.record.model import Record
from harvest.record.private import PRIVATE, is_private, without_private

Pairs = list[tuple[str, str]]


def public(table: QuotaTable) -> QuotaTable:
    """The table as others may see it: private names and texts of its record replaced."""
    survey = PRIVATE if is_private(table.record, "survey") else table.rates.count_survey
    return replace(table, record=without_private(table.record), rates=replace(table.rates, count_survey=survey))


def rates_words(rates: Rates) -> str:
    """Where the rates come from."""
    return "stated, not fitted" if rates.origin == "stated" else rates.origin


def _lag_words(lag: int) -> str:
    if lag == 0:
        return "in the year of the quota they serve"
    return f"{words.years(lag)} before the quota they serve"


def _population(record: Record, rates: Rates) -> Pairs:
    pairs = [
        ("Season", "one short season, then growth" if record.season == "short" else "removals all year"),
        ("Counts", f"{words.moment(record)}, {_lag_words(record.lag)}"),
        ("Environment", f"lognormal yearly noise with {record.noise}"),
    ]
    total = sum(c.weight for c in record.curves)
    for choice in record.curves:
        own = "; ".join(f"{name.replace('_', ' ')} {d}" for name, d in choice.rates)
        told = f"{words.percent(choice.weight / total)} of the draws" + (f"; {own}" if own else "")
        pairs.append((f"Growth curve: {choice.name}", told))
    origin = rates_words(rates)
    pairs += [(f"Range of {name.replace('_', ' ')}", f"{d} ({origin})") for name, d in record.rates]
    if any(c.name in ("fox", "gompertz") for c in record.curves):
        low = words.percent(record.low_abundance)
        pairs.append(("Growth at low abundance", f"max growth of the Fox and Gompertz curves is meant at {low} of K"))
    for c in record.correlations:
        names = f"{c.first.replace('_', ' ')} and {c.second.replace('_', ' ')}"
        pairs.append(("Correlation", f"{names}: Spearman {c.value:g}"))
    if record.unit == "tonnes" and record.life.body_mass is not None:
        pairs.append(("Body mass", f"{record.life.body_mass:g} kg"))
    return pairs


def _evidence(record: Record, rates: Rates) -> Pairs:
    usable, losses = latest_usable_count(record), record.losses
    tau_cv = record.survey_plan.cv if record.survey_plan.cv is not None else usable.cv
    _, bias = survey_error(record)
    every = "every year" if record.survey_plan.every == 1 else f"every {words.years(record.survey_plan.every)}"
    unused = [s.name for s in record.surveys if s.kind == "index"]
    pairs = [
        (
            "Abundance from",
            f"{rates.count_survey} of {rates.count_year}: {usable.count:,.10g}, coefficient of variation "
            f"{words.percent(usable.cv)}",
        ),
        ("Survey bias (count divided by abundance)", f"{usable.survey.bias}, median {bias:.3g}"),
        ("Surveys ahead", f"{every}, coefficient of variation {words.percent(tau_cv)}"),
        ("Reported removals of past years", "taken as legal take, so losses come on top"),
        ("Wounding loss per retrieved animal", str(losses.wounding)),
        ("Unreported take, ratio to the legal take", str(losses.unreported)),
        ("Other human-caused deaths a year", str(losses.other)),
        ("Yearly implementation error", words.percent(losses.implementation_cv)),
    ]
    if unused:
        pairs.append(("Not used here", f"index surveys ({', '.join(unused)}): they serve a fit to the history"))
    return pairs + [("Note", note) for note in rates.notes]


def _aims(record: Record, table: QuotaTable) -> Pairs:
    aims, aim = record.objectives, table.recommendation.criterion
    pairs = [
        ("Limit", words.limit_words(record)),
        ("Collapse level", words.collapse_words(record)),
        ("Horizon", f"{words.years(table.horizon)} of quotas from {table.rates.first_year}"),
        ("Risk tolerance", words.percent(table.tolerance)),
    ]
    if aim.question != "limit":
        assumed = " (assumed: the record states no aim)" if aim.assumed else ""
        told = f"{aim.question} within {words.years(aim.year)} with {words.percent(aim.bound)} chance{assumed}"
        pairs.append(("Aim", told))
    if aims.target is not None:
        pairs.append(("Target", words.level(record, aims.target)))
    if aims.ceiling is not None:
        pairs.append(("Ceiling", words.level(record, aims.ceiling)))
    return pairs


def assumptions(table: QuotaTable) -> Pairs:
    """What the quota rests on: (topic, what is assumed). For others, of :func:`public` of the table."""
    rule = "none adopted: the same legal quota every year"
    if table.rule.feedback:
        share = words.percent(table.rule.without_count)
        rule = f"{table.rule}; without a count {share} of the last quota"
    return [
        ("Rule", rule),
        *_population(table.record, table.rates),
        *_evidence(table.record, table.rates),
        *_aims(table.record, table),
        ("Left out", "age and sex, movement in and out, other species, trends in habitat or climate"),
    ]


def record_pairs(record: Record) -> Pairs:
    """The record's names and texts: (field, content)."""
    pairs = [("Name", record.name), ("Species", record.species), ("Place", record.place), ("Unit", record.unit)]
    if record.present_quota is not None:
        pairs.append(("Present quota", words.number(record.present_quota, record.unit)))
    return [(k, v) for k, v in pairs if v] + [(k.replace("_", " ").capitalize(), v) for k, v in record.plan]


def provenance(table: QuotaTable) -> Pairs:
    """What a reviewer needs to run it again, and the day: (item, value)."""
    pairs = [
        ("Harvest version", table.version),
        ("Record digest (SHA-256)", table.rates.record_digest),
        ("Seed of the rates", str(table.rates.seed)),
        ("Seed of the futures", str(table.seed)),
        ("Draws", f"{len(table.rates):,}"),
        ("Futures a draw", str(table.future.futures_per_draw)),
        ("Rates", rates_words(table.rates)),
        ("Python", platform.python_version()),
        *((name, installed(name)) for name in ("numpy", "scipy", "pandas", "numba")),
    ]
    return [*pairs, ("Date", date.today().isoformat())]
