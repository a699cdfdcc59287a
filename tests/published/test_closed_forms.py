"""Closed forms and roots of all curves, in both seasons, against scipy's optimisers and plain iteration."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.optimize import brentq, minimize_scalar

from harvest.population import BY_NAME, by_draw
from harvest.record.model import CURVES
from harvest.yields.reference import both_equilibria, reference_values, return_time, slope_at, sustainable_today
from harvest.yields.thresholds import counted_equilibria

from ..builders import make_rates, make_record

SETS = [
    ("logistic", 0.15, 800.0, np.nan),
    ("logistic", 1.2, 12.5, np.nan),
    ("theta-logistic", 0.3, 1000.0, 2.4),
    ("theta-logistic", 0.8, 50.0, 0.4),
    ("theta-logistic", 0.1, 1000.0, 7.0),
    ("fox", 0.25, 1000.0, np.nan),
    ("fox", 0.9, 3e6, np.nan),
    ("gompertz", np.nan, 1000.0, 0.2),
    ("gompertz", np.nan, 0.4, 0.7),
    ("allee", 0.9, 1000.0, 0.1),
    ("allee", 1.5, 90.0, 0.35),
    ("ricker", 0.3, 1000.0, 0.8),
    ("ricker", 1.2, 60.0, 0.0),
    ("ricker", 2.5, 500.0, 0.1),
    ("beverton-holt", 0.3, 1000.0, 0.8),
    ("beverton-holt", 1.2, 60.0, 0.0),
    ("beverton-holt", 6.0, 3e6, 0.5),
]
EVERY = pytest.mark.parametrize("given", SETS, ids=lambda g: f"{g[0]}-{g[1]}-{g[3]}")
SEASONS = pytest.mark.parametrize("season", ["short", "all year"])


def test_every_curve_is_here():
    assert {given[0] for given in SETS} == set(BY_NAME) == set(CURVES)


def g_of(given):
    """The curve as a plain function of one number."""
    name, r, k, s = given
    return {
        "logistic": lambda n: r * n * (1 - n / k),
        "theta-logistic": lambda n: r * n * (1 - (n / k) ** s),
        "fox": lambda n: r * n * math.log(k / n) if n > 0 else 0.0,
        "gompertz": lambda n: n ** (1 - s) * k**s - n,
        "allee": lambda n: r * n * (1 - n / k) * (n / k - s),
        "ricker": lambda n: s * n + (r + 1 - s) * n * math.exp(-n / k * math.log((r + 1 - s) / (1 - s))) - n,
        "beverton-holt": lambda n: s * n + (r + 1 - s) * n / (1 + r / (1 - s) * n / k) - n,
    }[name]


def floor_of(given):
    return given[2] * given[3] if given[0] == "allee" else 0.0


def rates_of(given, abundance=None):
    name, r, k, s = given
    return make_rates(name, r=r, K=k, shape=s, abundance=0.6 * k if abundance is None else abundance)


def peak_of(given):
    g, k = g_of(given), given[2]
    best = minimize_scalar(lambda n: -g(n), bounds=(floor_of(given), k), method="bounded", options={"xatol": 1e-10 * k})
    return best.x, -best.fun


def held_at(given, season, x):
    """What can be taken every year so that the season's start stays x."""
    g = g_of(given)
    if season == "all year":
        return g(x)
    return x - brentq(lambda b: b + g(b) - x, 0.0, x, xtol=1e-13 * x, rtol=1e-14)


