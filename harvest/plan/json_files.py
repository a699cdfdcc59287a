"""The results of each command as JSON; every key is explained in ``harvest.commands.json_keys``.

No dates, no machine names: the same record, settings and seed give the same bytes, whatever the threads.
Numbers have ten significant digits; null is "there is none" (or "never", for years).
"""

from __future__ import annotations

import json
import math
from collections.abc import Mapping
from dataclasses import asdict
from typing import Any

import numpy as np
import pandas as pd

from harvest.errors import CAUTION
from harvest.futures.project import Future
from harvest.futures.recommend import Recommendation
from harvest.futures.risk import RiskCurve
from harvest.futures.rules import Rule
from harvest.plan.assumptions import assumptions, public
from harvest.plan.sentences import findings, headline
from harvest.plan.table import QuotaTable
from harvest.rates import Rates
from harvest.rates.spread import Spread
from harvest.record.model import Record
from harvest.record.private import PRIVATE, is_private, without_private
from harvest.yields.summary import YieldSummary
from harvest.yields.thresholds import Thresholds


def plain(value: Any) -> Any:
    """Numbers, texts, lists and dictionaries as JSON knows them; ten significant digits; NaN and infinity null."""
    if isinstance(value, Mapping):
        return {str(k): plain(v) for k, v in value.items()}
    if isinstance(value, pd.DataFrame):
        return [plain(row) for row in value.astype(object).to_dict(orient="records")]
    if isinstance(value, np.ndarray):
        return [plain(v) for v in value]
    if isinstance(value, (list, tuple)):
        return [plain(v) for v in value]
    if isinstance(value, (bool, np.bool_)):
        return bool(value)
    if isinstance(value, (int, np.integer)):
        return int(value)
    if isinstance(value, (float, np.floating)):
        number = float(value)
        return float(f"{number:.10g}") if math.isfinite(number) else None
    return value


def json_bytes(content: Mapping[str, Any]) -> bytes:
    """The content as UTF-8 JSON, keys in their order."""
    return (json.dumps(plain(content), ensure_ascii=False, indent=1, allow_nan=False) + "\n").encode()


def _head(kind: str, record: Record, rates: Rates, version: str) -> dict[str, Any]:
    shown = without_private(record)
    return {
        "kind": kind,
        "version": version,
        "caution": CAUTION,
        "name": shown.name,
        "unit": record.unit,
        "season": record.season,
        "count_when": record.count_when,
        "record_digest": rates.record_digest,
        "seed": rates.seed,
        "draws": len(rates),
        "origin": rates.origin,
        "first_year": rates.first_year,
        "count_year": rates.count_year,
        "count_survey": PRIVATE if is_private(record, "survey") else rates.count_survey,
        "notes": rates.notes,
    }


def _spreads(spreads: Mapping[str, Spread]) -> dict[str, Any]:
    return {name: spread.plain() for name, spread in spreads.items()}


def _rule(rule: Rule) -> dict[str, Any]:
    return {"name": rule.name, "settings": rule.named_settings(), "without_count": rule.without_count}


def yield_json(record: Record, rates: Rates, summary: YieldSummary) -> dict[str, Any]:
    """What ``harvest yield`` writes."""
    return {
        **_head("yield", record, rates, summary.version),
        "spreads": _spreads(summary.spreads),
        "below_msy_abundance": summary.below_msy_abundance,
        "above_msy_rate": summary.above_msy_rate,
        "present_removals": None if is_private(record, "history.removals") else summary.present_removals,
        "declines_unharvested": summary.declines_unharvested,
        "unstable": summary.unstable,
        "biological_removal": asdict(summary.removal_bound),
        "yield_curve": summary.curve,
    }


def thresholds_json(record: Record, rates: Rates, found: Thresholds) -> dict[str, Any]:
    """What ``harvest thresholds`` writes."""
    return {
        **_head("thresholds", record, rates, found.version),
        "quota": found.quota,
        "spreads": _spreads(found.spreads),
        "beyond_fold": found.beyond_fold,
        "below_lower": found.below_lower,
        "doomed": found.doomed,
        "branches": found.branches,
    }


def future_json(record: Record, rates: Rates, future: Future) -> dict[str, Any]:
    """What ``harvest project`` writes."""
    return {
        **_head("project", record, rates, future.version),
        "futures_per_draw": future.futures_per_draw,
        "rule": _rule(future.rule),
        "projection_seed": future.seed,
        "ever_bounded": future.ever_bounded,
        "by_year": future.by_year,
        "measures": future.measures,
    }


def _recommendation(advice: Recommendation) -> dict[str, Any]:
    told = asdict(advice)
    del told["version"]
    for name in ("present", "zero"):
        values = told[name]
        told[name] = None if values is None else dict(zip(("quota", "probability", "se"), values, strict=True))
    told["limit_risk"] = dict(zip(("probability", "se"), told["limit_risk"], strict=True))
    return told


def _curve(curve: RiskCurve) -> dict[str, Any]:
    return {"quotas": curve.quotas, "probability": curve.probability, "se": curve.se}


def quota_json(table: QuotaTable) -> dict[str, Any]:
    """What ``harvest quota`` writes."""
    table = public(table)
    p, se = table.rule_risk
    return {
        **_head("quota", table.record, table.rates, table.version),
        "futures_per_draw": table.future.futures_per_draw,
        "projection_seed": table.seed,
        "ever_bounded": table.future.ever_bounded,
        "horizon": table.horizon,
        "tolerance": table.tolerance,
        "first_quota_awaits_count": table.awaits_count,
        "headline": headline(table),
        "findings": findings(table),
        "rule": _rule(table.rule),
        "rule_risk": {"probability": p, "se": se},
        "recommendation": _recommendation(table.recommendation),
        "quota_table": table.rows,
        "lookup_card": table.card,
        "steps": table.steps,
        "compared": table.compared,
        "risk_curve": _curve(table.curve),
        "assumptions": [{"topic": topic, "content": content} for topic, content in assumptions(table)],
    }
