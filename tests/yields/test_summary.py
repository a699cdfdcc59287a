"""Yields over draws: probabilities by plain numpy, the yield curve, the bound on removals and its refusals."""

from __future__ import annotations

import numpy as np
import pytest

from harvest.errors import SettingsError
from harvest.record.model import Objectives, fixed
from harvest.yields import summarise_yield
from harvest.yields.biological_removal import biological_removal, minimum_abundance, potential_biological_removal

from ..builders import make_rates, make_record

MOMENTS = [("short", "before"), ("short", "after"), ("all year", "start")]


def mixed(n=3000):
    rng = np.random.default_rng(1)
    return make_rates(
        r=rng.lognormal(np.log(0.5), 0.5, n),
        K=rng.lognormal(np.log(1000), 0.3, n),
        abundance=rng.lognormal(np.log(600), 0.5, n),
        wounding=0.1,
        unreported=0.05,
        other=3.0,
    )


@pytest.mark.parametrize(("season", "when"), MOMENTS)
def test_where_the_population_stands(season, when):
    rates = mixed()
    r, k, x = (rates.table[c].to_numpy() for c in ("r", "K", "abundance"))
    record = make_record(season, when, removals={2019: 999.0, 2020: 70.0}, years=(2019, 2020), present_quota=5.0)
    got = summarise_yield(record, rates)
    msy = r * k / 4
    at = k / 2 + (msy if (season, when) == ("short", "before") else 0)
    u = r / (2 + r) if season == "short" else r / 2
    assert got.below_msy_abundance == (x < at).mean()
    assert got.present_removals == 70.0
    assert got.above_msy_rate == ((70 * 1.15 + 3) / x > u).mean()
    assert got.declines_unharvested == (x > k).mean()
    assert got.unstable == (r >= 2).mean()
    assert 0 < got.unstable < 0.1
    assert got.spreads["msy"].low90 == pytest.approx(np.quantile(msy, 0.05))
    assert got.spreads["msy_share"].median == pytest.approx(np.median(u))
    assert got.spreads["K"].high50 == pytest.approx(np.quantile(k, 0.75))


def test_present_take_is_the_latest_recorded_else_the_present_quota_else_nothing():
    rates = mixed(50)
    assert summarise_yield(make_record(present_quota=12.0), rates).present_removals == 12.0
    bare = summarise_yield(make_record(), rates)
    assert (bare.present_removals, bare.above_msy_rate) == (None, None)
    zero = summarise_yield(make_record(removals={2020: 0.0}, present_quota=12.0), rates)
    assert zero.present_removals == 0.0, "a recorded zero is a removal of zero"


@pytest.mark.parametrize(("season", "when"), MOMENTS)
def test_yield_curve_is_what_holds_each_counted_abundance(season, when):
    """At every point: take the yield from that abundance, grow, and be back there."""
    rates = make_rates(r=[0.4], K=[1000.0])
    curve = summarise_yield(make_record(season, when), rates).curve
    assert len(curve) == 41
    n, h = curve["abundance"].to_numpy(), curve["median"].to_numpy()
    inside = (n > 0) & (n < 1000)
    base = n - h if when == "before" else n
    grown = base + 0.4 * base * (1 - base / 1000)
    back = grown if when == "before" else grown - h
    np.testing.assert_allclose(back[inside], n[inside], rtol=1e-9)
    assert (h[n > 1000] == 0).all()
    assert h[0] == 0.0
    assert (curve["low90"] == curve["high90"]).all()


def test_unbounded_curves_have_no_persistence_share_and_the_spread_says_so():
    rates = make_rates(["fox", "fox", "logistic"], r=[0.2, 0.3, 0.4])
    got = summarise_yield(make_record(), rates)
    assert got.spreads["persistence_share"].share == pytest.approx(1 / 3)
    assert got.spreads["persistence_share"].median == pytest.approx(0.4 / 1.4)
    assert got.spreads["greatest_growth"].share == pytest.approx(1 / 3)


def test_allee_below_its_threshold_sustains_nothing():
    rates = make_rates("allee", r=1.0, K=1000.0, shape=0.2, abundance=[150.0, 200.0, 250.0, 1000.0, 1100.0])
    for season in ("short", "all year"):
        got = summarise_yield(make_record(season), rates)
        held = got.draws["sustainable_today"].to_numpy()
        assert held[[0, 4]].tolist() == [0.0, 0.0]
        assert held[2] > 0
        assert held[[1, 3]] == pytest.approx([0, 0], abs=1e-9)
        assert got.declines_unharvested == pytest.approx(0.4, abs=0.21)


def test_bound_on_removals_uses_growth_at_low_abundance_where_growth_is_unbounded():
    rates = make_rates(["fox", "gompertz"], r=[0.05, np.nan], shape=[np.nan, 0.05])
    for low in (0.05, 0.2):
        bound = biological_removal(make_record(low_abundance=low, objectives=Objectives(recovery_factor=1.0)), rates)
        expected = np.median([0.05 * np.log(1 / low), low**-0.05 - 1])
        assert bound.r_max == pytest.approx(expected, rel=1e-12)
        assert bound.value == pytest.approx(bound.n_min * 0.5 * expected, rel=1e-12)


def test_minimum_abundance_is_the_twentieth_percentile():
    rng = np.random.default_rng(0)
    for cv in (0.1, 0.5, 1.2):
        sample = 500 * np.exp(np.sqrt(np.log(1 + cv**2)) * rng.standard_normal(400_000))
        assert minimum_abundance(500.0, cv) == pytest.approx(np.quantile(sample, 0.2), rel=0.01)
    assert minimum_abundance(500.0, 0.0) == 500.0


@pytest.mark.parametrize(
    ("n_min", "r_max", "factor"),
    [(100, 0.1, 0.05), (100, 0.1, 1.01), (-1, 0.1, 0.5), (100, -0.1, 0.5), (100, 0.1, float("nan"))],
)
def test_impossible_bounds_are_refused(n_min, r_max, factor):
    with pytest.raises(SettingsError):
        potential_biological_removal(n_min, r_max, factor)


def test_bound_divides_the_count_by_its_bias():
    plain = biological_removal(make_record(), make_rates())
    halved = biological_removal(make_record(bias=fixed(0.5)), make_rates())
    assert halved.value == pytest.approx(2 * plain.value)
    assert halved.n_best == 2000.0
