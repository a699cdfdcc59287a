"""The whole projection kernel, lane by lane, against plain Python fed with the same normals."""

from __future__ import annotations

import functools

import numpy as np
import pytest

from harvest.kernels import projection as kernel
from harvest.kernels.histogram import BINS, base_of
from harvest.kernels.randomness import normals
from harvest.population import BY_NAME

from . import reference

YEARS = 9
BASE = kernel.Settings(
    seed=0,
    years=YEARS,
    futures_per_draw=1,
    season=0,
    when=0,
    lag=0,
    mean_one=1,
    demographic=1,
    environmental=1,
    carried=0,
    rule=0,
    tau=0.0,
    implementation=0.0,
    bias=1.0,
    without_count=0.8,
    last_quota=33.0,
    per_unit=1.0,
    histograms=1,
    base=base_of(1000.0),
    paths=0,
)
SETTINGS = {0: [45.0], 1: [0.15], 2: [420.0], 3: [200.0, 700.0, 0.3]}


def make_draws(n, lag, seed=1, demographic=True):
    rng = np.random.default_rng(seed)
    d = np.zeros((kernel.COLUMNS + lag, n))
    d[kernel.R] = rng.uniform(0.1, 1.1, n)
    d[kernel.K] = rng.uniform(500, 1500, n)
    d[kernel.SHAPE] = rng.uniform(0.1, 0.6, n)
    d[kernel.SIGMA] = rng.uniform(0, 0.4, n)
    d[kernel.SIGMA_DEMO] = rng.uniform(0.1, 2, n) if demographic else 0.0
    d[kernel.RHO] = rng.uniform(-0.7, 0.9, n)
    d[kernel.START] = rng.uniform(2, 1200, n)
    d[kernel.FACTOR] = rng.uniform(1, 1.5, n)
    d[kernel.OTHER] = rng.uniform(0, 12, n)
    d[kernel.BIAS] = rng.uniform(0.6, 1.3, n)
    d[kernel.LIMIT] = rng.uniform(200, 500, n)
    d[kernel.COLLAPSE] = 0.1 * d[kernel.K]
    d[kernel.CEILING] = rng.uniform(600, 1000, n)
    d[kernel.TARGET] = rng.uniform(300, 800, n)
    d[kernel.WEATHER] = rng.standard_normal(n)
    d[kernel.COLUMNS :] = rng.uniform(100, 900, (lag, n))
    return d


def run(settings, blocks, draws, available=None, recorded=None):
    """One call of the kernel: what it adds up, by name."""
    futures = draws.shape[1] * settings.futures_per_draw
    years = settings.years
    out = {
        "summary": np.full((kernel.SUMMARY, futures), np.nan),
        "events": np.zeros((years, kernel.EVENTS)),
        "event_squares": np.zeros((years, kernel.EVENTS)),
        "sums": np.zeros((years, kernel.SUMMED)),
        "sum_squares": np.zeros((years, kernel.SUMMED)),
        "counts": np.zeros((3, years, BINS), np.int32),
        "extremes": np.tile([1e300, -1e300], (3, years, 1)),
        "paths": np.full((4, years, settings.paths), np.nan),
    }
    available = np.zeros(years, np.int64) if available is None else np.array(available)
    recorded = np.zeros(years) if recorded is None else np.array(recorded, float)
    rule = np.array(SETTINGS[settings.rule])
    kernel.project_blocks(settings, rule, available, recorded, np.array(blocks, np.int64), draws, *out.values())
    return out


