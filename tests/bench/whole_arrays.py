"""What a user would write instead: the same closed loop in plain numpy, whole arrays or chunks of them."""

from __future__ import annotations

import numpy as np

LEVELS = (0.05, 0.25, 0.5, 0.75, 0.95)


def project(table, record, rule, tau, implementation, years, rng):
    """Short season, count before it, lag 0, logistic curve; every noise; yearly events and the ever flags."""
    r, k, sigma, demo, rho = (table[c].to_numpy() for c in ("r", "K", "sigma", "sigma_demo", "rho"))
    bias, other = table["bias"].to_numpy(), table["other"].to_numpy()
    factor = 1.0 + table["wounding"].to_numpy() + table["unreported"].to_numpy()
    x, n = table["abundance"].to_numpy().copy(), len(table)
    lower, upper, share = rule
    limit, collapse = record.objectives.limit.value, 0.1 * k
    central = np.median(bias)
    ever_below, ever_collapsed = np.zeros(n, bool), np.zeros(n, bool)
    legal, change, last = np.zeros(n), np.zeros(n), None
    keep = np.sqrt(1.0 - rho * rho)
    weather = rng.standard_normal(n)
    abundance, removals, quotas = (np.empty((years, n)) for _ in range(3))
    events = np.empty((years, 5))
    for t in range(years):
        estimate = x * bias * np.exp(tau * rng.standard_normal(n)) / central
        quota = share * estimate * np.clip((estimate - lower) / (upper - lower), 0.0, 1.0)
        take = quota * np.exp(implementation * rng.standard_normal(n) - 0.5 * implementation**2)
        wanted = take * factor + other
        taken = np.minimum(wanted, x)
        left = x - taken
        grown = np.maximum(0.0, left + r * left * (1.0 - left / k))
        if t:
            weather = rho * weather + keep * rng.standard_normal(n)
        spread = demo / np.sqrt(np.maximum(left, 1.0))
        noise = sigma * weather + spread * rng.standard_normal(n) - 0.5 * (sigma**2 + spread**2)
        x = grown * np.exp(noise)
        x[x < 1.0] = 0.0
        below, collapsed = x < limit, x < collapse
        ever_below |= below
        ever_collapsed |= collapsed
        closed = quota <= 0.0
        legal += take * taken / wanted
        if last is not None:
            change += np.abs(quota - last)
        last = quota
        abundance[t], removals[t], quotas[t] = x, taken, quota
        events[t] = below.sum(), collapsed.sum(), ever_below.sum(), ever_collapsed.sum(), closed.sum()
    return abundance, removals, quotas, events, legal, change


def summarise(parts):
    """Quantiles by year over all futures, and the yearly events."""
    series = [np.concatenate([p[i] for p in parts], axis=1) if len(parts) > 1 else parts[0][i] for i in range(3)]
    quantiles = [np.quantile(s, LEVELS, axis=1) for s in series]
    return quantiles, sum(p[3] for p in parts)


def whole(table, record, rule, tau, implementation, years, seed):
    """All futures in one array."""
    return summarise([project(table, record, rule, tau, implementation, years, np.random.default_rng(seed))])


def chunked(table, record, rule, tau, implementation, years, seed, chunk):
    """Chunks that fit the processor's cache, with the fastest of numpy's generators."""
    seeds = np.random.SeedSequence(seed).spawn(len(table) // chunk)
    parts = [
        project(
            table.iloc[i * chunk : (i + 1) * chunk],
            record,
            rule,
            tau,
            implementation,
            years,
            np.random.Generator(np.random.SFC64(s)),
        )
        for i, s in enumerate(seeds)
    ]
    return summarise(parts)
