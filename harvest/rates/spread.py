"""A quantity over draws, told as its median with 50% and 90% intervals."""

from __future__ import annotations

from dataclasses import asdict, dataclass

import numpy as np

LEVELS = (0.05, 0.25, 0.5, 0.75, 0.95)


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
    def of(cls, values: np.ndarray) -> Spread:
        """Spread of values over draws; NaN marks draws in which the quantity does not exist."""
        there = values[~np.isnan(values)]
        if there.size == 0:
            return cls(*[float("nan")] * 5, share=0.0)
        method = "linear" if np.isfinite(there).all() else "inverted_cdf"
        low90, low50, median, high50, high90 = (float(v) for v in np.quantile(there, LEVELS, method=method))
        return cls(low90, low50, median, high50, high90, there.size / values.size)

    def plain(self) -> dict[str, float]:
        """As a dictionary."""
        return asdict(self)
