"""The quota table: what goes into the management plan, with the risk beside each number."""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass, field

import numpy as np
import pandas as pd

from harvest import __version__
from harvest.errors import SettingsError
from harvest.futures.engine import Prepared, prepare, workers
from harvest.futures.project import Future, project_prepared
from harvest.futures.recommend import Recommendation, pick_question, recommend_quota
from harvest.futures.risk import POINTS, RiskCurve, curve_years, highest_quota, trace_prepared
from harvest.futures.rounding import round_down
from harvest.futures.rules import Rule, fixed_quota, rule_of
from harvest.plan.card import lookup_card
from harvest.plan.steps import quota_steps, rule_steps
from harvest.rates import Rates
from harvest.record.model import Record

#: (what is being computed, steps done, steps in all)
Report = Callable[[str, int, int], None]


@dataclass(frozen=True)
class QuotaTable:
    """A quota with everything that stands behind it.

    Attributes
    ----------
    record, rates, rule
        ``rule`` is the record's or the caller's; else the recommended quota every year.
    recommendation : Recommendation
        The constant legal quota read off the risk curve (also where a rule with feedback is in force).
    curve : RiskCurve
    future : Future
        The rule over the horizon; the table's years are its first.
    rows : DataFrame
        One row a plan year: ``quota_year``, ``quota`` (legal; rounded in the first year and under a fixed
        quota, else the median), ``quota_low90``, ``quota_high90``, ``removals`` (expected total),
        ``count_year``, ``abundance`` (median at that count), ``abundance_low90``, ``abundance_high90``,
        ``below_limit``, ``ever_below_limit``, ``ever_collapsed``.
    card : DataFrame
        See :func:`harvest.plan.card.lookup_card`.
    steps : DataFrame
        See :mod:`harvest.plan.steps`.
    compared : DataFrame
        Constant quotas side by side, zero and the present quota among them: ``quota``, ``what``,
        ``ever_below_limit``, ``ever_below_limit_se``, ``ever_collapsed``, ``meets`` (the criterion's probability).
    count_bias : float
        What the lookup card's counts are divided by.
    horizon, seed, version
    """

    record: Record
    rates: Rates
    rule: Rule
    recommendation: Recommendation
    curve: RiskCurve
    future: Future
    rows: pd.DataFrame
    card: pd.DataFrame
    steps: pd.DataFrame
    compared: pd.DataFrame
    count_bias: float
    horizon: int
    seed: int
    version: str = field(default=__version__)

    @property
    def first_quota(self) -> float:
        """Legal quota of the first plan year, rounded."""
        return float(self.rows["quota"].iloc[0])

    @property
    def rule_risk(self) -> tuple[float, float]:
        """Chance of ever falling below the limit within the horizon under the rule, and its standard error."""
        last = self.future.by_year.iloc[self.horizon - 1]
        return float(last["ever_below_limit"]), float(last["ever_below_limit_se"])


def check_plan_years(years: int) -> None:
    """Plan years: 1 to 10."""
    if not 1 <= years <= 10:
        raise SettingsError(f"{years} plan years are not allowed: give a whole number from 1 to 10")


def _trace(
    prepared: Prepared,
    quotas: np.ndarray,
    years: int,
    pool: ThreadPoolExecutor,
    seed: int,
    report: Report | None,
    losses: bool,
) -> RiskCurve:
    label = "risk against quota" if losses else "the same without losses"

    def progress(done: int, total: int) -> None:
        if report:
            report(label, done, total)

    return trace_prepared(prepared, quotas, years, pool, seed=seed, losses=losses, progress=progress)


