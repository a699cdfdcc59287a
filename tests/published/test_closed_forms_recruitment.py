"""Ricker and Beverton–Holt with adult survival: textbook identities, printed facts, cycles and folded maps."""

from __future__ import annotations

import math
import tomllib
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import brentq, minimize_scalar

from harvest.futures import fixed_quota, project, rule_from
from harvest.kernels.equilibria import first_top
from harvest.kernels.growth import growth_array
from harvest.population import BY_NAME
from harvest.rates.cautions import cautions
from harvest.yields.reference import reference_values, sustainable_today

from ..builders import make_rates, make_record

PRINTED = tomllib.loads((Path(__file__).parent / "recruitment_points.toml").read_text("utf-8"))
NAMES = ("ricker", "beverton-holt")
#: Growth and survival: weak and strong, semelparous and long-lived.
PAIRS = [(0.02, 0.0), (0.3, 0.8), (1.5, 0.0), (5.75, 0.75), (9.0, 0.0), (9.9, 0.9), (0.5, 0.999)]


def recruits(name: str, n: float, r: float, k: float, s: float) -> float:
    """Recruits as the textbooks write them: a N exp(−b N), and a N/(1 + c N)."""
    a, m = r + 1 - s, 1 - s
    return a * n * math.exp(-math.log(a / m) / k * n) if name == "ricker" else a * n / (1 + r / m / k * n)


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize(("r", "s"), PAIRS)
def test_closed_forms_against_an_optimiser_however_strong_the_growth(name, r, s):
    k = 700.0
    rates = make_rates(name, r=r, K=k, shape=s)
    for n in (1e-6, 3.0, 200.0, 699.0, 2500.0):
        assert rates.growth(np.array([n]))[0] == pytest.approx(
            s * n + recruits(name, n, r, k, s) - n, rel=1e-9, abs=1e-12 * n
        )
    found = minimize_scalar(
        lambda n: n - s * n - recruits(name, n, r, k, s), bounds=(0, k), method="bounded", options={"xatol": 1e-9 * k}
    )
    assert rates.closed_form("msy")[0] == pytest.approx(-found.fun, rel=1e-10)
    assert rates.closed_form("peak")[0] == pytest.approx(found.x, rel=1e-5)
    assert rates.closed_form("greatest_growth")[0] == r
    assert rates.growth(np.array([1e-9 * k]))[0] / (1e-9 * k) == pytest.approx(r, rel=1e-5)
    assert rates.growth(np.array([k]))[0] == 0.0
    for n in (5.0, 300.0, 700.0, 1400.0):
        d = 1e-5 * n
        rise = recruits(name, n + d, r, k, s) - recruits(name, n - d, r, k, s)
        assert rates.step_slope(np.array([n]))[0] == pytest.approx(s + rise / (2 * d), rel=1e-6, abs=1e-8)


@pytest.mark.parametrize("r", [0.05, 0.8, 3.0, 9.0])
def test_slopes_at_capacity_are_the_textbooks(r):
    """Ricker 1 − ln(1 + r) without survival, 1 − m ln(1 + r/m) with it; Beverton–Holt 1/(1 + r), s + m²/(r + m)."""
    for s in (0.0, 0.4, 0.9):
        m = 1 - s
        expected = {"ricker": 1 - m * math.log(1 + r / m), "beverton-holt": s + m * m / (r + m)}
        for name in NAMES:
            rates = make_rates(name, r=r, shape=s)
            assert rates.step_slope(rates.column("K"))[0] == pytest.approx(expected[name], rel=1e-12)


@pytest.mark.parametrize("season", ["short", "all year"])
def test_only_an_overshooting_ricker_curve_is_cautioned(season):
    """Stable to ln(1 + r) = 2 without survival; survival damps it, and Beverton–Holt never overshoots."""
    edge = math.exp(2.0) - 1
    rates = make_rates(
        ["ricker", "ricker", "ricker", "beverton-holt"], r=[edge * 0.999, edge * 1.001, edge * 1.001, 9.9], shape=0.0
    )
    rates.table.loc[2, "shape"] = 0.3
    notes = [note for note in cautions(make_record(season), rates) if "overshoots" in note]
    assert len(notes) == 1
    assert notes[0].startswith("in 25% of the draws")


@pytest.mark.parametrize("cycle", PRINTED["ricker_orbits"]["cycles"], ids=lambda c: f"{c['rho']}")
def test_cycles_of_the_ricker_map_as_printed(cycle):
    code, r = BY_NAME["ricker"].code, math.expm1(cycle["rho"])
    n, orbit = 0.3, []
    for year in range(40_032):
        n += float(growth_array(code, n, r, 1.0, 0.0))
        if year >= 40_000:
            orbit.append(n)
    length = next(p for p in (1, 2, 4, 8, 16) if np.allclose(orbit[p:], orbit[:-p], atol=1e-6))
    assert length == cycle["length"]


