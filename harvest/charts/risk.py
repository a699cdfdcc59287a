"""Risk against the legal quota: the stored curve, what is accepted, and the quota that is read off it."""

from __future__ import annotations

from typing import Any

import numpy as np

from harvest.charts import marks
from harvest.charts.axes import Axes, Axis, chance_axis
from harvest.charts.hiding import drawable
from harvest.charts.palette import ABUNDANCE, CEILING, DARK, DASHED, DOTTED, INK, REFERENCE, RISK, TAKE
from harvest.charts.phrases import amount, axis_what, limit_name, what
from harvest.charts.picture import Picture, assemble, with_layers
from harvest.futures.recommend import Criterion, Recommendation
from harvest.futures.risk import RiskCurve
from harvest.plan import words
from harvest.record.model import Record

#: Colour of each event, and what it is called: on the axis and as "the chance of ...".
EVENTS = {
    "limit": (RISK, "ever being below {level}"),
    "recovery": (ABUNDANCE, "being back above {level}"),
    "reduction": (CEILING, "being under {level}"),
}
_95 = 1.96


def draw_risk(
    record: Record,
    curve: RiskCurve,
    advice: Recommendation,
    *,
    marked_quota: float | None = None,
    public: bool = False,
) -> Picture:
    """The probability of the criterion's event against the legal quota, with its 95% Monte Carlo error.

    Parameters
    ----------
    marked_quota : float
        A quota to mark; a slider rather keeps the picture without it and calls :func:`mark_quota`.
    public : bool
        Leave out what the record keeps private, for a file that others see.

    Raises
    ------
    SettingsError
        A marked quota outside the curve.
    """
    shown, aim = drawable(record, public), advice.criterion
    p, se = curve.probability[aim.event][:, aim.year - 1], curve.se[aim.event][:, aim.year - 1]
    low, high = np.maximum(p - _95 * se, 0.0), np.minimum(p + _95 * se, 1.0)
    axes, colour = _axes(shown, curve, aim), EVENTS[aim.question][0]
    layers = [
        marks.band(axes, curve.quotas, low, high, colour, DARK),
        marks.level(axes, aim.bound, REFERENCE, DASHED),
        marks.line(axes, curve.quotas, p, colour),
        *_uprights(axes, shown, advice),
        *marks.end_labels(axes, [(aim.bound, _bound_words(aim), REFERENCE)]),
        marks.hover(
            axes,
            curve.quotas,
            p,
            {
                "Legal quota": [amount(shown, q) for q in curve.quotas],
                "Chance": [words.short_probability(v) for v in p],
                "Monte Carlo": [words.error(v) for v in se],
            },
        ),
    ]
    picture = assemble(
        "risk-against-quota",
        _title(aim, curve.quotas, p),
        _sentence(shown, aim, advice),
        layers,
        [
            ("Legal quota", "amount", curve.quotas),
            (f"Chance of {_event(shown, aim)}", "probability", p),
            ("Monte Carlo standard error", "error", se),
        ],
    )
    return picture if marked_quota is None else mark_quota(picture, shown, curve, aim, marked_quota)


def mark_quota(picture: Picture, record: Record, curve: RiskCurve, criterion: Criterion, quota: float) -> Picture:
    """The picture of :func:`draw_risk` with one quota marked and its chance written beside it; costs next to nothing.

    Raises
    ------
    SettingsError
        A quota outside the curve.
    """
    p, _ = curve.at(criterion.event, quota, criterion.year)
    record = drawable(record, public=False)
    axes = _axes(record, curve, criterion)
    text = f"{amount(record, quota)}: {words.short_probability(p)}"
    side = _free_side(axes, quota, p, curve, criterion)
    return with_layers(
        picture,
        [
            marks.upright(axes, quota, INK, DOTTED),
            marks.points(axes, [quota], [p], INK, size=80),
            marks.label(axes, quota, p, text, INK, fontWeight="bold", **side),
        ],
    )


def _free_side(axes: Axes, quota: float, p: float, curve: RiskCurve, aim: Criterion) -> dict[str, Any]:
    """Where the label of a mark does not lie on the curve: above it on its outer side, or well below its top."""
    ends = curve.probability[aim.event][[0, -1], aim.year - 1]
    share, rising = quota / axes.x.high, bool(ends[1] >= ends[0])
    high = p > 0.88 * axes.y.high
    left = share > 0.8 or (share > 0.2 and rising and not high)
    return {"align": "right" if left else "left", "dx": -9 if left else 9, "dy": 26 if high else -12}


