"""Roots and crossing times, draw by draw: bisection on brackets that are known to hold, to the last bit.

All arrays have one entry a draw; ``curve`` is int64, the rest float64. NaN means "there is none".
"""

from __future__ import annotations

import numpy as np

from harvest.kernels.codes import AFTER, SHORT
from harvest.kernels.compiling import kernel
from harvest.kernels.growth import ALLEE, growth


@kernel()
def crossing(curve, r, k, s, level, low, high):
    """N between ``low`` and ``high`` where g(N) = level; g − level has opposite signs at the two ends."""
    rising = growth(curve, low, r, k, s) < growth(curve, high, r, k, s)
    for _ in range(400):
        middle = 0.5 * (low + high)
        if middle in (low, high):
            break
        if (growth(curve, middle, r, k, s) < level) == rising:
            low = middle
        else:
            high = middle
    return 0.5 * (low + high)


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
            lower[i] = crossing(curve[i], r[i], k[i], s[i], removals[i], floor, peak[i])
            upper[i] = crossing(curve[i], r[i], k[i], s[i], removals[i], peak[i], k[i])


@kernel()
def holding_yield(season, curve, r, k, s, x, out):
    """Removals that hold the season's starting abundance x: g(x), or x − B with S(B) = x; 0 where g(x) ≤ 0."""
    for i in range(r.shape[0]):
        now = growth(curve[i], x[i], r[i], k[i], s[i])
        if not now > 0.0:
            out[i] = 0.0
        elif season != SHORT:
            out[i] = now
        else:
            low, high = 0.0, x[i]
            for _ in range(400):
                middle = 0.5 * (low + high)
                if middle in (low, high):
                    break
                if middle + growth(curve[i], middle, r[i], k[i], s[i]) < x[i]:
                    low = middle
                else:
                    high = middle
            out[i] = x[i] - 0.5 * (low + high)


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
