"""What a reader must be told about a table of draws before trusting what follows from it."""

from __future__ import annotations

import numpy as np

from harvest.rates.table import Rates
from harvest.record.model import Record

#: Shares of draws below this are not worth a note.
NOTABLE = 0.01


def _overshooting(record: Record, rates: Rates) -> np.ndarray:
    """Draws whose yearly step is unstable at carrying capacity: S'(K) ≤ −1."""
    return rates.step_slope(rates.column("K")) <= -1.0


def _crashing(record: Record, rates: Rates) -> np.ndarray:
    """Draws in which today's abundance alone would bring the growth curve to zero within a year."""
    x = rates.column("abundance")
    return (x > 0.0) & (x + rates.growth(x) <= 0.0)


def _crowded(record: Record, rates: Rates) -> np.ndarray:
    """Other draws in which today's abundance is more than twice the carrying capacity."""
    return (rates.column("abundance") > 2.0 * rates.column("K")) & ~_crashing(record, rates)


def _crossed(record: Record, rates: Rates) -> np.ndarray:
    """Draws in which the collapse level lies above the stated limit."""
    if record.objectives.limit is None:
        return np.zeros(len(rates), dtype=bool)
    return rates.collapse_level(record.objectives.collapse) > rates.level(record.objectives.limit, np.inf)


_NOTES = (
    (
        _overshooting,
        "growth is so strong that the yearly step overshoots and does not settle (May 1976): risk need not rise "
        "with the quota, and a population can crash without a take; check the growth rate and the shape",
    ),
    (
        _crashing,
        "today's abundance is so far above the carrying capacity that the growth curve falls to zero in one year: "
        "the count and the range of the carrying capacity contradict each other",
    ),
    (
        _crowded,
        "today's abundance is more than twice the carrying capacity: check the count and the range",
    ),
    (
        _crossed,
        "the collapse level lies above the limit: the limit is no safeguard there",
    ),
)


def cautions(record: Record, rates: Rates) -> tuple[str, ...]:
    """Notes on draws that are likely not meant, each with the share of draws it concerns."""
    shares = ((float(np.mean(concerns(record, rates))), text) for concerns, text in _NOTES)
    return tuple(f"in {_share_words(share)} {text}" for share, text in shares if share >= NOTABLE)


def _share_words(share: float) -> str:
    return "all draws" if share > 0.9995 else f"{100.0 * share:.3g}% of the draws"
