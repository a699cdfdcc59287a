"""Closed-loop yearly projection in lanes: nature, count, rule, take, losses; one block of lanes at a time.

The order of a year and every formula follow the population model of DEVELOPERS.md; tests/kernels holds a
plain-Python reference that this file must equal. Blocks hold one growth curve each and are independent:
what a block computes depends on its key, its draws and the settings, never on threads.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from harvest.kernels.codes import AFTER, BEFORE, MISSING, RECORDED, SHORT
from harvest.kernels.compiling import SUMS, kernel
from harvest.kernels.growth import fill_growth
from harvest.kernels.histogram import bin_of
from harvest.kernels.randomness import DEMOGRAPHY, ENVIRONMENT, IMPLEMENTATION, SURVEY, fill_normals
from harvest.kernels.rules import fill_quota
from harvest.kernels.vectormath import exp

#: Most lanes (futures) of a block.
LANES = 256

#: Columns of the draws, shape (COLUMNS, draws); the abundances of years before the first follow, oldest first.
R, K, SHAPE, SIGMA, SIGMA_DEMO, RHO, START, FACTOR, OTHER, BIAS, LIMIT, COLLAPSE, CEILING, TARGET, WEATHER = range(15)
COLUMNS = 15

#: Yearly events, counted over futures: rows of ``year_events`` (years, EVENTS).
BELOW, EVER_BELOW, COLLAPSED, EVER_COLLAPSED, ABOVE, BACK, UNDER, CLOSED, AT_TARGET = range(9)
EVENTS = 9

#: Yearly sums over futures: columns of ``year_sums`` (years, SUMMED).
ABUNDANCE, REMOVALS, QUOTA, LEGAL = range(4)
SUMMED = 4

#: One summary row a future: rows of ``summary`` (SUMMARY, futures). Years count from 1; 0 is never.
(FIRST_BELOW, FIRST_COLLAPSED, FIRST_BACK, FIRST_UNDER, CLOSURES, TOTAL_LEGAL, TOTAL_SQUARES, TOTAL_CHANGE, SHORTFALLS,
 BOUNDED, FINAL, LEAST) = range(12)  # fmt: skip
SUMMARY = 12


class Settings(NamedTuple):
    """Everything that is the same for all draws; whole numbers unless said otherwise.

    ``per_unit`` (float) is animals per unit of abundance; ``tau`` (float) the survey's sd of log;
    ``implementation`` (float) the sd of log of the legal take; ``bias`` (float) what a count is divided by;
    ``without_count`` (float) the share of the last quota in a year without a count; ``carried`` whether the
    column WEATHER holds the standard normal of the year before the first.
    """

    seed: int
    years: int
    futures_per_draw: int
    season: int
    when: int
    lag: int
    mean_one: int
    demographic: int
    environmental: int
    carried: int
    rule: int
    tau: float
    implementation: float
    bias: float
    without_count: float
    last_quota: float
    per_unit: float
    histograms: int
    base: int
    paths: int


@kernel(fastmath=SUMS)
def add_up(values, lanes):
    """Sum of the first ``lanes`` values."""
    total = 0.0
    for j in range(lanes):
        total += values[j]
    return total


@kernel(fastmath=SUMS)
def add_up_squares(values, lanes):
    """Sum of the squares of the first ``lanes`` values."""
    total = 0.0
    for j in range(lanes):
        total += values[j] * values[j]
    return total


@kernel()
def count_events(flags, lanes, per_draw, row, events, squares):
    """Add one yearly event: how many lanes, and the sum over draws of the squared share of the draw's futures."""
    events[row] += add_up(flags, lanes)
    if per_draw > 1:
        for first in range(0, lanes, per_draw):
            share = 0.0
            for j in range(first, first + per_draw):
                share += flags[j]
            squares[row] += (share / per_draw) ** 2


@kernel()
def add_values(values, lanes, per_draw, column, sums, squares):
    """Add one yearly quantity: its sum over lanes, and over draws the squared mean of the draw's futures."""
    sums[column] += add_up(values, lanes)
    if per_draw == 1:
        squares[column] += add_up_squares(values, lanes)
        return
    total = 0.0
    for first in range(0, lanes, per_draw):
        mean = 0.0
        for j in range(first, first + per_draw):
            mean += values[j]
        total += (mean / per_draw) ** 2
    squares[column] += total


