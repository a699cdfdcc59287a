"""What the population can sustain and what collapses it."""

from harvest.yields.summary import YieldSummary, summarise_yield
from harvest.yields.thresholds import Thresholds, find_thresholds

__all__ = ["Thresholds", "YieldSummary", "find_thresholds", "summarise_yield"]
