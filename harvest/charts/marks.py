"""The marks that charts are made of: bands, lines, points, rules and labels on shared axes."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from harvest.charts.axes import LINE_HEIGHT, PLOT_WIDTH, Axes, Axis, keep_apart, label_rows
from harvest.charts.palette import ABUNDANCE, DARK, DASHED, LIGHT, REFERENCE, Dash
from harvest.charts.phrases import label_width

#: Significant digits of a number in a chart.
DIGITS = 5
#: A column of numbers or texts.
Column = Sequence[Any] | np.ndarray
#: One layer as plain Vega-Lite: data, mark and encoding.
Layer = dict[str, Any]


def rounded(value: Any) -> Any:
    """A value for the chart's data: numbers to :data:`DIGITS` significant digits, None where there is none."""
    if isinstance(value, str):
        return value
    number = float(value)
    return float(f"{number:.{DIGITS}g}") if math.isfinite(number) else None


def layer(columns: Mapping[str, Column], mark: str, style: Mapping[str, Any], encoding: Mapping[str, Any]) -> Layer:
    """One layer: its data as columns of equal length, its mark and how it is drawn."""
    names = list(columns)
    values = [dict(zip(names, map(rounded, row), strict=True)) for row in zip(*columns.values(), strict=True)]
    return {"data": {"values": values}, "mark": {"type": mark, **style}, "encoding": dict(encoding)}


def band(axes: Axes, x: Column, low: Column, high: Column, colour: str, opacity: float) -> Layer:
    """An area between two lines."""
    style = {"color": colour, "opacity": opacity, "clip": True}
    encoding = {"x": axes.across(), "y": axes.up("low"), "y2": {"field": "high"}}
    return layer({"x": x, "low": low, "high": high}, "area", style, encoding)


def line(axes: Axes, x: Column, y: Column, colour: str, dash: Dash = None, **style: Any) -> Layer:
    """A line; numbers that are missing break it."""
    style = {"color": colour, "clip": True, **_dashed(dash), **style}
    return layer({"x": x, "y": y}, "line", style, {"x": axes.across(), "y": axes.up()})


def fan(axes: Axes, x: Column, spread: Mapping[str, Column], colour: str = ABUNDANCE) -> list[Layer]:
    """The 90% band light, the 50% band dark, the median a line."""
    return [
        band(axes, x, spread["low90"], spread["high90"], colour, LIGHT),
        band(axes, x, spread["low50"], spread["high50"], colour, DARK),
        line(axes, x, spread["median"], colour),
    ]


def bars(axes: Axes, x: Column, y: Column, colour: str, width: float) -> Layer:
    """Bars from zero."""
    style = {"color": colour, "opacity": 0.75, "width": width, "clip": True}
    return layer({"x": x, "y": y}, "bar", style, {"x": axes.across(), "y": axes.up()})


def points(axes: Axes, x: Column, y: Column, colour: str, shape: str = "circle", **style: Any) -> Layer:
    """Points."""
    style = {"color": colour, "shape": shape, "filled": True, "size": 46, "opacity": 1.0, **style}
    return layer({"x": x, "y": y}, "point", style, {"x": axes.across(), "y": axes.up()})


def whiskers(axes: Axes, at: Column, low: Column, high: Column, colour: str, *, flat: bool = False) -> Layer:
    """Intervals as rules: upright, each at its place, or flat, each at its height."""
    style = {"color": colour, "strokeWidth": 1.6, "clip": True}
    upright = {"x": axes.across("at"), "y": axes.up("low"), "y2": {"field": "high"}}
    lying = {"x": axes.across("low"), "x2": {"field": "high"}, "y": axes.up("at")}
    return layer({"at": at, "low": low, "high": high}, "rule", style, lying if flat else upright)


def level(axes: Axes, value: float, colour: str, dash: Dash = DASHED) -> Layer:
    """A level line across the plot."""
    return layer({"y": [value]}, "rule", {"color": colour, **_dashed(dash)}, {"y": axes.up()})


def upright(axes: Axes, value: float, colour: str, dash: Dash = None, width: float = 1.3) -> Layer:
    """A rule from the bottom to the top of the plot."""
    return layer({"x": [value]}, "rule", {"color": colour, "strokeWidth": width, **_dashed(dash)}, {"x": axes.across()})


def _dashed(dash: Dash) -> dict[str, Any]:
    return {} if dash is None else {"strokeDash": list(dash)}


def label(axes: Axes, x: float, y: float, text: str, colour: str, **style: Any) -> Layer:
    """One text at a point."""
    style = {"color": colour, "align": "left", "baseline": "middle", "dx": 8, "dy": 0, "limit": 400, **style}
    encoding = {"x": axes.across(), "y": axes.up(), "text": {"value": text}}
    return layer({"x": [x], "y": [y]}, "text", style, encoding)


def end_labels(axes: Axes, ends: Sequence[tuple[float, str, str]]) -> list[Layer]:
    """Labels right of the plot, (height, text, colour) each, near their line's end and apart from one another."""
    heights = keep_apart([y for y, _, _ in ends], axes.y)
    return [
        label(axes, axes.x.high, height, text, colour) for height, (_, text, colour) in zip(heights, ends, strict=True)
    ]


def top_labels(axes: Axes, marked: Sequence[tuple[float, str, str]]) -> list[Layer]:
    """Labels above the plot, (place, text, colour) each, in as many rows as keep them apart."""
    rows = label_rows([_span(x, text, axes.x) for x, text, _ in marked])
    return [
        label(
            axes, x, axes.y.high, text, colour, baseline="bottom", dy=-4 - LINE_HEIGHT * row, **_SIDES[_side(x, axes.x)]
        )
        for (x, text, colour), row in zip(marked, rows, strict=True)
    ]


#: How a label above the plot is aligned: towards the middle near the plot's ends.
_SIDES: dict[str, dict[str, Any]] = {
    "left": {"align": "left", "dx": -2},
    "center": {"align": "center", "dx": 0},
    "right": {"align": "right", "dx": 2},
}


def _side(x: float, axis: Axis) -> str:
    share = (x - axis.low) / (axis.high - axis.low)
    if share < 0.2:
        return "left"
    return "right" if share > 0.8 else "center"


def _span(x: float, text: str, axis: Axis) -> tuple[float, float]:
    """From where to where a label above the plot reaches, on a small screen."""
    width = (label_width(text) + 14) * (axis.high - axis.low) / PLOT_WIDTH
    start = x - width * {"left": 0.0, "center": 0.5, "right": 1.0}[_side(x, axis)]
    return start, start + width


def hover(axes: Axes, x: Column, y: Column, told: Mapping[str, Sequence[str]]) -> Layer:
    """Points that are not seen and tell their numbers, as texts by heading, under the pointer."""
    texts = {f"t{i}": column for i, column in enumerate(told.values())}
    tips = [{"field": f"t{i}", "type": "nominal", "title": heading} for i, heading in enumerate(told)]
    style = {"color": REFERENCE, "size": 180, "opacity": 0, "filled": True, "clip": True}
    encoding = {"x": axes.across(), "y": axes.up(), "tooltip": tips}
    return layer({"x": x, "y": y, **texts}, "point", style, encoding)
