"""Standard normal numbers keyed by (seed, block, year, purpose): the same whatever the threads.

Each key is hashed to the start of a SplitMix64 sequence (Steele, Lea & Flood 2014, doi:10.1145/2660193.2660195);
lane j reads element j, so no state is carried and one noise can be switched on without moving the others.
Box–Muller turns the elements of lanes j and j + half into the normals of those two lanes.
"""

from __future__ import annotations

import math

import numpy as np

from harvest.kernels.compiling import kernel
from harvest.kernels.vectormath import U, as_float, log, sine_cosine

#: Purposes of random numbers.
ENVIRONMENT, DEMOGRAPHY, SURVEY, IMPLEMENTATION = 1, 2, 3, 4
_GOLDEN = 0x9E3779B97F4A7C15


@kernel(inline=True)
def mix(z):
    """SplitMix64's finaliser: a bijection of 64 bits."""
    z = (z ^ (z >> U(30))) * U(0xBF58476D1CE4E5B9)
    z = (z ^ (z >> U(27))) * U(0x94D049BB133111EB)
    return z ^ (z >> U(31))


@kernel()
def stream_key(seed, block, year, purpose):
    """The start of the sequence of one (seed, block, year, purpose); all whole numbers, year may be negative."""
    z = mix(U(seed) + U(_GOLDEN))
    z = mix((z ^ U(block)) + U(_GOLDEN))
    z = mix((z ^ U(year)) + U(_GOLDEN))
    return mix((z ^ U(purpose)) + U(_GOLDEN))


@kernel()
def fill_normals(seed, block, year, purpose, out):
    """Fill ``out`` (an even number of lanes) with independent standard normals."""
    key = stream_key(seed, block, year, purpose)
    half = out.shape[0] // 2
    for j in range(half):
        first = mix(key + U(_GOLDEN) * U(j + 1))
        second = mix(key + U(_GOLDEN) * U(j + half + 1))
        u = as_float((first >> U(12)) | U(0x3FF0000000000000)) - 1.0
        v = as_float((second >> U(12)) | U(0x3FF0000000000000)) - 1.0
        radius = math.sqrt(-2.0 * log(1.0 - u))
        sine, cosine = sine_cosine(v)
        out[j] = radius * cosine
        out[j + half] = radius * sine


def normals(seed: int, block: int, year: int, purpose: int, lanes: int) -> np.ndarray:
    """Standard normals of one key, shape (lanes,); for tests and for plain-numpy references."""
    out = np.empty(lanes)
    fill_normals(seed, block, year, purpose, out)
    return out
