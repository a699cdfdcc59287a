"""This year's abundance: from the latest usable absolute count, through the recorded removals, to the quota.

In a short season a count sees X (before) or what the take leaves (after); in an all-year season X. From there
each draw follows the yearly step with the removals on record (times its losses) and its own noise.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
import pandas as pd
from scipy import special

from harvest.errors import RatesError
from harvest.kernels.growth import growth_array
from harvest.rates.distributions import DOMAINS, quantile
from harvest.rates.streams import stream
from harvest.rates.table import Rates, curve_codes
from harvest.record.model import Record, Survey


@dataclass(frozen=True)
class AbsoluteCount:
    """An absolute count with its survey, its place in the history and its CV; zero is "below the detection limit"."""

    survey: Survey
    row: int
    count: float
    cv: float


def absolute_counts(record: Record) -> dict[int, AbsoluteCount]:
    """Absolute counts with a CV, by year: of several in one year one above zero, then the one with the smallest CV."""
    found: dict[int, AbsoluteCount] = {}
    for survey in record.surveys:
        if survey.kind == "absolute":
            for row, (value, cv) in enumerate(zip(survey.values, survey.cvs, strict=True)):
                if value is not None and cv is not None:
                    mine, year = AbsoluteCount(survey, row, value, cv), record.history.years[row]
                    rival = found.get(year)
                    if rival is None or (mine.count <= 0.0, cv) < (rival.count <= 0.0, rival.cv):
                        found[year] = mine
    return found


def latest_usable_count(record: Record) -> AbsoluteCount:
    """The latest of :func:`absolute_counts` above zero.

    Raises
    ------
    RatesError
        If the record holds none.
    """
    usable = {year: count for year, count in absolute_counts(record).items() if count.count > 0.0}
    if not usable:
        raise RatesError(
            "the record holds no usable absolute count (a count above zero with a CV): this year's abundance "
            "cannot be told from an index or from nothing. Add one, or wait for the fit to the history"
        )
    return usable[max(usable)]


def zero_counts_since(record: Record, usable: AbsoluteCount) -> tuple[str, ...]:
    """A note for each absolute count of zero that is later than the count that is used."""
    used = record.history.years[usable.row]
    return tuple(
        f"the {c.survey.name} of {year} found none (fewer than {c.survey.detection_limit or 1:g}), and cannot be used: "
        f"abundance here rests on the count of {used} and may be far too high"
        for year, c in sorted(absolute_counts(record).items())
        if year > used and c.count <= 0.0
    )


def animals_per_unit(record: Record) -> float:
    """Animals per unit of abundance: 1, or by body mass (kg) where the unit is tonnes."""
    if record.unit == "animals" or record.life.body_mass is None:
        return 1.0
    return 1000.0 / record.life.body_mass


def approach(record: Record, table: pd.DataFrame, seed: int, notes: tuple[str, ...]) -> Rates:
    """Add ``bias``, ``abundance``, ``counted`` and ``weather`` to a table of rates and make it Rates."""
    usable = latest_usable_count(record)
    draws, table = len(table), table.copy()
    u = special.ndtr(stream(seed, f"bias of {usable.survey.name}").standard_normal(draws))
    table["bias"] = quantile(usable.survey.bias, u, DOMAINS["bias"])
    tau = math.sqrt(math.log1p(usable.cv**2))
    z = stream(seed, "latest count").standard_normal(draws)
    seen = usable.count / table["bias"].to_numpy() * np.exp(tau * z)

    walk = _Walk(record, table, seed)
    count_year, seen_after = record.history.years[usable.row], usable.survey.when == "after"
    after = record.season == "short" and record.count_when == "after"
    at_count: dict[int, np.ndarray] = {count_year: seen} if seen_after == after else {}
    abundance = walk.grow(seen, count_year) if seen_after else seen
    for year in range(count_year + 1 if seen_after else count_year, record.quota_year):
        start = abundance
        left, abundance = walk.year(start, year)
        at_count[year] = left if after else start
    last = record.quota_year - 1 if after else record.quota_year
    if not after:
        at_count[last] = abundance
    table["abundance"] = abundance
    table["counted"] = at_count.get(last, seen)
    table["weather"] = walk.weather if walk.weather is not None else np.zeros(draws)
    nothing = np.full(draws, np.nan)
    recent = [at_count.get(record.quota_year - back, nothing) for back in range(record.lag, 0, -1)]
    return Rates(
        table=table,
        recent=np.array(recent).reshape(record.lag, draws),
        origin="stated",
        seed=seed,
        first_year=record.quota_year,
        count_year=count_year,
        count_survey=usable.survey.name,
        carried=walk.weather is not None,
        notes=(*notes, *zero_counts_since(record, usable)),
        record_digest=record.digest(),
    )


class _Walk:
    """The yearly step over the years between the count and the quota, all draws at once."""

    def __init__(self, record: Record, table: pd.DataFrame, seed: int):
        self.record, self.table, self.seed = record, table, seed
        self.codes = curve_codes(table)
        self.rates = [table[name].to_numpy(float) for name in ("r", "K", "shape")]
        self.weather: np.ndarray | None = None
        self.per_unit = animals_per_unit(record)

    def removals(self, year: int) -> np.ndarray:
        """Total removals of a year on record, draw by draw."""
        history = self.record.history
        reported = dict(zip(history.years, history.removals, strict=True)).get(year)
        if reported is None:
            raise RatesError(
                f"removals of {year} are missing: each draw is projected from the count through every year "
                f"to the quota of {self.record.quota_year}. Enter the removals of {year} (or the best estimate)"
            )
        t = self.table
        return np.asarray(reported * (1.0 + t["wounding"] + t["unreported"]) + t["other"])

    def grow(self, base: np.ndarray, year: int) -> np.ndarray:
        """What ``base`` becomes by the next season: S(base)·Z, short season."""
        step = np.maximum(0.0, base + growth_array(self.codes, base, *self.rates))
        return self._environment(step, base, year)

    def year(self, start: np.ndarray, year: int) -> tuple[np.ndarray, np.ndarray]:
        """One recorded year from the season's start: (what the take left, next season's start)."""
        wanted = self.removals(year)
        if self.record.season == "short":
            left = start - np.minimum(wanted, start)
            return left, self.grow(left, year)
        step = np.maximum(0.0, start + growth_array(self.codes, start, *self.rates))
        return start, self._environment(step - np.minimum(wanted, step), start, year)

    def _environment(self, step: np.ndarray, grown: np.ndarray, year: int) -> np.ndarray:
        t = self.table
        rho, sigma, demo = (t[name].to_numpy(float) for name in ("rho", "sigma", "sigma_demo"))
        fresh = stream(self.seed, f"environment {year}").standard_normal(len(t))
        if self.weather is None:
            self.weather = fresh
        else:
            self.weather = rho * self.weather + np.sqrt(1.0 - rho * rho) * fresh
        own = stream(self.seed, f"demography {year}").standard_normal(len(t))
        spread = demo / np.sqrt(np.maximum(grown * self.per_unit, 1.0))
        half = 0.5 if self.record.noise == "mean one" else 0.0
        after = step * np.exp(sigma * self.weather + spread * own - half * (sigma**2 + spread**2))
        gone = (demo > 0.0) & (after * self.per_unit < 1.0)
        return np.where(gone, 0.0, after)
