"""Axes: where they end, how their numbers are written, and labels at their edge that keep apart."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np

#: Height of a plot in pixels at least, and the height of a label's line.
PLOT_HEIGHT, LINE_HEIGHT = 250, 15
#: Width of a plot on a small screen in pixels.
PLOT_WIDTH = 420

AMOUNT, YEAR, PERCENT = ",.6~f", "d", ".3~%"
#: Years that are written on an axis at most.
MOST_YEARS = 8


@dataclass(frozen=True)
class Axis:
    """One axis: its title, its ends, and the d3 format of its numbers."""

    title: str
    low: float
    high: float
    format: str = AMOUNT
    more: dict[str, Any] = field(default_factory=dict)

    def channel(self, field_name: str) -> dict[str, Any]:
        """The axis as a channel of a layer; the same title, scale and axis in every layer of a chart."""
        axis = {
            "format": self.format,
            "tickCount": 5,
            "labelOverlap": "greedy",
            "labelFlush": False,
        }
        scale = {"domain": [self.low, self.high], "nice": False, "zero": False, "padding": 0}
        named = {"field": field_name, "type": "quantitative", "title": self.title}
        return named | {"scale": scale, "axis": axis | self.more}


@dataclass(frozen=True)
class Axes:
    """Both axes of a plot."""

    x: Axis
    y: Axis

    def across(self, field_name: str = "x") -> dict[str, Any]:
        """The horizontal channel of a column."""
        return self.x.channel(field_name)

    def up(self, field_name: str = "y") -> dict[str, Any]:
        """The vertical channel of a column."""
        return self.y.channel(field_name)


def round_top(value: float) -> float:
    """The end of an axis from zero that holds a value: a round number above it, 1 where there is nothing to hold."""
    if not math.isfinite(value) or value <= 0.0:
        return 1.0
    step = 10.0 ** math.floor(math.log10(value))
    for part in (0.1, 0.2, 0.25, 0.5):
        if value / (part * step) <= 12.0:
            return float(f"{math.ceil(value / (part * step) - 1e-9) * part * step:.6g}")
    return float(f"{math.ceil(value / step - 1e-9) * step:.6g}")


def year_axis(title: str, first: int, last: int) -> Axis:
    """An axis of whole years; one year alone stands in the middle."""
    low, high = (first, last) if last > first else (first - 1, last + 1)
    step = next(s for s in (1, 2, 5, 10, 20, 50, 100, 200, 500) if (high - low) / s < MOST_YEARS)
    written = list(range(-(-low // step) * step, high + 1, step))
    return Axis(title, low, high, YEAR, {"values": written, "tickCount": len(written)})


def chance_axis(title: str, highest: float) -> Axis:
    """An axis of probabilities from zero: to 100% where they are large, else to a round number above them."""
    return Axis(title, 0.0, 1.0 if highest > 0.6 else max(round_top(1.05 * highest), 0.01), PERCENT)


def keep_apart(values: Sequence[float], axis: Axis) -> list[float]:
    """Heights of labels, each as near its value as the others and the plot's ends allow, in the order given."""
    if not values:
        return []
    gap = (axis.high - axis.low) * LINE_HEIGHT / PLOT_HEIGHT
    order = np.argsort(np.asarray(values, float), kind="stable")
    wanted = np.clip(np.asarray(values, float)[order], axis.low, axis.high)
    rank = np.arange(wanted.size) * gap
    room = max(axis.low, axis.high - rank[-1])
    placed = np.clip(_nearest_rising(wanted - rank), axis.low, room) + rank
    out = np.empty(wanted.size)
    out[order] = placed
    return [float(v) for v in out]


def _nearest_rising(values: np.ndarray) -> np.ndarray:
    """The non-decreasing numbers nearest to the values in least squares: neighbours out of order are pooled."""
    pools: list[tuple[float, int]] = []
    for value in values:
        mean, size = float(value), 1
        while pools and pools[-1][0] > mean:
            before, n = pools.pop()
            mean, size = (before * n + mean * size) / (n + size), n + size
        pools.append((mean, size))
    return np.concatenate([np.full(n, mean) for mean, n in pools])


def label_rows(spans: Sequence[tuple[float, float]]) -> list[int]:
    """The row, 0 nearest the plot, of each label that stands above it, so that no two spans of a row meet."""
    rows: list[int] = []
    for i, (low, high) in enumerate(spans):
        taken = {rows[j] for j in range(i) if spans[j][0] < high and low < spans[j][1]}
        rows.append(min(r for r in range(i + 1) if r not in taken))
    return rows
