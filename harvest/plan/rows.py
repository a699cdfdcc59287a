"""The rows of the quota table, and constant quotas side by side."""

from __future__ import annotations

import pandas as pd

from harvest.futures.project import Future
from harvest.futures.recommend import Recommendation
from harvest.futures.risk import RiskCurve
from harvest.futures.rounding import round_down
from harvest.futures.rules import Rule
from harvest.record.model import Record

#: Columns of the table's rows, and the columns of the projection's years that they come from.
SOURCES = {
    "quota_year": "quota_year",
    "quota": "quota_median",
    "quota_low90": "quota_low90",
    "quota_high90": "quota_high90",
    "removals": "removals_mean",
    "count_year": "count_year",
    "abundance": "abundance_median",
    "abundance_low90": "abundance_low90",
    "abundance_high90": "abundance_high90",
    "below_limit": "below_limit",
    "ever_below_limit": "ever_below_limit",
    "ever_collapsed": "ever_collapsed",
}


def plan_rows(future: Future, rule: Rule, years: int, unit: str) -> pd.DataFrame:
    """The plan's years: columns of :data:`SOURCES`, quotas as they would be printed."""
    table = future.by_year.head(years)
    rows = pd.DataFrame({name: table[source] for name, source in SOURCES.items()}).reset_index(drop=True)
    quotas = ["quota", "quota_low90", "quota_high90"]
    if rule.feedback:
        rows[quotas] = rows[quotas].map(lambda quota: round_down(float(quota), unit))
    return rows


def least_risk(curve: RiskCurve, horizon: int) -> float:
    """The quota of least risk: zero, unless another is better by more than three standard errors."""
    p, se = curve.probability["ever_below_limit"][:, horizon - 1], curve.se["ever_below_limit"][:, horizon - 1]
    best = int(p.argmin())
    return float(curve.quotas[best]) if p[0] - p[best] > 3.0 * float(se[0]) else 0.0


def _named(record: Record, curve: RiskCurve, advice: Recommendation, horizon: int) -> dict[float, str]:
    """The quotas that are always shown, with what each is."""
    named: dict[float, list[str]] = {0.0: ["no take"]}
    if record.present_quota is not None:
        named.setdefault(record.present_quota, []).append("present quota")
    best = least_risk(curve, horizon)
    if advice.qualifies:
        named.setdefault(advice.quota, []).append("recommended")
    elif advice.criterion.question != "reduction" and best == 0.0 and not advice.further_runs:
        named[0.0].append("closure")
    if best > 0.0:
        named.setdefault(best, []).append("least risk")
    return {quota: ", ".join(what) for quota, what in named.items()}


def compare_quotas(record: Record, curve: RiskCurve, advice: Recommendation, horizon: int) -> pd.DataFrame:
    """A few constant quotas side by side, from the stored curve: zero and the present quota always.

    Returns
    -------
    DataFrame
        ``quota``, ``what``, ``ever_below_limit``, ``ever_below_limit_se``, ``ever_collapsed``, ``meets`` (the
        probability of the criterion's event).
    """
    named = _named(record, curve, advice, horizon)
    most = max(named)
    top = min(float(curve.quotas[-1]), 1.6 * most) if most > 0.0 else 0.7 * float(curve.quotas[-1])
    extra = [round_down(top * i / 8, record.unit) for i in range(1, 9)]
    quotas = sorted({*named, *(q for q in extra if all(abs(q - n) > top / 24 for n in named))})
    rows = []
    for quota in quotas:
        p, se = curve.at("ever_below_limit", quota, horizon)
        collapsed, _ = curve.at("ever_collapsed", quota, horizon)
        meets, _ = curve.at(advice.criterion.event, quota, advice.criterion.year)
        rows.append((quota, named.get(quota, ""), p, se, collapsed, meets))
    columns = ["quota", "what", "ever_below_limit", "ever_below_limit_se", "ever_collapsed", "meets"]
    return pd.DataFrame(rows, columns=columns)
