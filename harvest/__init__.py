"""Harvest: from counts and removals to a quota with the risk written beside it.

The names below are loaded when first used, so that ``import harvest`` stays light.
"""

from __future__ import annotations

from importlib import import_module
from typing import Any

__version__ = "0.1.0"

_HOMES = {
    "Record": "harvest.record",
    "read_record": "harvest.record",
    "save_record": "harvest.record",
    "Rates": "harvest.rates",
    "draw_rates": "harvest.rates",
    "summarise_yield": "harvest.yields",
    "find_thresholds": "harvest.yields",
    "Rule": "harvest.futures",
    "project": "harvest.futures",
    "trace_risk": "harvest.futures",
    "recommend_quota": "harvest.futures",
    "find_quota": "harvest.futures",
    "make_quota_table": "harvest.plan",
    "HarvestError": "harvest.errors",
    "RecordError": "harvest.errors",
}

__all__ = ["__version__", *_HOMES]


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module 'harvest' has no attribute {name!r}")
    return getattr(import_module(_HOMES[name]), name)


def __dir__() -> list[str]:
    return sorted(__all__)
