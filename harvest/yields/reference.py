"""Season-aware reference values of every draw: MSY, where it is reached, the shares, the yield that holds today."""

from __future__ import annotations

import numpy as np
import pandas as pd

from harvest.kernels.codes import SEASON_CODES
from harvest.kernels.equilibria import equilibria, holding_yield
from harvest.rates import Rates
from harvest.record.model import Record


def both_equilibria(rates: Rates, removals: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """The N below and above the peak with g(N) = removals; NaN beyond the fold. Shapes (draws,)."""
    n = len(rates)
    lower, upper = np.empty(n), np.empty(n)
    r, k, s = rates.column("r"), rates.column("K"), rates.column("shape")
    peak, msy = rates.closed_form("peak"), rates.closed_form("msy")
    equilibria(rates.codes, r, k, s, peak, msy, np.ascontiguousarray(removals, float), lower, upper)
    return lower, upper


def at_count(record: Record, base: np.ndarray, removals: np.ndarray | float) -> np.ndarray:
    """Abundance at the count's moment where ``base`` grows and ``removals`` are taken each year.

    The base is what stays after the take of a short season (so a count before it sees base + removals), and
    the abundance itself in an all-year season.
    """
    before_take = record.season == "short" and record.count_when == "before"
    return base + removals if before_take else base + 0.0


def greatest_harvest_rate(record: Record, growth: np.ndarray) -> np.ndarray:
    """Share of the season's starting abundance at which persistence ends: p, or p/(1 + p) in a short season.

    NaN where p is unbounded: there is no such share.
    """
    p = np.where(np.isinf(growth), np.nan, growth)
    return p / (1.0 + p) if record.season == "short" else p


def sustainable_today(record: Record, rates: Rates, x: np.ndarray | None = None) -> np.ndarray:
    """Total removals that hold the abundance ``x`` at the season's start (default: today's); 0 where none do."""
    out = np.empty(len(rates))
    r, k, s = rates.column("r"), rates.column("K"), rates.column("shape")
    start = rates.column("abundance") if x is None else np.ascontiguousarray(x, float)
    holding_yield(SEASON_CODES[record.season], rates.codes, r, k, s, start, out)
    return out


def slope_at(rates: Rates, base: np.ndarray) -> np.ndarray:
    """Slope m = 1 + g'(N) of the yearly step at a base abundance, under a fixed quota in either season."""
    return rates.step_slope(base)


def return_time(slope: np.ndarray) -> np.ndarray:
    """−1/ln|m| years; NaN where the equilibrium is unstable, 0 where m = 0."""
    size = np.abs(slope)
    with np.errstate(divide="ignore", invalid="ignore"):
        years = -1.0 / np.log(size)
    return np.where(size < 1.0, np.where(size == 0.0, 0.0, years), np.nan)


def reference_values(record: Record, rates: Rates) -> pd.DataFrame:
    """Reference values draw by draw.

    Returns
    -------
    DataFrame
        One row a draw: ``msy`` (total removals a year), ``msy_abundance`` (at the count's moment),
        ``msy_share`` (u* of the season's starting abundance), ``persistence_share`` (NaN for none),
        ``greatest_growth`` (p, a year), ``good_low`` and ``good_high`` (abundances at the count's moment whose
        yield is at least 80% of MSY), ``sustainable_today``, ``slope_at_capacity``.
    """
    msy, peak = rates.closed_form("msy"), rates.closed_form("peak")
    start = peak + msy if record.season == "short" else peak
    growth = rates.closed_form("greatest_growth")
    low, high = both_equilibria(rates, 0.8 * msy)
    return pd.DataFrame(
        {
            "msy": msy,
            "msy_abundance": at_count(record, peak, msy),
            "msy_share": msy / start,
            "persistence_share": greatest_harvest_rate(record, growth),
            "greatest_growth": growth,
            "good_low": at_count(record, low, 0.8 * msy),
            "good_high": at_count(record, high, 0.8 * msy),
            "sustainable_today": sustainable_today(record, rates),
            "slope_at_capacity": slope_at(rates, rates.column("K")),
        }
    )
