"""Roots and crossing times, draw by draw: within brackets that are known to hold, to the last bits.

All arrays have one entry a draw; ``curve`` is int64, the rest float64. NaN means "there is none".
"""

from __future__ import annotations

import numpy as np

from harvest.kernels.codes import AFTER, SHORT
from harvest.kernels.compiling import kernel
from harvest.kernels.growth import ALLEE, RICKER, growth

#: Twice the spacing of floating-point numbers near one.
EPSILON = 4.5e-16


@kernel()
def crossing(kept, curve, r, k, s, level, low, high):
    """N between ``low`` and ``high`` where kept·N + g(N) = level, to the last bits.

    Chandrupatla's method (1997, doi:10.1016/S0965-9978(96)00051-8): inverse quadratic interpolation where it is
    safe, bisection where it is not, always within a bracket. Where rounding hides the change of sign, the end that
    comes closer.
    """
    x1, x2 = low, high
    f1 = kept * x1 + growth(curve, x1, r, k, s) - level
    f2 = kept * x2 + growth(curve, x2, r, k, s) - level
    if (f1 < 0.0) == (f2 < 0.0):
        return x1 if abs(f1) < abs(f2) else x2
    t = 0.5
    for _ in range(400):
        x = x1 + t * (x2 - x1)
        f = kept * x + growth(curve, x, r, k, s) - level
        if (f < 0.0) == (f1 < 0.0):
            x3, f3 = x1, f1
        else:
            x3, f3 = x2, f2
            x2, f2 = x1, f1
        x1, f1 = x, f
        best = x1 if abs(f1) < abs(f2) else x2
        least = EPSILON * abs(best) / abs(x2 - x1) if x2 != x1 else 1.0
        if least > 0.5 or f1 == 0.0 or f2 == 0.0:
            return best
        xi, phi = (x1 - x2) / (x3 - x2), (f1 - f2) / (f3 - f2)
        t = 0.5
        if phi * phi < xi and (1.0 - phi) * (1.0 - phi) < 1.0 - xi:
            t = f1 / (f2 - f1) * (f3 / (f2 - f3)) + (x3 - x1) / (x2 - x1) * (f1 / (f3 - f1)) * (f2 / (f3 - f2))
        t = min(max(t, least), 1.0 - least)
    return best


@kernel()
def equilibria(curve, r, k, s, peak, msy, removals, lower, upper):
    """Both N with g(N) = removals, below and above the peak; NaN where removals exceed the peak."""
    for i in range(r.shape[0]):
        floor = s[i] * k[i] if curve[i] == ALLEE else 0.0
        if removals[i] > msy[i]:
            lower[i] = np.nan
            upper[i] = np.nan
        elif removals[i] <= 0.0:
            lower[i] = floor
            upper[i] = k[i]
        else:
            lower[i] = crossing(0.0, curve[i], r[i], k[i], s[i], removals[i], floor, peak[i])
            upper[i] = crossing(0.0, curve[i], r[i], k[i], s[i], removals[i], peak[i], k[i])


@kernel()
def first_top(r, k, s):
    """N up to which Ricker's yearly map S(N) rises before it falls; infinity where it never falls.

    With y = (N/K) ln(a/m) it solves (y − 1) e^−y = s/a. The left side rises from 0 at y = 1 to e^−2 at y = 2 and is
    concave between: Newton's steps from y = 1 approach the root from below.
    """
    m = 1.0 - s
    share = s / (r + m)
    if share >= np.exp(-2.0):
        return np.inf
    y = 1.0
    for _ in range(100):
        step = (share * np.exp(y) - (y - 1.0)) / (2.0 - y)
        if not step > EPSILON:
            break
        y += step
    return y * k / np.log1p(r / m)


@kernel()
def holding_yield(season, curve, r, k, s, x, out):
    """Removals that hold the season's starting abundance x: g(x), or x − B with S(B) = x; 0 where g(x) ≤ 0.

    Where Ricker's map rises, falls and rises again, up to three B give the same x: the least, so the greatest take.
    """
    for i in range(r.shape[0]):
        now = growth(curve[i], x[i], r[i], k[i], s[i])
        if not now > 0.0:
            out[i] = 0.0
        elif season != SHORT:
            out[i] = now
        else:
            high = x[i]
            if curve[i] == RICKER:
                top = first_top(r[i], k[i], s[i])
                if top < high and top + growth(RICKER, top, r[i], k[i], s[i]) >= high:
                    high = top
            out[i] = x[i] - crossing(1.0, curve[i], r[i], k[i], s[i], x[i], 0.0, high)


@kernel()
def years_to_cross(season, when, most, falling, curve, r, k, s, x, removals, level, out):
    """Years of average environment until the counted abundance is below (falling) or back at ``level``.

    Under constant total removals from the season's starting abundance ``x``; infinity if not within ``most``.
    """
    for i in range(r.shape[0]):
        n = x[i]
        out[i] = np.inf
        for t in range(most):
            if season == SHORT:
                left = n - min(removals[i], n)
                after = max(0.0, left + growth(curve[i], left, r[i], k[i], s[i]))
                counted = left if when == AFTER else after
            else:
                step = max(0.0, n + growth(curve[i], n, r[i], k[i], s[i]))
                after = step - min(removals[i], step)
                counted = after
            if (counted < level[i]) if falling else (counted >= level[i]):
                out[i] = t + 1.0
                break
            n = after
