"""What the numbers rest on, and where they come from: assumptions, the record in words, provenance."""

from __future__ import annotations

import platform
from dataclasses import replace
from datetime import date
from importlib.metadata import version as installed

from harvest.plan import words
from harvest.plan.table import QuotaTable
from harvest.rates import Rates
from harvest.record.model import Record

Pairs = list[tuple[str, str]]


def is_private(record: Record, path: str) -> bool:
    """Whether the record hides a field: by its own path ("plan.author") or its table's ("plan")."""
    return any(path == name or path.startswith(name + ".") for name in record.private)


def without_private(record: Record) -> Record:
    """The record with its private names and texts replaced, for everything that leaves the program."""

    def shown(path: str, text: str) -> str:
        return words.PRIVATE if text and is_private(record, path) else text

    return replace(
        record,
        name=shown("name", record.name),
        species=shown("species", record.species),
        place=shown("place", record.place),
        surveys=tuple(replace(s, name=shown("survey", s.name)) for s in record.surveys),
        plan=tuple((key, shown(f"plan.{key}", text)) for key, text in record.plan),
    )


def public(table: QuotaTable) -> QuotaTable:
    """The table as others may see it: private names and texts of its record replaced."""
    survey = words.PRIVATE if is_private(table.record, "survey") else table.rates.count_survey
    return replace(table, record=without_private(table.record), rates=replace(table.rates, count_survey=survey))


def _lag_words(lag: int) -> str:
    if lag == 0:
        return "in the year of the quota they serve"
    return f"{lag} year{'s' if lag > 1 else ''} before the quota they serve"


def _population(record: Record) -> Pairs:
    pairs = [
        ("Season", "one short season, then growth" if record.season == "short" else "removals all year"),
        ("Counts", f"{words.moment(record)}, {_lag_words(record.lag)}"),
        ("Environment", f"lognormal yearly noise with {record.noise}"),
    ]
    total = sum(c.weight for c in record.curves)
    for choice in record.curves:
        own = "; ".join(f"{name} {d}" for name, d in choice.rates)
        told = f"{words.percent(choice.weight / total)} of the draws" + (f"; {own}" if own else "")
        pairs.append((f"Growth curve: {choice.name}", told))
    pairs += [(f"Range of {name.replace('_', ' ')}", f"{d} (stated, not fitted)") for name, d in record.rates]
    for c in record.correlations:
        pairs.append(("Correlation", f"{c.first} and {c.second}: Spearman {c.value:g}"))
    return pairs


def _aims(record: Record, table: QuotaTable) -> Pairs:
    aims = record.objectives
    pairs = [
        ("Limit", words.limit_words(record)),
        ("Collapse level", words.collapse_words(record)),
        ("Horizon", f"{table.horizon} quota years from {table.rates.first_year}"),
        ("Risk tolerance", words.percent(table.recommendation.criterion.bound))
        if table.recommendation.criterion.question == "limit"
        else (
            "Aim",
            f"{table.recommendation.criterion.question} within {table.recommendation.criterion.year} years "
            f"with {words.percent(table.recommendation.criterion.bound)} chance",
        ),
    ]
    if aims.target is not None:
        pairs.append(("Target", words.level(record, aims.target)))
    if aims.ceiling is not None:
        pairs.append(("Ceiling", words.level(record, aims.ceiling)))
    return pairs


def _evidence(record: Record, rates: Rates) -> Pairs:
    losses = record.losses
    unused = [s.name for s in record.surveys if s.kind == "index"]
    pairs = [
        ("Abundance from", f"{rates.count_survey} of {rates.count_year}, with its coefficient of variation"),
        ("Wounding loss per retrieved animal", str(losses.wounding)),
        ("Unreported take, ratio to the legal take", str(losses.unreported)),
        ("Other human-caused deaths a year", str(losses.other)),
        ("Yearly implementation error", words.percent(losses.implementation_cv)),
    ]
    if unused:
        pairs.append(("Not used here", f"index surveys ({', '.join(unused)}): they serve a fit to the history"))
    return pairs + [("Note", note) for note in rates.notes]


def assumptions(table: QuotaTable) -> Pairs:
    """What the quota rests on: (topic, what is assumed). For others, of :func:`public` of the table."""
    record = table.record
    rule = "none adopted: the same legal quota every year" if not table.rule.feedback else str(table.rule)
    return [
        ("Rule", rule),
        *_population(record),
        *_evidence(record, table.rates),
        *_aims(record, table),
        ("Left out", "age and sex, movement in and out, other species, trends in habitat or climate"),
    ]


def record_pairs(record: Record) -> Pairs:
    """The record's names and texts: (field, content)."""
    pairs = [("Name", record.name), ("Species", record.species), ("Place", record.place), ("Unit", record.unit)]
    if record.present_quota is not None:
        pairs.append(("Present quota", words.number(record.present_quota, record.unit)))
    return [(k, v) for k, v in pairs if v] + [(k.replace("_", " ").capitalize(), v) for k, v in record.plan]


def provenance(table: QuotaTable, *, dated: bool = True) -> Pairs:
    """What a reviewer needs to run it again: (item, value); the date only where it is wanted."""
    pairs = [
        ("Harvest version", table.version),
        ("Record digest (SHA-256)", table.rates.record_digest),
        ("Seed", str(table.seed)),
        ("Draws", f"{len(table.rates):,}"),
        ("Futures a draw", str(table.future.futures_per_draw)),
        ("Rates", f"{table.rates.origin}, not fitted" if table.rates.origin == "stated" else table.rates.origin),
        ("Python", platform.python_version()),
        *((name, installed(name)) for name in ("numpy", "scipy", "pandas", "numba")),
    ]
    return [*pairs, ("Date", date.today().isoformat())] if dated else pairs
