"""The compiled kernels in plain Python, one future at a time, one number at a time.

Written to be read: what a kernel does over lanes, these functions do for one future with ``math`` alone.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

NEVER = 0.0


def growth(curve: int, n: float, r: float, k: float, s: float) -> float:
    if n == 0.0:
        return 0.0
    if curve == 0:
        return r * n * (1 - n / k)
    if curve == 1:
        return r * n * (1 - (n / k) ** s)
    if curve == 2:
        return r * n * math.log(k / n)
    if curve == 3:
        return n ** (1 - s) * k**s - n
    if curve == 4:
        return r * n * (1 - n / k) * (n / k - s)
    if curve == 5:
        return n * (1 - s) * math.expm1(math.log1p(r / (1 - s)) * (1 - n / k))
    if curve == 6:
        return r * n * (k - n) / (k + n * r / (1 - s))
    raise ValueError(f"no growth curve {curve} here: add it")


def quota(rule: int, settings: list[float], x: float) -> float:
    if rule == 0:
        return settings[0]
    if rule == 1:
        return settings[0] * x
    if rule == 2:
        return max(0.0, x - settings[0])
    lower, upper, share = settings
    return share * x * min(1.0, max(0.0, (x - lower) / (upper - lower)))


@dataclass
class Draw:
    """One state of nature, in the order of the kernel's columns."""

    r: float
    k: float
    shape: float
    sigma: float
    sigma_demo: float
    rho: float
    start: float
    factor: float
    other: float
    bias: float
    limit: float
    collapse: float
    ceiling: float
    target: float
    weather: float


def one_year(season: int, curve: int, d: Draw, x: float, take: float) -> tuple[float, float, float, bool, bool]:
    """Removals, what grows, abundance before the environment, whether too few were there, whether S was negative."""
    wanted = take * d.factor + d.other
    if season == 0:
        removals = min(wanted, x)
        grows = x - removals
        step = grows + growth(curve, grows, d.r, d.k, d.shape)
        return removals, grows, max(0.0, step), wanted > x, step < 0
    step = x + growth(curve, x, d.r, d.k, d.shape)
    most = max(0.0, step)
    removals = min(wanted, most)
    return removals, x, most - removals, wanted > most, step < 0


def environment(s, d: Draw, grows: float, eps: float, eta: float) -> float:
    """The factor Z of one year."""
    demo = d.sigma_demo**2 / max(grows * s.per_unit, 1.0)
    return math.exp(d.sigma * eps + math.sqrt(demo) * eta - (d.sigma**2 + demo) / 2 * s.mean_one)


def future(s, rule_settings, available, recorded, curve: int, d: Draw, recent: list[float], z: Callable) -> dict:
    """One future. ``z(purpose, year)`` is its standard normal; ``recent`` the abundance seen before, oldest first."""
    seen = {year - s.lag: x for year, x in enumerate(recent)}
    x, last, eps = d.start, s.last_quota, d.weather
    out: dict = {name: [] for name in ("start", "removals", "counted", "quota", "legal")}
    summary = dict.fromkeys(
        ("below", "collapsed", "back", "under", "closures", "legal", "squares", "change", "shortfalls", "bounded"), 0.0
    )
    for t in range(s.years):
        if s.when == 0:
            seen[t] = x
        if s.rule == 0:
            q = quota(0, rule_settings, 0.0)
        elif available[t] == 2:
            q = s.without_count * last
        elif available[t] == 1:
            q = quota(s.rule, rule_settings, recorded[t])
        else:
            noise = math.exp(s.tau * z(3, t - s.lag)) if s.tau > 0 else 1.0
            q = quota(s.rule, rule_settings, seen[t - s.lag] * d.bias * noise / s.bias)
        slip = s.implementation
        take = q * (math.exp(slip * z(4, t) - slip**2 / 2) if slip > 0 else 1.0)
        removals, grows, after, short, bounded = one_year(s.season, curve, d, x, take)
        wanted = take * d.factor + d.other
        legal = take * removals / wanted if wanted > 0 else 0.0
        first = t == 0 and not s.carried
        eps = z(1, 0) if first else d.rho * eps + math.sqrt(1 - d.rho**2) * z(1, t)
        after *= environment(s, d, grows, eps, z(2, t))
        if d.sigma_demo > 0 and after * s.per_unit < 1:
            after = 0.0
        if s.when == 1:
            seen[t] = grows
        counted = seen[t] if s.when == 1 else after
        for name, value in (("start", x), ("removals", removals), ("counted", counted), ("quota", q), ("legal", legal)):
            out[name].append(value)
        for name, true in (
            ("below", counted < d.limit),
            ("collapsed", counted < d.collapse),
            ("back", counted >= d.limit),
            ("under", counted <= d.ceiling),
        ):
            if true and summary[name] == NEVER:
                summary[name] = t + 1.0
        summary["closures"] += q <= 0
        summary["legal"] += legal
        summary["squares"] += legal**2
        summary["change"] += abs(q - last) if t > 0 else 0.0
        summary["shortfalls"] += short
        summary["bounded"] += bounded
        x, last = after, q
    summary |= {"final": out["counted"][-1], "least": min(out["counted"])}
    return out | {"summary": list(summary.values())}


def years_to_cross(season, after, most, falling, curve, r, k, s, x, removals, level) -> float:
    """Years of average environment under constant removals until the counted abundance crosses the level."""
    for year in range(1, most + 1):
        if season == 0:
            left = max(0.0, x - removals)
            x = max(0.0, left + growth(curve, left, r, k, s))
            counted = left if after else x
        else:
            x = counted = max(0.0, max(0.0, x + growth(curve, x, r, k, s)) - removals)
        if (counted < level) if falling else (counted >= level):
            return float(year)
    return math.inf
