"""The recommended quota, read off one stored risk curve.

Three questions, by where the population stands: from above the limit, the largest quota whose chance of ever
falling below it is within tolerance; from below the limit, the largest that still recovers in time; above a
ceiling, the smallest cull that gets under it in time.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from harvest import __version__
from harvest.errors import SettingsError
from harvest.futures.risk import RiskCurve
from harvest.futures.rounding import round_down, round_up
from harvest.rates import Rates
from harvest.record.model import ByYear, Record

QUESTIONS = ("limit", "recovery", "reduction")
DEFAULT_AIM = ByYear(years=10, chance=0.8)


@dataclass(frozen=True)
class Criterion:
    """What a quota must satisfy: the event's probability by a year at most (or at least) a bound.

    ``assumed``: the record states no such aim, and :data:`DEFAULT_AIM` stands in.
    """

    question: str
    event: str
    year: int
    bound: float
    at_least: bool
    assumed: bool = False

    def excess(self, curve: RiskCurve) -> np.ndarray:
        """How far each quota of the curve is from qualifying: 0 or below qualifies, shape (q,)."""
        p = curve.probability[self.event][:, self.year - 1]
        return self.bound - p if self.at_least else p - self.bound


@dataclass(frozen=True)
class Recommendation:
    """The recommended legal quota and what it rests on.

    Attributes
    ----------
    criterion : Criterion
    quota : float
        Legal quota a year, rounded; 0 (closure) where no quota qualifies for the limit or recovery, the
        largest examined where none qualifies for a reduction.
    exact : float
        Before rounding.
    qualifies : bool
        Whether any quota qualifies.
    at_edge : bool
        Whether even the largest quota examined qualifies: the true answer is at least this.
    probability, se : float
        Of the criterion's event at ``quota``, with its Monte Carlo standard error.
    miss : float
        By how much the best quota misses the bound (0 where one qualifies).
    present : tuple (quota, probability, se) or None
        The same at the present quota.
    zero : tuple (quota, probability, se)
        The same without a take.
    limit_risk : tuple (probability, se)
        Chance of ever falling below the limit within the horizon, at ``quota``.
    further_runs : tuple of (float, float)
        Further runs of quotas that qualify, not recommended.
    """

    criterion: Criterion
    quota: float
    exact: float
    qualifies: bool
    at_edge: bool
    probability: float
    se: float
    miss: float
    present: tuple[float, float, float] | None
    zero: tuple[float, float, float]
    limit_risk: tuple[float, float]
    further_runs: tuple[tuple[float, float], ...]
    version: str = field(default=__version__)


def pick_question(record: Record, rates: Rates) -> str:
    """The question that a record's standing asks, by the median of today's abundance at the count's moment."""
    counted = rates.column("counted")
    aims = record.objectives
    if aims.limit is not None and np.mean(counted < rates.level(aims.limit, 0.0)) > 0.5:
        return "recovery"
    if aims.ceiling is not None and np.mean(counted > rates.level(aims.ceiling, np.inf)) > 0.5:
        return "reduction"
    return "limit"


def check_question(record: Record, rates: Rates, question: str) -> None:
    """A recovery is asked only of a population below its limit: one above it is "back" at once, whatever is taken.

    Raises
    ------
    SettingsError
        For the recovery of a population that is above its limit in most draws.
    """
    if question == "recovery" and record.objectives.limit is not None and pick_question(record, rates) != "recovery":
        raise SettingsError(
            "the population is above its limit in most draws, so there is nothing to recover from: "
            'ask the question "limit"'
        )


def criterion_of(
    record: Record, question: str, *, tolerance: float | None = None, horizon: int | None = None
) -> Criterion:
    """The criterion of a question under the record's objectives.

    Raises
    ------
    SettingsError
        Unknown question, tolerance outside 0..1, a recovery without a limit, a reduction without a ceiling.
    """
    aims = record.objectives
    if question not in QUESTIONS:
        raise SettingsError(f"there is no question {question!r}: choose one of {', '.join(QUESTIONS)}")
    if question == "limit":
        bound = aims.tolerance if tolerance is None else tolerance
        if not 0.0 < bound < 1.0:
            hint = f" ({bound:g}% is {bound / 100.0:g})" if 1.0 <= bound < 100.0 else ""
            raise SettingsError(f"risk tolerance {bound:g} is not allowed: give a number between 0 and 1{hint}")
        year = aims.horizon if horizon is None else horizon
        return Criterion(question, "ever_below_limit", year, bound, at_least=False)
    recovery = question == "recovery"
    needed, name = (aims.limit, "limit") if recovery else (aims.ceiling, "ceiling")
    if needed is None:
        raise SettingsError(f"a {question} needs a {name}: state objectives.{name} in the record")
    stated = aims.recovery if recovery else aims.reduction
    aim = stated or DEFAULT_AIM
    event = "back_above_limit" if recovery else "under_ceiling"
    return Criterion(question, event, aim.years, aim.chance, at_least=True, assumed=stated is None)