def _rows(future: Future, rule: Rule, first: float, plan_years: int, unit: str) -> pd.DataFrame:
    """The table's rows from the projection's years, quotas rounded down."""
    years = future.by_year.head(plan_years)
    rows = pd.DataFrame(
        {
            "quota_year": years["quota_year"],
            "quota": years["quota_median"],
            "quota_low90": years["quota_low90"],
            "quota_high90": years["quota_high90"],
            "removals": years["removals_mean"],
            "count_year": years["count_year"],
            "abundance": years["abundance_median"],
            "abundance_low90": years["abundance_low90"],
            "abundance_high90": years["abundance_high90"],
            "below_limit": years["below_limit"],
            "ever_below_limit": years["ever_below_limit"],
            "ever_collapsed": years["ever_collapsed"],
        }
    ).reset_index(drop=True)
    columns = ["quota", "quota_low90", "quota_high90"]
    if rule.feedback:
        rows[columns] = rows[columns].map(lambda quota: round_down(float(quota), unit))
        rows.loc[0, columns] = first
    else:
        rows[columns] = first
    return rows


def _compared(record: Record, curve: RiskCurve, advice: Recommendation, horizon: int) -> pd.DataFrame:
    """A few constant quotas side by side, from the stored curve: zero and the present quota always."""
    named: dict[float, str] = {0.0: "no take"}
    if record.present_quota is not None:
        named[record.present_quota] = "present quota"
    if advice.quota > 0.0:
        named[advice.quota] = "recommended" if advice.quota not in named else named[advice.quota] + ", recommended"
    span = 1.6 * max([*named, 1e-9])
    top = min(float(curve.quotas[-1]), span)
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


def make_quota_table(
    record: Record,
    rates: Rates,
    rule: Rule | None = None,
    *,
    seed: int | None = None,
    question: str | None = None,
    tolerance: float | None = None,
    horizon: int | None = None,
    plan_years: int | None = None,
    futures_per_draw: int = 1,
    threads: int | None = None,
    report: Report | None = None,
) -> QuotaTable:
    """Make the quota table of a record.

    Parameters
    ----------
    rule : Rule
        Default: the record's rule; without one, the recommended constant quota.
    question : {"limit", "recovery", "reduction"}
        Default: what the population's standing asks (:func:`harvest.futures.recommend.pick_question`).
    tolerance, horizon, plan_years
        In place of the record's.
    report : callable
        Told what is being computed.

    Raises
    ------
    SettingsError
        A setting out of range.
    """
    plan_years = record.objectives.plan_years if plan_years is None else plan_years
    check_plan_years(plan_years)
    horizon = record.objectives.horizon if horizon is None else horizon
    years = max(curve_years(record), horizon)
    question = question or pick_question(record, rates)
    seed = rates.seed if seed is None else seed
    if rule is None and record.rule is not None:
        rule = rule_of(record.rule)
    present = [] if record.present_quota is None else [record.present_quota]
    with workers(threads) as pool:
        prepared = prepare(record, rates, futures_per_draw=futures_per_draw)
        lossless = prepare(record, rates, futures_per_draw=futures_per_draw, losses=False)
        top = highest_quota(record, rates)
        for _ in range(6):
            quotas = np.unique([0.0, *present, *np.linspace(0.0, top, POINTS)])
            curve = _trace(prepared, quotas, years, pool, seed, report, losses=True)
            advice = recommend_quota(record, curve, question, tolerance=tolerance, horizon=horizon)
            if not advice.at_edge:
                break
            top *= 2.0
        without_losses = _trace(lossless, quotas, years, pool, seed, report, losses=False)
        rule = fixed_quota(advice.quota) if rule is None else rule
        future = project_prepared(
            prepared,
            rule,
            max(horizon, plan_years),
            pool,
            seed=seed,
            progress=(lambda done, total: report("the plan's years", done, total)) if report else None,
        )
    first = round_down(float(future.by_year["quota_median"].iloc[0]), record.unit)
    feedback = rule.feedback
    return QuotaTable(
        record=record,
        rates=rates,
        rule=rule,
        recommendation=advice,
        curve=curve,
        future=future,
        rows=_rows(future, rule, first if feedback else rule.settings[0], plan_years, record.unit),
        card=lookup_card(record, rates, rule, prepared.bias),
        steps=rule_steps(record, rates, rule, first)
        if feedback
        else quota_steps(record, rates, advice, without_losses),
        compared=_compared(record, curve, advice, horizon),
        count_bias=prepared.bias,
        horizon=horizon,
        seed=seed,
    )
