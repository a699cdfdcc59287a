"""From Rates and a rule to the kernel and back: draws as a matrix, blocks, threads, accumulators.

Blocks are the unit of parallel work. Chunks of blocks run on threads (the kernel releases the GIL); what is
summed in floating point is added up chunk by chunk in a fixed order, the rest is whole numbers, so that the
number of threads changes nothing in the result.
"""

from __future__ import annotations

import itertools
import math
import os
from collections.abc import Callable, Iterator
from concurrent.futures import ThreadPoolExecutor
from contextlib import contextmanager
from dataclasses import dataclass
from queue import Empty, SimpleQueue

import numpy as np

from harvest.errors import SettingsError
from harvest.futures.rules import Rule
from harvest.kernels import projection as kernel
from harvest.kernels.codes import MISSING, RECORDED, SEASON_CODES, SIMULATED, WHEN_CODES
from harvest.kernels.histogram import BINS, base_of
from harvest.rates import Rates
from harvest.rates.approach import absolute_counts, animals_per_unit, latest_usable_count
from harvest.rates.distributions import DOMAINS, quantile
from harvest.rates.draw import check_seed_and_draws
from harvest.record.model import Record, Survey

#: Blocks that one task runs: fixed, so that sums do not depend on threads.
CHUNK = 8
MOST_YEARS = 500
MOST_FUTURES = 20_000_000
Progress = Callable[[int, int], None]


def thread_count(threads: int | None = None) -> int:
    """Threads to use: as asked, else ``HARVEST_THREADS``, else the cores this process may use.

    Raises
    ------
    SettingsError
        Not a whole number of at least 1.
    """
    if threads is None:
        stated = os.environ.get("HARVEST_THREADS")
        if not stated:
            affinity = getattr(os, "sched_getaffinity", None)
            return len(affinity(0)) if affinity else os.cpu_count() or 1
        if not stated.isascii() or not stated.isdigit():
            raise SettingsError(f"HARVEST_THREADS is {stated!r}: give a whole number from 1")
        threads = int(stated)
    if threads < 1:
        raise SettingsError(f"{threads} threads are not allowed: give a whole number from 1")
    return threads


@dataclass(frozen=True)
class Prepared:
    """Rates laid out for the kernel; made once, used for many rules and quotas."""

    record: Record
    rates: Rates
    draws: np.ndarray
    blocks: np.ndarray
    futures_per_draw: int
    tau: float
    bias: float
    base: int
    demographic: bool
    environmental: bool
    implementation: float

    @property
    def futures(self) -> int:
        """Number of futures."""
        return len(self.rates) * self.futures_per_draw


def make_blocks(codes: np.ndarray, draws_per_block: int) -> np.ndarray:
    """Blocks of one growth curve each: key, curve, first draw, number of draws; int64, shape (blocks, 4)."""
    starts = [0, *(np.flatnonzero(np.diff(codes)) + 1).tolist(), codes.size]
    rows: list[tuple[int, int, int, int]] = []
    for begin, end in itertools.pairwise(starts):
        for first in range(begin, end, draws_per_block):
            rows.append((len(rows), int(codes[begin]), first, min(draws_per_block, end - first)))
    return np.array(rows, dtype=np.int64).reshape(-1, 4)


def stated_bias(survey: Survey) -> float:
    """What a survey's counts are divided by: the median of its stated bias."""
    return float(quantile(survey.bias, np.array([0.5]), DOMAINS["bias"])[0])


def survey_error(record: Record) -> tuple[float, float]:
    """The survey of the years ahead: standard deviation of log, and the bias that counts are divided by."""
    usable = latest_usable_count(record)
    cv = record.survey_plan.cv if record.survey_plan.cv is not None else usable.cv
    return math.sqrt(math.log1p(cv * cv)), stated_bias(usable.survey)


