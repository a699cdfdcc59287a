"""The population model in plain numpy with its own random numbers, written from the design, not from the code.

One column of ``draws`` a future. Whatever is not stated has no effect (no noise, no losses, a perfect count).
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np


@dataclass
class Plan:
    """Everything that is the same for all futures."""

    season: str
    when: str
    rule: str
    settings: dict[str, float]
    years: int = 10
    lag: int = 0
    mean_one: bool = True
    survey_cv: float = 0.0
    implementation_cv: float = 0.0
    stated_bias: float = 1.0
    without_count: float = 0.8
    last_quota: float = 0.0
    animals_per_unit: float = 1.0
    #: What the rule has in each year: "count", "none" or the estimate on record.
    schedule: list[str | float] = field(default_factory=list)


def growth(name: np.ndarray, n: np.ndarray, r: np.ndarray, k: np.ndarray, s: np.ndarray) -> np.ndarray:
    g = np.empty_like(n)
    for one in np.unique(name):
        i = name == one
        x, a, c, d = n[i], r[i], k[i], s[i]
        positive = np.where(x > 0, x, 1.0)
        g[i] = {
            "logistic": lambda x=x, a=a, c=c: a * x * (1 - x / c),
            "theta-logistic": lambda x=x, a=a, c=c, d=d: a * x * (1 - (x / c) ** d),
            "fox": lambda x=x, a=a, c=c, p=positive: a * x * np.log(c / p),
            "gompertz": lambda x=x, c=c, d=d: x ** (1 - d) * c**d - x,
            "allee": lambda x=x, a=a, c=c, d=d: a * x * (1 - x / c) * (x / c - d),
            "ricker": lambda x=x, a=a, c=c, d=d: x * ((a + 1 - d) * (1 + a / (1 - d)) ** (-x / c) - (1 - d)),
            "beverton-holt": lambda x=x, a=a, c=c, d=d: x * ((a + 1 - d) / (1 + a / (1 - d) * x / c) - (1 - d)),
        }[one]()
    return g


def quota_of(plan: Plan, x: np.ndarray) -> np.ndarray:
    s = plan.settings
    if plan.rule == "fixed quota":
        return np.full_like(x, s["quota"])
    if plan.rule == "fixed share":
        return s["share"] * x
    if plan.rule == "escapement":
        return np.clip(x - s["escapement"], 0, None)
    full = np.clip((x - s["lower"]) / (s["upper"] - s["lower"]), 0, 1)
    return s["share"] * full * x


def simulate(plan: Plan, d: dict[str, np.ndarray], recent: np.ndarray, rng: np.random.Generator) -> dict:
    """Paths, each of shape (years, futures): start, counted, removals, quota, legal, short, bounded."""
    n = d["K"].size
    out = {
        key: np.zeros((plan.years, n)) for key in ("start", "counted", "removals", "quota", "legal", "short", "bounded")
    }
    tau, slip = (np.sqrt(np.log(1 + cv**2)) for cv in (plan.survey_cv, plan.implementation_cv))
    x, quota = d["abundance"].astype(float), np.full(n, plan.last_quota)
    eps = d.get("weather")
    seen = {-back: recent[plan.lag - back] for back in range(1, plan.lag + 1)}  # by year, 0 the first quota year
    for t in range(plan.years):
        out["start"][t] = x
        if plan.when != "after":
            seen[t] = x
        has = plan.schedule[t] if plan.schedule else "count"
        if plan.rule == "fixed quota":
            quota = quota_of(plan, x)
        elif has == "none":
            quota = plan.without_count * quota
        elif has == "count":
            count = d["bias"] * seen[t - plan.lag] * np.exp(tau * rng.standard_normal(n))
            quota = quota_of(plan, count / plan.stated_bias)
        else:
            quota = quota_of(plan, np.full(n, has))
        legal = quota * np.exp(slip * rng.standard_normal(n) - slip**2 / 2)
        wanted = legal * (1 + d["wounding"] + d["unreported"]) + d["other"]

        if plan.season == "short":
            most, parent = x, None
        else:
            raw = x + growth(d["curve"], x, d["r"], d["K"], d["shape"])
            out["bounded"][t] = raw < 0
            most, parent = np.clip(raw, 0, None), x
        taken = np.minimum(wanted, most)
        out["short"][t] = wanted > most
        if plan.season == "short":
            parent = x - taken
            raw = parent + growth(d["curve"], parent, d["r"], d["K"], d["shape"])
            out["bounded"][t] = raw < 0
            after = np.clip(raw, 0, None)
        else:
            after = most - taken

        fresh = rng.standard_normal(n)
        eps = fresh if eps is None else d["rho"] * eps + np.sqrt(1 - d["rho"] ** 2) * fresh
        heads = np.maximum(parent * plan.animals_per_unit, 1.0)
        demo_var = d["sigma_demo"] ** 2 / heads
        shift = (d["sigma"] ** 2 + demo_var) / 2 if plan.mean_one else 0.0
        after = after * np.exp(d["sigma"] * eps + np.sqrt(demo_var) * rng.standard_normal(n) - shift)
        after = np.where((d["sigma_demo"] > 0) & (after * plan.animals_per_unit < 1), 0.0, after)

        if plan.when == "after":
            seen[t] = x - taken
        out["counted"][t] = seen[t] if plan.when == "after" else after
        out["removals"][t], out["quota"][t] = taken, quota
        out["legal"][t] = np.divide(legal * taken, wanted, out=np.zeros(n), where=wanted > 0)
        x = after
    return out
