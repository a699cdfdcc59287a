"""What the population can sustain: reference values over draws, the yield curve, and where it stands today."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import pandas as pd

from harvest import __version__
from harvest.rates import Rates
from harvest.rates.spread import LEVEL_NAMES, LEVELS, Spread
from harvest.record.model import Record
from harvest.yields.biological_removal import BiologicalRemoval, biological_removal
from harvest.yields.reference import reference_values, sustainable_today


@dataclass(frozen=True)
class YieldSummary:
    """Yields of one record under its rates.

    Attributes
    ----------
    draws : DataFrame
        Reference values draw by draw; see :func:`harvest.yields.reference.reference_values`.
    spreads : dict of str to Spread
        Median with 50% and 90% intervals of each column of ``draws``, and of ``abundance`` (today, at the
        count's moment), ``K``, ``r``.
    curve : DataFrame
        Yield curve: ``abundance`` at the count's moment against quantiles of the yearly yield that holds it.
    below_msy_abundance : float
        Chance that today's abundance is below the one that gives MSY.
    above_msy_rate : float or None
        Chance that present total removals are above the rate that gives MSY; None without present removals.
    present_removals : float or None
        Legal take of the latest recorded year, else the present quota.
    declines_unharvested : float
        Chance that the population declines even without a take (above K, or below an Allee threshold).
    unstable : float
        Share of draws whose yearly step is unstable at K, S'(K) ≤ −1 (May 1976).
    removal_bound : BiologicalRemoval
    seed, record_digest, version
    """

    draws: pd.DataFrame
    spreads: dict[str, Spread]
    curve: pd.DataFrame
    below_msy_abundance: float
    above_msy_rate: float | None
    present_removals: float | None
    declines_unharvested: float
    unstable: float
    removal_bound: BiologicalRemoval
    seed: int
    record_digest: str
    version: str = field(default=__version__)


def standing_year(record: Record, rates: Rates) -> int:
    """The year of today's abundance at the count's moment: the latest before the first quota season's take."""
    return rates.first_year - 1 if record.counts_after else rates.first_year


def present_take(record: Record) -> float | None:
    """The legal take in force: removals of the latest recorded year, else the present quota."""
    recorded = [h for h in record.history.removals if h is not None]
    return recorded[-1] if recorded else record.present_quota


def yield_curve(record: Record, rates: Rates, points: int = 41) -> pd.DataFrame:
    """Quantiles over draws of the yearly removals that hold a counted abundance.

    Returns
    -------
    DataFrame
        ``points`` rows from 0 to 1.1 times the 95th percentile of K: ``abundance``, ``low90`` … ``high90``.
    """
    rows = []
    for n in np.linspace(0.0, 1.1 * float(np.quantile(rates.column("K"), 0.95)), points):
        x = np.full(len(rates), n)
        held = np.maximum(0.0, rates.growth(x)) if record.counts_after else sustainable_today(record, rates, x)
        rows.append([n, *np.quantile(held, LEVELS)])
    return pd.DataFrame(rows, columns=["abundance", *LEVEL_NAMES])


def summarise_yield(record: Record, rates: Rates) -> YieldSummary:
    """Yields, reference values and today's standing of a record under its rates."""
    draws = reference_values(record, rates)
    spreads = {name: Spread.of(draws[name].to_numpy()) for name in draws}
    growth = draws["greatest_growth"].to_numpy()
    spreads["greatest_growth"] = Spread.of(np.where(np.isinf(growth), np.nan, growth))
    spreads |= {
        "abundance": Spread.of(rates.column("counted")),
        "K": Spread.of(rates.column("K")),
        "r": Spread.of(rates.column("r")),
    }
    start, counted = rates.column("abundance"), rates.column("counted")
    take = present_take(record)
    rate = None
    if take is not None:
        with np.errstate(divide="ignore", invalid="ignore"):
            share = np.where(start > 0.0, rates.total_removals(take) / start, np.inf)
        rate = float(np.mean(share > draws["msy_share"].to_numpy()))
    return YieldSummary(
        draws=draws,
        spreads=spreads,
        curve=yield_curve(record, rates),
        below_msy_abundance=float(np.mean(counted < draws["msy_abundance"].to_numpy())),
        above_msy_rate=rate,
        present_removals=take,
        declines_unharvested=float(np.mean(rates.growth(start) < 0.0)),
        unstable=float(np.mean(draws["slope_at_capacity"].to_numpy() <= -1.0)),
        removal_bound=biological_removal(record, rates),
        seed=rates.seed,
        record_digest=rates.record_digest,
    )
