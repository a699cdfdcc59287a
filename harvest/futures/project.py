"""A rule projected over all draws: what happens by year, and what it adds up to, each with its standard error."""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass, field

import numpy as np
import pandas as pd

from harvest import __version__
from harvest.futures.engine import Progress, Tally, run, workers
from harvest.futures.prepared import Prepared, prepare
from harvest.futures.rules import Rule
from harvest.kernels import projection as kernel
from harvest.kernels.histogram import quantiles
from harvest.rates import Rates
from harvest.rates.spread import LEVEL_NAMES, LEVELS
from harvest.record.model import Record

#: Yearly probabilities, by their column in the table of years.
EVENT_COLUMNS = {
    "below_limit": kernel.BELOW,
    "ever_below_limit": kernel.EVER_BELOW,
    "collapsed": kernel.COLLAPSED,
    "ever_collapsed": kernel.EVER_COLLAPSED,
    "above_ceiling": kernel.ABOVE,
    "back_above_limit": kernel.BACK,
    "under_ceiling": kernel.UNDER,
    "closed": kernel.CLOSED,
    "at_target": kernel.AT_TARGET,
}


@dataclass(frozen=True)
class Future:
    """What a rule does over the years ahead.

    Attributes
    ----------
    rule : Rule
    by_year : DataFrame
        One row a quota year: ``quota_year``, ``count_year`` (of the count that shows its effect); quantiles and
        mean of ``abundance`` (at the count's moment, after that year's take), ``removals`` (total) and ``quota``
        (legal); ``legal_mean``, the mean legal take; each probability of :data:`EVENT_COLUMNS` with its Monte
        Carlo standard error (``…_se``). "Ever" counts years 1 to this one, today excluded; "back above the limit"
        and "under the ceiling" mean in this year or an earlier one.
    measures : DataFrame
        One row a measure: ``measure``, ``value``, ``se``.
    ever_bounded : float
        Share of futures in which the growth curve itself fell below zero and was held there.
    paths : ndarray, shape (4, years, n)
        Start, removals, counted abundance and quota of the first futures.
    draws, futures_per_draw, seed, record_digest, version
    """

    rule: Rule
    by_year: pd.DataFrame
    measures: pd.DataFrame
    ever_bounded: float
    paths: np.ndarray
    draws: int
    futures_per_draw: int
    seed: int
    record_digest: str
    version: str = field(default=__version__)

    def measure(self, name: str) -> float:
        """The value of one measure."""
        return float(self.measures.set_index("measure").loc[name, "value"])


def _draws_error(mean: np.ndarray, mean_square: np.ndarray, draws: int) -> np.ndarray:
    """Standard error of a mean over draws, from the mean of the draws' squares."""
    return np.sqrt(np.maximum(mean_square - mean * mean, 0.0) / max(draws - 1, 1))


def event_error(p: np.ndarray, squares: np.ndarray, draws: int, per_draw: int) -> np.ndarray:
    """Standard error of a probability, clustered by draw: sd of the draws' shares over √draws.

    Where no future or every future shows the event, that estimate is zero and says too much: the error is then
    that of one event more among ``draws`` + 2 (Agresti & Coull 1998, doi:10.1080/00031305.1998.10480550).
    """
    error = _draws_error(p, p if per_draw == 1 else squares / draws, draws)
    rare = 1.0 / (draws + 2)
    return np.where(error > 0.0, error, np.sqrt(rare * (1.0 - rare) / draws))


def clustered(values: np.ndarray, per_draw: int) -> tuple[float, float]:
    """Mean over futures and its standard error, clustered by draw."""
    means = values.reshape(-1, per_draw).mean(axis=1)
    error = means.std(ddof=1) / np.sqrt(means.size) if means.size > 1 else float("nan")
    return float(means.mean()), float(error)


def count_year(record: Record, quota_year: int) -> int:
    """The year of the count that first shows what the take of ``quota_year`` did."""
    return quota_year if record.counts_after else quota_year + 1


def _year_quantiles(tally: Tally, row: int, base: int) -> np.ndarray:
    """Quantiles of one quantity by year, shape (years, levels)."""
    levels, extremes = np.array(LEVELS), tally.extremes[row]
    return np.array(
        [quantiles(c, base, float(e[0]), float(e[1]), levels) for c, e in zip(tally.counts[row], extremes, strict=True)]
    )