def lane_by_lane(settings, blocks, draws, available=None, recorded=None):
    """The same in plain Python: futures in order."""
    available = [0] * settings.years if available is None else available
    recorded = [0.0] * settings.years if recorded is None else recorded

    @functools.cache
    def numbers(key, purpose, year):
        return normals(settings.seed, key, year, purpose, kernel.LANES)

    futures = []
    for key, curve, first, count in blocks:
        for lane in range(count * settings.futures_per_draw):
            column = draws[:, first + lane // settings.futures_per_draw].tolist()
            draw = reference.Draw(*column[: kernel.COLUMNS])
            z = lambda purpose, year, key=key, lane=lane: numbers(key, purpose, year)[lane]  # noqa: E731
            rule = SETTINGS[settings.rule]
            futures.append(
                reference.future(settings, rule, available, recorded, curve, draw, column[kernel.COLUMNS :], z)
            )
    return futures


CASES = {
    f"curve {curve}, season {season}, when {when}, lag {lag}, rule {rule}": (curve, season, when, lag, rule)
    for curve in (c.code for c in BY_NAME.values())
    for season, when, lag in ((0, 0, 0), (0, 0, 2), (0, 1, 1), (0, 1, 3), (1, 0, 0), (1, 0, 1))
    for rule in ((curve + lag) % 4, (curve + lag + 1 + season) % 4)
}


@pytest.mark.parametrize("name", CASES)
def test_every_lane_equals_plain_python(name):
    curve, season, when, lag, rule = CASES[name]
    settings = BASE._replace(
        season=season,
        when=when,
        lag=lag,
        rule=rule,
        seed=curve,
        mean_one=lag % 2,
        carried=int(rule > 1),
        paths=90,
        tau=0.3 if curve != 1 else 0.0,
        implementation=0.2 if season == 0 else 0.0,
        bias=0.9,
        per_unit=[1.0, 12.0][rule % 2],
    )
    draws = make_draws(90, lag, seed=lag)
    blocks = [(4, curve, 0, 60), (7, curve, 60, 30)]
    available, recorded = [1, 0, 2, 2, 0, 0, 1, 2, 0], [500.0] + [0.0] * 5 + [640.0, 0.0, 0.0]
    got = run(settings, blocks, draws, available, recorded)
    futures = lane_by_lane(settings, blocks, draws, available, recorded)
    for row, key in enumerate(("start", "removals", "counted", "quota")):
        expected = np.array([f[key] for f in futures]).T
        np.testing.assert_allclose(got["paths"][row], expected, rtol=1e-10, atol=1e-10, err_msg=key)
    expected = np.array([f["summary"] for f in futures]).T
    np.testing.assert_allclose(got["summary"], expected, rtol=1e-10, atol=1e-9)


def check_sums(got, futures, draws, settings, lanes):
    """Everything that the kernel adds up over lanes, from the lane-by-lane futures."""
    counted, removals, quota, legal = (
        np.array([f[key] for f in futures]).T for key in ("counted", "removals", "quota", "legal")
    )
    per = settings.futures_per_draw
    rows = (kernel.LIMIT, kernel.COLLAPSE, kernel.CEILING, kernel.TARGET)
    limit, collapse, ceiling, target = (np.repeat(draws[row], per) for row in rows)
    below, collapsed, above = counted < limit, counted < collapse, counted > ceiling
    ever = np.logical_or.accumulate
    flags = [below, ever(below), collapsed, ever(collapsed), above, ever(~below), ever(~above), quota <= 0]
    flags.append(counted >= target)
    clustered = [f.reshape(settings.years, -1, per).mean(axis=2) for f in flags]
    np.testing.assert_array_equal(got["events"], np.array([f.sum(axis=1) for f in flags]).T)
    if per > 1:
        np.testing.assert_allclose(got["event_squares"], np.array([(c**2).sum(axis=1) for c in clustered]).T)
    for column, values in enumerate((counted, removals, quota, legal)):
        means = values.reshape(settings.years, -1, per).mean(axis=2)
        np.testing.assert_allclose(got["sums"][:, column], values.sum(axis=1), rtol=1e-10)
        np.testing.assert_allclose(got["sum_squares"][:, column], (means**2).sum(axis=1), rtol=1e-10)
    for row, values in enumerate((counted, removals, quota)):
        assert (got["counts"][row].sum(axis=1) == lanes).all()
        np.testing.assert_allclose(got["extremes"][row, :, 0], values.min(axis=1), rtol=1e-10)
        np.testing.assert_allclose(got["extremes"][row, :, 1], values.max(axis=1), rtol=1e-10)


@pytest.mark.parametrize(("per_draw", "counts"), [(1, (256, 13)), (4, (64, 5)), (100, (2, 1)), (256, (1, 1))])
def test_sums_events_and_histograms_count_the_lanes_in_use_only(per_draw, counts):
    settings = BASE._replace(rule=3, tau=0.2, implementation=0.1, futures_per_draw=per_draw, season=1)
    draws = make_draws(sum(counts), 0)
    blocks = [(0, 0, 0, counts[0]), (1, 4, counts[0], counts[1])]
    got = run(settings, blocks, draws)
    futures = lane_by_lane(settings, blocks, draws)
    check_sums(got, futures, draws, settings, sum(counts) * per_draw)
    assert np.isfinite(got["summary"]).all()


def test_switching_one_noise_on_leaves_the_others_as_they_were():
    """A fixed quota without demographic noise does not notice the survey; abundance keeps its own weather."""
    draws = make_draws(50, 0, demographic=False)
    blocks = [(0, 0, 0, 50)]
    plain = run(BASE._replace(demographic=0, paths=50), blocks, draws)["paths"]
    survey = run(BASE._replace(demographic=0, paths=50, tau=0.5), blocks, draws)["paths"]
    np.testing.assert_array_equal(plain, survey)
    draws[kernel.SIGMA_DEMO] = 1e-9
    demographic = run(BASE._replace(demographic=1, paths=50), blocks, draws)["paths"]
    np.testing.assert_allclose(demographic, plain, rtol=1e-6)
    share = BASE._replace(rule=1, demographic=0, paths=50)
    quiet, noisy = (run(share._replace(tau=tau, implementation=0.3), blocks, draws)["paths"] for tau in (0.0, 0.4))
    assert not np.allclose(quiet[3], noisy[3])
    kept = (quiet[0, 0] > quiet[1, 0]) & (noisy[0, 0] > noisy[1, 0])  # not cut short by what exists
    assert kept.sum() > 30
    slip = [((p[1, 0] - draws[kernel.OTHER]) / draws[kernel.FACTOR] / p[3, 0])[kept] for p in (quiet, noisy)]
    np.testing.assert_allclose(*slip, rtol=1e-9)


def test_blocks_do_not_depend_on_what_ran_before_them():
    settings = BASE._replace(rule=1, tau=0.2, lag=1, paths=120)
    draws = make_draws(120, 1)
    blocks = [(0, 0, 0, 40), (1, 2, 40, 40), (2, 4, 80, 40)]
    together = run(settings, blocks, draws)
    backwards = run(settings, blocks[::-1], draws)
    np.testing.assert_array_equal(together["paths"], backwards["paths"])
    np.testing.assert_array_equal(together["summary"], backwards["summary"])
