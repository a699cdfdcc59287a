"""This year's abundance: from the latest usable absolute count, through the recorded removals, to the quota.

In a short season a count sees X (before) or what the take leaves (after); in an all-year season X. Absolute
counts are all made at the record's moment. From there each draw follows the yearly step with the removals on
record (times its losses) and its own noise.
"""

from __future__ import annotations

import math

import numpy as np
import pandas as pd
from scipy import special

from harvest.errors import RatesError
from harvest.kernels.growth import growth_array
from harvest.rates.distributions import DOMAINS, quantile
from harvest.rates.losses import total_removals
from harvest.rates.streams import stream
from harvest.rates.table import Rates, curve_codes
from harvest.record.counts import AbsoluteCount, absolute_counts, latest_absolute_count
from harvest.record.model import Record, Survey

__all__ = [
    "AbsoluteCount",
    "absolute_counts",
    "animals_per_unit",
    "approach",
    "latest_usable_count",
    "stated_bias",
    "zero_counts_since",
]
#: Share of draws that the recorded removals may empty before a note tells of it.
_EMPTIED = 0.01


def latest_usable_count(record: Record) -> AbsoluteCount:
    """The record's :func:`latest_absolute_count`.

    Raises
    ------
    RatesError
        If the record holds none.
    """
    usable = latest_absolute_count(record)
    if usable is None:
        raise RatesError(
            f"the record holds no usable absolute count (a count above zero with a CV, known by the quota of "
            f"{record.quota_year}): this year's abundance cannot be told from an index or from nothing. Add one, "
            "or wait for the fit to the history"
        )
    return usable


def stated_bias(survey: Survey) -> float:
    """What a survey's counts are divided by: the median of its stated bias."""
    return float(quantile(survey.bias, np.array([0.5]), DOMAINS["bias"])[0])


def zero_counts_since(record: Record, usable: AbsoluteCount) -> tuple[str, ...]:
    """A note for each absolute count of zero that is later than the count that is used."""
    used = record.history.years[usable.row]
    return tuple(
        f"an absolute count of zero in {year} (fewer than {c.survey.detection_limit or 1:g}) cannot be used: "
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
    """Add ``bias``, ``abundance``, ``counted`` and ``weather`` to a table of rates and make it Rates.

    Raises
    ------
    RatesError
        No usable absolute count, or one at another moment than the record's; removals missing on the way, or
        so great that no draw has anything left.
    """
    usable = latest_usable_count(record)
    draws, table = len(table), table.copy()
    u = special.ndtr(stream(seed, f"bias of {usable.survey.name}").standard_normal(draws))
    table["bias"] = quantile(usable.survey.bias, u, DOMAINS["bias"])
    tau = math.sqrt(math.log1p(usable.cv**2))
    z = stream(seed, "latest count").standard_normal(draws)
    seen = usable.count / table["bias"].to_numpy() * np.exp(tau * z)

    walk = _Walk(record, table, seed)
    count_year, after = record.history.years[usable.row], record.count_when == "after"
    if usable.survey.when != record.count_when:
        raise RatesError(
            f'the absolute count of {count_year} is made "{usable.survey.when}", and the record tells abundance '
            f'"{record.count_when}": an absolute count happens at the record\'s count_when'
        )
    at_count = {count_year: seen}
    abundance = walk.grow(seen, count_year) if after else seen
    for year in range(count_year + after, record.quota_year):
        start = abundance
        left, abundance = walk.year(start, year)
        at_count[year] = left if after else start
    if not after:
        at_count[record.quota_year] = abundance
    table["abundance"] = abundance
    table["counted"] = at_count[record.quota_year - after]
    table["weather"] = walk.weather if walk.weather is not None else np.zeros(draws)
    nothing = np.full(draws, np.nan)
    years = range(record.quota_year - record.lag, record.quota_year)
    recent = [at_count[year] if year >= count_year else nothing for year in years]
    return Rates(
        table=table,
        recent=np.array(recent).reshape(record.lag, draws),
        origin="stated",
        seed=seed,
        first_year=record.quota_year,
        count_year=count_year,
        count_survey=usable.survey.name,
        carried=walk.weather is not None,
        notes=(*notes, *zero_counts_since(record, usable), *_emptied(abundance, walk, count_year)),
        record_digest=record.digest(),
    )


def _emptied(abundance: np.ndarray, walk: _Walk, count_year: int) -> tuple[str, ...]:
    """A note where many draws have nothing left, and a refusal where none has.

    Raises
    ------
    RatesError
        Nothing is left in any draw.
    """
    gone, since = abundance <= 0.0, f"since the count of {count_year}"
    share, taken = float(gone.mean()), float((gone & walk.emptied).mean())
    if share == 1.0:
        why = f"removals on record {since} are more than any draw held"
        if taken < 1.0:
            why = f"{since}, removals on record took all there was in {taken:.0%} of draws, and the rest died out"
        raise RatesError(
            f"nothing is left by the season of {walk.record.quota_year} in any draw: {why}. "
            "Check the counts, the removals, the losses and the growth rates"
        )
    if share <= _EMPTIED:
        return ()
    told = f"in {share:.1%} of draws nothing is left by the season of {walk.record.quota_year}: "
    told += f"removals on record {since} took all there was"
    return (told if taken == share else f"{told} in {taken:.1%}, and in the others the population died out",)


class _Walk:
    """The yearly step over the years between the count and the quota, all draws at once."""

    def __init__(self, record: Record, table: pd.DataFrame, seed: int):
        self.record, self.table, self.seed = record, table, seed
        self.codes = curve_codes(table)
        self.rates = [table[name].to_numpy(float) for name in ("r", "K", "shape")]
        self.weather: np.ndarray | None = None
        self.per_unit = animals_per_unit(record)
        #: Draws of which some year's removals on record took everything.
        self.emptied = np.zeros(len(table), bool)

    def removals(self, year: int) -> np.ndarray:
        """Total removals of a year on record, draw by draw."""
        history = self.record.history
        reported = dict(zip(history.years, history.removals, strict=True)).get(year)
        if reported is None:
            quota_year = self.record.quota_year
            added = (
                f", in a row of its own, and state first_quota_year = {quota_year}" if year > history.years[-1] else ""
            )
            raise RatesError(
                f"removals of {year} are missing: each draw is projected from the count through every year "
                f"to the quota of {quota_year}. Enter the removals of {year} (or the best estimate){added}"
            )
        return total_removals(self.table, reported)

    def grow(self, base: np.ndarray, year: int) -> np.ndarray:
        """What ``base`` becomes by the next season: S(base)·Z, short season."""
        step = np.maximum(0.0, base + growth_array(self.codes, base, *self.rates))
        return self._environment(step, base, year)

    def year(self, start: np.ndarray, year: int) -> tuple[np.ndarray, np.ndarray]:
        """One recorded year from the season's start: (what the take left, next season's start)."""
        wanted = self.removals(year)
        if self.record.season == "short":
            left = self._take(start, wanted)
            return left, self.grow(left, year)
        step = np.maximum(0.0, start + growth_array(self.codes, start, *self.rates))
        return start, self._environment(self._take(step, wanted), start, year)

    def _take(self, there: np.ndarray, wanted: np.ndarray) -> np.ndarray:
        """What is left of what is there."""
        self.emptied |= (there > 0.0) & (wanted >= there)
        return there - np.minimum(wanted, there)

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