@EVERY
@SEASONS
def test_greatest_yield_where_and_at_which_share(given, season):
    """max over season-start abundance X of the take that holds X, by a search that knows no closed form."""
    k = given[2]
    low = floor_of(given) * 1.0001 + 1e-6 * k
    grid = np.linspace(low, k * 0.9999, 400)
    best = grid[np.argmax([held_at(given, season, x) for x in grid])]
    width = grid[1] - grid[0]
    found = minimize_scalar(
        lambda x: -held_at(given, season, x),
        bounds=(max(low, best - width), best + width),
        method="bounded",
        options={"xatol": 1e-9 * k},
    )
    msy, x = -found.fun, found.x
    values = reference_values(make_record(season), rates_of(given)).iloc[0]
    assert values["msy"] == pytest.approx(msy, rel=1e-9)
    assert values["msy_abundance"] == pytest.approx(x, rel=1e-4)
    assert values["msy_share"] == pytest.approx(msy / x, rel=1e-4)
    after = reference_values(make_record("short", "after"), rates_of(given)).iloc[0]
    assert after["msy_abundance"] == pytest.approx(peak_of(given)[0], rel=1e-5)
    assert after["msy_share"] == reference_values(make_record("short"), rates_of(given)).iloc[0]["msy_share"]


@EVERY
@SEASONS
def test_persistence_ends_at_the_stated_share(given, season):
    g, k = g_of(given), given[2]
    values = reference_values(make_record(season), rates_of(given)).iloc[0]
    share = values["persistence_share"]
    if given[0] in ("fox", "gompertz"):
        assert np.isnan(share)
        assert np.isinf(values["greatest_growth"])
        return

    per_head = [g(n) / n for n in np.geomspace(max(floor_of(given), 1e-17 * k), k, 20_001)]
    assert values["greatest_growth"] == pytest.approx(max(per_head), rel=1e-6)

    def survives(u):
        x = 0.8 * k if floor_of(given) else 1e-3 * k  # all year a share can be above one: more than a dense year holds
        for _ in range(25_000):
            left = (1 - u) * x
            x = left + g(left) if season == "short" else x + g(x) - u * x
            if x < 1e-8 * k:
                return False
        return x > 1e-7 * k

    assert survives(0.99 * share)
    assert not survives(1.01 * share)


@EVERY
@SEASONS
@pytest.mark.parametrize("fraction", [0.02, 0.2, 0.6, 0.95])
def test_yield_that_holds_todays_abundance(given, season, fraction):
    x = fraction * given[2]
    got = float(sustainable_today(make_record(season), rates_of(given, x))[0])
    if x < floor_of(given):
        assert got == 0.0
        return
    assert got == pytest.approx(held_at(given, season, x), rel=1e-9)
    g = g_of(given)
    step = (x - got) + g(x - got) if season == "short" else x + g(x) - got
    assert step == pytest.approx(x, rel=1e-12)


@EVERY
@SEASONS
@pytest.mark.parametrize("fraction", [1.0, 1.0 + 1e-12, 1.3, 5.0])
def test_nothing_holds_an_abundance_above_capacity(given, season, fraction):
    got = float(sustainable_today(make_record(season), rates_of(given, fraction * given[2]))[0])
    assert got == pytest.approx(0.0, abs=1e-9 * given[2])
    if fraction > 1.1:
        assert got == 0.0


@EVERY
@pytest.mark.parametrize("pressure", [1e-6, 0.3, 0.8, 0.999])
def test_both_equilibria_under_a_quota(given, pressure):
    g, k = g_of(given), given[2]
    peak, msy = peak_of(given)
    quota = pressure * msy
    tiny = max(floor_of(given), 1e-40 * k)
    low = brentq(lambda n: g(n) - quota, tiny, peak, xtol=1e-30 * k, rtol=1e-14)
    high = brentq(lambda n: g(n) - quota, peak, k, xtol=1e-30 * k, rtol=1e-14)
    rates = rates_of(given)
    for season, when, add in (("short", "before", quota), ("short", "after", 0.0), ("all year", "start", 0.0)):
        lower, upper = counted_equilibria(make_record(season, when), rates, quota)
        assert upper[0] == pytest.approx(high + add, rel=1e-7)
        assert lower[0] == pytest.approx(low + add, rel=1e-6)
    for base in counted_equilibria(make_record("all year"), rates, quota):
        assert g(base[0]) == pytest.approx(quota, rel=1e-9)