def _axes(record: Record, curve: RiskCurve, aim: Criterion) -> Axes:
    p, se = curve.probability[aim.event][:, aim.year - 1], curve.se[aim.event][:, aim.year - 1]
    title = f"Chance of {_short_event(record, aim)} in {words.years(aim.year)}"
    x = Axis(f"Legal quota, {axis_what(record)} a year", 0.0, float(curve.quotas[-1]) or 1.0)
    return Axes(x, chance_axis(title, max(float((p + _95 * se).max()), aim.bound)))


def _short_event(record: Record, aim: Criterion) -> str:
    level = "the ceiling" if aim.question == "reduction" else limit_name(record)
    return EVENTS[aim.question][1].format(level=level)


def _event(record: Record, aim: Criterion) -> str:
    """The criterion's event with its level, as "the chance of …"."""
    ceiling = record.objectives.ceiling
    level = words.limit_words(record)
    if aim.question == "reduction" and ceiling is not None:
        level = words.level(record, ceiling)
    return f"{EVENTS[aim.question][1].format(level=level)} in {words.years(aim.year)}"


def _bound_words(aim: Criterion) -> str:
    return f"{'at least' if aim.at_least else 'tolerance'} {words.percent(aim.bound)}"


def _uprights(axes: Axes, record: Record, advice: Recommendation) -> list[marks.Layer]:
    """The recommended quota and the present one, one rule where they are the same."""
    present = None if advice.present is None else advice.present[0]
    name = "recommended" if advice.qualifies else "closure" if advice.quota == 0.0 else "largest examined"
    if present == advice.quota:
        name += " and present"
    made = [marks.upright(axes, advice.quota, TAKE, width=2.0)]
    marked = [(advice.quota, f"{name} {amount(record, advice.quota)}", TAKE)]
    if present is not None and present != advice.quota:
        made.append(marks.upright(axes, present, REFERENCE))
        marked.append((present, f"present {amount(record, present)}", REFERENCE))
    return made + marks.top_labels(axes, marked)


def _title(aim: Criterion, quotas: np.ndarray, p: np.ndarray) -> str:
    if aim.question == "reduction":
        return "Chance of getting under the ceiling, against legal quota"
    if aim.question == "recovery":
        return "Chance of recovery, against legal quota"
    return "Risk grows slowly, then all at once" if grows_suddenly(quotas, p) else "Risk against legal quota"


def grows_suddenly(quotas: np.ndarray, p: np.ndarray) -> bool:
    """Whether risk rises throughout, and from 5% to 50% within fewer quotas than it takes to reach 5%."""
    if p[0] >= 0.05 or p.max() < 0.5 or (np.diff(p) < -0.005).any():
        return False
    twentieth, half = np.interp([0.05, 0.5], np.maximum.accumulate(p), quotas)
    return bool(half - twentieth < twentieth)


def _sentence(record: Record, aim: Criterion, advice: Recommendation) -> str:
    quota = "Without a take" if advice.quota == 0.0 else f"With {amount(record, advice.quota)} {what(record)} a year"
    assumed = " (assumed: the record states no aim)" if aim.assumed else ""
    asked = (
        f"at least {words.percent(aim.bound)} is asked" if aim.at_least else f"{words.percent(aim.bound)} is accepted"
    )
    told = (
        f"{quota} the chance of {_event(record, aim)} is {words.probability(advice.probability)} "
        f"({words.error(advice.se)} Monte Carlo); {asked}{assumed}."
    )
    if not advice.qualifies:
        told += " No quota examined meets that."
    if advice.at_edge:
        told += " Even the largest quota examined meets that; more may."
    if advice.present is not None and advice.present[0] != advice.quota:
        present, p, _ = advice.present
        told += f" With the present quota of {amount(record, present)} it is {words.probability(p)}."
    if advice.quota != 0.0:
        told += f" Without a take it is {words.probability(advice.zero[1])}."
    return told + " The band is the 95% Monte Carlo error."
