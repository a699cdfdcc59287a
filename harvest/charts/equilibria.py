"""Equilibrium abundance against the legal quota: where a population settles, and below which it declines."""

from __future__ import annotations

import numpy as np
import pandas as pd

from harvest.charts import marks
from harvest.charts.axes import Axes, Axis, round_top
from harvest.charts.hiding import drawable
from harvest.charts.palette import ABUNDANCE, DARK, DASHED, DOTTED, INK, LIGHT, RISK, TAKE, Dash
from harvest.charts.phrases import abundance_title, amount, axis_what, what, with_interval
from harvest.charts.picture import Picture, assemble
from harvest.plan import words
from harvest.plan.spreads import FEW
from harvest.rates import Rates
from harvest.rates.spread import LEVEL_NAMES, Spread
from harvest.record.model import Record
from harvest.record.private import is_named
from harvest.yields import Thresholds
from harvest.yields.summary import present_take

#: Share of draws with equilibria below which the bands end; below ``FEW`` nothing is drawn.
HALF = 0.5


def draw_equilibria(record: Record, rates: Rates, thresholds: Thresholds, *, public: bool = False) -> Picture:
    """Both equilibria against a constant legal quota, with today's abundance at the examined quota.

    Bands and full lines are drawn while at least half of the draws have equilibria; beyond, thin medians of those
    that have them; nothing where fewer than one draw in twenty has.

    Parameters
    ----------
    public : bool
        Leave out what the record keeps private, for a file that others see: today's point where the examined
        quota is the latest reported removals and those are private.
    """
    secret = (
        public
        and is_named("history.removals", record.private)
        and thresholds.quota != record.present_quota
        and thresholds.quota == present_take(record)
    )
    record = drawable(record, public)
    branches = thresholds.branches
    today, fold = Spread.of(rates.column("counted")), thresholds.spreads["fold_quota"]
    sure, thin = branches[branches["share"] >= HALF], _thin(branches)
    axes = _axes(record, thresholds, today)
    layers = [marks.upright(axes, fold.median, RISK, DOTTED)]
    for name, colour, dash, text in (("upper", ABUNDANCE, None, "settles"), ("lower", RISK, DASHED, "declines below")):
        layers += _branch(axes, sure, thin, name, colour, dash)
        layers += _branch_label(axes, sure, name, colour, text)
    marked = [(fold.median, f"fold {amount(record, fold.median)}", RISK)]
    if not secret:
        quota = thresholds.quota
        layers += [
            marks.upright(axes, quota, TAKE),
            marks.whiskers(axes, [quota], [today.low90], [today.high90], INK),
            marks.points(axes, [quota], [today.median], INK, size=80),
        ]
        marked.append((quota, f"quota {amount(record, quota)}", TAKE))
        layers.append(_today_label(axes, record, thresholds, today.median))
    layers += marks.top_labels(axes, marked)
    return assemble(
        "equilibria",
        "Equilibrium abundance against legal quota",
        _sentence(record, thresholds, today, secret),
        [*layers, _hover(axes, record, branches[branches["share"] >= FEW])],
        _columns(branches),
    )


def _thin(branches: pd.DataFrame) -> pd.DataFrame:
    """Where fewer than half of the draws have equilibria, from the last quota where half have: one row overlaps."""
    few = branches[(branches["share"] < HALF) & (branches["share"] >= FEW)]
    before = branches[branches["share"] >= HALF].tail(1)
    return pd.concat([before, few]) if len(few) else few


def _axes(record: Record, thresholds: Thresholds, today: Spread) -> Axes:
    branches = thresholds.branches
    there = branches[branches["share"] >= HALF]
    highest = max(today.high90, float(there["upper_high90"].max()) if len(there) else 0.0)
    drawn = branches["quota"][branches["share"] >= FEW]
    reach = max(1.08 * float(drawn.max()) if len(drawn) else 0.0, 1.15 * thresholds.quota)
    x = Axis(f"Legal quota, {axis_what(record)} a year", 0.0, reach or float(branches["quota"].iloc[-1]))
    return Axes(x, Axis(abundance_title(record), 0.0, round_top(1.02 * highest)))


