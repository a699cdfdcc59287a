"""The yield curve: total removals that hold an abundance, and where the population stands on it."""

from __future__ import annotations

import numpy as np

from harvest.charts import marks
from harvest.charts.axes import Axes, Axis, round_top
from harvest.charts.hiding import drawable
from harvest.charts.palette import ABUNDANCE, DASHED, INK, REFERENCE, TAKE
from harvest.charts.phrases import abundance_title, amount, axis_what, between, spread_words, what, with_interval
from harvest.charts.picture import Picture, assemble
from harvest.plan import words
from harvest.rates import Rates
from harvest.rates.spread import LEVEL_NAMES, Spread
from harvest.record.model import Record
from harvest.record.private import is_named
from harvest.yields import YieldSummary

_SECRET = "Present removals are not shown."
_BANDS = "Bands hold 50% and 90% of the draws."


def draw_yield(record: Record, rates: Rates, summary: YieldSummary, *, public: bool = False) -> Picture:
    """Yearly total removals that hold an abundance, with today's abundance and the present total removals.

    Parameters
    ----------
    public : bool
        Leave out what the record keeps private, for a file that others see: present removals where those are.
    """
    secret = public and is_named("history.removals", record.private)
    record = drawable(record, public)
    curve, today = summary.curve, summary.spreads["abundance"]
    take = None if secret or summary.present_removals is None else _present(rates, summary.present_removals)
    axes = _axes(record, summary, today, take)
    x = curve["abundance"].to_numpy()
    best = summary.spreads["msy_abundance"].median
    layers = [
        marks.upright(axes, best, REFERENCE, DASHED),
        *marks.fan(axes, x, {name: curve[name].to_numpy() for name in LEVEL_NAMES}, ABUNDANCE),
        *_today(axes, record, today, take),
        marks.hover(
            axes,
            x,
            curve["median"].to_numpy(),
            {
                "Abundance": [amount(record, v) for v in x],
                "Removals that hold it": [amount(record, v) for v in curve["median"]],
                "90%": [between(record, *ends) for ends in zip(curve["low90"], curve["high90"], strict=True)],
            },
        ),
        *marks.top_labels(axes, [(best, f"greatest yield at {amount(record, best)}", REFERENCE)]),
    ]
    if take is not None:
        ends = [(take.median, f"present {amount(record, take.median)}", TAKE)]
        layers += [marks.level(axes, take.median, TAKE), *marks.end_labels(axes, ends)]
    headings = ("90% from", "50% from", "Median", "50% to", "90% to")
    return assemble(
        "yield-curve",
        "Removals that hold an abundance",
        _sentence(record, summary, today, take),
        layers,
        [
            (f"Abundance {words.moment(record)}", "amount", x),
            *((h, "amount", curve[n].to_numpy()) for h, n in zip(headings, LEVEL_NAMES, strict=True)),
        ],
    )


def _present(rates: Rates, legal: float) -> Spread:
    """Present total removals over draws."""
    return Spread.of(np.broadcast_to(rates.total_removals(legal), len(rates)))


def _axes(record: Record, summary: YieldSummary, today: Spread, take: Spread | None) -> Axes:
    highest = max(float(summary.curve["high90"].max()), 0.0 if take is None else take.high90)
    widest = max(float(summary.curve["abundance"].iloc[-1]), 1.02 * today.high90)
    x = Axis(abundance_title(record), 0.0, widest)
    return Axes(x, Axis(f"Total removals, {axis_what(record)} a year", 0.0, round_top(1.05 * highest)))


def _today(axes: Axes, record: Record, today: Spread, take: Spread | None) -> list[marks.Layer]:
    """Today's abundance with its 90% interval, at the present removals (on the ground where there are none)."""
    height = 0.0 if take is None else take.median
    made = [marks.whiskers(axes, [height], [today.low90], [today.high90], INK, flat=True)]
    if take is not None and take.low90 < take.high90:
        made.append(marks.whiskers(axes, [today.median], [take.low90], [take.high90], INK))
    made.append(marks.points(axes, [today.median], [height], INK, size=80))
    return [*made, marks.label(axes, today.median, height, f"today {amount(record, today.median)}", INK, dy=-11)]


def _sentence(record: Record, summary: YieldSummary, today: Spread, take: Spread | None) -> str:
    held, msy = summary.spreads["sustainable_today"], summary.spreads["msy"]
    told = (
        f"Total removals of {spread_words(record, held)} {what(record)} a year hold today's abundance of "
        f"{with_interval(record, today)} {words.moment(record)}; the greatest yield is {with_interval(record, msy)}, "
        f"at an abundance of {with_interval(record, summary.spreads['msy_abundance'])}."
    )
    if take is None:
        missing = "No present removals are on record." if summary.present_removals is None else _SECRET
        return f"{told} {missing} {_BANDS}"
    told += f" Present total removals, losses included, are {with_interval(record, take)}."
    if summary.above_msy_rate is not None:
        above = words.probability(summary.above_msy_rate)
        told += f" The chance that they are above the rate of greatest yield is {above}."
    return f"{told} {_BANDS}"