def prepare(record: Record, rates: Rates, *, futures_per_draw: int = 1, losses: bool = True) -> Prepared:
    """Lay Rates out for the kernel.

    Parameters
    ----------
    record, rates : Record, Rates
    futures_per_draw : int
        1 to 256.
    losses : bool
        False leaves out wounding, unreported and other deaths and the implementation error: what the quota
        would be if every dead animal were a reported one.

    Raises
    ------
    SettingsError
        Futures per draw out of range, or too many futures.
    """
    if not 1 <= futures_per_draw <= kernel.LANES:
        raise SettingsError(f"{futures_per_draw} futures a draw are not allowed: give 1 to {kernel.LANES}")
    n = len(rates)
    if n * futures_per_draw > MOST_FUTURES:
        raise SettingsError(f"{n * futures_per_draw:,} futures are too many: at most {MOST_FUTURES:,}")
    lag = rates.recent.shape[0]
    draws = np.zeros((kernel.COLUMNS + lag, n))
    for row, name in (
        (kernel.R, "r"),
        (kernel.K, "K"),
        (kernel.SHAPE, "shape"),
        (kernel.SIGMA, "sigma"),
        (kernel.SIGMA_DEMO, "sigma_demo"),
        (kernel.RHO, "rho"),
        (kernel.START, "abundance"),
        (kernel.BIAS, "bias"),
        (kernel.WEATHER, "weather"),
    ):
        draws[row] = np.nan_to_num(rates.column(name))
    draws[kernel.FACTOR] = rates.factor if losses else 1.0
    draws[kernel.OTHER] = rates.column("other") if losses else 0.0
    draws[kernel.COLLAPSE] = rates.collapse_level(record.objectives.collapse)
    draws[kernel.LIMIT] = rates.limit_level(record.objectives)
    draws[kernel.CEILING] = rates.level(record.objectives.ceiling, 1e300)
    draws[kernel.TARGET] = rates.level(record.objectives.target, 1e300)
    draws[kernel.COLUMNS :] = np.nan_to_num(rates.recent)
    tau, bias = survey_error(record)
    cv = record.losses.implementation_cv if losses else 0.0
    return Prepared(
        record=record,
        rates=rates,
        draws=draws,
        blocks=make_blocks(rates.codes, kernel.LANES // futures_per_draw),
        futures_per_draw=futures_per_draw,
        tau=tau,
        bias=bias,
        base=base_of(float(draws[[kernel.K, kernel.START]].max())),
        demographic=bool(draws[kernel.SIGMA_DEMO].any()),
        environmental=bool(draws[kernel.SIGMA].any()),
        implementation=math.sqrt(math.log1p(cv * cv)),
    )


def counts_ahead(record: Record, rates: Rates, years: int) -> tuple[np.ndarray, np.ndarray]:
    """What a rule has in each quota year: a recorded count, a simulated one or none; and recorded estimates.

    A count of year c serves the quota of year c + lag, divided by its own survey's bias. Counts of years within
    the history are as recorded; from then on one is made every ``survey_plan.every`` years after the latest.
    """
    on_record = absolute_counts(record)
    kind, estimate = np.full(years, SIMULATED, np.int64), np.zeros(years)
    for t in range(years):
        counted = rates.first_year + t - record.lag
        if counted in on_record:
            seen = on_record[counted]
            kind[t], estimate[t] = RECORDED, seen.count / stated_bias(seen.survey)
        elif counted <= record.history.years[-1] or (counted - rates.count_year) % record.survey_plan.every:
            kind[t] = MISSING
    return kind, estimate


@dataclass
class Tally:
    """What the kernel adds up; shapes as in :func:`harvest.kernels.projection.project_blocks`."""

    summary: np.ndarray
    events: np.ndarray
    event_squares: np.ndarray
    sums: np.ndarray
    sum_squares: np.ndarray
    counts: np.ndarray
    extremes: np.ndarray
    paths: np.ndarray


def check_years(years: int) -> None:
    """Years of a projection: a whole number from 1 to :data:`MOST_YEARS`."""
    if not 1 <= years <= MOST_YEARS:
        raise SettingsError(f"{years} years are not allowed: give a whole number from 1 to {MOST_YEARS}")


@contextmanager
def workers(threads: int | None = None) -> Iterator[ThreadPoolExecutor]:
    """A pool of threads for several calls of :func:`run`."""
    with ThreadPoolExecutor(thread_count(threads)) as pool:
        yield pool


def run(
    prepared: Prepared,
    rule: Rule,
    years: int,
    pool: ThreadPoolExecutor,
    *,
    seed: int = 0,
    histograms: bool = True,
    paths: int = 0,
    progress: Progress | None = None,
) -> Tally:
    """Project all futures under a rule and add them up.

    Raises
    ------
    SettingsError
        Years or seed out of range, or a rule that needs the last quota in a year without a count and none is known.
    """
    check_years(years)
    check_seed_and_draws(seed, len(prepared.rates))
    record, rates = prepared.record, prepared.rates
    available, recorded = counts_ahead(record, rates, years)
    if rule.feedback and available[0] == MISSING and record.present_quota is None:
        raise SettingsError(
            f"there is no count for the quota of {rates.first_year}, so the rule starts from the present "
            "quota: state present_quota in the record"
        )
    settings = kernel.Settings(
        seed=seed,
        years=years,
        futures_per_draw=prepared.futures_per_draw,
        season=SEASON_CODES[record.season],
        when=WHEN_CODES[record.count_when],
        lag=rates.recent.shape[0],
        mean_one=int(record.noise == "mean one"),
        demographic=int(prepared.demographic),
        environmental=int(prepared.environmental),
        carried=int(rates.carried),
        rule=rule.code,
        tau=prepared.tau,
        implementation=prepared.implementation,
        bias=prepared.bias,
        without_count=rule.without_count,
        last_quota=float(record.present_quota or 0.0),
        per_unit=animals_per_unit(record),
        histograms=int(histograms),
        base=prepared.base,
        paths=min(paths, prepared.futures),
    )
    return _add_up(prepared, settings, np.array(rule.settings), available, recorded, pool, progress)


def _add_up(
    prepared: Prepared,
    settings: kernel.Settings,
    rule_settings: np.ndarray,
    available: np.ndarray,
    recorded: np.ndarray,
    pool: ThreadPoolExecutor,
    progress: Progress | None,
) -> Tally:
    """Run chunks of blocks on the pool; add their sums in order, their whole-number histograms in any order."""
    years = settings.years
    summary = np.empty((kernel.SUMMARY, prepared.futures))
    paths = np.empty((4, years, settings.paths))
    spare: SimpleQueue[tuple[np.ndarray, np.ndarray]] = SimpleQueue()
    made: list[tuple[np.ndarray, np.ndarray]] = []

    def buffers() -> tuple[np.ndarray, np.ndarray]:
        try:
            return spare.get_nowait()
        except Empty:
            extremes = np.empty((3, years, 2))
            extremes[..., 0], extremes[..., 1] = 1e300, -1e300
            fresh = np.zeros((3, years, BINS if settings.histograms else 0), np.int32), extremes
            made.append(fresh)
            return fresh

    def chunk(first: int) -> tuple[np.ndarray, ...]:
        sums = tuple(np.zeros((years, m)) for m in (kernel.EVENTS, kernel.EVENTS, kernel.SUMMED, kernel.SUMMED))
        mine = buffers()
        blocks = prepared.blocks[first : first + CHUNK]
        kernel.project_blocks(
            settings, rule_settings, available, recorded, blocks, prepared.draws, summary, *sums, *mine, paths
        )
        spare.put(mine)
        return sums

    total = [np.zeros((years, m)) for m in (kernel.EVENTS, kernel.EVENTS, kernel.SUMMED, kernel.SUMMED)]
    firsts = range(0, prepared.blocks.shape[0], CHUNK)
    for done, parts in enumerate(pool.map(chunk, firsts), start=1):
        for mine, more in zip(total, parts, strict=True):
            mine += more
        if progress:
            progress(done, len(firsts))
    counts = sum((c for c, _ in made[1:]), start=made[0][0])
    least = np.min([e[..., 0] for _, e in made], axis=0)
    most = np.max([e[..., 1] for _, e in made], axis=0)
    events, event_squares, sums, sum_squares = total
    extremes = np.stack([least, most], axis=-1)
    return Tally(summary, events, event_squares, sums, sum_squares, counts, extremes, paths)
