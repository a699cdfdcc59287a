"""Drawing rates: correlations, weights of curves, streams of their own, refusals."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from harvest.errors import RatesError, SettingsError
from harvest.population import BY_NAME
from harvest.rates import COLUMNS, draw_rates
from harvest.rates.draw import curve_counts
from harvest.rates.spread import Spread
from harvest.record.model import Correlation, CurveChoice, Level, Losses, fixed

from ..builders import make_rates, make_record, spread

FULL = {
    "growth_rate": spread("90% between", low=0.1, high=0.4),
    "carrying_capacity": spread("lognormal", median=1500, sd_log=0.2),
    "process_noise": spread("uniform", low=0.05, high=0.3),
    "demographic_noise": spread("uniform", low=0.2, high=1.0),
    "autocorrelation": spread("uniform", low=-0.2, high=0.6),
}
LOSSES = Losses(
    wounding=spread("uniform", low=0.0, high=0.3),
    unreported=spread("triangular", low=0.0, mode=0.1, high=0.2),
    other=spread("lognormal", median=10, sd_log=0.3),
)


def full_record(**more):
    return make_record(rates=FULL, losses=LOSSES, bias=spread("90% between", low=0.7, high=0.9), **more)


def test_every_column_follows_its_range():
    rates = draw_rates(full_record(), seed=1, draws=20_000)
    assert set(rates.table) == set(COLUMNS)
    expected = {
        "r": stats.lognorm(np.log(4) / 2 / stats.norm.ppf(0.95), scale=0.2),
        "K": stats.lognorm(0.2, scale=1500),
        "sigma": stats.uniform(0.05, 0.25),
        "sigma_demo": stats.uniform(0.2, 0.8),
        "rho": stats.uniform(-0.2, 0.8),
        "wounding": stats.uniform(0, 0.3),
        "unreported": stats.triang(0.5, 0, 0.2),
        "other": stats.lognorm(0.3, scale=10),
        "bias": stats.lognorm(np.log(9 / 7) / 2 / stats.norm.ppf(0.95), scale=np.sqrt(0.63)),
    }
    for name, exact in expected.items():
        assert stats.kstest(rates.column(name), exact.cdf).pvalue > 1e-3, name
    pairs = np.abs(np.corrcoef([rates.column(name) for name in expected])[np.triu_indices(len(expected), 1)])
    assert pairs.max() < 4.5 / np.sqrt(20_000), "unrelated ranges are independent"


@pytest.mark.parametrize("rho", [-0.8, -0.3, 0.5, 0.95])
def test_spearman_correlation_is_recovered_and_marginals_kept(rho):
    n = 400_000  # Pearson's in place of Spearman's would be off by 0.017
    record = replace(full_record(), correlations=(Correlation("growth_rate", "carrying_capacity", rho),))
    rates = draw_rates(record, draws=n)
    got = stats.spearmanr(rates.column("r"), rates.column("K")).statistic
    assert got == pytest.approx(rho, abs=4.5 / np.sqrt(n))
    assert stats.kstest(rates.column("K")[:40_000], stats.lognorm(0.2, scale=1500).cdf).pvalue > 1e-3


def test_three_correlations_at_once_and_contradictions_refused():
    names = ("growth_rate", "carrying_capacity", "process_noise")
    values = {(0, 1): -0.6, (0, 2): 0.3, (1, 2): 0.2}
    record = replace(
        full_record(), correlations=tuple(Correlation(names[i], names[j], v) for (i, j), v in values.items())
    )
    table = draw_rates(record, draws=40_000).table[["r", "K", "sigma"]]
    got = stats.spearmanr(table).statistic
    for (i, j), value in values.items():
        assert got[i, j] == pytest.approx(value, abs=4.5 / np.sqrt(40_000))
    clash = replace(
        record,
        correlations=tuple(
            Correlation(names[i], names[j], v) for (i, j), v in {(0, 1): 0.9, (0, 2): 0.9, (1, 2): -0.9}.items()
        ),
    )
    with pytest.raises(RatesError, match="contradict"):
        draw_rates(clash, draws=10)


def test_changing_one_range_leaves_the_other_draws_untouched():
    before = draw_rates(full_record(), seed=4, draws=500).table
    for name, column in (
        ("growth_rate", "r"),
        ("carrying_capacity", "K"),
        ("process_noise", "sigma"),
        ("autocorrelation", "rho"),
    ):
        changed = make_record(
            rates=FULL | {name: spread("uniform", low=0.31, high=0.32) if name != "carrying_capacity" else fixed(900)},
            losses=LOSSES,
            bias=spread("90% between", low=0.7, high=0.9),
        )
        after = draw_rates(changed, seed=4, draws=500).table
        differs = {c for c in before if not before[c].equals(after[c])}
        assert differs == {column}, name
    losses = replace(LOSSES, wounding=fixed(0.1))
    after = draw_rates(replace(full_record(), losses=losses), seed=4, draws=500).table
    assert {c for c in before if not before[c].equals(after[c])} == {"wounding"}


def test_seed_zero_is_a_seed_and_seeds_differ():
    a, b, c = (draw_rates(full_record(), seed=s, draws=300) for s in (0, 0, 1))
    assert a.table.equals(b.table)
    assert all((a.column(x) != c.column(x)).all() for x in ("r", "K", "sigma", "abundance", "bias", "other"))
    assert a.seed == 0


@given(st.lists(st.floats(0.001, 50), min_size=1, max_size=6), st.integers(1, 5000))
def test_curve_weights_are_exact_by_largest_remainder(weights, draws):
    counts = curve_counts(np.array(weights), draws)
    exact = draws * np.array(weights) / np.sum(weights)
    assert counts.sum() == draws
    assert (np.abs(counts - exact) < 1 + 1e-9).all()
    up = counts > np.floor(exact)
    if up.any() and not up.all():
        part = exact - np.floor(exact)
        assert part[up].min() >= part[~up].max() - 1e-9


def test_two_curves_share_a_table_in_exact_proportion_each_with_its_own_rates():
    curves = (
        CurveChoice("theta-logistic", 1.0, (("shape", spread("uniform", low=1.0, high=3.0)),)),
        CurveChoice("gompertz", 2.0, (("shape", spread("beta", a=4, b=8)), ("carrying_capacity", fixed(777.0)))),
        CurveChoice("fox", 0.0001, ()),
    )
    rates = draw_rates(replace(full_record(), curves=curves), draws=1000)
    counts = {name: int((rates.table["curve"] == name).sum()) for name in ("theta-logistic", "gompertz", "fox")}
    assert counts == {"theta-logistic": 333, "gompertz": 667, "fox": 0}
    gompertz = rates.table[rates.table["curve"] == "gompertz"]
    assert (gompertz["K"] == 777).all()
    assert gompertz["r"].isna().all()
    theta = rates.table[rates.table["curve"] == "theta-logistic"]
    assert theta["shape"].between(1, 3).all()
    assert theta["K"].std() > 100


def test_max_growth_is_growth_at_the_stated_low_abundance_for_unbounded_curves():
    growth = spread("90% between", low=0.1, high=0.3)
    curves = tuple(
        CurveChoice(name, 1.0, shape)
        for name, shape in (
            ("logistic", ()),
            ("fox", ()),
            ("gompertz", ()),
            ("allee", (("shape", fixed(0.2)),)),
            ("ricker", (("shape", fixed(0.7)),)),
            ("beverton-holt", (("shape", fixed(0.0)),)),
        )
    )
    record = replace(
        make_record(),
        curves=curves,
        low_abundance=0.1,
        rates=(("max_growth", growth), ("carrying_capacity", fixed(1000.0))),
    )
    t = draw_rates(record, draws=1000 * len(curves)).table
    p = {
        "logistic": t["r"],
        "fox": t["r"] * np.log(10),
        "gompertz": 10 ** t["shape"] - 1,
        "allee": t["r"] * 0.8**2 / 4,
        "ricker": t["r"],
        "beverton-holt": t["r"],
    }
    for name, values in p.items():
        mine = values[t["curve"] == name]
        assert mine.quantile([0.05, 0.5, 0.95]).tolist() == pytest.approx([0.1, np.sqrt(0.03), 0.3], rel=0.06), name


def test_all_curves_mix_in_one_table_and_adult_survival_follows_its_range():
    """A 90% range of survival is logit-normal, its two ends its quantiles; a fixed 0, all dying, stays 0."""
    survival = spread("90% between", low=0.6, high=0.9)
    shapes = {"theta-logistic": fixed(2.0), "gompertz": fixed(0.3), "allee": fixed(0.2)}
    shapes |= {"ricker": survival, "beverton-holt": fixed(0.0)}
    curves = tuple(CurveChoice(n, 1.0, (("shape", shapes[n]),) if n in shapes else ()) for n in BY_NAME)
    rates = draw_rates(replace(full_record(), curves=curves), draws=7 * 3000)
    assert rates.table["curve"].value_counts().to_dict() == dict.fromkeys(BY_NAME, 3000)
    drawn = rates.table[rates.table["curve"] == "ricker"]["shape"]
    low, high = np.log(0.6 / 0.4), np.log(0.9 / 0.1)
    exact = stats.norm((low + high) / 2, (high - low) / 2 / stats.norm.ppf(0.95))
    assert stats.kstest(np.log(drawn / (1 - drawn)), exact.cdf).pvalue > 1e-3
    assert (rates.table[rates.table["curve"] == "beverton-holt"]["shape"] == 0.0).all()
    assert np.isfinite(rates.closed_form("msy")).all()
    assert (rates.closed_form("msy") > 0).all()


def test_refusals_say_what_to_do():
    with pytest.raises(RatesError, match="of its probability outside"):
        draw_rates(make_record(rates={"growth_rate": spread("normal", mean=0.0, sd=0.2)}), draws=10)
    noted = draw_rates(make_record(rates={"growth_rate": spread("normal", mean=0.2, sd=0.1)}), draws=10)
    assert "cut off" in noted.notes[0]
    assert draw_rates(make_record(rates={"growth_rate": spread("normal", mean=0.2, sd=0.01)}), draws=10).notes == ()
    bare = replace(make_record(), rates=(("carrying_capacity", fixed(1000.0)),))
    with pytest.raises(RatesError, match="growth_rate or max_growth"):
        draw_rates(bare, draws=10)
    for seed, draws in ((-1, 10), (2**63, 10), (0, 0), (0, 10_000_001)):
        with pytest.raises(SettingsError):
            draw_rates(make_record(), seed=seed, draws=draws)


def test_levels_are_absolute_or_fractions_of_each_draws_capacity():
    rates = make_rates(["allee", "allee", "logistic"], K=[1000.0, 500.0, 200.0], shape=[0.05, 0.3, np.nan])
    assert rates.level(Level(300.0), 0).tolist() == [300.0] * 3
    assert rates.level(Level(0.3, True), 0).tolist() == [300.0, 150.0, 60.0]
    assert rates.collapse_level(None).tolist() == [100.0, 150.0, 20.0], "10% of K, or a higher Allee threshold"
    assert rates.collapse_level(Level(40.0)).tolist() == [40.0] * 3


def test_spread_tells_quantiles_over_the_draws_that_have_the_quantity():
    x = np.random.default_rng(0).normal(size=999)
    s = Spread.of(np.append(x, np.nan))
    assert [s.low90, s.low50, s.median, s.high50, s.high90] == pytest.approx(
        np.quantile(x, [0.05, 0.25, 0.5, 0.75, 0.95])
    )
    assert s.share == 0.999
    never = Spread.of(np.array([1.0, 2.0, np.inf, np.inf, np.inf]))
    assert (never.low90, never.median, never.high90) == (1.0, np.inf, np.inf)
    nothing = Spread.of(np.full(3, np.nan))
    assert nothing.share == 0.0
    assert np.isnan(nothing.median)
