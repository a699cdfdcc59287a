"""Random numbers for whole columns of draws, keyed by (seed, purpose)."""

from __future__ import annotations

import hashlib

import numpy as np


def stream(seed: int, purpose: str) -> np.random.Generator:
    """A generator keyed by (seed, purpose)."""
    key = int.from_bytes(hashlib.sha256(purpose.encode()).digest()[:8], "big")
    return np.random.Generator(np.random.PCG64(np.random.SeedSequence([seed, key])))
