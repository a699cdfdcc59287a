"""Index surveys by year: each in its own unit, so each scaled to its mean."""

from __future__ import annotations

import math
from collections.abc import Collection

from harvest.charts import marks
from harvest.charts.axes import Axes, Axis, round_top, year_axis
from harvest.charts.hiding import hidden_names, shareable
from harvest.charts.history import SHAPES, Counted, count_layers, counted
from harvest.charts.palette import DOTTED, INK, REFERENCE
from harvest.charts.phrases import capital, listed
from harvest.charts.picture import Picture, assemble
from harvest.plan import words
from harvest.record.model import Record


def draw_indices(record: Record, *, hidden: Collection[str] = (), public: bool = False) -> Picture | None:
    """The index surveys of a record, or None where it has none; nothing here needs rates or compiled kernels.

    One index is drawn in its own unit; several are divided by their means, which makes them comparable.

    Parameters
    ----------
    hidden, public
        As for :func:`harvest.charts.history.draw_history`.
    """
    record = shareable(record, hidden_names(record, hidden, public))
    surveys = [s for s in record.surveys if s.kind == "index"]
    series = [found for found in (counted(record, s, s.name) for s in surveys) if found]
    if not series:
        return None
    scale = [1.0 if len(series) == 1 else _mean(found) for found in series]
    name = series[0][0].survey
    title = capital(name) if len(series) == 1 else "Index divided by its mean"
    scaled = [[_divided(c, by) for c in found] for found, by in zip(series, scale, strict=True)]
    every = [c for found in scaled for c in found]
    top = round_top(1.02 * max(c.value if math.isnan(c.high) else c.high for c in every))
    years = record.history.years
    axes = Axes(year_axis("Year", years[0] - 1, years[-1] + 1), Axis(title, 0.0, top))
    mean = _mean(scaled[0]) if len(series) == 1 else 1.0
    ends = [(mean, "mean", REFERENCE)]
    if len(series) > 1:
        ends += [(found[-1].value, found[-1].survey, INK) for found in scaled]
    layers = [marks.level(axes, mean, REFERENCE, DOTTED)]
    for i, found in enumerate(scaled):
        layers += count_layers(axes, found, SHAPES[i % len(SHAPES)])
    rows = sorted((c for found in series for c in found), key=lambda c: c.year)
    return assemble(
        "indices",
        "Index surveys" if len(series) > 1 else "Index survey",
        _sentence(series),
        [*layers, *marks.end_labels(axes, ends)],
        [
            ("Year", "year", [c.year for c in rows]),
            ("Survey", "text", [c.survey for c in rows]),
            ("Index", "index", [0.0 if c.zero else c.value for c in rows]),
            ("90% from", "index", [c.low for c in rows]),
            ("to", "index", [c.high for c in rows]),
        ],
    )


def _mean(counts: list[Counted]) -> float:
    return sum(c.value for c in counts) / len(counts)


def _divided(c: Counted, by: float) -> Counted:
    return Counted(c.year, c.survey, c.value / by, c.low / by, c.high / by, c.zero)


def _sentence(series: list[list[Counted]]) -> str:
    told = []
    for found in series:
        last, mean = found[-1], _mean(found)
        told.append(
            f"{found[0].survey}: {words.small(last.value)} in {last.year}, {words.percent(last.value / mean)} of its "
            f"mean over {words.years(len(found))}"
        )
    return f"{capital(listed(told))}. An index follows abundance and does not tell how many there are."
