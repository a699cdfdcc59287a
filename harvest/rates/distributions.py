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

#: Domains: open intervals in which a rate lives.
DOMAINS: dict[str, tuple[float, float]] = {
    "growth_rate": (0.0, math.inf),
    "max_growth": (0.0, math.inf),
    "carrying_capacity": (0.0, math.inf),
    "process_noise": (0.0, math.inf),
    "demographic_noise": (0.0, math.inf),
    "autocorrelation": (-1.0, 1.0),
    "theta-logistic shape": (0.0, math.inf),
    "gompertz shape": (0.0, 1.0),
    "allee shape": (0.0, 1.0),
    "bias": (0.0, math.inf),
    "wounding": (0.0, math.inf),
    "unreported": (0.0, math.inf),
    "other": (0.0, math.inf),
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


def _between(d: Distribution, u: np.ndarray, domain: tuple[float, float]) -> np.ndarray:
    """Nine tenths between low and high: lognormal, logit-normal or normal, by the domain."""
    low, high = d["low"], d["high"]
    z = special.ndtri(u) / _Z95
    if domain == (0.0, math.inf):
        middle, half = 0.5 * math.log(low * high), 0.5 * math.log(high / low)
        return np.exp(middle + half * z)
    if domain == (0.0, 1.0):
        a, b = special.logit(low), special.logit(high)
        return special.expit(0.5 * (a + b) + 0.5 * (b - a) * z)
    return 0.5 * (low + high) + 0.5 * (high - low) * z


def outside(d: Distribution, domain: tuple[float, float]) -> float:
    """Probability that the untruncated distribution puts outside the domain."""
    if d.kind == "fixed" or (d.kind == "90% between" and domain != (-1.0, 1.0)):
        return 0.0
    frozen = (
        stats.norm(0.5 * (d["low"] + d["high"]), 0.5 * (d["high"] - d["low"]) / _Z95)
        if d.kind == "90% between"
        else _frozen(d)
    )
    return float(frozen.cdf(domain[0]) + frozen.sf(domain[1]))


def quantile(d: Distribution, u: np.ndarray, domain: tuple[float, float]) -> np.ndarray:
    """The distribution's value at probability ``u``, held within ``domain``.

    Parameters
    ----------
    d : Distribution
    u : ndarray
        Probabilities in (0, 1).
    domain : (float, float)
        One of :data:`DOMAINS`. It also decides what "90% between" means: lognormal for positive rates,
        logit-normal for proportions, else normal.
    """
    if d.kind == "fixed":
        return np.full(u.shape, d["value"])
    if d.kind == "90% between":
        if domain == (-1.0, 1.0):
            mean, sd = 0.5 * (d["low"] + d["high"]), 0.5 * (d["high"] - d["low"]) / _Z95
            d = Distribution("normal", (("mean", mean), ("sd", sd)))
        else:
            return _between(d, u, domain)
    frozen = _frozen(d)
    low, high = float(frozen.cdf(domain[0])), float(frozen.cdf(domain[1]))
    return np.asarray(frozen.ppf(low + u * (high - low)))
