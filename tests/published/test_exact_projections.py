"""Projections whose answer is known exactly: the Gompertz map in logs, no noise at all, demographic noise alone."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from scipy import stats

from harvest.futures import fixed_quota, project, rule_from
from harvest.population import BY_NAME
from harvest.record.model import LifeHistory, Losses

from ..builders import make_rates, make_record
from ..futures.simulation import Plan, simulate

STRICT = 4.5


def gompertz_moments(b, log_start, log_k, sigma, rho, mean_one, years, weather=None):
    """Exact mean and variance of log X by year: log X' = (1 − b) log X + b log K + σε − σ²/2, ε autocorrelated."""
    c, mean, var = 1 - b, log_start, 0.0
    e_mean, e_var, cov = (0.0, 1.0, 0.0) if weather is None else (weather, 0.0, 0.0)
    rows = []
    for t in range(years):
        if t > 0 or weather is not None:
            e_mean, e_var, cov = rho * e_mean, rho**2 * e_var + 1 - rho**2, rho * cov
        mean = c * mean + b * log_k + sigma * e_mean - (sigma**2 / 2 if mean_one else 0)
        var, cov = c * c * var + sigma**2 * e_var + 2 * c * sigma * cov, c * cov + sigma * e_var
        rows.append((mean, var))
    return np.array(rows).T


@pytest.mark.parametrize("noise", ["mean one", "median one"])
@pytest.mark.parametrize(("rho", "weather"), [(0.0, None), (0.7, None), (-0.5, None), (0.8, 1.5)])
@pytest.mark.parametrize("season", ["short", "all year"])
def test_gompertz_map_without_harvest_is_an_exact_autoregression(noise, rho, weather, season):
    n, b, sigma, years = 40_000, 0.3, 0.35, 12
    carried = weather is not None
    rates = make_rates(
        "gompertz", n, r=np.nan, shape=b, sigma=sigma, rho=rho, abundance=300.0, weather=weather or 0.0, carried=carried
    )
    future = project(make_record(season, noise=noise), rates, fixed_quota(0), years, paths=n, seed=5)
    mean, var = gompertz_moments(b, np.log(300), np.log(1000), sigma, rho, noise == "mean one", years, weather)
    logs = np.log(future.paths[2])
    assert (np.abs(logs.mean(axis=1) - mean) < STRICT * np.sqrt(var / n)).all()
    assert (np.abs(logs.var(axis=1) / var - 1) < STRICT * np.sqrt(2 / n)).all()
    gap = future.by_year["abundance_mean"] - np.exp(mean + var / 2)
    assert (gap.abs() < STRICT * future.by_year["abundance_mean_se"]).all()
    exact = stats.norm.cdf(np.log(400), mean, np.sqrt(var))
    below = (future.paths[2] < 400).mean(axis=1)
    assert (np.abs(below - exact) < STRICT * np.sqrt(exact * (1 - exact) / n)).all()
    for level, name in ((0.05, "low90"), (0.5, "median"), (0.95, "high90")):
        z = stats.norm.ppf(level)
        density = stats.norm.pdf(z) / np.sqrt(var)
        gap = np.log(future.by_year[f"abundance_{name}"]) - (mean + z * np.sqrt(var))
        assert (gap.abs() < STRICT * np.sqrt(level * (1 - level) / n) / density + 0.004).all()


@pytest.mark.parametrize("season", ["short", "all year"])
def test_autocorrelated_noise_keeps_its_marginal_standard_deviation(season):
    """b near 1 forgets abundance, so that log X is the year's environment alone: sd σ, lag-one correlation ρ."""
    n, sigma, rho = 40_000, 0.4, 0.6
    rates = make_rates("gompertz", n, r=np.nan, shape=1 - 1e-12, sigma=sigma, rho=rho)
    logs = np.log(project(make_record(season), rates, fixed_quota(0), 6, paths=n).paths[2])
    assert np.abs(logs.std(axis=1) / sigma - 1).max() < STRICT / np.sqrt(2 * n)
    for a, b in itertools.pairwise(logs):
        assert np.corrcoef(a, b)[0, 1] == pytest.approx(rho, abs=STRICT * (1 - rho**2) / np.sqrt(n))


RULES = [
    ("fixed quota", {"quota": 70.0}),
    ("fixed share", {"share": 0.3}),
    ("escapement", {"escapement": 250.0}),
    ("ramp", {"lower": 100.0, "upper": 700.0, "share": 0.5}),
]
MOMENTS = [("short", "before"), ("short", "after"), ("all year", "start")]


