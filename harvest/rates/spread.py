"""A quantity over draws, told as its median with 50% and 90% intervals."""

from __future__ import annotations

from dataclasses import asdict, dataclass

import numpy as np

#: Probabilities of the quantiles that tell a quantity, and their names.
LEVELS = (0.05, 0.25, 0.5, 0.75, 0.95)
LEVEL_NAMES = ("low90", "low50", "median", "high50", "high90")


@dataclass(frozen=True)
class Spread:
    """Median, 50% and 90% interval of a quantity over draws; infinity means "never".

    ``share`` is the share of draws in which the quantity exists at all; the quantiles are over those.
    """

    low90: float
    low50: float
    median: float
    high50: float
    high90: float
    share: float = 1.0

    @classmethod
    def of(cls, sample: np.ndarray) -> Spread:
        """Spread of a sample over draws; NaN marks draws in which the quantity does not exist."""
        there = sample[~np.isnan(sample)]
        if there.size == 0:
            nothing = float("nan")
            return cls(nothing, nothing, nothing, nothing, nothing, share=0.0)
        finite = bool(np.isfinite(there).all())
        levels = np.array(LEVELS)
        values = np.quantile(there, levels, method="linear" if finite else "inverted_cdf")
        low90, low50, median, high50, high90 = (float(v) for v in values)
        return cls(low90, low50, median, high50, high90, there.size / sample.size)

    def plain(self) -> dict[str, float]:
        """As a dictionary."""
        return asdict(self)
