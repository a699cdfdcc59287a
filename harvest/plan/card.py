"""The lookup card of a rule: for each band of the next count, the quota from the band's lower edge."""

from __future__ import annotations

import math

import numpy as np
import pandas as pd

from harvest.futures.rounding import round_down
from harvest.futures.rules import Rule
from harvest.rates import Rates
from harvest.record.model import Record

#: Bands to aim at; the step is the next of 1, 2, 2.5 or 5 times a power of ten.
BANDS = 16


def nice_step(span: float, bands: int = BANDS) -> float:
    """A round step that cuts ``span`` into about ``bands`` parts."""
    raw = span / bands
    power = 10.0 ** math.floor(math.log10(raw))
    return next(m * power for m in (1.0, 2.0, 2.5, 5.0, 10.0) if m * power >= raw * (1.0 - 1e-9))


def band_edges(record: Record, rates: Rates, rule: Rule, bias: float) -> list[float]:
    """Lower edges of the bands of a raw count: round steps, and where the rule itself bends."""
    top = 1.3 * bias * float(np.quantile(rates.column("counted"), 0.95))
    given = rule.named_settings()
    bends = [bias * given[name] for name in ("lower", "upper", "escapement") if name in given]
    top = max([top, *(1.2 * b for b in bends)])
    step = nice_step(top)
    if record.unit == "animals":
        step = max(1.0, math.ceil(step))
        bends = [float(math.ceil(b - 1e-9)) for b in bends]
    steps = [i * step for i in range(math.ceil(top / step))]
    edges = sorted({*steps, *bends})
    return [e for e in edges if e in bends or all(abs(e - b) > 0.2 * step for b in bends) or e == 0.0]


def lookup_card(record: Record, rates: Rates, rule: Rule, bias: float) -> pd.DataFrame:
    """The lookup card.

    Parameters
    ----------
    bias : float
        What a raw count is divided by to estimate abundance.

    Returns
    -------
    DataFrame
        ``count_from``, ``count_below`` (NaN for "and above"; both NaN for a year without a count), ``quota``
        (NaN without a count: see ``share_of_last``), ``share_of_last`` (share of the last quota, only without
        a count). Bands with the same quota are joined.
    """
    if not rule.feedback:
        return pd.DataFrame(
            [(0.0, np.nan, rule.settings[0], np.nan), (np.nan, np.nan, rule.settings[0], np.nan)],
            columns=["count_from", "count_below", "quota", "share_of_last"],
        )
    edges = band_edges(record, rates, rule, bias)
    quotas = [round_down(float(q), record.unit) for q in rule.quota(np.array(edges) / bias)]
    rows: list[tuple[float, float, float, float]] = []
    for edge, upper, quota in zip(edges, [*edges[1:], np.nan], quotas, strict=True):
        if rows and rows[-1][2] == quota:
            rows[-1] = (rows[-1][0], upper, quota, np.nan)
        else:
            rows.append((edge, upper, quota, np.nan))
    rows.append((np.nan, np.nan, np.nan, rule.without_count))
    return pd.DataFrame(rows, columns=["count_from", "count_below", "quota", "share_of_last"])