@pytest.mark.parametrize("curve", BY_NAME)
@pytest.mark.parametrize(("season", "when", "lag"), [(*m, lag) for m in MOMENTS for lag in range(m[1] == "after", 4)])
@pytest.mark.parametrize(("rule", "settings"), RULES, ids=lambda v: v if isinstance(v, str) else "")
def test_without_noise_the_projection_is_the_recursion(curve, season, when, lag, rule, settings):
    rng = np.random.default_rng(lag)
    n, years = 300, 14
    shape = {
        "theta-logistic": rng.uniform(0.4, 3, n),
        "gompertz": rng.uniform(0.1, 0.6, n),
        "allee": rng.uniform(0.05, 0.3, n),
        "ricker": rng.uniform(0, 0.95, n),
        "beverton-holt": rng.uniform(0, 0.95, n),
    }
    columns = {
        "r": rng.uniform(0.05, 1.2, n),
        "K": rng.uniform(400, 1500, n),
        "shape": shape.get(curve, np.nan),
        "abundance": rng.uniform(10, 2500, n),
        "counted": rng.uniform(10, 2500, n),  # shown, never projected from
        "bias": rng.uniform(0.6, 1.4, n),
        "wounding": rng.uniform(0, 0.4, n),
        "unreported": rng.uniform(0, 0.2, n),
        "other": rng.uniform(0, 30, n),
    }
    recent = rng.uniform(100, 900, (lag, n))
    rates = make_rates(curve, n, recent=recent, count_year=2010, **columns)
    record = make_record(season, when, years=(2010,), cv=0.0, lag=lag)
    future = project(record, rates, rule_from(rule, settings), years, paths=n)
    table = {k: rates.table[k].to_numpy(object if k == "curve" else float) for k in rates.table}
    exact = simulate(Plan(season, when, rule, settings, years, lag), table, recent, np.random.default_rng(0))
    for row, name in enumerate(("start", "removals", "counted", "quota")):
        np.testing.assert_allclose(future.paths[row], exact[name], rtol=1e-9, atol=1e-9, err_msg=name)
    assert future.measure("share of years with less to take than the quota") == pytest.approx(exact["short"].mean())
    assert future.measure("share of years held at zero by the growth curve") == pytest.approx(exact["bounded"].mean())
    assert future.measure("mean yearly legal take") == pytest.approx(exact["legal"].mean(), rel=1e-9)


@pytest.mark.parametrize(("season", "when"), MOMENTS)
@pytest.mark.parametrize("mass", [None, 80.0])
def test_demographic_noise_alone_has_variance_one_over_what_grows(season, when, mass):
    """sd of log X' is σ_d/√N, N the animals that grow: what the take left in a short season, X all year."""
    n, demo, take = 60_000, 1.5, 300.0
    unit = 1.0 if mass is None else 1000 / mass
    rates = make_rates("logistic", n, r=0.3, K=2000.0, abundance=900.0, sigma_demo=demo)
    record = make_record(season, when, unit="animals" if mass is None else "tonnes", life=LifeHistory(body_mass=mass))
    paths = project(record, rates, fixed_quota(take), 2, paths=n).paths
    grows = 600.0 if season == "short" else 900.0
    mean = 600 + 0.3 * 600 * 0.7 if season == "short" else 900 + 0.3 * 900 * (1 - 0.45) - take
    logs = np.log(paths[0, 1])
    var = demo**2 / (grows * unit)
    assert logs.var() / var == pytest.approx(1, abs=STRICT * np.sqrt(2 / n))
    assert logs.mean() == pytest.approx(np.log(mean) - var / 2, abs=STRICT * np.sqrt(var / n))


def test_population_below_one_animal_is_gone_under_demographic_noise_only():
    for demo, gone in ((0.1, True), (0.0, False)):
        rates = make_rates("logistic", 1000, r=0.1, K=50.0, abundance=3.0, sigma_demo=demo)
        paths = project(make_record(), rates, fixed_quota(2.6), 2, paths=1000).paths
        assert (paths[0, 1] == 0).all() == gone


def test_constant_escapement_takes_the_greatest_yield_when_it_never_fails():
    """Reed 1979: mean take S(B*)·E(Z) − B* = MSY while X stays above B*; below it, less; a shared loss cuts it."""
    n = 40_000
    for sigma, reaches in ((0.1, True), (0.6, False)):
        rates = make_rates("logistic", n, r=1.0, abundance=750.0, sigma=sigma)
        future = project(make_record(cv=0.0), rates, rule_from("escapement", {"escapement": 500.0}), 30, seed=2)
        last = future.by_year.iloc[-1]
        if reaches:
            assert last["removals_mean"] == pytest.approx(250, abs=STRICT * last["removals_mean_se"])
        else:
            assert last["removals_mean"] < 250 - STRICT * last["removals_mean_se"]


def test_legal_take_is_what_remains_of_all_removals():
    """Total = legal × (1 + wounding + unreported) + other; with too few to take, legal falls in proportion."""
    rates = make_rates(abundance=[600.0, 90.0], wounding=0.2, unreported=0.3, other=10.0)
    future = project(make_record(losses=Losses()), rates, fixed_quota(60), 1, paths=2)
    assert future.paths[1][0].tolist() == [100.0, 90.0]
    assert future.measure("mean yearly legal take") == pytest.approx((60 + 60 * 0.9) / 2)
    assert future.measure("share of years with less to take than the quota") == 0.5


@pytest.mark.parametrize(("season", "best"), [("short", 500.0), ("all year", 500.0)])
def test_no_rule_beats_the_greatest_yield_in_the_long_run_and_escapement_comes_closest(season, best):
    """Reed 1979: independent mean-one noise, perfect counts; mean removals after eighty years."""
    rates = make_rates("logistic", 20_000, r=0.6, abundance=600.0, sigma=0.35)
    record, msy = make_record(season, cv=0.0), 0.6 * 1000 / 4
    share = msy / (best + msy) if season == "short" else msy / best
    yields = {}
    for rule, settings in (
        ("escapement", {"escapement": best}),
        ("fixed share", {"share": share}),
        ("ramp", {"lower": 200.0, "upper": 800.0, "share": 1.4 * share}),
    ):
        last = project(record, rates, rule_from(rule, settings), 80).by_year.iloc[-1]
        yields[rule] = (last["removals_mean"], last["removals_mean_se"])
        assert last["removals_mean"] < msy + STRICT * last["removals_mean_se"], rule
    if season == "all year":
        return  # taking X − E from a year whose growth already began at X is not Reed's rule; only the bound holds
    for rule in ("fixed share", "ramp"):
        assert yields["escapement"][0] > yields[rule][0] - STRICT * np.hypot(yields["escapement"][1], yields[rule][1])
