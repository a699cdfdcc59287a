"""The lookup card of a rule: for each band of the next count, the quota from the band's lower edge."""

from __future__ import annotations

import math

import numpy as np
import pandas as pd

from harvest.futures.rounding import round_down, round_up
from harvest.futures.rules import Rule
from harvest.rates import Rates
from harvest.record.model import Record

COLUMNS = ["when", "count_from", "count_below", "quota", "share_of_last"]
#: Bands to aim at; the step is the next of 1, 2, 2.5, 3, 4 or 5 times a power of ten.
BANDS = 16


def nice_step(span: float, bands: int = BANDS) -> float:
    """A round step that cuts ``span`` into about ``bands`` parts."""
    raw = span / bands
    power = 10.0 ** math.floor(math.log10(raw))
    return next(m * power for m in (1.0, 2.0, 2.5, 3.0, 4.0, 5.0, 10.0) if m * power >= raw * (1.0 - 1e-9))


def band_edges(record: Record, rates: Rates, rule: Rule, bias: float) -> list[float]:
    """Lower edges of the bands of a raw count: round steps, and where the rule itself bends."""
    top = 1.3 * bias * float(np.quantile(rates.column("counted"), 0.95))
    given = rule.named_settings()
    bends = [bias * given[name] for name in ("lower", "upper", "escapement") if name in given]
    counts = [v for survey in record.surveys if survey.kind == "absolute" for v in survey.values if v is not None]
    top = max([top, *(1.2 * b for b in bends)]) or max([*counts, 1.0])
    step = nice_step(top)
    if record.unit == "animals":
        step = max(1.0, math.ceil(step))
        bends = [float(math.ceil(b - 1e-9)) for b in bends]
    steps = [i * step for i in range(math.ceil(top / step))]
    edges = sorted({*steps, *bends})
    return [e for e in edges if e in bends or all(abs(e - b) > 0.2 * step for b in bends) or e == 0.0]


def stopping_count(record: Record, rates: Rates, question: str, bias: float) -> float | None:
    """The count under which a constant quota stops: the limit, or the ceiling that a cull serves; None for none.

    A level that is a fraction of carrying capacity is taken at the median over draws. A recovery goes on below
    the limit, so it has none.
    """
    aims = record.objectives
    level = {"limit": aims.limit, "reduction": aims.ceiling}.get(question)
    if level is None:
        return None
    return round_up(bias * float(np.median(rates.level(level, 0.0))), record.unit)


def lookup_card(record: Record, rates: Rates, rule: Rule, question: str, bias: float) -> pd.DataFrame:
    """The lookup card.

    Parameters
    ----------
    question : {"limit", "recovery", "reduction"}
        What a constant quota was to achieve: it decides under which count the quota stops.
    bias : float
        What a raw count is divided by to estimate abundance.

    Returns
    -------
    DataFrame
        ``when`` ("count" or "no count made"), ``count_from``, ``count_below`` (NaN for "and above"; both NaN
        without a count), ``quota`` (NaN where it is a share of the last), ``share_of_last`` (only without a
        count). Bands with the same quota are joined.
    """
    if not rule.feedback:
        quota, stop = rule.settings[0], stopping_count(record, rates, question, bias)
        bands = [(0.0, np.nan, quota)] if stop is None or quota == 0.0 else [(0.0, stop, 0.0), (stop, np.nan, quota)]
        rows = [("count", *band, np.nan) for band in bands]
        return pd.DataFrame([*rows, ("no count made", np.nan, np.nan, quota, np.nan)], columns=COLUMNS)
    edges = band_edges(record, rates, rule, bias)
    quotas = [round_down(float(q), record.unit) for q in rule.quota(np.array(edges) / bias)]
    joined: list[tuple[float, float, float]] = []
    for edge, upper, quota in zip(edges, [*edges[1:], np.nan], quotas, strict=True):
        if joined and joined[-1][2] == quota:
            joined[-1] = (joined[-1][0], upper, quota)
        else:
            joined.append((edge, upper, quota))
    rows = [("count", *band, np.nan) for band in joined]
    return pd.DataFrame([*rows, ("no count made", np.nan, np.nan, np.nan, rule.without_count)], columns=COLUMNS)
