"""The quota table: what goes into the management plan, with the risk beside each number."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import pandas as pd

from harvest import __version__
from harvest.errors import SettingsError
from harvest.futures.engine import Progress, workers
from harvest.futures.find import find_prepared, settle_criterion
from harvest.futures.prepared import counts_ahead, prepare
from harvest.futures.project import Future, project_prepared
from harvest.futures.recommend import (
    Criterion,
    Recommendation,
    pick_question,
    read_off,
    recommend_quota,
)
from harvest.futures.risk import RiskCurve, curve_years
from harvest.futures.rounding import precision_words, round_down
from harvest.futures.rules import Rule, fixed_quota, rule_of
from harvest.kernels.codes import SIMULATED
from harvest.plan.card import lookup_card
from harvest.plan.rows import compare_quotas, plan_rows
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
    record, rates, rule, given
        ``given`` tells whether the caller or the record gave the rule; else it is the recommended quota every
        year (where no cull gets under a ceiling in time: the present quota, or none).
    recommendation : Recommendation
        The constant legal quota read off the risk curve (also where a rule with feedback is in force).
    curve : RiskCurve
    without_losses : (float, bool) or None
        The unrounded quota if every dead animal were a reported one, and whether there is one; None where
        the rule in force is not the recommended quota.
    future : Future
        The rule over the horizon; the table's years are its first.
    rows : DataFrame
        One row a plan year, none beyond the horizon or a reduction's aim: ``quota_year``, ``quota`` (legal,
        rounded; under a rule with feedback the median, save a first year whose count is on record),
        ``quota_low90``, ``quota_high90``, ``removals`` (expected total), ``count_year``, ``abundance`` (median
        at that count), ``abundance_low90``, ``abundance_high90``, ``below_limit``, ``ever_below_limit``,
        ``ever_collapsed``.
    card : DataFrame
        See :func:`harvest.plan.card.lookup_card`.
    compared : DataFrame
        See :func:`harvest.plan.rows.compare_quotas`.
    first_count : int
        What the rule has in the first year: ``harvest.kernels.codes`` RECORDED, SIMULATED (not made yet) or
        MISSING.
    tolerance, horizon : float, int
        As used.
    count_bias : float
        What the lookup card's counts are divided by.
    seed, version
    """

    record: Record
    rates: Rates
    rule: Rule
    given: bool
    recommendation: Recommendation
    curve: RiskCurve
    without_losses: tuple[float, bool] | None
    future: Future
    rows: pd.DataFrame
    card: pd.DataFrame
    compared: pd.DataFrame
    first_count: int
    tolerance: float
    horizon: int
    count_bias: float
    seed: int
    version: str = field(default=__version__)

    @property
    def first_quota(self) -> float:
        """Legal quota of the first plan year, rounded (a median where the rule's count is not made yet)."""
        return float(self.rows["quota"].iloc[0])

    @property
    def awaits_count(self) -> bool:
        """Whether the first year's quota follows from a count that is not made yet."""
        return self.rule.feedback and self.first_count == SIMULATED

    @property
    def is_recommended(self) -> bool:
        """Whether the rule in force is the recommended constant quota."""
        return not self.rule.feedback and self.rule.settings[0] == self.recommendation.quota

    @property
    def rule_risk(self) -> tuple[float, float]:
        """Chance of ever falling below the limit within the horizon under the rule, and its standard error."""
        return self.rule_chance("ever_below_limit", self.horizon)

    def rule_chance(self, event: str, year: int) -> tuple[float, float]:
        """Probability of an event by the year-th quota year under the rule, and its standard error."""
        row = self.future.by_year.iloc[year - 1]
        return float(row[event]), float(row[f"{event}_se"])

    @property
    def steps(self) -> pd.DataFrame:
        """Why this number; see :mod:`harvest.plan.steps`."""
        if self.without_losses is not None:
            return quota_steps(self.record, self.rates, self.recommendation, *self.without_losses)
        return rule_steps(self.record, self.rates, self.rule, self.first_quota, self.first_count)


