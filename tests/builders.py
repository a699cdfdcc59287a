"""Records and rates made by hand, so that no test of the arithmetic depends on files."""

from __future__ import annotations

from typing import Any

import numpy as np
import pandas as pd

from harvest.rates import Rates
from harvest.record.model import (
    CurveChoice,
    Distribution,
    History,
    Losses,
    Objectives,
    Record,
    Survey,
    fixed,
)


def spread(kind: str, **parameters: float) -> Distribution:
    return Distribution(kind, tuple((k, float(v)) for k, v in parameters.items()))


def make_survey(values: dict[int, float], years: tuple[int, ...], cv: float = 0.2, **more: Any) -> Survey:
    counts = tuple(values.get(y) for y in years)
    cvs = more.pop("cvs", {})
    return Survey(
        **{"name": "count", "column": "count", "kind": "absolute", "when": "before", "cv": cv}
        | {
            "values": counts,
            "cvs": tuple(None if c is None else cvs.get(y, cv) for y, c in zip(years, counts, strict=True)),
        }
        | more
    )


def make_record(
    season: str = "short",
    when: str | None = None,
    *,
    counts: dict[int, float] | None = None,
    removals: dict[int, float | None] | None = None,
    years: tuple[int, ...] = (2020,),
    cv: float = 0.2,
    bias: Distribution | None = None,
    rates: dict[str, Distribution] | None = None,
    curve: str = "logistic",
    shape: Distribution | None = None,
    surveys: tuple[Survey, ...] | None = None,
    **more: Any,
) -> Record:
    """One absolute count of 1,000 in 2020 (nothing taken), r 0.3 and K 1,500 exactly, unless said otherwise."""
    when = when or {"short": "before", "all year": "start"}[season]
    counts = {years[-1]: 1000.0} if counts is None else counts
    taken = {} if removals is None else removals
    given = {"growth_rate": fixed(0.3), "carrying_capacity": fixed(1500.0)} | (rates or {})
    survey = make_survey(counts, years, cv, when=when, bias=bias or fixed(1.0))
    choice = CurveChoice(curve, 1.0, (("shape", shape),) if shape is not None else ())
    return Record(
        **{"name": "Test herd", "unit": "animals", "lag": 1 if when == "after" else 0}
        | {"season": season, "count_when": when}
        | {"history": History(years, tuple(taken.get(y) for y in years))}
        | {"surveys": (survey,) if surveys is None else surveys}
        | {"curves": (choice,), "rates": tuple(given.items()), "objectives": Objectives(), "losses": Losses()}
        | more
    )


def make_rates(
    curve: str | list[str] = "logistic",
    draws: int | None = None,
    *,
    recent: np.ndarray | None = None,
    first_year: int = 2021,
    count_year: int = 2020,
    carried: bool = False,
    seed: int = 0,
    **columns: Any,
) -> Rates:
    """Rates with every column stated or at a plain default (K 1,000, r 0.3, no noise, abundance 600)."""
    plain = {"r": 0.3, "K": 1000.0, "shape": np.nan, "sigma": 0.0, "sigma_demo": 0.0, "rho": 0.0, "bias": 1.0}
    plain |= {"wounding": 0.0, "unreported": 0.0, "other": 0.0, "abundance": 600.0, "weather": 0.0}
    given = plain | columns
    given.setdefault("counted", given["abundance"])
    n = draws or max(np.size(v) for v in [*given.values(), curve])
    table = pd.DataFrame({k: np.broadcast_to(np.asarray(v, float), n).copy() for k, v in given.items()})
    table.insert(0, "curve", np.broadcast_to(np.asarray(curve, object), n))
    return Rates(
        table=table,
        recent=np.zeros((0, n)) if recent is None else np.atleast_2d(recent),
        origin="stated",
        seed=seed,
        first_year=first_year,
        count_year=count_year,
        count_survey="count",
        carried=carried,
        notes=(),
        record_digest="none",
    )
