"""The record: what the manager knows, as frozen dataclasses.

Nothing here reads, writes or draws; see ``read.py``, ``write.py`` and ``check.py``.
Units: abundances and removals in the record's own unit (animals, or tonnes), rates per year, proportions 0..1.
"""

from __future__ import annotations

import hashlib
import json
from dataclasses import asdict, dataclass, field
from typing import Any

FORMAT = 1
UNITS = ("animals", "tonnes")
SEASONS = ("short", "all year")
#: When a count happens: before or after a short season; at the start of an all-year season's year, or as its mean.
COUNT_MOMENTS = {"short": ("before", "after"), "all year": ("start", "mean of year")}
#: The moments at which a record tells abundance: its absolute counts happen then, its limits are judged then.
RECORD_MOMENTS = {"short": ("before", "after"), "all year": ("start",)}
NOISE_CONVENTIONS = ("mean one", "median one")
CURVES = ("logistic", "theta-logistic", "fox", "gompertz", "allee", "ricker", "beverton-holt")
SURVEY_KINDS = ("absolute", "index")
RULES = ("fixed quota", "fixed share", "escapement", "ramp")
#: A rule's share of the last quota in a year without a count, unless stated.
WITHOUT_COUNT = 0.8


@dataclass(frozen=True)
class Distribution:
    """A range for one rate: a distribution by name with its named parameters.

    Attributes
    ----------
    kind : str
        "fixed" (value), "uniform" (low, high), "triangular" (low, mode, high), "normal" (mean, sd),
        "lognormal" (median, sd_log), "beta" (a, b) or "90% between" (low, high).
    parameters : tuple of (str, float)
        In the order given above.
    """

    kind: str
    parameters: tuple[tuple[str, float], ...]

    def __getitem__(self, name: str) -> float:
        return dict(self.parameters)[name]

    def __str__(self) -> str:
        values = dict(self.parameters)
        if self.kind == "fixed":
            return f"{values['value']:.10g}"
        if self.kind == "90% between":
            return f"90% between {values['low']:.10g} and {values['high']:.10g}"
        return f"{self.kind} ({', '.join(f'{k} {v:.10g}' for k, v in self.parameters)})"


def fixed(value: float) -> Distribution:
    """A rate known exactly."""
    return Distribution("fixed", (("value", float(value)),))


@dataclass(frozen=True)
class Level:
    """An abundance, absolute (in the record's unit) or as a fraction of each draw's carrying capacity."""

    value: float
    of_capacity: bool = False


@dataclass(frozen=True)
class Survey:
    """One survey: a column of the history.

    Attributes
    ----------
    name, column : str
        Shown name; column of the history file.
    kind : {"absolute", "index"}
    when : str
        One of ``COUNT_MOMENTS[season]``; "mean of year" for an index only.
    values : tuple of float or None
        One per history year; None is a year without a count.
    cvs : tuple of float or None
        Coefficient of variation per history year (None where there is no count).
    cv : float or None
        The constant CV, when the CVs come from one number and not a column.
    cv_column : str or None
        The column of the CVs, when there is one.
    bias : Distribution
        Count = bias × abundance on average (sightability below 1, double counting above 1).
    detection_limit : float or None
        A count of zero means "fewer than this".
    """

    name: str
    column: str
    kind: str
    when: str
    values: tuple[float | None, ...]
    cvs: tuple[float | None, ...]
    cv: float | None = None
    cv_column: str | None = None
    bias: Distribution = field(default_factory=lambda: fixed(1.0))
    detection_limit: float | None = None


@dataclass(frozen=True)
class History:
    """The yearly history: consecutive years, reported removals, free notes."""

    years: tuple[int, ...]
    removals: tuple[float | None, ...]
    notes: tuple[str, ...] = ()


@dataclass(frozen=True)
class CurveChoice:
    """One growth curve that the record allows, with its weight and the ranges that belong to it alone.

    ``rates`` may override ``growth_rate``, ``max_growth``, ``carrying_capacity`` or ``process_noise`` and
    holds the curve's own ``shape`` (θ of the theta-logistic, b of the Gompertz map, A/K of the Allee
    curve, adult survival of Ricker and Beverton–Holt).
    """

    name: str
    weight: float = 1.0
    rates: tuple[tuple[str, Distribution], ...] = ()


@dataclass(frozen=True)
class Correlation:
    """Spearman rank correlation between two rates."""

    first: str
    second: str
    value: float


