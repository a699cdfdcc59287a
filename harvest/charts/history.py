"""The record's history: absolute counts with their uncertainty, reported removals, and the levels it is held to."""

from __future__ import annotations

import math
from collections.abc import Collection
from dataclasses import dataclass

from harvest.charts import marks
from harvest.charts.axes import Axes, Axis, round_top, year_axis
from harvest.charts.hiding import hidden_names, shareable
from harvest.charts.palette import ABUNDANCE, CEILING, DASHED, DOTTED, INK, LONG, RISK, TAKE, Dash
from harvest.charts.phrases import abundance_title, amount, between, capital, levels, listed, what
from harvest.charts.picture import Picture, assemble
from harvest.plan import words
from harvest.record.model import Record, Survey
from harvest.record.private import is_named

#: Colour and dash of each level.
LEVELS: dict[str, tuple[str, Dash]] = {
    "limit": (RISK, DASHED),
    "collapse": (RISK, DOTTED),
    "target": (ABUNDANCE, LONG),
    "ceiling": (CEILING, DASHED),
}
SHAPES = ("circle", "square", "diamond", "triangle-up")
_Z90 = 1.6448536269514722


@dataclass(frozen=True)
class Counted:
    """One count as it is drawn: the ends of its 90% interval, NaN for a count of zero or one without a CV.

    ``value`` of a count of zero is the survey's detection limit (1 where none is stated), and ``zero`` tells so.
    """

    year: int
    survey: str
    value: float
    low: float
    high: float
    zero: bool


def counted(record: Record, survey: Survey, name: str) -> list[Counted]:
    """The counts of one survey, with the 90% interval count × exp(±1.645 τ), τ² = ln(1 + CV²)."""
    found = []
    for year, value, cv in zip(record.history.years, survey.values, survey.cvs, strict=True):
        if value is None:
            continue
        zero = value <= 0.0
        shown = (survey.detection_limit or 1.0) if zero else value
        spread = math.nan if zero or cv is None else math.exp(_Z90 * math.sqrt(math.log1p(cv * cv)))
        found.append(Counted(year, name, shown, shown / spread, shown * spread, zero))
    return found


def count_layers(axes: Axes, counts: list[Counted], shape: str) -> list[marks.Layer]:
    """Counts as ink points with their intervals; a count of zero is an open triangle that points down."""
    sure, zero = [c for c in counts if not c.zero], [c for c in counts if c.zero]
    made = []
    barred = [c for c in sure if not math.isnan(c.low)]
    if barred:
        years, low, high = [c.year for c in barred], [c.low for c in barred], [c.high for c in barred]
        made.append(marks.whiskers(axes, years, low, high, INK))
    if sure:
        made.append(marks.points(axes, [c.year for c in sure], [c.value for c in sure], INK, shape))
    if zero:
        years, least = [c.year for c in zero], [c.value for c in zero]
        made.append(marks.points(axes, years, least, INK, "triangle-down", filled=False, size=70))
    return made


def draw_history(record: Record, *, hidden: Collection[str] = (), public: bool = False) -> Picture:
    """Counts and removals by year, on one axis from zero; nothing here needs rates or compiled kernels.

    Parameters
    ----------
    record : Record
    hidden : collection of str
        What is left out, named as in ``record.private``: "history.removals", "survey", "species", ...
    public : bool
        Leave out what the record keeps private, for a file that others see.
    """
    hidden = hidden_names(record, hidden, public)
    record = shareable(record, hidden)
    surveys = [s for s in record.surveys if s.kind == "absolute"]
    counts = [counted(record, s, s.name) for s in surveys]
    every = [c for of_survey in counts for c in of_survey]
    secret = is_named("history.removals", hidden)
    taken = {} if secret else {y: h for y, h in zip(record.history.years, record.history.removals, strict=True) if h}
    stated = {name: level.value for name, level in levels(record).items() if not level.of_capacity}
    axes = _axes(record, every, taken, stated)
    ends = [(v, f"{name} {amount(record, v)}", LEVELS[name][0]) for name, v in stated.items()]
    layers = [_bars(axes, taken), *(marks.level(axes, v, *LEVELS[name]) for name, v in stated.items())]
    for i, of_survey in enumerate(counts):
        layers += count_layers(axes, of_survey, SHAPES[i % len(SHAPES)])
        if len(surveys) > 1 and of_survey:
            last = of_survey[-1]
            ends.append((last.value, last.survey, INK))
    layers.append(_hover(axes, record, every, taken))
    table = _rows(record, every, taken)
    return assemble(
        "history",
        _title(every, taken),
        _sentence(record, surveys, every, taken, secret),
        [*layers, *marks.end_labels(axes, ends), *_bar_label(axes, taken)],
        [
            ("Year", "year", [r[0] for r in table]),
            ("What", "text", [r[1] for r in table]),
            (f"{capital(words.moment(record))}, or removed", "amount", [r[2] for r in table]),
            ("90% from", "amount", [r[3] for r in table]),
            ("to", "amount", [r[4] for r in table]),
        ],
    )


