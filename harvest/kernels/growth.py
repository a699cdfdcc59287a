"""The growth curves g(N), once, for every kernel: one loop a curve over lanes.

``n`` abundance (≥ 0), ``r`` per year, ``k`` carrying capacity, ``s`` the curve's shape; ``out`` the yearly
growth g(N), so that the yearly map is S(N) = max(0, N + g(N)). Sources: Schaefer 1954; Pella & Tomlinson 1969
and Gilpin & Ayala 1973; Fox 1970; the Gompertz map; the logistic with an Allee threshold (s = A/K); Ricker 1954
and Beverton & Holt 1957 with adult survival s: m = 1 − s, and recruits per adult at low abundance a = r + m.
"""

from __future__ import annotations

import numpy as np

from harvest.kernels.compiling import kernel
from harvest.kernels.vectormath import exp, log

LOGISTIC, THETA_LOGISTIC, FOX, GOMPERTZ, ALLEE, RICKER, BEVERTON_HOLT = 0, 1, 2, 3, 4, 5, 6
_TINY = 1e-200


@kernel(inline=True)
def logistic(n, r, k):
    """r N (1 − N/K)."""
    return r * n * (1.0 - n / k)


@kernel(inline=True)
def theta_logistic(n, r, k, s):
    """r N (1 − (N/K)^θ)."""
    return r * n * (1.0 - exp(s * log(max(n / k, _TINY))))


@kernel(inline=True)
def fox(n, r, k):
    """r N ln(K/N), zero at N = 0."""
    return -r * n * log(max(n / k, _TINY))


@kernel(inline=True)
def gompertz(n, k, s):
    """N^(1−b) K^b − N, zero at N = 0."""
    return n * (exp(-s * log(max(n / k, _TINY))) - 1.0)


@kernel(inline=True)
def allee(n, r, k, s):
    """r N (1 − N/K)(N/K − A/K)."""
    return r * n * (1.0 - n / k) * (n / k - s)


@kernel(inline=True)
def ricker(n, r, k, s):
    """a N exp(−N/K ln(a/m)) − m N, as m N (exp((1 − N/K) ln(a/m)) − 1): exactly zero at K, never below −m N."""
    m = 1.0 - s
    return m * n * (exp((1.0 - n / k) * log(1.0 + r / m)) - 1.0)


@kernel(inline=True)
def beverton_holt(n, r, k, s):
    """a N/(1 + (r/m) N/K) − m N, as r N (1 − N/K)/(1 + (r/m) N/K): exactly zero at K."""
    return r * n * (1.0 - n / k) / (1.0 + r / (1.0 - s) * (n / k))


@kernel(inline=True)
def growth(curve, n, r, k, s):
    """g(N) of one draw, for loops that run draw by draw."""
    if curve == LOGISTIC:
        return logistic(n, r, k)
    if curve == THETA_LOGISTIC:
        return theta_logistic(n, r, k, s)
    if curve == FOX:
        return fox(n, r, k)
    if curve == GOMPERTZ:
        return gompertz(n, k, s)
    if curve == ALLEE:
        return allee(n, r, k, s)
    if curve == RICKER:
        return ricker(n, r, k, s)
    return beverton_holt(n, r, k, s)


@kernel()
def fill_growth(curve, n, r, k, s, out):
    """g(N) of all lanes of one block (one curve): arrays of equal length."""
    if curve == LOGISTIC:
        for j in range(n.shape[0]):
            out[j] = logistic(n[j], r[j], k[j])
    elif curve == THETA_LOGISTIC:
        for j in range(n.shape[0]):
            out[j] = theta_logistic(n[j], r[j], k[j], s[j])
    elif curve == FOX:
        for j in range(n.shape[0]):
            out[j] = fox(n[j], r[j], k[j])
    elif curve == GOMPERTZ:
        for j in range(n.shape[0]):
            out[j] = gompertz(n[j], k[j], s[j])
    elif curve == ALLEE:
        for j in range(n.shape[0]):
            out[j] = allee(n[j], r[j], k[j], s[j])
    elif curve == RICKER:
        for j in range(n.shape[0]):
            out[j] = ricker(n[j], r[j], k[j], s[j])
    else:
        for j in range(n.shape[0]):
            out[j] = beverton_holt(n[j], r[j], k[j], s[j])


@kernel()
def growth_by_draw(curve, n, r, k, s, out):
    """g(N) of draws with mixed curves: ``curve`` int64, the rest float64, all of one length."""
    for i in range(n.shape[0]):
        out[i] = growth(curve[i], n[i], r[i], k[i], s[i])


def growth_array(curve: np.ndarray, n: np.ndarray, r: np.ndarray, k: np.ndarray, s: np.ndarray) -> np.ndarray:
    """g(N), broadcast over arrays; shapes as numpy broadcasts them."""
    shape = np.broadcast_shapes(*(np.shape(a) for a in (curve, n, r, k, s)))
    flat = [np.ascontiguousarray(np.broadcast_to(np.asarray(a, float), shape)).ravel() for a in (n, r, k, s)]
    codes = np.ascontiguousarray(np.broadcast_to(np.asarray(curve, np.int64), shape)).ravel()
    out = np.empty(codes.size)
    growth_by_draw(codes, *flat, out)
    return out.reshape(shape)