@EVERY
def test_no_equilibrium_beyond_the_fold_and_both_ends_without_a_quota(given):
    rates, k = rates_of(given), given[2]
    msy = rates.closed_form("msy")
    assert np.isnan(both_equilibria(rates, msy * 1.0001)).all()
    lower, upper = both_equilibria(rates, 0.0 * msy)
    assert (lower[0], upper[0]) == (pytest.approx(floor_of(given)), k)


@EVERY
@SEASONS
def test_range_with_four_fifths_of_the_greatest_yield(given, season):
    g, k = g_of(given), given[2]
    peak, msy = peak_of(given)
    values = reference_values(make_record(season), rates_of(given)).iloc[0]
    add = 0.8 * msy if season == "short" else 0.0
    tiny = max(floor_of(given), 1e-12 * k)
    assert values["good_low"] == pytest.approx(brentq(lambda n: g(n) - 0.8 * msy, tiny, peak) + add, rel=1e-7)
    assert values["good_high"] == pytest.approx(brentq(lambda n: g(n) - 0.8 * msy, peak, k) + add, rel=1e-7)


@EVERY
@SEASONS
@pytest.mark.parametrize("pressure", [0.0, 0.5, 0.9])
def test_slope_and_return_time_of_the_yearly_step(given, season, pressure):
    """The slope by finite differences of the season's own map; the return time from the map's own decay."""
    g, rates = g_of(given), rates_of(given)
    quota = pressure * rates.closed_form("msy")
    _, upper = both_equilibria(rates, quota)
    base, h = upper[0], quota[0]

    def step(x):
        return (x - h) + g(x - h) if season == "short" else x + g(x) - h

    x = base + h if season == "short" else base
    d = 1e-5 * x
    slope = float(slope_at(rates, upper)[0])
    assert slope == pytest.approx((step(x + d) - step(x - d)) / (2 * d), rel=1e-5, abs=1e-7)
    years = float(return_time(np.array([slope]))[0])
    if abs(slope) >= 1:
        assert np.isnan(years)
    elif abs(slope) > 0.05:
        y = x * (1 + 1e-4)
        for _ in range(3):
            y = step(y)
        decay = abs((y - x) / (x * 1e-4)) ** (1 / 3)
        assert years == pytest.approx(-1 / np.log(decay), rel=5e-3)


def test_return_time_at_the_edges():
    assert return_time(np.array([0.0, 1.0, -1.0, 1.2, -0.5])).tolist() == pytest.approx(
        [0.0, np.nan, np.nan, np.nan, 1 / np.log(2)], nan_ok=True
    )


@pytest.mark.parametrize("name", BY_NAME)
@pytest.mark.parametrize("low", [0.05, 0.2])
def test_rates_from_per_head_growth(name, low):
    """Turning p into the curve's own parameters and back: p = sup g/N, or g/N at the stated low abundance."""
    p, k = np.array([0.08, 0.5]), np.array([900.0, 900.0])
    shape = {"theta-logistic": 1.7, "allee": 0.2, "ricker": 0.7, "beverton-holt": 0.0}.get(name, np.nan)
    r, s = BY_NAME[name].from_growth(p, np.full(2, shape), low)
    for i in range(2):
        g = g_of((name, r[i], 900.0, s[i]))
        if name in ("fox", "gompertz"):
            assert g(low * 900) / (low * 900) == pytest.approx(p[i], rel=1e-12)
        else:
            heads = [g(n) / n for n in np.geomspace(1e-7, 900, 20_001)]
            assert max(heads) == pytest.approx(p[i], rel=1e-6)
    assert by_draw(np.full(2, BY_NAME[name].code), "msy", r, k, s) == pytest.approx(
        [peak_of((name, r[i], 900.0, s[i]))[1] for i in range(2)]
    )
