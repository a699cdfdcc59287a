"""A fixed log histogram: 256 bins an octave over 40 octaves, read off the bits of a float.

A bin's edges differ by at most 0.39%, so a quantile interpolated within a bin is off by less than that.
Bin 0 holds zero and whatever is smaller than 2^-30 of the reference.
"""

from __future__ import annotations

import math
from functools import cache

import numpy as np

from harvest.kernels.compiling import kernel
from harvest.kernels.vectormath import U, as_bits

BINS = 256 * 40 + 2


def base_of(reference: float) -> int:
    """The number subtracted from a value's leading bits so that ``reference`` falls into octave 30 of 40."""
    octave = math.frexp(max(reference, 1e-200))[1] - 30
    return ((1023 + octave) << 8) - 1


@kernel(inline=True)
def bin_of(value, base):
    """The bin of a value ≥ 0."""
    index = np.int64(as_bits(value) >> U(44)) - base
    return min(max(index, 0), BINS - 1)


def _bin(value: float, base: int) -> int:
    """The bin of one value ≥ 0, before it is held within the histogram."""
    return (int(np.float64(value).view(np.int64)) >> 44) - base


@cache
def edges(base: int) -> np.ndarray:
    """Lower edges of all bins and the upper edge of the last, shape (BINS + 1,); the first two are 0 and tiny."""
    bits = (np.arange(BINS + 1, dtype=np.int64) + base) << 44
    lower = bits.view(np.float64).copy()
    lower[0] = 0.0
    lower.flags.writeable = False
    return lower


def quantiles(counts: np.ndarray, base: int, least: float, most: float, q: np.ndarray) -> np.ndarray:
    """Quantiles of one histogram, linear within a bin and held within the exact extremes.

    Parameters
    ----------
    counts : ndarray, shape (BINS,)
    least, most : float
        Smallest and largest value counted.
    q : ndarray
        Probabilities.
    """
    first = min(max(_bin(least, base), 0), BINS - 1)
    last = min(max(_bin(most, base), 0), BINS - 1)
    occupied = np.flatnonzero(counts[first : last + 1]) + first
    held = counts[occupied]
    cumulative = np.concatenate([[0], np.cumsum(held)])
    rank = q * (cumulative[-1] - 1) + 0.5
    place = np.clip(np.searchsorted(cumulative, rank, side="right") - 1, 0, occupied.size - 1)
    index = occupied[place]
    inside = (rank - cumulative[place]) / held[place]
    edge = edges(base)
    value = edge[index] + np.clip(inside, 0.0, 1.0) * (edge[index + 1] - edge[index])
    value = np.where(index == 0, 0.0, value)
    return np.clip(value, least, most)