def _branch(
    axes: Axes, sure: pd.DataFrame, thin: pd.DataFrame, name: str, colour: str, dash: Dash
) -> list[marks.Layer]:
    """One equilibrium: bands and line, and beyond them a thin pale median."""
    x = sure["quota"].to_numpy()
    made = []
    if len(sure):
        low, high = sure[f"{name}_low90"].to_numpy(), sure[f"{name}_high90"].to_numpy()
        made.append(marks.band(axes, x, low, high, colour, LIGHT))
        low, high = sure[f"{name}_low50"].to_numpy(), sure[f"{name}_high50"].to_numpy()
        made.append(marks.band(axes, x, low, high, colour, DARK))
        made.append(marks.line(axes, x, sure[f"{name}_median"].to_numpy(), colour, dash))
    if len(thin):
        y = thin[f"{name}_median"].to_numpy()
        made.append(marks.line(axes, thin["quota"].to_numpy(), y, colour, dash, strokeWidth=1.2, opacity=0.55))
    return made


def _branch_label(axes: Axes, sure: pd.DataFrame, name: str, colour: str, text: str) -> list[marks.Layer]:
    """The branch's name near its start: the upper one's on its line, the lower one's above its band."""
    if not len(sure):
        return []
    width = axes.x.high - axes.x.low
    start, end = axes.x.low + 0.03 * width, axes.x.low + 0.25 * width
    place, column = (start, "upper_median") if name == "upper" else (end, "lower_high90")
    height = float(np.interp(place, sure["quota"], sure[column]))
    return [marks.label(axes, start, height, text, colour, dx=0, dy=-9)]


def _today_label(axes: Axes, record: Record, thresholds: Thresholds, today: float) -> marks.Layer:
    """Today's number beside its point: on the side without the fold, away from the line where it settles."""
    quota, fold = thresholds.quota, thresholds.spreads["fold_quota"].median
    share = quota / axes.x.high
    left = share > 0.75 or (fold > quota and fold - quota < 0.25 * axes.x.high and share > 0.2)
    side = {"align": "right", "dx": -9} if left else {"align": "left", "dx": 9}
    upper = thresholds.spreads["upper_equilibrium"]
    below = 12 if upper.share >= HALF and today < upper.median else -12
    return marks.label(axes, quota, today, f"today {amount(record, today)}", INK, dy=below, **side)


def _hover(axes: Axes, record: Record, there: pd.DataFrame) -> marks.Layer:
    told = {
        "Legal quota": [amount(record, v) for v in there["quota"]],
        "Settles at": [amount(record, v) for v in there["upper_median"]],
        "Declines below": [amount(record, v) for v in there["lower_median"]],
        "Draws with equilibria": [words.short_probability(v) for v in there["share"]],
    }
    return marks.hover(axes, there["quota"].to_numpy(), there["upper_median"].to_numpy(), told)


def _columns(branches: pd.DataFrame) -> list[tuple[str, str, np.ndarray]]:
    """The table: quantiles are left out where fewer than one draw in twenty has equilibria."""
    few = branches["share"].to_numpy() < FEW
    columns = [("Legal quota", "amount", branches["quota"].to_numpy())]
    columns.append(("Draws with equilibria", "share", branches["share"].to_numpy()))
    headings = ("90% from", "50% from", "median", "50% to", "90% to")
    for name, title in (("upper", "Settles at"), ("lower", "Declines below")):
        for level, heading in zip(LEVEL_NAMES, headings, strict=True):
            values = np.where(few, np.nan, branches[f"{name}_{level}"].to_numpy())
            columns.append((f"{title}, {heading}", "amount", values))
    return columns


def _sentence(record: Record, thresholds: Thresholds, today: Spread, secret: bool) -> str:
    s = thresholds.spreads
    told = (
        f"The fold lies at a legal quota of {with_interval(record, s['fold_quota'])} {what(record)} a year: above it "
        "no abundance holds."
    )
    if not secret:
        told += f" {_under_quota(record, thresholds)}"
    told += f" Today's abundance is {with_interval(record, today)} {words.moment(record)}."
    shares = thresholds.branches["share"]
    if (shares < HALF).any():
        told += (
            " Bands end where fewer than half of the draws have equilibria; thin lines beyond are of the draws that "
            "have them, down to 1 in 20."
        )
    return told


def _under_quota(record: Record, thresholds: Thresholds) -> str:
    """What the examined quota does."""
    quota, s = amount(record, thresholds.quota), thresholds.spreads
    upper, lower = s["upper_equilibrium"], s["lower_equilibrium"]
    beyond = f"the chance that {quota} is beyond the fold is {words.probability(thresholds.beyond_fold)}"
    if upper.share < FEW:
        return f"Under {quota} a year fewer than 1 draw in 20 has an equilibrium; {beyond}."
    which = "" if upper.share == 1.0 else f" (in the {words.short_probability(upper.share)} of draws with equilibria)"
    return (
        f"Under {quota} a year the population settles at {with_interval(record, upper)} and declines from below "
        f"{with_interval(record, lower)}{which}; {beyond}."
    )
