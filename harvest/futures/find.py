"""Finding the recommended quota: a coarse risk curve, extended until the risk shows, and refined where the answer lies.

All quotas are projected on the same futures, so adding quotas to the curve changes nothing on it. The number of
futures is fixed before looking; only where the curve is looked at follows the answer.
"""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor

import numpy as np

from harvest.errors import SettingsError
from harvest.futures.engine import Progress, workers
from harvest.futures.prepared import Prepared, prepare
from harvest.futures.recommend import (
    Criterion,
    Recommendation,
    check_question,
    criterion_of,
    read_off,
    recommend_quota,
)
from harvest.futures.risk import (
    POINTS,
    RiskCurve,
    coarse_quotas,
    curve_years,
    trace_prepared,
)
from harvest.futures.rounding import round_down, round_up
from harvest.rates import Rates
from harvest.record.model import Record

#: Quotas added within the bracket of the answer in one pass, and passes at most.
INSIDE, PASSES = 9, 12
#: A tolerance below this many futures cannot be told from chance.
FEWEST_EVENTS = 10


def check_resolution(criterion: Criterion, draws: int) -> None:
    """The bound on the probability is at least :data:`FEWEST_EVENTS` draws away from 0 and 1.

    Raises
    ------
    SettingsError
        With the number of draws that would do.
    """
    rare = min(criterion.bound, 1.0 - criterion.bound)
    if rare * draws < FEWEST_EVENTS * (1.0 - 1e-9):
        raise SettingsError(
            f"a probability of {criterion.bound:g} cannot be told with {draws:,} draws: draw at least "
            f"{int(np.ceil(FEWEST_EVENTS / rare)):,}, or ask for less"
        )


def settle_criterion(
    record: Record, rates: Rates, question: str, *, tolerance: float | None = None, horizon: int | None = None
) -> Criterion:
    """The criterion of a question, once it is seen that these rates can answer it.

    Raises
    ------
    SettingsError
        From :func:`harvest.futures.recommend.criterion_of`, ``check_question`` or :func:`check_resolution`.
    """
    criterion = criterion_of(record, question, tolerance=tolerance, horizon=horizon)
    check_question(record, rates, question)
    check_resolution(criterion, len(rates))
    return criterion


def bracket(curve: RiskCurve, criterion: Criterion) -> tuple[float, float] | None:
    """The neighbouring quotas between which the answer lies; None where it is an end of the curve or does not exist."""
    exact, qualifies, _ = read_off(curve, criterion)
    if not qualifies:
        return None
    reduction = criterion.question == "reduction"
    above = int(np.searchsorted(curve.quotas, exact, side="left" if reduction else "right"))
    if not 0 < above < curve.quotas.size:
        return None
    return float(curve.quotas[above - 1]), float(curve.quotas[above])


def fresh_quotas(curve: RiskCurve, criterion: Criterion, unit: str) -> np.ndarray:
    """Quotas as they would be printed, inside the answer's bracket and not on the curve yet."""
    found = bracket(curve, criterion)
    if found is None:
        return np.empty(0)
    low, high = found
    inside = {round_down(q, unit) for q in np.linspace(low, high, INSIDE + 2)}
    inside |= {round_down(low, unit), min(round_up(high, unit), float(curve.quotas[-1]))}
    return np.array(sorted(q for q in inside if q not in curve.quotas))


def _ends_too_soon(curve: RiskCurve, criterion: Criterion) -> bool:
    """Whether the curve must be extended: its end still qualifies, or a cull's chance still rises there unmet."""
    exact, qualifies, _ = read_off(curve, criterion)
    if criterion.question == "reduction":
        chance = criterion.excess(curve)
        return not qualifies and bool(chance[-1] < chance[-2])
    return qualifies and bool(exact >= curve.quotas[-1])


def find_prepared(
    prepared: Prepared,
    criterion: Criterion,
    years: int,
    pool: ThreadPoolExecutor,
    *,
    seed: int,
    points: int = POINTS,
    progress: Progress | None = None,
) -> RiskCurve:
    """The risk curve with the criterion's answer pinned between two neighbouring printable quotas."""
    record, unit = prepared.record, prepared.record.unit

    def trace(quotas: np.ndarray, report: Progress | None = None) -> RiskCurve:
        return trace_prepared(prepared, quotas, years, pool, seed=seed, progress=report)

    curve = trace(coarse_quotas(record, prepared.rates, points), progress)
    for _ in range(PASSES):
        if not _ends_too_soon(curve, criterion):
            break
        top = 2.0 * float(curve.quotas[-1])
        curve = curve.merged(trace(np.array([round_up(0.75 * top, unit), round_up(top, unit)])))
    for _ in range(PASSES):
        fresh = fresh_quotas(curve, criterion, unit)
        if not fresh.size:
            break
        curve = curve.merged(trace(fresh))
    return curve


def find_quota(
    record: Record,
    rates: Rates,
    question: str,
    *,
    tolerance: float | None = None,
    horizon: int | None = None,
    points: int = POINTS,
    seed: int | None = None,
    futures_per_draw: int = 1,
    threads: int | None = None,
    progress: Progress | None = None,
) -> tuple[RiskCurve, Recommendation]:
    """The recommended quota and the stored curve that it is read off.

    Parameters
    ----------
    question : {"limit", "recovery", "reduction"}
        See :func:`harvest.futures.recommend.pick_question`.
    tolerance, horizon
        In place of the record's.
    points : int
        Quotas of the coarse curve.

    Raises
    ------
    SettingsError
        A setting out of range, or a tolerance too small for the number of draws.
    """
    criterion = settle_criterion(record, rates, question, tolerance=tolerance, horizon=horizon)
    years = max(curve_years(record), record.objectives.horizon if horizon is None else horizon, criterion.year)
    with workers(threads) as pool:
        curve = find_prepared(
            prepare(record, rates, futures_per_draw=futures_per_draw),
            criterion,
            years,
            pool,
            seed=rates.seed if seed is None else seed,
            points=points,
            progress=progress,
        )
    return curve, recommend_quota(record, curve, question, tolerance=tolerance, horizon=horizon)
