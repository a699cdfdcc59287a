"""What collapses the population: the fold, both equilibria, margins, and times in years of average environment."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import pandas as pd

from harvest import __version__
from harvest.errors import SettingsError
from harvest.kernels.codes import SEASON_CODES, WHEN_CODES
from harvest.kernels.equilibria import years_to_cross
from harvest.rates import Rates
from harvest.rates.spread import Spread
from harvest.record.model import Record
from harvest.yields.reference import (
    at_count,
    both_equilibria,
    greatest_harvest_rate,
    return_time,
    slope_at,
)
from harvest.yields.summary import present_take

#: Times longer than this count as "never".
MOST_YEARS = 500
#: The largest quota that makes sense to ask about.
MOST_QUOTA = 1e15


@dataclass(frozen=True)
class Thresholds:
    """Where a constant legal quota tips the population.

    Attributes
    ----------
    quota : float
        The legal quota that is examined.
    spreads : dict of str to Spread
        ``removals`` (total, under the quota); ``fold`` (total removals = MSY) and ``fold_quota`` (the legal
        quota that reaches it); ``margin_to_fold`` (total removals, negative beyond); ``lower_equilibrium`` and
        ``upper_equilibrium`` (at the count's moment; over draws within the fold); ``margin_to_lower`` (today's
        abundance less the lower equilibrium); ``persistence_share``; ``return_time``; ``years_to_collapse``
        under the quota; ``years_to_recover_closed`` and ``years_to_recover_half`` to the limit with no take
        and with half the quota.
    beyond_fold, below_lower, doomed : float
        Chance that the quota is beyond the fold; that it is not but today's abundance is below the lower
        equilibrium; and of either.
    branches : DataFrame
        Equilibria against quota: ``quota``, ``share`` of draws with equilibria, quantiles of both.
    seed, record_digest, version
    """

    quota: float
    spreads: dict[str, Spread]
    beyond_fold: float
    below_lower: float
    doomed: float
    branches: pd.DataFrame
    seed: int
    record_digest: str
    version: str = field(default=__version__)


def counted_equilibria(record: Record, rates: Rates, quota: float) -> tuple[np.ndarray, np.ndarray]:
    """Lower and upper equilibrium at the count's moment under a constant legal quota; NaN beyond the fold."""
    removals = rates.total_removals(quota)
    lower, upper = both_equilibria(rates, removals)
    return at_count(record, lower, removals), at_count(record, upper, removals)


def equilibrium_branches(record: Record, rates: Rates, quotas: np.ndarray) -> pd.DataFrame:
    """Quantiles of both equilibria for each legal quota, over the draws that have them."""
    rows = []
    for quota in quotas:
        lower, upper = (Spread.of(v) for v in counted_equilibria(record, rates, float(quota)))
        row: dict[str, float] = {"quota": float(quota), "share": upper.share}
        for name, spread in (("lower", lower), ("upper", upper)):
            row |= {f"{name}_{k}": v for k, v in spread.plain().items() if k != "share"}
        rows.append(row)
    return pd.DataFrame(rows)


def crossing_years(record: Record, rates: Rates, quota: float, level: np.ndarray, *, falling: bool) -> np.ndarray:
    """Years of average environment until the counted abundance falls below a level, or is back at it.

    Shape (draws,); infinity where not within :data:`MOST_YEARS`.
    """
    out = np.empty(len(rates))
    years_to_cross(
        SEASON_CODES[record.season],
        WHEN_CODES[record.count_when],
        MOST_YEARS,
        falling,
        rates.codes,
        rates.column("r"),
        rates.column("K"),
        rates.column("shape"),
        rates.column("abundance"),
        np.ascontiguousarray(rates.total_removals(quota)),
        level,
        out,
    )
    return out


def find_thresholds(
    record: Record, rates: Rates, quota: float | None = None, *, branches: pd.DataFrame | None = None
) -> Thresholds:
    """Thresholds of a record under a constant legal quota (default: the present quota, else the latest removals).

    Parameters
    ----------
    branches : DataFrame, optional
        Those found for another quota with the same rates: only the row of this quota is then added to them.

    Raises
    ------
    SettingsError
        A quota out of range.
    """
    if quota is None:
        quota = record.present_quota if record.present_quota is not None else present_take(record) or 0.0
    if not 0.0 <= quota <= MOST_QUOTA:
        raise SettingsError(f"quota {quota:g} is not allowed: give a number from 0 to {MOST_QUOTA:g}")
    removals, msy = rates.total_removals(quota), rates.closed_form("msy")
    base_lower, base_upper = both_equilibria(rates, removals)
    lower, upper = at_count(record, base_lower, removals), at_count(record, base_upper, removals)
    counted = rates.column("counted")
    beyond = removals > msy
    below = ~beyond & (counted < lower)
    collapse = rates.collapse_level(record.objectives.collapse)
    limit = rates.limit_level(record.objectives)

    def recovery(take: float) -> np.ndarray:
        years = crossing_years(record, rates, take, limit, falling=False)
        return np.where(counted < limit, years, 0.0)

    fold_quota = rates.legal_take(msy)
    values = {
        "removals": removals,
        "fold": msy,
        "fold_quota": fold_quota,
        "margin_to_fold": msy - removals,
        "lower_equilibrium": lower,
        "upper_equilibrium": upper,
        "margin_to_lower": counted - lower,
        "persistence_share": greatest_harvest_rate(record, rates.closed_form("greatest_growth")),
        "return_time": return_time(slope_at(rates, base_upper)),
        "years_to_collapse": crossing_years(record, rates, quota, collapse, falling=True),
        "years_to_recover_closed": recovery(0.0),
        "years_to_recover_half": recovery(0.5 * quota),
    }
    return Thresholds(
        quota=quota,
        spreads={name: Spread.of(v) for name, v in values.items()},
        beyond_fold=float(beyond.mean()),
        below_lower=float(below.mean()),
        doomed=float((beyond | below).mean()),
        branches=_branches(record, rates, quota, fold_quota, branches),
        seed=rates.seed,
        record_digest=rates.record_digest,
    )


def _branches(
    record: Record, rates: Rates, quota: float, fold_quota: np.ndarray, known: pd.DataFrame | None
) -> pd.DataFrame:
    """Equilibria against quota up to well beyond the fold, the examined quota among them."""
    if known is None:
        top = max(1.3 * float(np.quantile(fold_quota, 0.95)), 1.2 * quota)
        return equilibrium_branches(record, rates, np.unique(np.append(np.linspace(0.0, top, 40), quota)))
    if quota in known["quota"].to_numpy():
        return known
    own = equilibrium_branches(record, rates, np.array([quota]))
    return pd.concat([known, own]).sort_values("quota", ignore_index=True)
