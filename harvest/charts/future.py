"""The years ahead: abundance under a rule, year by year, after the counts that are on record."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from harvest.charts import marks
from harvest.charts.axes import Axes, Axis, round_top, year_axis
from harvest.charts.hiding import drawable
from harvest.charts.history import LEVELS, Counted, count_layers, counted
from harvest.charts.palette import ABUNDANCE, REFERENCE
from harvest.charts.phrases import abundance_title, amount, between, levels, limit_name, under, what
from harvest.charts.picture import Picture, assemble
from harvest.futures import Future
from harvest.plan import words
from harvest.rates import Rates
from harvest.rates.spread import LEVEL_NAMES, Spread
from harvest.record.model import Record
from harvest.yields.summary import standing_year

#: Single futures that are drawn, and the row of counted abundance in ``Future.paths``.
PATHS, COUNTED = 4, 2
#: Counts are shown from this many years before the first quota year.
YEARS_BEFORE = 10


@dataclass(frozen=True)
class _Fan:
    """Years and quantiles of abundance at the count's moment, today's first, and a few single futures."""

    years: np.ndarray
    spread: dict[str, np.ndarray]
    paths: np.ndarray


def draw_future(record: Record, rates: Rates, future: Future, *, counts: bool = True, public: bool = False) -> Picture:
    """Abundance by year under the future's rule: 50% and 90% of the futures, their median, a few single ones.

    Parameters
    ----------
    counts : bool
        Show the absolute counts of the years before.
    public : bool
        Leave out what the record keeps private, for a file that others see.
    """
    record = drawable(record, public)
    fan = _fan(record, rates, future)
    stated = {name: float(np.median(rates.level(level, np.nan))) for name, level in levels(record).items()}
    shown = _counts_before(record, int(fan.years[0])) if counts else []
    axes = _axes(record, fan, stated, [c for of_survey in shown for c in of_survey])
    layers = [marks.level(axes, v, *LEVELS[name]) for name, v in stated.items()]
    layers += marks.fan(axes, fan.years, fan.spread)
    layers += [marks.line(axes, fan.years, path, REFERENCE, strokeWidth=0.8, opacity=0.8) for path in fan.paths]
    for of_survey in shown:
        layers += count_layers(axes, of_survey, "circle")
    ends = [(v, _level_words(record, name, v), LEVELS[name][0]) for name, v in stated.items()]
    ends.append((fan.spread["median"][-1], f"median {amount(record, fan.spread['median'][-1])}", ABUNDANCE))
    layers += [*marks.end_labels(axes, ends), _hover(axes, record, fan)]
    headings = ("90% from", "50% from", "Median", "50% to", "90% to")
    return assemble(
        "years-ahead",
        f"Abundance in the {words.years(len(future.by_year))} ahead",
        _sentence(record, future, fan),
        layers,
        [
            ("Year of the count", "year", fan.years),
            *((h, "amount", fan.spread[n]) for h, n in zip(headings, LEVEL_NAMES, strict=True)),
        ],
    )


def _fan(record: Record, rates: Rates, future: Future) -> _Fan:
    """The future's quantiles with today's abundance before them."""
    today, table = Spread.of(rates.column("counted")).plain(), future.by_year
    spread = {n: np.concatenate([[today[n]], table[f"abundance_{n}"].to_numpy()]) for n in LEVEL_NAMES}
    years = np.concatenate([[standing_year(record, rates)], table["count_year"].to_numpy()])
    kept = future.paths.shape[2]
    chosen = np.unique(np.linspace(0, kept - 1, min(PATHS, kept)).astype(int))
    start = rates.column("counted")[chosen // future.futures_per_draw]
    return _Fan(years, spread, np.column_stack([start, future.paths[COUNTED][:, chosen].T]))


def _counts_before(record: Record, today: int) -> list[list[Counted]]:
    """The absolute counts of the last years, survey by survey."""
    every = [counted(record, s, s.name) for s in record.surveys if s.kind == "absolute"]
    return [[c for c in of_survey if today - YEARS_BEFORE <= c.year <= today] for of_survey in every]


def _axes(record: Record, fan: _Fan, stated: dict[str, float], counts: list[Counted]) -> Axes:
    reach = float(fan.spread["high90"].max())
    path = min(float(fan.paths.max()) if fan.paths.size else 0.0, 1.25 * reach)
    seen = [c.value if math.isnan(c.high) else c.high for c in counts]
    top = round_top(1.02 * max([reach, path, *seen, *stated.values()]))
    first = min([int(fan.years[0]), *(c.year - 1 for c in counts)])
    return Axes(year_axis("Year of the count", first, int(fan.years[-1])), Axis(abundance_title(record), 0.0, top))


def _level_words(record: Record, name: str, value: float) -> str:
    about = "about " if levels(record)[name].of_capacity else ""
    return f"{name} {about}{amount(record, value)}"


def _hover(axes: Axes, record: Record, fan: _Fan) -> marks.Layer:
    told = {
        "Year": [f"{y:.0f}" for y in fan.years],
        "Median": [amount(record, v) for v in fan.spread["median"]],
        "50%": [between(record, *e) for e in zip(fan.spread["low50"], fan.spread["high50"], strict=True)],
        "90%": [between(record, *e) for e in zip(fan.spread["low90"], fan.spread["high90"], strict=True)],
    }
    return marks.hover(axes, fan.years, fan.spread["median"], told)


def _sentence(record: Record, future: Future, fan: _Fan) -> str:
    last = {name: values[-1] for name, values in fan.spread.items()}
    end, row = int(fan.years[-1]), future.by_year.iloc[-1]
    told = (
        f"{under(record, future.rule)}, abundance {words.moment(record)} in {end} is {amount(record, last['median'])} "
        f"{what(record)} (50%: {between(record, last['low50'], last['high50'])}; "
        f"90%: {between(record, last['low90'], last['high90'])})."
    )
    span = words.years(len(future.by_year))
    told += (
        f" Chance of ever falling below {limit_name(record)} in {span}: {words.probability(row['ever_below_limit'])}; "
        f"of having collapsed: {words.probability(row['ever_collapsed'])}."
    )
    if any(level.of_capacity for level in levels(record).values()):
        told += " Levels that are a share of the carrying capacity are drawn at their median."
    return f"{told} Bands hold 50% and 90% of the futures; thin lines are single ones." if fan.paths.size else told