def test_harvest_share_and_escapement_of_ricker_as_printed():
    rule = PRINTED["ricker_rules_of_thumb"]
    a = np.array(rule["a"])
    values = reference_values(make_record("short", "after"), make_rates("ricker", r=np.expm1(a), shape=0.0))
    assert values["msy_share"].to_numpy() == pytest.approx(0.5 * a - 0.07 * a**2, rel=rule["tolerance"])
    assert values["msy_abundance"].to_numpy() == pytest.approx(1000 * (0.5 - 0.07 * a), rel=rule["tolerance"])
    omega = PRINTED["ricker_omega"]
    share = reference_values(make_record("short"), make_rates("ricker", r=math.e - 1, shape=0.0))["msy_share"]
    assert share[0] == pytest.approx(omega["share"], rel=omega["tolerance"])


@pytest.mark.parametrize("s", [0.0, 0.6, 0.95])
def test_beverton_holt_depletion_at_msy_follows_steepness_as_printed(s):
    """Steepness: the share of the recruits at K that comes from a fifth of K."""
    printed = PRINTED["beverton_holt_steepness"]
    h = np.array(printed["h"])
    ratio = 4 * h / (1 - h)
    rates = make_rates("beverton-holt", r=(1 - s) * (ratio - 1), K=1000.0, shape=s)
    fifth, full = (rates.growth(np.full(h.size, n)) + (1 - s) * n for n in (200.0, 1000.0))
    assert fifth / full == pytest.approx(h, rel=1e-12)
    assert rates.closed_form("peak") / 1000 == pytest.approx(
        (np.sqrt(ratio) - 1) / (ratio - 1), rel=printed["tolerance"]
    )


@pytest.mark.parametrize("season", ["short", "all year"])
def test_beverton_holt_without_survival_is_solved_exactly(season):
    """N_t = K/(1 + (K/N_0 − 1)(1 + r)^−t); a share taken in a short season leaves the same law with its own r and K."""
    years = np.arange(1, 31)
    start, r, k = np.array([40.0, 900.0, 2600.0]), np.array([0.4, 0.9, 2.5]), np.array([1000.0, 700.0, 1200.0])

    def solved(growth, capacity):
        return capacity / (1 + (capacity / start - 1) * growth ** -years[:, None].astype(float))

    rates = make_rates("beverton-holt", r=r, K=k, shape=0.0, abundance=start)
    paths = project(make_record(season, cv=0.0), rates, fixed_quota(0), 30, paths=3).paths
    np.testing.assert_allclose(paths[2], solved(1 + r, k), rtol=1e-12)
    if season == "short":
        left = 1 - 0.2
        paths = project(make_record(cv=0.0), rates, rule_from("fixed share", {"share": 0.2}), 30, paths=3).paths
        growth = (1 + r) * left
        np.testing.assert_allclose(paths[2], solved(growth, k * (growth - 1) / (r * left)), rtol=1e-12)


@pytest.mark.parametrize(("r", "s"), [(5.75, 0.75), (9.9, 0.9)])
@pytest.mark.parametrize("fraction", [0.3, 0.9, 0.975, 0.982, 0.9875, 0.995])
def test_a_folded_ricker_map_is_held_by_the_greatest_take(r, s, fraction):
    """S rises, falls and rises again below K: of the B with S(B) = x the least, found by walking up from zero."""
    k = 1000.0
    x = fraction * k

    def gap(b):
        return s * b + recruits("ricker", b, r, k, s) - x

    walk = np.linspace(0, x, 200_001)
    above = next(i for i, b in enumerate(walk) if gap(b) > 0)
    least = brentq(gap, walk[above - 1], walk[above], xtol=1e-12)
    rates = make_rates("ricker", r=r, K=k, shape=s, abundance=x)
    take = sustainable_today(make_record("short"), rates)[0]
    assert x - take == pytest.approx(least, rel=1e-9)
    assert take <= rates.closed_form("msy")[0] * (1 + 1e-12)


@pytest.mark.parametrize(("r", "s"), [*PAIRS, (6.6, 0.89)])
def test_first_top_of_the_ricker_map(r, s):
    """Where the slope of S first vanishes, found by walking up from zero; infinity where it never does."""
    k = 700.0
    n = np.linspace(0, 60 * k, 200_001)
    rates = make_rates("ricker", n.size, r=r, K=k, shape=s)
    falling = rates.step_slope(n) < 0
    top = first_top(r, k, s)
    if not falling.any():
        assert np.isinf(top)
    else:
        assert n[falling.argmax() - 1] <= top * (1 + 1e-6) <= n[falling.argmax()] * (1 + 2e-6)


def test_every_printed_fact_says_where_it_is_from():
    for fact in PRINTED.values():
        assert fact["citation"] and fact["where"] and isinstance(fact["from_memory"], bool)
