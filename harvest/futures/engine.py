"""From laid-out rates and a rule to the kernel and back: threads and accumulators.

Blocks are the unit of parallel work. Chunks of blocks run on threads (the kernel releases the GIL); what is
summed in floating point is added up chunk by chunk in a fixed order, the rest is whole numbers, so that the
number of threads changes nothing in the result.
"""

from __future__ import annotations

import os
from collections.abc import Callable, Iterator
from concurrent.futures import ThreadPoolExecutor
from contextlib import contextmanager
from dataclasses import dataclass
from queue import Empty, SimpleQueue

import numpy as np

from harvest.errors import SettingsError
from harvest.futures.prepared import Prepared, counts_ahead
from harvest.futures.rules import Rule
from harvest.kernels import projection as kernel
from harvest.kernels.codes import MISSING, SEASON_CODES, WHEN_CODES
from harvest.kernels.histogram import BINS
from harvest.rates.approach import animals_per_unit
from harvest.rates.draw import check_seed_and_draws

#: Blocks that one task runs: fixed, so that sums do not depend on threads.
CHUNK = 8
MOST_YEARS = 500
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