def check_plan_years(years: int) -> None:
    """Plan years: 1 to 10."""
    if not 1 <= years <= 10:
        raise SettingsError(f"{years} plan years are not allowed: give a whole number from 1 to 10")


def check_horizon(years: int) -> None:
    """Horizon: 1 to 200 quota years."""
    if not 1 <= years <= 200:
        raise SettingsError(f"a horizon of {years} years is not allowed: give a whole number from 1 to 200")


def check_printable(rule: Rule, unit: str) -> None:
    """A fixed quota is one that can be printed: whole animals, three figures of tonnes."""
    if not rule.feedback and round_down(rule.settings[0], unit) != rule.settings[0]:
        raise SettingsError(
            f"a quota of {rule.settings[0]:.12g} cannot be printed: give {precision_words(unit)}, "
            f"such as {round_down(rule.settings[0], unit):.12g}"
        )


def _default_rule(record: Record, advice: Recommendation) -> Rule:
    """The recommended quota; where no cull gets under the ceiling in time, the present quota or none."""
    if advice.criterion.question == "reduction" and not advice.qualifies:
        return fixed_quota(record.present_quota or 0.0)
    return fixed_quota(advice.quota)


def _shown_years(criterion: Criterion, rule: Rule, plan_years: int, horizon: int) -> int:
    """Years of the table: none beyond the horizon, nor a constant cull beyond the year it must have worked by."""
    cull = criterion.question == "reduction" and not rule.feedback
    return min(plan_years, horizon, criterion.year if cull else plan_years)


def _telling(report: Report | None, label: str) -> Progress | None:
    return None if report is None else lambda done, total: report(label, done, total)


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
        A setting out of range, or a tolerance too small for the number of draws.
    """
    aims = record.objectives
    plan_years = aims.plan_years if plan_years is None else plan_years
    horizon = aims.horizon if horizon is None else horizon
    check_plan_years(plan_years)
    check_horizon(horizon)
    if rule is None and record.rule is not None:
        rule = rule_of(record.rule)
    given = rule is not None
    if rule is not None:
        check_printable(rule, record.unit)
    question = question or pick_question(record, rates)
    criterion = settle_criterion(record, rates, question, tolerance=tolerance, horizon=horizon)
    seed, years = rates.seed if seed is None else seed, max(curve_years(record), horizon, criterion.year)
    with workers(threads) as pool:
        prepared = prepare(record, rates, futures_per_draw=futures_per_draw)
        telling = _telling(report, "risk against quota")
        curve = find_prepared(prepared, criterion, years, pool, seed=seed, progress=telling)
        advice = recommend_quota(record, curve, question, tolerance=tolerance, horizon=horizon)
        without = None
        rule = _default_rule(record, advice) if rule is None else rule
        if not rule.feedback and rule.settings[0] == advice.quota:
            lossless = prepare(record, rates, futures_per_draw=futures_per_draw, losses=False)
            telling = _telling(report, "the same without losses")
            bare = find_prepared(lossless, criterion, years, pool, seed=seed, progress=telling)
            without = read_off(bare, criterion)[:2]
        telling = _telling(report, "the plan's years")
        future = project_prepared(prepared, rule, years, pool, seed=seed, progress=telling)
    return QuotaTable(
        record=record,
        rates=rates,
        rule=rule,
        given=given,
        recommendation=advice,
        curve=curve,
        without_losses=without,
        future=future,
        rows=plan_rows(future, rule, _shown_years(criterion, rule, plan_years, horizon), record.unit),
        card=lookup_card(record, rates, rule, criterion.question, prepared.bias),
        compared=compare_quotas(record, curve, advice, horizon),
        first_count=int(counts_ahead(record, rates, 1)[0][0]),
        tolerance=aims.tolerance if tolerance is None else tolerance,
        horizon=horizon,
        count_bias=prepared.bias,
        seed=seed,
    )
