"""Quantiles of the distributions in which a record states its rates.

A distribution is held within the domain of its rate by conditioning (a truncated distribution): the probability
u is mapped onto the part of the distribution that lies inside. What was cut off is reported by
:func:`outside`.
"""

from __future__ import annotations

import math

import numpy as np
from scipy import special, stats

from harvest.record.model import Distribution

Interval = tuple[float, float]
POSITIVE: Interval = (0.0, math.inf)
PROPORTION: Interval = (0.0, 1.0)
#: Domains: open intervals in which a rate lives.
DOMAINS: dict[str, Interval] = {
    "growth_rate": POSITIVE,
    "max_growth": POSITIVE,
    "carrying_capacity": POSITIVE,
    "process_noise": POSITIVE,
    "demographic_noise": POSITIVE,
    "autocorrelation": (-1.0, 1.0),
    "theta-logistic shape": POSITIVE,
    "gompertz shape": PROPORTION,
    "allee shape": PROPORTION,
    "ricker shape": PROPORTION,
    "beverton-holt shape": PROPORTION,
    "bias": POSITIVE,
    "wounding": POSITIVE,
    "unreported": POSITIVE,
    "other": POSITIVE,
}
_Z95 = float(stats.norm.ppf(0.95))


def _frozen(d: Distribution) -> stats.distributions.rv_frozen:
    if d.kind == "uniform":
        return stats.uniform(d["low"], d["high"] - d["low"])
    if d.kind == "triangular":
        width = d["high"] - d["low"]
        return stats.triang((d["mode"] - d["low"]) / width, d["low"], width)
    if d.kind == "normal":
        return stats.norm(d["mean"], d["sd"])
    if d.kind == "lognormal":
        return stats.lognorm(d["sd_log"], scale=d["median"])
    return stats.beta(d["a"], d["b"])


def resolved(d: Distribution, domain: Interval) -> Distribution:
    """The distribution that "90% between" stands for: lognormal for positive rates, normal for rates of either sign.

    Proportions stay as they are: their logit-normal has no name of its own.
    """
    if d.kind != "90% between" or domain == PROPORTION:
        return d
    low, high = d["low"], d["high"]
    if domain == POSITIVE:
        spread = 0.5 * math.log(high / low) / _Z95
        return Distribution("lognormal", (("median", math.sqrt(low * high)), ("sd_log", spread)))
    return Distribution("normal", (("mean", 0.5 * (low + high)), ("sd", 0.5 * (high - low) / _Z95)))


def outside(d: Distribution, domain: Interval, within: Interval | None = None) -> float:
    """Probability that the untruncated distribution puts outside ``within`` (default: the domain)."""
    d, (low, high) = resolved(d, domain), within or domain
    if d.kind == "fixed":
        inside = low < d["value"] < high or (d["value"] == low == 0.0)
        return 0.0 if inside else 1.0
    if d.kind == "90% between":
        return 0.0
    frozen = _frozen(d)
    return float(frozen.cdf(low) + frozen.sf(high))


def quantile(d: Distribution, u: np.ndarray, domain: Interval, within: Interval | None = None) -> np.ndarray:
    """The distribution's value at probability ``u``, held within its domain.

    Parameters
    ----------
    d : Distribution
    u : ndarray
        Probabilities in (0, 1).
    domain : (float, float)
        One of :data:`DOMAINS`. It also decides what "90% between" means: lognormal for positive rates,
        logit-normal for proportions, else normal.
    within : (float, float)
        A narrower interval to hold the value in, not for "90% between" of a proportion.
    """
    d = resolved(d, domain)
    if d.kind == "fixed":
        return np.full(u.shape, d["value"])
    if d.kind == "90% between":
        a, b = special.logit(d["low"]), special.logit(d["high"])
        return np.asarray(special.expit(0.5 * (a + b) + 0.5 * (b - a) * special.ndtri(u) / _Z95))
    frozen, (low, high) = _frozen(d), within or domain
    least, most = float(frozen.cdf(low)), float(frozen.cdf(high))
    return np.asarray(frozen.ppf(least + u * (most - least)))
