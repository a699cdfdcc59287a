"""Rates: the table of draws, one row a state of nature that the evidence allows."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import pandas as pd

from harvest import __version__
from harvest.errors import RatesError
from harvest.kernels.growth import growth_array
from harvest.population import BY_NAME, by_draw
from harvest.rates.losses import removals_factor, total_removals
from harvest.record.model import Level, Objectives

#: The columns of the table, with their units.
COLUMNS = {
    "curve": "name of the growth curve",
    "r": "growth rate, per year (NaN for the Gompertz map)",
    "K": "carrying capacity, in the record's unit",
    "shape": "θ, b, A/K or adult survival (NaN where the curve has none)",
    "sigma": "process noise, standard deviation of log",
    "sigma_demo": "demographic noise, standard deviation of log at one animal",
    "rho": "autocorrelation of the environment",
    "bias": "count = bias × abundance",
    "wounding": "wounding loss per retrieved animal",
    "unreported": "unreported take, ratio to the legal take",
    "other": "other human-caused deaths a year, in the record's unit",
    "abundance": "start of the first quota season, in the record's unit",
    "counted": "latest abundance at the count's moment before that season's take, in the record's unit",
    "weather": "standard normal of the environment in the year before (0 where none is known)",
}


def curve_codes(table: pd.DataFrame) -> np.ndarray:
    """Kernel code of each draw's growth curve, int64, shape (draws,).

    Raises
    ------
    RatesError
        On a curve that the program does not know.
    """
    names = pd.Categorical(table["curve"], categories=list(BY_NAME))
    positions = np.asarray(names.codes)
    if (positions < 0).any():
        unknown = sorted({str(n) for n in table["curve"][positions < 0]})
        raise RatesError(f"unknown growth curve {', '.join(unknown)}: choose among {', '.join(BY_NAME)}")
    return np.array([c.code for c in BY_NAME.values()], dtype=np.int64)[positions]


@dataclass(frozen=True)
class Rates:
    """Draws of everything uncertain; what comes after takes this and does not care where it came from.

    Attributes
    ----------
    table : DataFrame
        One row a draw, columns as in :data:`COLUMNS`; rows of one curve stand together.
    recent : ndarray, shape (lag, draws)
        Abundance at the count's moment in the ``lag`` years before the first quota year, oldest first (NaN
        where the count is on record or was not made).
    origin : str
        "stated" or "fitted".
    seed : int
    first_year : int
        The first quota year.
    count_year : int
        Year of the absolute count that the abundance starts from.
    count_survey : str
    carried : bool
        Whether ``weather`` is known from the years between the count and the quota.
    notes : tuple of str
        What a reader must know (a survey that was not used, ranges cut at their domain).
    record_digest : str
    version : str
    """

    table: pd.DataFrame
    recent: np.ndarray
    origin: str
    seed: int
    first_year: int
    count_year: int
    count_survey: str
    carried: bool
    notes: tuple[str, ...]
    record_digest: str
    version: str = field(default=__version__)

    def __len__(self) -> int:
        return len(self.table)

    def column(self, name: str) -> np.ndarray:
        """One column as a contiguous float64 array, shape (draws,)."""
        return np.ascontiguousarray(self.table[name].to_numpy(float))

    @property
    def codes(self) -> np.ndarray:
        """Kernel code of each draw's growth curve, int64, shape (draws,)."""
        return curve_codes(self.table)

    @property
    def factor(self) -> np.ndarray:
        """Total removals per unit of legal take, without the other deaths: 1 + wounding + unreported."""
        return removals_factor(self.table)

    def total_removals(self, legal_take: np.ndarray | float) -> np.ndarray:
        """Total removals that a legal take brings, shape (draws,) or as broadcast."""
        return total_removals(self.table, legal_take)

    def legal_take(self, removals: np.ndarray | float) -> np.ndarray:
        """The legal take that brings these total removals, at least 0; shape (draws,) or as broadcast."""
        return np.asarray(np.maximum(0.0, (removals - self.column("other")) / self.factor))

    def closed_form(self, quantity: str) -> np.ndarray:
        """``msy``, ``peak`` (both need r, K, shape) or ``greatest_growth`` (r, shape) of each draw."""
        r, k, s = self.column("r"), self.column("K"), self.column("shape")
        return by_draw(self.codes, quantity, *((r, s) if quantity == "greatest_growth" else (r, k, s)))

    def growth(self, n: np.ndarray) -> np.ndarray:
        """g(N) of each draw at an abundance of its own, shape (draws,)."""
        return growth_array(self.codes, n, self.column("r"), self.column("K"), self.column("shape"))

    def step_slope(self, n: np.ndarray) -> np.ndarray:
        """Slope 1 + g'(N) of each draw's yearly step at an abundance of its own, shape (draws,)."""
        r, k, s = self.column("r"), self.column("K"), self.column("shape")
        return 1.0 + by_draw(self.codes, "slope", n, r, k, s)

    def level(self, level: Level | None, absent: float) -> np.ndarray:
        """An abundance level draw by draw: absolute, or a fraction of each draw's K; ``absent`` for None."""
        if level is None:
            return np.full(len(self), absent)
        return level.value * self.column("K") if level.of_capacity else np.full(len(self), level.value)

    def limit_level(self, objectives: Objectives) -> np.ndarray:
        """The lower limit draw by draw; the collapse level stands in where none is stated."""
        limit = self.level(objectives.limit, np.nan)
        return np.where(np.isnan(limit), self.collapse_level(objectives.collapse), limit)

    def collapse_level(self, level: Level | None) -> np.ndarray:
        """The collapse level: the user's, else 10% of K (Worm et al. 2009) or a higher Allee threshold."""
        if level is not None:
            return self.level(level, 0.0)
        k = self.column("K")
        threshold = np.where(self.codes == BY_NAME["allee"].code, self.column("shape") * k, 0.0)
        return np.maximum(0.1 * k, threshold)
