"""Rates laid out for the kernel, once, for many rules and quotas: draws as a matrix, blocks, the surveys ahead."""

from __future__ import annotations

import itertools
import math
from dataclasses import dataclass

import numpy as np

from harvest.errors import SettingsError
from harvest.kernels import projection as kernel
from harvest.kernels.codes import MISSING, RECORDED, SIMULATED
from harvest.kernels.histogram import base_of
from harvest.rates import Rates
from harvest.rates.approach import absolute_counts, latest_usable_count, stated_bias
from harvest.record.model import Record

MOST_FUTURES = 20_000_000


@dataclass(frozen=True)
class Prepared:
    """Rates laid out for the kernel; made once, used for many rules and quotas."""

    record: Record
    rates: Rates
    draws: np.ndarray
    blocks: np.ndarray
    futures_per_draw: int
    losses: bool
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
        losses=losses,
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
