"""The whole projection against an independent plain-numpy simulation, within Monte Carlo error."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

import numpy as np
import pytest

from harvest.futures import project, rule_from
from harvest.population import BY_NAME
from harvest.rates.spread import LEVELS
from harvest.record.model import Level, LifeHistory, Losses, Objectives, SurveyPlan, fixed

from ..builders import make_rates, make_record
from .simulation import Plan, simulate

DRAWS = 20_000
STRICT = 4.5
#: One shape for each curve of the mixture.
SHAPES = {
    "logistic": np.nan,
    "theta-logistic": 2.4,
    "fox": np.nan,
    "gompertz": 0.25,
    "allee": 0.15,
    "ricker": 0.8,
    "beverton-holt": 0.0,
}


@dataclass
class Case:
    season: str
    when: str
    curve: Any
    rule: str
    settings: dict[str, float]
    columns: dict[str, Any]
    lag: int = 0
    noise: str = "mean one"
    survey_cv: float = 0.0
    every: int = 1
    implementation_cv: float = 0.0
    stated_bias: float = 1.0
    present_quota: float | None = None
    body_mass: float | None = None
    carried: bool = False
    per_draw: int = 1
    limit: float = 400.0
    ceiling: float = 900.0
    schedule: list = field(default_factory=list)
    more: dict[str, Any] = field(default_factory=dict)


def lognormal(rng: np.random.Generator, median: float, sd: float) -> np.ndarray:
    return median * np.exp(sd * rng.standard_normal(DRAWS))


_rng = np.random.default_rng(7)
_mixed = [list(BY_NAME)[i * len(BY_NAME) // DRAWS] for i in range(DRAWS)]
_shape = np.array([SHAPES[c] for c in _mixed])
CASES = {
    "fixed quota, losses, slips": Case(
        "short",
        "before",
        "logistic",
        "fixed quota",
        {"quota": 60},
        {
            "r": lognormal(_rng, 0.35, 0.1),
            "K": lognormal(_rng, 1000, 0.1),
            "sigma": 0.2,
            "abundance": lognormal(_rng, 700, 0.2),
            "wounding": lognormal(_rng, 0.15, 0.3),
            "unreported": 0.1,
            "other": 5.0,
        },
        implementation_cv=0.3,
    ),
    "share after the season, autocorrelated, biased survey": Case(
        "short",
        "after",
        "theta-logistic",
        "fixed share",
        {"share": 0.12},
        {
            "r": 0.3,
            "shape": 2.4,
            "sigma": 0.25,
            "rho": 0.6,
            "bias": lognormal(_rng, 0.8, 0.2),
            "abundance": lognormal(_rng, 700, 0.2),
            "recent": lognormal(_rng, 650, 0.2),
        },
        lag=1,
        survey_cv=0.35,
        stated_bias=0.75,
    ),
    "escapement all year, every second year, no count first": Case(
        "all year",
        "start",
        "fox",
        "escapement",
        {"escapement": 450},
        {"r": lognormal(_rng, 0.3, 0.1), "sigma": 0.15, "abundance": lognormal(_rng, 700, 0.2)},
        survey_cv=0.2,
        every=2,
        present_quota=40.0,
        implementation_cv=0.2,
        schedule=["none", "count"] * 5,
    ),
    "ramp, lag 2, median one, weather carried": Case(
        "short",
        "before",
        "gompertz",
        "ramp",
        {"lower": 300, "upper": 800, "share": 0.25},
        {
            "r": np.nan,
            "shape": lognormal(_rng, 0.3, 0.1),
            "sigma": 0.3,
            "rho": 0.4,
            "weather": _rng.standard_normal(DRAWS) - 0.5,
            "abundance": lognormal(_rng, 700, 0.2),
            "recent": np.array([lognormal(_rng, 500, 0.2), lognormal(_rng, 600, 0.2)]),
        },
        lag=2,
        noise="median one",
        survey_cv=0.25,
        carried=True,
        present_quota=50.0,
    ),
    "Allee, demographic noise alone, median one": Case(
        "all year",
        "start",
        "allee",
        "fixed quota",
        {"quota": 14},
        {
            "r": 0.5,
            "K": 400.0,
            "shape": 0.15,
            "sigma_demo": 1.2,
            "abundance": lognormal(_rng, 150, 0.3),
            "wounding": 0.1,
        },
        noise="median one",
        limit=100.0,
        ceiling=350.0,
    ),
    "Allee, after, lag 3, every third year, recorded count, two noises": Case(
        "short",
        "after",
        "allee",
        "escapement",
        {"escapement": 350},
        {
            "r": 0.9,
            "shape": 0.1,
            "sigma": 0.2,
            "sigma_demo": 1.0,
            "abundance": lognormal(_rng, 600, 0.2),
            "other": lognormal(_rng, 8, 0.2),
            "recent": np.array([np.full(DRAWS, np.nan), lognormal(_rng, 500, 0.2), lognormal(_rng, 500, 0.2)]),
        },
        lag=3,
        survey_cv=0.3,
        every=3,
        present_quota=30.0,
        schedule=[410.0, "none", "none", "count", "none", "none", "count", "none", "none", "count"],
        more={"counts": {2018: 410.0}, "years": (2018,)},
    ),
    "all curves at once, all year": Case(
        "all year",
        "start",
        _mixed,
        "ramp",
        {"lower": 200, "upper": 600, "share": 0.15},
        {
            "r": 0.6,
            "shape": _shape,
            "sigma": 0.2,
            "sigma_demo": 0.8,
            "rho": 0.3,
            "bias": lognormal(_rng, 1.1, 0.1),
            "wounding": 0.2,
            "other": 4.0,
            "abundance": lognormal(_rng, 500, 0.3),
            "recent": lognormal(_rng, 500, 0.3),
        },
        lag=1,
        survey_cv=0.3,
        implementation_cv=0.25,
        stated_bias=1.1,
    ),
    "tonnes with a body mass": Case(
        "short",
        "before",
        "logistic",
        "fixed share",
        {"share": 0.2},
        {"r": 0.5, "K": 20.0, "sigma_demo": 0.9, "sigma": 0.1, "abundance": lognormal(_rng, 9, 0.3)},
        survey_cv=0.2,
        body_mass=250.0,
        limit=6.0,
        ceiling=14.0,
    ),
    "below the limit, several futures a draw, a quota that empties": Case(
        "short",
        "before",
        "logistic",
        "fixed quota",
        {"quota": 70},
        {"r": 0.4, "sigma": 0.25, "rho": -0.3, "abundance": lognormal(_rng, 300, 0.3)},
        per_draw=5,
    ),
    "a growth curve that overshoots, all year": Case(
        "all year",
        "start",
        "theta-logistic",
        "fixed quota",
        {"quota": 100},
        {"r": 0.9, "shape": 2.5, "sigma": 0.5, "abundance": lognormal(_rng, 900, 0.3)},
        ceiling=1200.0,
        implementation_cv=0.5,
    ),
}


def both(case: Case, seed: int) -> tuple[Any, dict[str, np.ndarray], int]:
    """The program's Future and an independent simulation of the same draws."""
    columns, years = dict(case.columns), case.more.get("years", (2010,))
    recent = columns.pop("recent", np.zeros((0, DRAWS // case.per_draw)))
    draws = DRAWS // case.per_draw
    columns = {k: v[:draws] if np.ndim(v) else v for k, v in columns.items()}
    rates = make_rates(
        case.curve, draws, recent=recent, carried=case.carried, first_year=2021, count_year=years[-1], **columns
    )
    record = make_record(
        case.season,
        case.when,
        cv=case.survey_cv,
        bias=fixed(case.stated_bias),
        lag=case.lag,
        noise=case.noise,
        unit="tonnes" if case.body_mass else "animals",
        life=LifeHistory(body_mass=case.body_mass),
        present_quota=case.present_quota,
        survey_plan=SurveyPlan(None, case.every),
        losses=Losses(implementation_cv=case.implementation_cv),
        objectives=Objectives(limit=Level(case.limit), ceiling=Level(case.ceiling), collapse=Level(0.2, True)),
        years=years,
        counts={y: v * case.stated_bias for y, v in case.more.get("counts", {2010: 1000.0}).items()},
    )
    future = project(record, rates, rule_from(case.rule, case.settings), 10, seed=seed, futures_per_draw=case.per_draw)
    table = {
        k: np.repeat(rates.table[k].to_numpy(object if k == "curve" else float), case.per_draw) for k in rates.table
    }
    if not case.carried:
        table.pop("weather")
    plan = Plan(
        case.season,
        case.when,
        case.rule,
        case.settings,
        10,
        case.lag,
        case.noise == "mean one",
        case.survey_cv,
        case.implementation_cv,
        case.stated_bias,
        0.8,
        case.present_quota or 0.0,
        1000 / case.body_mass if case.body_mass else 1.0,
        case.schedule,
    )
    paths = simulate(plan, table, np.repeat(rates.recent, case.per_draw, axis=1), np.random.default_rng(seed + 1))
    return future, paths, DRAWS


def events(case: Case, paths: dict[str, np.ndarray], k: np.ndarray) -> dict[str, np.ndarray]:
    x = paths["counted"]
    below, collapsed, above = x < case.limit, x < 0.2 * k, x > case.ceiling
    ever = np.logical_or.accumulate
    return {
        "below_limit": below,
        "ever_below_limit": ever(below),
        "collapsed": collapsed,
        "ever_collapsed": ever(collapsed),
        "above_ceiling": above,
        "back_above_limit": ever(~below),
        "under_ceiling": ever(~above),
        "closed": paths["quota"] <= 0,
    }


@pytest.mark.parametrize("name", CASES)
def test_projection_agrees_with_independent_simulation(name):
    case = CASES[name]
    future, paths, n = both(case, seed=11)
    table = future.by_year
    k = np.broadcast_to(np.asarray(case.columns.get("K", 1000.0), float), n)
    for event, mine in events(case, paths, k).items():
        p, q = table[event].to_numpy(), mine.mean(axis=1)
        middle = (n * (p + q) + 2) / (2 * n + 4)
        bound = STRICT * np.sqrt(2 * middle * (1 - middle) / n * (1 + (case.per_draw > 1)))
        assert (np.abs(p - q) <= bound).all(), (event, p, q)
    for quantity, column in (("counted", "abundance"), ("removals", "removals"), ("quota", "quota")):
        mine = paths[quantity]
        error = np.hypot(table[f"{column}_mean_se"], mine.std(axis=1, ddof=1) / np.sqrt(n))
        gap = table[f"{column}_mean"] - mine.mean(axis=1)
        assert (np.abs(gap) <= STRICT * error + 1e-9 * mine.mean(axis=1)).all(), (column, gap / error)
        for level, label in zip(LEVELS, ("low90", "low50", "median", "high50", "high90"), strict=True):
            value = table[f"{column}_{label}"].to_numpy()[:, None]
            slack = STRICT * np.sqrt(2 * level * (1 - level) / n * (1 + (case.per_draw > 1)))
            assert ((mine < value * 0.995).mean(axis=1) <= level + slack).all(), (column, label)
            assert ((mine <= value * 1.005).mean(axis=1) >= level - slack).all(), (column, label)
    for measure, mine in {
        "mean yearly legal take": paths["legal"].mean(axis=0),
        "standard deviation of the legal take between years": paths["legal"].std(axis=0),
        "mean yearly change of the quota": np.abs(np.diff(paths["quota"], axis=0)).mean(axis=0),
        "share of years closed": (paths["quota"] <= 0).mean(axis=0),
        "share of years with less to take than the quota": paths["short"].mean(axis=0),
        "share of years held at zero by the growth curve": paths["bounded"].mean(axis=0),
        "mean abundance at the end": paths["counted"][-1],
        "mean of the lowest abundance": paths["counted"].min(axis=0),
    }.items():
        row = future.measures.set_index("measure").loc[measure]
        error = np.hypot(row["se"], mine.std(ddof=1) / np.sqrt(n)) + 1e-5
        assert abs(row["value"] - mine.mean()) <= STRICT * error + 1e-9 * mine.mean(), (
            measure,
            row["value"],
            mine.mean(),
        )


def test_the_cases_reach_what_they_claim():
    """Each event, closures, shortfalls and a bounded growth curve happen in some case, neither never nor always."""
    seen: dict[str, float] = {}
    for case in CASES.values():
        _, paths, n = both(case, seed=3)
        k = np.broadcast_to(np.asarray(case.columns.get("K", 1000.0), float), n)
        found = events(case, paths, k) | {
            "short": paths["short"],
            "bounded": paths["bounded"],
            "gone": paths["start"] == 0,
        }
        for event, flags in found.items():
            share = flags.mean()
            seen[event] = max(seen.get(event, 0.0), min(share, 1 - share))
    assert all(v > 0.003 for v in seen.values()), seen
