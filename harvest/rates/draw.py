"""Rates from the ranges that a record states, correlated by a Gaussian copula, mixed over growth curves.

Each rate has its own stream of random numbers, keyed by (seed, name), so that changing one range leaves the
draws of the others as they were.
"""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pandas as pd
from scipy import special

from harvest.errors import RatesError, SettingsError
from harvest.population import BY_NAME
from harvest.rates.approach import approach
from harvest.rates.cautions import cautions
from harvest.rates.distributions import DOMAINS, Interval, outside, quantile
from harvest.rates.streams import stream
from harvest.rates.table import Rates
from harvest.record.curves import merged_rate
from harvest.record.fields import CORRELATED
from harvest.record.model import CurveChoice, Distribution, Record

#: States of nature to draw, unless said otherwise.
DRAWS = 10_000


def check_seed_and_draws(seed: int, draws: int) -> None:
    """Seed a whole number from 0 to 2^63 − 1, draws from 1 to 10 million."""
    if not 0 <= seed < 2**63:
        raise SettingsError(f"seed {seed} is not allowed: give a whole number from 0 to 2^63 − 1")
    if not 1 <= draws <= 10_000_000:
        raise SettingsError(f"{draws} draws are not allowed: give a whole number from 1 to 10,000,000")


def curve_counts(weights: np.ndarray, draws: int) -> np.ndarray:
    """Draws of each curve: the weights' shares by largest remainder, exact in total."""
    share = draws * weights / weights.sum()
    counts = np.floor(share).astype(int)
    rest = draws - counts.sum()
    counts[np.argsort(-(share - counts), kind="stable")[:rest]] += 1
    return counts


def correlated_normals(record: Record, seed: int, draws: int) -> dict[str, np.ndarray]:
    """Standard normals of each correlated rate, shape (draws,), by Spearman's ρ through a Gaussian copula."""
    names = [name for name in CORRELATED if name == merged_rate(name)]
    pearson = np.eye(len(names))
    for c in record.correlations:
        i, j = names.index(merged_rate(c.first)), names.index(merged_rate(c.second))
        pearson[i, j] = pearson[j, i] = 2.0 * math.sin(math.pi * c.value / 6.0)
    try:
        factor = np.linalg.cholesky(pearson)
    except np.linalg.LinAlgError as error:
        smallest = float(np.linalg.eigvalsh(pearson)[0])
        raise RatesError(
            f"the stated correlations contradict each other (smallest eigenvalue {smallest:.3g}, must be "
            "above 0): bring some of them closer to 0"
        ) from error
    z = dict(zip(names, factor @ np.stack([stream(seed, n).standard_normal(draws) for n in names]), strict=True))
    return {name: z[merged_rate(name)] for name in CORRELATED}


def _domain(name: str, curve: str) -> Interval:
    return DOMAINS[f"{curve} shape" if name == "shape" else name]


def _possible(name: str, curve: str, low_abundance: float) -> Interval:
    """Where a rate may lie under a curve: its domain; growth at low abundance that keeps the Gompertz b below 1."""
    if name == "max_growth" and curve == "gompertz":
        return (0.0, 1.0 / low_abundance - 1.0)
    return _domain(name, curve)


def _draw_curve(
    record: Record, choice: CurveChoice, rows: slice, z: dict[str, np.ndarray], notes: list[str]
) -> pd.DataFrame:
    """The population rates of one curve's rows."""
    stated: dict[str, Distribution] = dict(record.rates) | dict(choice.rates)
    if "growth_rate" in dict(choice.rates):
        stated.pop("max_growth", None)
    elif "max_growth" in dict(choice.rates):
        stated.pop("growth_rate", None)

    def value(name: str) -> np.ndarray:
        d, domain = stated[name], _domain(name, choice.name)
        low, high = within = _possible(name, choice.name, record.low_abundance)
        cut = outside(d, domain, within)
        if cut > 0.2:
            raise RatesError(
                f"the range of {name} ({d}) has {cut:.0%} of its probability outside what the {choice.name} curve "
                f"allows ({low:g} to {high:g}): state a range that lies inside"
            )
        if cut > 0.001:
            notes.append(f"{name} ({d}): the {cut:.1%} outside {low:g} to {high:g} is cut off")
        return quantile(d, special.ndtr(z[name][rows]), domain, within)

    n = z["shape"][rows].size
    curve = BY_NAME[choice.name]
    shape = value("shape") if "shape" in stated else np.full(n, np.nan)
    if "growth_rate" in stated and choice.name != "gompertz":
        r = value("growth_rate")
    elif "max_growth" in stated and not (choice.name == "gompertz" and "shape" in stated):
        r, shape = curve.from_growth(value("max_growth"), shape, record.low_abundance)
    elif choice.name == "gompertz" and "shape" in stated:
        r = np.full(n, np.nan)
    else:
        raise RatesError(f"the {choice.name} curve has no growth rate: state growth_rate or max_growth")
    zero = Distribution("fixed", (("value", 0.0),))
    for name in ("process_noise", "demographic_noise", "autocorrelation"):
        stated.setdefault(name, zero)
    return pd.DataFrame(
        {
            "curve": choice.name,
            "r": r,
            "K": value("carrying_capacity"),
            "shape": shape,
            "sigma": value("process_noise"),
            "sigma_demo": value("demographic_noise"),
            "rho": value("autocorrelation"),
        }
    )


def draw_rates(record: Record, seed: int = 0, draws: int = DRAWS) -> Rates:
    """Draw Rates from the ranges that the record states.

    Parameters
    ----------
    record : Record
    seed : int
        0 to 2^63 − 1.
    draws : int
        Rows of the table.

    Returns
    -------
    Rates
        With this year's abundance: each draw starts from the latest usable absolute count and its CV and is
        projected through the recorded removals, with noise, to the first quota season.

    Raises
    ------
    RatesError
        No usable absolute count, removals missing on the way, impossible ranges or correlations.
    SettingsError
        Seed or number of draws out of range.
    """
    check_seed_and_draws(seed, draws)
    z = correlated_normals(record, seed, draws)
    counts = curve_counts(np.array([c.weight for c in record.curves]), draws)
    ends = np.cumsum(counts)
    notes: list[str] = []
    parts = [
        _draw_curve(record, choice, slice(end - count, end), z, notes)
        for choice, count, end in zip(record.curves, counts, ends, strict=True)
        if count > 0
    ]
    table = pd.concat(parts, ignore_index=True)
    table["curve"] = pd.Categorical(table["curve"], categories=list(BY_NAME))
    for name in ("wounding", "unreported", "other"):
        u = special.ndtr(stream(seed, name).standard_normal(draws))
        table[name] = quantile(getattr(record.losses, name), u, DOMAINS[name])
    rates = approach(record, table, seed, tuple(dict.fromkeys(notes)))
    return replace(rates, notes=(*rates.notes, *cautions(record, rates)))