@dataclass(frozen=True)
class LifeHistory:
    """Life-history facts, all optional: years, proportion a year, kilograms."""

    age_first_breeding: float | None = None
    adult_survival: float | None = None
    body_mass: float | None = None


@dataclass(frozen=True)
class ByYear:
    """An aim to be reached within ``years`` quota years with probability ``chance``."""

    years: int
    chance: float


@dataclass(frozen=True)
class Objectives:
    """What the quota must respect.

    ``tolerance`` is the accepted probability of ever falling below the limit within ``horizon`` quota years.
    """

    limit: Level | None = None
    target: Level | None = None
    ceiling: Level | None = None
    collapse: Level | None = None
    horizon: int = 20
    tolerance: float = 0.05
    recovery: ByYear | None = None
    reduction: ByYear | None = None
    plan_years: int = 5
    recovery_factor: float = 0.5


@dataclass(frozen=True)
class Losses:
    """From the legal take to all deaths that people cause.

    Total removals = legal take × (1 + wounding + unreported) + other. ``implementation_cv`` is the yearly
    lognormal error (mean one) of the legal take around the quota.
    """

    wounding: Distribution = field(default_factory=lambda: fixed(0.0))
    unreported: Distribution = field(default_factory=lambda: fixed(0.0))
    other: Distribution = field(default_factory=lambda: fixed(0.0))
    implementation_cv: float = 0.0


@dataclass(frozen=True)
class RuleChoice:
    """A harvest rule with its settings (absolute numbers); see ``harvest.futures.rules``."""

    name: str
    settings: tuple[tuple[str, float], ...] = ()


@dataclass(frozen=True)
class SurveyPlan:
    """The survey in the years ahead: its CV (None: that of the latest usable count) and the years between."""

    cv: float | None = None
    every: int = 1


@dataclass(frozen=True)
class Record:
    """All that the manager knows about one population.

    Attributes mirror the keys of ``record.toml``; ``rates`` holds the ranges shared by all curves, by name:
    ``growth_rate`` or ``max_growth`` (per year), ``carrying_capacity`` (unit), ``process_noise`` (sd of log),
    ``demographic_noise`` (sd of log at one animal), ``autocorrelation`` (-1..1).
    ``lag`` is the number of years from the count to the quota that it serves.
    """

    name: str
    unit: str
    season: str
    count_when: str
    lag: int
    history: History
    surveys: tuple[Survey, ...]
    curves: tuple[CurveChoice, ...]
    rates: tuple[tuple[str, Distribution], ...]
    species: str = ""
    place: str = ""
    first_quota_year: int | None = None
    present_quota: float | None = None
    noise: str = "mean one"
    low_abundance: float = 0.05
    correlations: tuple[Correlation, ...] = ()
    life: LifeHistory = field(default_factory=LifeHistory)
    objectives: Objectives = field(default_factory=Objectives)
    losses: Losses = field(default_factory=Losses)
    rule: RuleChoice | None = None
    survey_plan: SurveyPlan = field(default_factory=SurveyPlan)
    plan: tuple[tuple[str, str], ...] = ()
    private: tuple[str, ...] = ()

    @property
    def counts_after(self) -> bool:
        """Whether counts see what a short season's take leaves."""
        return self.season == "short" and self.count_when == "after"

    @property
    def quota_year(self) -> int:
        """The first year that needs a quota.

        The stated ``first_quota_year``; else the last year of the history plus ``lag``, but never a year
        whose removals are already recorded.
        """
        if self.first_quota_year is not None:
            return self.first_quota_year
        taken = [y for y, h in zip(self.history.years, self.history.removals, strict=True) if h is not None]
        return max([self.history.years[-1] + self.lag, *(y + 1 for y in taken[-1:])])

    def digest(self) -> str:
        """SHA-256 of the record's content (not of the files' bytes): hexadecimal, 64 digits."""
        text = json.dumps(_same_zeros(asdict(self)), sort_keys=True, ensure_ascii=False, separators=(",", ":"))
        return hashlib.sha256(text.encode()).hexdigest()


def _same_zeros(value: Any) -> Any:
    """The same values with every negative zero made zero: equal records then have one digest."""
    if isinstance(value, dict):
        return {key: _same_zeros(inner) for key, inner in value.items()}
    if isinstance(value, list | tuple):
        return [_same_zeros(inner) for inner in value]
    return value + 0.0 if isinstance(value, float) else value
