"""Thresholds over draws by plain numpy, times by explicit loops."""

from __future__ import annotations

import numpy as np
import pytest

from harvest.errors import SettingsError
from harvest.population import BY_NAME
from harvest.record.model import Level, Objectives
from harvest.yields import find_thresholds
from harvest.yields.thresholds import MOST_YEARS, counted_equilibria, crossing_years

from ..builders import make_rates, make_record

N = 4000


@pytest.fixture(scope="module")
def logistic():
    rng = np.random.default_rng(8)
    return make_rates(
        r=rng.lognormal(np.log(0.35), 0.3, N),
        K=rng.lognormal(np.log(1000), 0.2, N),
        abundance=rng.lognormal(np.log(350), 0.5, N),
        wounding=rng.uniform(0, 0.3, N),
        unreported=rng.uniform(0, 0.1, N),
        other=rng.uniform(0, 10, N),
    )


def columns(rates, *names):
    return [rates.table[name].to_numpy() for name in names]


@pytest.mark.parametrize(("season", "when"), [("short", "before"), ("short", "after"), ("all year", "start")])
@pytest.mark.parametrize("quota", [0.0, 40.0, 75.0, 500.0])
def test_chances_of_the_fold_and_of_the_lower_equilibrium(logistic, season, when, quota):
    """The quadratic formula for the logistic: N = K/2 (1 ± √(1 − H/MSY)), at the count's moment."""
    r, k, x, w, u, other = columns(logistic, "r", "K", "counted", "wounding", "unreported", "other")
    h, msy = quota * (1 + w + u) + other, r * k / 4
    root = np.sqrt(np.maximum(0, 1 - h / msy))
    add = h if (season, when) == ("short", "before") else 0
    lower, upper = k / 2 * (1 - root) + add, k / 2 * (1 + root) + add
    beyond = h > msy
    below = ~beyond & (x < lower)
    got = find_thresholds(make_record(season, when), logistic, quota)
    assert got.beyond_fold == beyond.mean()
    assert got.below_lower == below.mean()
    assert got.doomed == (beyond | below).mean()
    spreads = got.spreads
    assert spreads["fold"].median == pytest.approx(np.median(msy))
    assert spreads["removals"].median == pytest.approx(np.median(h))
    assert spreads["fold_quota"].low90 == pytest.approx(np.quantile(np.maximum(0, (msy - other) / (1 + w + u)), 0.05))
    assert spreads["margin_to_fold"].low90 == pytest.approx(np.quantile(msy - h, 0.05))
    assert spreads["upper_equilibrium"].share == (~beyond).mean()
    if not beyond.all():
        assert spreads["lower_equilibrium"].median == pytest.approx(np.median(lower[~beyond]), rel=1e-6)
        assert spreads["upper_equilibrium"].high90 == pytest.approx(np.quantile(upper[~beyond], 0.95), rel=1e-6)
        assert spreads["margin_to_lower"].low50 == pytest.approx(np.quantile((x - lower)[~beyond], 0.25), rel=1e-6)
        times = -1 / np.log(np.abs(1 - r * root))[~beyond]
        assert spreads["return_time"].median == pytest.approx(np.median(times), rel=1e-6)
    share = r / (1 + r) if season == "short" else r
    assert spreads["persistence_share"].median == pytest.approx(np.median(share))


def test_the_fold_tips_the_population_both_ways():
    """A step of the model from just above the lower equilibrium climbs, from just below it falls to nothing."""
    rates = make_rates(
        list(BY_NAME),
        r=[0.4, 0.4, 0.4, np.nan, 1.0, 0.4, 0.4],
        shape=[np.nan, 2, np.nan, 0.3, 0.1, 0.7, 0.0],
    )
    for season, when in (("short", "before"), ("all year", "start")):
        record = make_record(season, when)
        quota = 0.8 * float(rates.closed_form("msy").min())
        spread = find_thresholds(record, rates, quota)
        assert spread.beyond_fold == 0.0
        lower, upper = counted_equilibria(record, rates, quota)
        for factor, end in ((1.02, True), (0.98, False)):
            moved = make_rates(
                list(rates.table["curve"]), r=rates.table["r"], shape=rates.table["shape"], abundance=lower * factor
            )
            to_upper = crossing_years(record, moved, quota, 0.95 * upper, falling=False)
            to_nothing = crossing_years(record, moved, quota, 0.3 * lower, falling=True)
            assert np.isfinite(to_upper if end else to_nothing).all()
            assert np.isinf(to_nothing if end else to_upper).all()


