"""The stored risk-against-quota curve: many constant legal quotas on common random numbers."""

from __future__ import annotations

from collections.abc import Sequence
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass, field, replace

import numpy as np

from harvest import __version__
from harvest.errors import SettingsError
from harvest.futures.engine import Progress, run, workers
from harvest.futures.prepared import Prepared, prepare
from harvest.futures.project import EVENT_COLUMNS, event_error
from harvest.futures.rounding import round_up
from harvest.futures.rules import fixed_quota
from harvest.rates import Rates
from harvest.record.model import Record

#: Quotas on the curve, unless stated (zero and the present quota are added).
POINTS = 50


@dataclass(frozen=True)
class RiskCurve:
    """Probabilities by quota and year under constant legal quotas.

    Attributes
    ----------
    quotas : ndarray, shape (q,)
        Legal quotas, increasing; the first is zero.
    probability, se : dict of str to ndarray, shape (q, years)
        Each event of :data:`harvest.futures.project.EVENT_COLUMNS` and its Monte Carlo standard error.
    first_year : int
    draws, futures_per_draw, seed, losses, record_digest, version
    """

    quotas: np.ndarray
    probability: dict[str, np.ndarray]
    se: dict[str, np.ndarray]
    first_year: int
    draws: int
    futures_per_draw: int
    seed: int
    losses: bool
    record_digest: str
    version: str = field(default=__version__)

    @property
    def years(self) -> int:
        """Quota years of the curve."""
        return int(self.probability["below_limit"].shape[1])

    def merged(self, other: RiskCurve) -> RiskCurve:
        """Both curves as one; where they share a quota this one's values stay (they are the same futures)."""
        fresh = ~np.isin(other.quotas, self.quotas)
        quotas = np.concatenate([self.quotas, other.quotas[fresh]])
        order = np.argsort(quotas)

        def together(mine: dict[str, np.ndarray], more: dict[str, np.ndarray]) -> dict[str, np.ndarray]:
            return {name: np.concatenate([mine[name], more[name][fresh]])[order] for name in mine}

        probability, se = together(self.probability, other.probability), together(self.se, other.se)
        return replace(self, quotas=quotas[order], probability=probability, se=se)

    def at(self, event: str, quota: float, year: int) -> tuple[float, float]:
        """Probability of an event by the year-th quota year (from 1) and its standard error, interpolated.

        Raises
        ------
        SettingsError
            A quota outside the curve, or a year beyond it.
        """
        if not self.quotas[0] <= quota <= self.quotas[-1]:
            raise SettingsError(f"quota {quota:g} is not on the risk curve, which ends at {self.quotas[-1]:g}")
        if not 1 <= year <= self.years:
            raise SettingsError(f"year {year} is not on the risk curve, which has {self.years} years")
        p, se = self.probability[event][:, year - 1], self.se[event][:, year - 1]
        return float(np.interp(quota, self.quotas, p)), float(np.interp(quota, self.quotas, se))


def highest_quota(record: Record, rates: Rates) -> float:
    """Where the curve ends unless stated: well beyond the fold and a cull to the ceiling.

    Rounded up as a quota is, so that a smallest cull rounded up is still on the curve.
    """
    fold = rates.legal_take(rates.closed_form("msy"))
    reach = [fold]
    if record.objectives.ceiling is not None:
        surplus = rates.column("abundance") - rates.level(record.objectives.ceiling, 0.0)
        reach.append(np.maximum(0.0, surplus) / rates.factor + fold)
    top = 1.3 * max(float(np.quantile(r, 0.95)) for r in reach)
    return round_up(top or 1.0, record.unit)


def check_quotas(quotas: Sequence[float] | np.ndarray) -> np.ndarray:
    """Quotas as an increasing array, each finite and from 0."""
    given = np.unique(np.asarray(quotas, float))
    if given.size == 0 or not np.isfinite(given).all() or given[0] < 0.0:
        raise SettingsError("the quotas of a risk curve must be numbers from 0, at least one")
    return given


def with_zero_and_present(record: Record, quotas: Sequence[float] | np.ndarray) -> np.ndarray:
    """Quotas in order, with zero and the present quota among them."""
    present = [] if record.present_quota is None else [record.present_quota]
    return check_quotas(np.concatenate([[0.0], present, np.asarray(quotas, float)]))


def coarse_quotas(record: Record, rates: Rates, points: int) -> np.ndarray:
    """The quotas of a curve before it is refined: evenly spaced to :func:`highest_quota`, zero and the present one."""
    return with_zero_and_present(record, np.linspace(0.0, highest_quota(record, rates), points))


def trace_prepared(
    prepared: Prepared,
    quotas: np.ndarray,
    years: int,
    pool: ThreadPoolExecutor,
    *,
    seed: int,
    progress: Progress | None = None,
) -> RiskCurve:
    """The risk curve of rates that are already laid out, on a pool of workers."""
    draws, per_draw = len(prepared.rates), prepared.futures_per_draw
    probability = {name: np.empty((quotas.size, years)) for name in EVENT_COLUMNS}
    se = {name: np.empty((quotas.size, years)) for name in EVENT_COLUMNS}
    for i, quota in enumerate(quotas):
        tally = run(prepared, fixed_quota(float(quota)), years, pool, seed=seed, histograms=False)
        for name, row in EVENT_COLUMNS.items():
            p = tally.events[:, row] / prepared.futures
            probability[name][i] = p
            se[name][i] = event_error(p, tally.event_squares[:, row], draws, per_draw)
        if progress:
            progress(i + 1, quotas.size)
    rates, losses = prepared.rates, prepared.losses
    return RiskCurve(quotas, probability, se, rates.first_year, draws, per_draw, seed, losses, rates.record_digest)


def curve_years(record: Record) -> int:
    """Quota years that the curve must cover: the horizon and the years of recovery or reduction."""
    aims = record.objectives
    return max([aims.horizon, *(a.years for a in (aims.recovery, aims.reduction) if a is not None)])


def trace_risk(
    record: Record,
    rates: Rates,
    quotas: Sequence[float] | np.ndarray | None = None,
    *,
    points: int = POINTS,
    years: int | None = None,
    seed: int | None = None,
    futures_per_draw: int = 1,
    losses: bool = True,
    threads: int | None = None,
    progress: Progress | None = None,
) -> RiskCurve:
    """Trace risk against quota on common random numbers.

    Parameters
    ----------
    record, rates : Record, Rates
    quotas : sequence of float
        Legal quotas; default ``points`` evenly spaced from 0 to :func:`highest_quota`. Zero and the present
        quota are always added. :func:`harvest.futures.find.find_quota` adds more where the answer lies.
    years : int
        Default: :func:`curve_years`.
    losses : bool
        False: as if every dead animal were a reported one.

    Raises
    ------
    SettingsError
        A setting out of range.
    """
    if points < 2:
        raise SettingsError(f"{points} points are too few for a risk curve: give at least 2")
    chosen = coarse_quotas(record, rates, points) if quotas is None else with_zero_and_present(record, quotas)
    with workers(threads) as pool:
        return trace_prepared(
            prepare(record, rates, futures_per_draw=futures_per_draw, losses=losses),
            chosen,
            curve_years(record) if years is None else years,
            pool,
            seed=rates.seed if seed is None else seed,
            progress=progress,
        )
