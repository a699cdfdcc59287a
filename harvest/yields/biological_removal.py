"""Potential biological removal (Wade 1998): a bound on all human-caused deaths from one count."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from harvest.errors import SettingsError
from harvest.rates import Rates
from harvest.rates.approach import latest_usable_count, stated_bias
from harvest.record.model import Record

#: Standard normal value of the 20th percentile, as printed by Wade (1998).
Z20 = 0.842


@dataclass(frozen=True)
class BiologicalRemoval:
    """Potential biological removal and what it is made of.

    ``value`` = N_min × ½ R_max × F_R, in the record's unit a year; ``n_best`` the latest count over its bias,
    ``n_min`` the 20th percentile of its lognormal, ``r_max`` a year, ``recovery_factor`` F_R, ``year`` of the
    count.
    """

    value: float
    n_best: float
    cv: float
    n_min: float
    r_max: float
    recovery_factor: float
    year: int


def minimum_abundance(n_best: float, cv: float) -> float:
    """N_min = N / exp(0.842 √ln(1 + CV²)): the 20th percentile of a lognormal (Wade 1998, eq. 4)."""
    return n_best / math.exp(Z20 * math.sqrt(math.log1p(cv * cv)))


def potential_biological_removal(n_min: float, r_max: float, recovery_factor: float) -> float:
    """PBR = N_min × ½ R_max × F_R (Wade 1998, doi:10.1111/j.1748-7692.1998.tb00688.x).

    Raises
    ------
    SettingsError
        Recovery factor outside 0.1..1, or a negative abundance or growth.
    """
    if not 0.1 <= recovery_factor <= 1.0:
        raise SettingsError(f"recovery factor {recovery_factor:g} is not allowed: give 0.1 to 1")
    if n_min < 0.0 or r_max < 0.0:
        raise SettingsError(f"abundance {n_min:g} and growth {r_max:g} must not be negative")
    return n_min * 0.5 * r_max * recovery_factor


def biological_removal(record: Record, rates: Rates) -> BiologicalRemoval:
    """Potential biological removal of a record: R_max is the median greatest per-head growth of the draws.

    Where that growth is unbounded (Fox, Gompertz) it is the growth at the record's stated low abundance.
    """
    usable = latest_usable_count(record)
    growth = rates.closed_form("greatest_growth")
    low = record.low_abundance * rates.column("K")
    at_low = rates.growth(low) / low
    r_max = float(np.median(np.where(np.isinf(growth), at_low, growth)))
    n_best = usable.count / stated_bias(usable.survey)
    n_min = minimum_abundance(n_best, usable.cv)
    factor = record.objectives.recovery_factor
    value = potential_biological_removal(n_min, r_max, factor)
    year = record.history.years[usable.row]
    return BiologicalRemoval(value, n_best, usable.cv, n_min, r_max, factor, year)