@pytest.mark.parametrize(("season", "when"), [("short", "before"), ("short", "after"), ("all year", "start")])
def test_times_to_collapse_and_to_recover_by_explicit_loops(logistic, season, when):
    record = make_record(season, when, objectives=Objectives(limit=Level(0.4, True), collapse=Level(120.0)))
    quota = 80.0
    got = find_thresholds(record, logistic, quota)
    r, k, x0, w, u, other = columns(logistic, "r", "K", "abundance", "wounding", "unreported", "other")

    def crossing(take, i, done):
        x, h = x0[i], take * (1 + w[i] + u[i]) + other[i]
        for year in range(1, MOST_YEARS + 1):
            if season == "short":
                b = max(0.0, x - h)
                x = b + r[i] * b * (1 - b / k[i])
                seen = b if when == "after" else x
            else:
                x = seen = max(0.0, x + r[i] * x * (1 - x / k[i]) - h)
            if done(seen):
                return year
        return np.inf

    some = range(0, N, 10)
    collapse = [crossing(quota, i, lambda n: n < 120) for i in some]
    closed = [0 if x0[i] >= 0.4 * k[i] else crossing(0, i, lambda n, i=i: n >= 0.4 * k[i]) for i in some]
    half = [0 if x0[i] >= 0.4 * k[i] else crossing(quota / 2, i, lambda n, i=i: n >= 0.4 * k[i]) for i in some]
    assert crossing_years(record, logistic, quota, np.full(N, 120.0), falling=True)[::10].tolist() == collapse
    part = make_rates(
        **{c: logistic.table[c].to_numpy()[::10] for c in ("r", "K", "abundance", "wounding", "unreported", "other")}
    )
    small = find_thresholds(record, part, quota).spreads
    for name, times in (
        ("years_to_collapse", collapse),
        ("years_to_recover_closed", closed),
        ("years_to_recover_half", half),
    ):
        times = np.sort(times)
        expected = [times[int(np.ceil(q * len(times))) - 1] for q in (0.05, 0.25, 0.5, 0.75, 0.95)]
        s = small[name]
        if np.isinf(times).any():
            assert [s.low90, s.low50, s.median, s.high50, s.high90] == expected, name
        else:
            assert [s.low90, s.low50, s.median, s.high50, s.high90] == pytest.approx(
                np.quantile(times, [0.05, 0.25, 0.5, 0.75, 0.95])
            )
    assert np.isinf(collapse).any()
    assert got.spreads["years_to_collapse"].share == 1.0


def test_limit_left_out_is_the_collapse_level_and_quota_left_out_the_present_one():
    rates = make_rates(abundance=[50.0, 900.0], K=1000.0)
    record = make_record(present_quota=20.0)
    got = find_thresholds(record, rates)
    assert got.quota == 20.0
    recover = got.spreads["years_to_recover_closed"]
    assert (recover.low90, recover.high90) == (pytest.approx(0.05 * 3, abs=1), pytest.approx(0.95 * 3, abs=1))
    assert find_thresholds(make_record(), rates).quota == 0.0
    with pytest.raises(SettingsError):
        find_thresholds(record, rates, -1.0)
    with pytest.raises(SettingsError):
        find_thresholds(record, rates, float("nan"))


def test_branches_rise_and_meet_at_the_fold():
    rates = make_rates(r=[0.4], K=[1000.0])
    b = find_thresholds(make_record("all year"), rates, 90.0).branches.dropna()
    assert (np.diff(b["lower_median"]) > 0).all()
    assert (np.diff(b["upper_median"]) < 0).all()
    expected = 500 * (1 + np.sqrt(1 - b["quota"] / 100))
    assert b["upper_median"].to_numpy() == pytest.approx(expected.to_numpy(), rel=1e-6)
    assert 90.0 in set(b["quota"])