def _axes(record: Record, counts: list[Counted], taken: dict[int, float], stated: dict[str, float]) -> Axes:
    highest = [c.value if math.isnan(c.high) else c.high for c in counts]
    top = round_top(1.02 * max([*highest, *taken.values(), *stated.values()], default=1.0))
    years = record.history.years
    return Axes(year_axis("Year", years[0] - 1, years[-1] + 1), Axis(abundance_title(record), 0.0, top))


def _bars(axes: Axes, taken: dict[int, float]) -> marks.Layer:
    """Removals as bars from zero, under everything else."""
    width = max(2.0, min(14.0, 300.0 / (axes.x.high - axes.x.low)))
    return marks.bars(axes, list(taken), list(taken.values()), TAKE, width)


def _bar_label(axes: Axes, taken: dict[int, float]) -> list[marks.Layer]:
    """The bars' name, above the first of them."""
    if not taken:
        return []
    year = next(iter(taken))
    near = max(h for y, h in taken.items() if y - year < (axes.x.high - axes.x.low) / 4 + 1)
    return [marks.label(axes, year, near, "removals", TAKE, dx=-6, dy=-9)]


def _hover(axes: Axes, record: Record, counts: list[Counted], taken: dict[int, float]) -> marks.Layer:
    rows = _rows(record, counts, taken)
    heights = [r[2] if r[1] != "removals" else r[2] / 2 for r in rows]
    told = {
        "Year": [str(r[0]) for r in rows],
        "What": [r[1] for r in rows],
        "Number": [amount(record, r[2]) for r in rows],
        "90%": ["" if math.isnan(r[3]) else between(record, r[3], r[4]) for r in rows],
    }
    return marks.hover(axes, [r[0] for r in rows], heights, told)


def _rows(record: Record, counts: list[Counted], taken: dict[int, float]) -> list[tuple[int, str, float, float, float]]:
    """Year, what, number, interval: in the order of the years, counts first."""
    rows = [(c.year, f"fewer than, {c.survey}" if c.zero else c.survey, c.value, c.low, c.high) for c in counts]
    rows += [(year, "removals", value, math.nan, math.nan) for year, value in taken.items()]
    return sorted(rows, key=lambda row: row[0])


def _title(counts: list[Counted], taken: dict[int, float]) -> str:
    if counts and taken:
        return "Counts and removals"
    return "Counts" if counts else "Reported removals" if taken else "No counts and no removals yet"


def _sentence(
    record: Record, surveys: list[Survey], counts: list[Counted], taken: dict[int, float], secret: bool
) -> str:
    told = []
    if counts:
        last = max(counts, key=lambda c: c.year)
        first = min(c.year for c in counts)
        start = f"{len(counts)} counts from {first} to {last.year}; the latest, of {last.year}, is"
        if len(counts) == 1:
            start = f"One count, of {first}:"
        said = f"fewer than {amount(record, last.value)}" if last.zero else amount(record, last.value)
        sure = "" if math.isnan(last.low) else f" (90%: {between(record, last.low, last.high)})"
        told.append(f"{start} {said} {what(record)}{sure}.")
    else:
        told.append("No absolute count is on record.")
    if secret:
        told.append("Reported removals are not shown.")
    elif taken:
        year = max(taken)
        told.append(
            f"Reported removals: {amount(record, taken[year])} in {year}, the latest, and "
            f"{amount(record, sum(taken.values()))} in the {words.years(len(taken))} with a take."
        )
    else:
        told.append("No removals are on record.")
    if any(s.bias.kind != "fixed" or s.bias["value"] != 1.0 for s in surveys):
        told.append("Counts are shown as counted, before correction for the survey's bias.")
    shares = [
        f"the {name}{' level' * (name == 'collapse')} ({words.percent(lv.value)})"
        for name, lv in levels(record).items()
        if lv.of_capacity
    ]
    if shares:
        verb = "is a share" if len(shares) == 1 else "are shares"
        told.append(f"Not drawn: {listed(shares)} {verb} of the carrying capacity.")
    return " ".join(told)