@kernel(fastmath=SUMS)
def widen(values, lanes, extremes):
    """Widen the exact extremes of what a histogram has counted."""
    least, most = extremes[0], extremes[1]
    for j in range(lanes):
        least = min(least, values[j])
        most = max(most, values[j])
    extremes[0], extremes[1] = least, most


@kernel()
def fill_histogram(values, lanes, base, bins, counts, extremes):
    """Count the lanes' values into a log histogram and widen its exact extremes; ``bins`` is room for the bins."""
    widen(values, lanes, extremes)
    for j in range(bins.shape[0]):
        bins[j] = np.uint64(bin_of(values[j], base))
    for j in range(lanes):
        counts[bins[j]] += 1


@kernel()
def load_lanes(draws, first, count, per_draw, lanes):
    """Copy the block's draws into lanes: a draw's futures stand side by side, spare lanes repeat the last."""
    for c in range(draws.shape[0]):
        for j in range(lanes.shape[1]):
            i = min(j // per_draw, count - 1)
            lanes[c, j] = draws[c, first + i]


@kernel()
def fill_estimate(settings, block, year, seen, bias, noise, estimate):
    """The estimate that the rule sees: a lognormal count of the abundance seen, divided by the stated bias."""
    if settings.tau > 0.0:
        fill_normals(settings.seed, block, year, SURVEY, noise)
        for j in range(estimate.shape[0]):
            estimate[j] = seen[j] * bias[j] * exp(settings.tau * noise[j]) / settings.bias
    else:
        for j in range(estimate.shape[0]):
            estimate[j] = seen[j] * bias[j] / settings.bias


@kernel()
def fill_take(settings, block, year, quota, noise, take):
    """Legal take: the quota with yearly lognormal error of mean one."""
    if settings.implementation > 0.0:
        fill_normals(settings.seed, block, year, IMPLEMENTATION, noise)
        spread = settings.implementation
        for j in range(take.shape[0]):
            take[j] = quota[j] * exp(spread * noise[j] - 0.5 * spread * spread)
    else:
        for j in range(take.shape[0]):
            take[j] = quota[j]


@kernel()
def fill_environment(settings, block, year, lanes, fresh, state, noise):
    """The autocorrelated standard normal of the year's environment, in place: marginal variance one.

    ``fresh`` is √(1 − ρ²), the weight of the year's own noise.
    """
    fill_normals(settings.seed, block, year, ENVIRONMENT, noise)
    rho = lanes[RHO]
    if year == 0 and not settings.carried:
        for j in range(state.shape[0]):
            state[j] = noise[j]
    else:
        for j in range(state.shape[0]):
            state[j] = rho[j] * state[j] + fresh[j] * noise[j]


@kernel()
def apply_environment(settings, block, year, lanes, state, grown, noise, abundance):
    """Multiply by Z = exp(σε + σ_d/√N η − (σ² + σ_d²/N)/2); below one animal the population is gone."""
    sigma, demo = lanes[SIGMA], lanes[SIGMA_DEMO]
    half = 0.5 * settings.mean_one
    if settings.demographic:
        fill_normals(settings.seed, block, year, DEMOGRAPHY, noise)
        for j in range(abundance.shape[0]):
            spread = demo[j] / np.sqrt(max(grown[j] * settings.per_unit, 1.0))
            variance = sigma[j] * sigma[j] + spread * spread
            after = abundance[j] * exp(sigma[j] * state[j] + spread * noise[j] - half * variance)
            gone = demo[j] > 0.0 and after * settings.per_unit < 1.0
            abundance[j] = 0.0 if gone else after
    elif settings.environmental:
        for j in range(abundance.shape[0]):
            abundance[j] *= exp(sigma[j] * state[j] - half * sigma[j] * sigma[j])


@kernel()
def take_and_grow(settings, curve, lanes, take, start, removals, grown, growth, abundance, summary):
    """One year without its environment: removals at most what exists, then growth; ``grown`` is what grew."""
    factor, other = lanes[FACTOR], lanes[OTHER]
    r, k, shape = lanes[R], lanes[K], lanes[SHAPE]
    n = start.shape[0]
    before = add_up(summary[SHORTFALLS], n)
    if settings.season == SHORT:
        for j in range(n):
            wanted = take[j] * factor[j] + other[j]
            removals[j] = min(wanted, start[j])
            grown[j] = start[j] - removals[j]
            summary[SHORTFALLS, j] += 1.0 if wanted > start[j] else 0.0
        fill_growth(curve, grown, r, k, shape, growth)
        for j in range(n):
            step = grown[j] + growth[j]
            summary[BOUNDED, j] += 1.0 if step < 0.0 else 0.0
            abundance[j] = max(0.0, step)
    else:
        fill_growth(curve, start, r, k, shape, growth)
        for j in range(n):
            grown[j] = start[j]
            step = start[j] + growth[j]
            summary[BOUNDED, j] += 1.0 if step < 0.0 else 0.0
            step = max(0.0, step)
            wanted = take[j] * factor[j] + other[j]
            removals[j] = min(wanted, step)
            summary[SHORTFALLS, j] += 1.0 if wanted > step else 0.0
            abundance[j] = step - removals[j]
    if add_up(summary[SHORTFALLS], n) > before:  # rare: only then is the legal take less than the quota
        for j in range(n):
            wanted = take[j] * factor[j] + other[j]
            take[j] *= removals[j] / wanted if removals[j] < wanted else 1.0


@kernel()
def judge(lanes, counted, year, flags, summary):
    """Yearly events of each lane from the abundance at the count's moment; first years go to the summary."""
    limit, collapse, ceiling, target = lanes[LIMIT], lanes[COLLAPSE], lanes[CEILING], lanes[TARGET]
    now = year + 1.0
    for j in range(counted.shape[0]):
        x = counted[j]
        below = 1.0 if x < limit[j] else 0.0
        collapsed = 1.0 if x < collapse[j] else 0.0
        above = 1.0 if x > ceiling[j] else 0.0
        summary[FIRST_BELOW, j] += now * below * (1.0 if summary[FIRST_BELOW, j] == 0.0 else 0.0)
        summary[FIRST_COLLAPSED, j] += now * collapsed * (1.0 if summary[FIRST_COLLAPSED, j] == 0.0 else 0.0)
        summary[FIRST_BACK, j] += now * (1.0 - below) * (1.0 if summary[FIRST_BACK, j] == 0.0 else 0.0)
        summary[FIRST_UNDER, j] += now * (1.0 - above) * (1.0 if summary[FIRST_UNDER, j] == 0.0 else 0.0)
        flags[BELOW, j] = below
        flags[COLLAPSED, j] = collapsed
        flags[ABOVE, j] = above
        flags[AT_TARGET, j] = 1.0 if x >= target[j] else 0.0
        flags[EVER_BELOW, j] = 1.0 if summary[FIRST_BELOW, j] > 0.0 else 0.0
        flags[EVER_COLLAPSED, j] = 1.0 if summary[FIRST_COLLAPSED, j] > 0.0 else 0.0
        flags[BACK, j] = 1.0 if summary[FIRST_BACK, j] > 0.0 else 0.0
        flags[UNDER, j] = 1.0 if summary[FIRST_UNDER, j] > 0.0 else 0.0
        summary[LEAST, j] = min(summary[LEAST, j], x)


@kernel()
def project_blocks(settings, rule_settings, available, recorded, blocks, draws, out_summary, year_events,
                   event_squares, year_sums, sum_squares, counts, extremes, paths):  # fmt: skip
    """Project a run of blocks and add to the accumulators.

    Parameters
    ----------
    settings : Settings
    rule_settings : ndarray, shape (m,)
    available : int64 ndarray, shape (years,)
        SIMULATED, RECORDED or MISSING: what the rule has in each quota year.
    recorded : ndarray, shape (years,)
        The estimate on record where ``available`` is RECORDED.
    blocks : int64 ndarray, shape (b, 4)
        Key, growth curve, first draw, number of draws.
    draws : ndarray, shape (COLUMNS + lag, draws)
    out_summary : ndarray, shape (SUMMARY, futures)
    year_events, event_squares : ndarray, shape (years, EVENTS)
    year_sums, sum_squares : ndarray, shape (years, SUMMED)
    counts : int64 ndarray, shape (3, years, BINS)
        Histograms of abundance, removals and quota, filled if ``settings.histograms``.
    extremes : ndarray, shape (3, years, 2)
    paths : ndarray, shape (4, years, paths)
        Start, removals, counted abundance and quota of the first futures.
    """
    per_draw = settings.futures_per_draw
    width = LANES
    lanes = np.empty((draws.shape[0], width))
    summary = np.empty((SUMMARY, width))
    flags = np.zeros((EVENTS, width))
    start = np.empty(width)
    abundance = np.empty(width)
    removals = np.empty(width)
    grown = np.empty(width)
    growth = np.empty(width)
    take = np.empty(width)
    quota = np.empty(width)
    last = np.empty(width)
    estimate = np.empty(width)
    state = np.zeros(width)
    fresh = np.empty(width)
    noise = np.empty(width)
    bins = np.empty(width, np.uint64)
    memory = np.empty((settings.lag + 1, width))
    for b in range(blocks.shape[0]):
        block, curve, first_draw, drawn = blocks[b, 0], blocks[b, 1], blocks[b, 2], blocks[b, 3]
        used = drawn * per_draw
        load_lanes(draws, first_draw, drawn, per_draw, lanes)
        summary[:] = 0.0
        summary[LEAST] = 1e300
        last[:] = settings.last_quota
        start[:] = lanes[START]
        state[:] = lanes[WEATHER]
        fresh[:] = np.sqrt(1.0 - lanes[RHO] * lanes[RHO])
        for back in range(settings.lag):
            memory[(back - settings.lag) % (settings.lag + 1)] = lanes[COLUMNS + back]
        for t in range(settings.years):
            # What the rule sees, and the quota it gives.
            if settings.when == BEFORE:
                memory[t % (settings.lag + 1)] = start
            if settings.rule == 0:
                fill_quota(settings.rule, rule_settings, estimate, quota)
            elif available[t] == MISSING:
                for j in range(width):
                    quota[j] = settings.without_count * last[j]
            else:
                if available[t] == RECORDED:
                    estimate[:] = recorded[t]
                else:
                    seen = memory[(t - settings.lag) % (settings.lag + 1)]
                    fill_estimate(settings, block, t - settings.lag, seen, lanes[BIAS], noise, estimate)
                fill_quota(settings.rule, rule_settings, estimate, quota)
            # The take, the growth, the environment.
            fill_take(settings, block, t, quota, noise, take)
            take_and_grow(settings, curve, lanes, take, start, removals, grown, growth, abundance, summary)
            if settings.environmental:
                fill_environment(settings, block, t, lanes, fresh, state, noise)
            apply_environment(settings, block, t, lanes, state, grown, noise, abundance)
            counted = abundance
            if settings.when == AFTER:
                counted = grown
                memory[t % (settings.lag + 1)] = grown
            # Judge and add up.
            judge(lanes, counted, t, flags, summary)
            for j in range(width):
                closed = 1.0 if quota[j] <= 0.0 else 0.0
                flags[CLOSED, j] = closed
                summary[CLOSURES, j] += closed
                summary[TOTAL_LEGAL, j] += take[j]
                summary[TOTAL_SQUARES, j] += take[j] * take[j]
                summary[TOTAL_CHANGE, j] += abs(quota[j] - last[j]) if t > 0 else 0.0
            for row in range(EVENTS):
                count_events(flags[row], used, per_draw, row, year_events[t], event_squares[t])
            if settings.histograms:
                add_values(counted, used, per_draw, ABUNDANCE, year_sums[t], sum_squares[t])
                add_values(removals, used, per_draw, REMOVALS, year_sums[t], sum_squares[t])
                add_values(quota, used, per_draw, QUOTA, year_sums[t], sum_squares[t])
                add_values(take, used, per_draw, LEGAL, year_sums[t], sum_squares[t])
                fill_histogram(counted, used, settings.base, bins, counts[0, t], extremes[0, t])
                fill_histogram(removals, used, settings.base, bins, counts[1, t], extremes[1, t])
                if settings.rule > 0:
                    fill_histogram(quota, used, settings.base, bins, counts[2, t], extremes[2, t])
            for j in range(min(used, settings.paths - first_draw * per_draw)):
                i = first_draw * per_draw + j
                paths[0, t, i] = start[j]
                paths[1, t, i] = removals[j]
                paths[2, t, i] = counted[j]
                paths[3, t, i] = quota[j]
            last, quota = quota, last
            start, abundance = abundance, start
        summary[FINAL] = counted
        for row in range(SUMMARY):
            for j in range(used):
                out_summary[row, first_draw * per_draw + j] = summary[row, j]