def _years_table(prepared: Prepared, tally: Tally, rule: Rule, years: int) -> pd.DataFrame:
    """The table of years from what the kernel added up."""
    record, draws, per_draw = prepared.record, len(prepared.rates), prepared.futures_per_draw
    futures = prepared.futures
    first = prepared.rates.first_year
    table: dict[str, np.ndarray] = {
        "quota_year": np.arange(first, first + years),
        "count_year": np.array([count_year(record, first + t) for t in range(years)]),
    }
    for row, name in enumerate(("abundance", "removals", "quota")):
        mean = tally.sums[:, row] / futures
        table[f"{name}_mean"] = mean
        table[f"{name}_mean_se"] = _draws_error(mean, tally.sum_squares[:, row] / draws, draws)
        if name == "quota" and not rule.feedback:
            levels = np.full((years, len(LEVELS)), rule.settings[0])
        else:
            levels = _year_quantiles(tally, row, prepared.base)
        for i, quantile_name in enumerate(LEVEL_NAMES):
            table[f"{name}_{quantile_name}"] = levels[:, i]
    table["legal_mean"] = tally.sums[:, kernel.LEGAL] / futures
    for name, row in EVENT_COLUMNS.items():
        p = tally.events[:, row] / futures
        table[name] = p
        table[f"{name}_se"] = event_error(p, tally.event_squares[:, row], draws, per_draw)
    return pd.DataFrame(table)


def _measures(prepared: Prepared, tally: Tally, years: int) -> pd.DataFrame:
    """Measures over the whole projection from the summary rows, one a future."""
    s, per_draw = tally.summary, prepared.futures_per_draw

    def spread() -> np.ndarray:
        variance, square = s[kernel.TOTAL_SQUARES] / years, s[kernel.TOTAL_LEGAL] / years
        variance -= np.square(square, out=square)
        np.maximum(variance, 0.0, out=variance)
        return np.sqrt(variance, out=variance)

    made: dict[str, Callable[[], np.ndarray]] = {
        "mean yearly legal take": lambda: s[kernel.TOTAL_LEGAL] / years,
        "standard deviation of the legal take between years": spread,
        "mean yearly change of the quota": lambda: s[kernel.TOTAL_CHANGE] / max(years - 1, 1),
        "ever below the limit": lambda: s[kernel.FIRST_BELOW] > 0,
        "ever collapsed": lambda: s[kernel.FIRST_COLLAPSED] > 0,
        "share of years closed": lambda: s[kernel.CLOSURES] / years,
        "share of years with less to take than the quota": lambda: s[kernel.SHORTFALLS] / years,
        "share of years held at zero by the growth curve": lambda: s[kernel.BOUNDED] / years,
        "mean abundance at the end": lambda: s[kernel.FINAL],
        "mean of the lowest abundance": lambda: s[kernel.LEAST],
    }
    rows = [(name, *clustered(values(), per_draw)) for name, values in made.items()]
    return pd.DataFrame(rows, columns=["measure", "value", "se"])


def project_prepared(
    prepared: Prepared,
    rule: Rule,
    years: int,
    pool: ThreadPoolExecutor,
    *,
    seed: int = 0,
    paths: int = 0,
    progress: Progress | None = None,
) -> Future:
    """Project rates that are already laid out, on a pool of workers; see :func:`project`."""
    tally = run(prepared, rule, years, pool, seed=seed, paths=paths, progress=progress)
    return Future(
        rule=rule,
        by_year=_years_table(prepared, tally, rule, years),
        measures=_measures(prepared, tally, years),
        ever_bounded=float(np.mean(tally.summary[kernel.BOUNDED] > 0.0)),
        paths=tally.paths,
        draws=len(prepared.rates),
        futures_per_draw=prepared.futures_per_draw,
        seed=seed,
        record_digest=prepared.rates.record_digest,
    )


def project(
    record: Record,
    rates: Rates,
    rule: Rule,
    years: int | None = None,
    *,
    seed: int | None = None,
    futures_per_draw: int = 1,
    threads: int | None = None,
    paths: int = 0,
    progress: Progress | None = None,
) -> Future:
    """Project every draw under a rule.

    Parameters
    ----------
    record, rates : Record, Rates
    rule : Rule
    years : int
        Quota years, 1 to 500; default the record's horizon.
    seed : int
        Default: the seed of the rates.
    futures_per_draw : int
        1 to 256; with more than one, standard errors are clustered by draw.
    threads : int
        Default: the cores at hand. The result does not depend on it.
    paths : int
        How many single futures to keep.
    progress : callable (done, total)

    Raises
    ------
    SettingsError
        A setting out of range.
    """
    with workers(threads) as pool:
        return project_prepared(
            prepare(record, rates, futures_per_draw=futures_per_draw),
            rule,
            record.objectives.horizon if years is None else years,
            pool,
            seed=rates.seed if seed is None else seed,
            paths=paths,
            progress=progress,
        )