def qualifying_runs(quotas: np.ndarray, excess: np.ndarray) -> list[tuple[float, float]]:
    """Runs of quotas with excess ≤ 0, their ends interpolated to where the excess is zero."""
    good = excess <= 0.0
    runs = []
    i = 0
    while i < good.size:
        if not good[i]:
            i += 1
            continue
        first = i
        while i + 1 < good.size and good[i + 1]:
            i += 1
        runs.append((_edge(quotas, excess, first, first - 1), _edge(quotas, excess, i, i + 1)))
        i += 1
    return runs


def _edge(quotas: np.ndarray, excess: np.ndarray, inside: int, outside: int) -> float:
    """Where the excess crosses zero between a qualifying quota and its neighbour."""
    if not 0 <= outside < quotas.size:
        return float(quotas[inside])
    share = -excess[inside] / (excess[outside] - excess[inside])
    return float(quotas[inside] + share * (quotas[outside] - quotas[inside]))


def read_off(curve: RiskCurve, criterion: Criterion) -> tuple[float, bool, list[tuple[float, float]]]:
    """The unrounded quota, whether any qualifies, and further runs.

    For the largest quota: the top of the run of qualifying quotas that starts at zero. (A run that starts above
    zero exists only where a population does better harvested than not; it is mentioned, not recommended, so
    that a lower tolerance never brings a higher quota.) For the smallest cull: the bottom of the lowest run.
    """
    runs = qualifying_runs(curve.quotas, criterion.excess(curve))
    if criterion.question == "reduction":
        return (runs[0][0], True, runs[1:]) if runs else (float(curve.quotas[-1]), False, [])
    if runs and runs[0][0] == curve.quotas[0]:
        return runs[0][1], True, runs[1:]
    return 0.0, False, runs


def recommend_quota(
    record: Record,
    curve: RiskCurve,
    question: str,
    *,
    tolerance: float | None = None,
    horizon: int | None = None,
) -> Recommendation:
    """Read the recommended legal quota off a stored risk curve.

    Parameters
    ----------
    record : Record
    curve : RiskCurve
    question : {"limit", "recovery", "reduction"}
        See :func:`pick_question`.
    tolerance, horizon
        In place of the record's (question "limit").

    Raises
    ------
    SettingsError
        A setting out of range, or years that the curve does not cover.
    """
    criterion = criterion_of(record, question, tolerance=tolerance, horizon=horizon)
    if not 1 <= criterion.year <= curve.years:
        raise SettingsError(f"year {criterion.year} is not on the risk curve, which has {curve.years} years")
    exact, qualifies, further = read_off(curve, criterion)
    if question == "reduction":
        quota = round_up(exact, record.unit)
        if quota > curve.quotas[-1]:  # a curve that ends between two whole animals
            quota = round_down(float(curve.quotas[-1]), record.unit)
    else:
        quota = round_down(exact, record.unit)
    excess = criterion.excess(curve)

    def at(value: float) -> tuple[float, float, float]:
        return (value, *curve.at(criterion.event, value, criterion.year))

    horizon = min(record.objectives.horizon if horizon is None else horizon, curve.years)
    return Recommendation(
        criterion=criterion,
        quota=quota,
        exact=exact,
        qualifies=qualifies,
        at_edge=bool(qualifies and question != "reduction" and exact >= curve.quotas[-1]),
        probability=at(quota)[1],
        se=at(quota)[2],
        miss=0.0 if qualifies else float(excess.min() if question == "reduction" else excess[0]),
        present=None if record.present_quota is None else at(record.present_quota),
        zero=at(0.0),
        limit_risk=curve.at("ever_below_limit", quota, horizon),
        further_runs=tuple(further),
    )
