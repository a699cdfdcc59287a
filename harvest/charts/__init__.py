"""The pictures: one Altair chart each, with its title, its finding, its data as a table and its files.

The names below are loaded when first used, so that the history is drawn without anything the other pictures need.
"""

from __future__ import annotations

from importlib import import_module
from typing import Any

_HOMES = {
    "Picture": "harvest.charts.picture",
    "draw_history": "harvest.charts.history",
    "draw_indices": "harvest.charts.indices",
    "draw_yield": "harvest.charts.yield_curve",
    "draw_equilibria": "harvest.charts.equilibria",
    "draw_future": "harvest.charts.future",
    "draw_risk": "harvest.charts.risk",
    "mark_quota": "harvest.charts.risk",
    "draw_probabilities": "harvest.charts.probabilities",
}

__all__ = list(_HOMES)


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module 'harvest.charts' has no attribute {name!r}")
    return getattr(import_module(_HOMES[name]), name)


def __dir__() -> list[str]:
    return sorted(__all__)
