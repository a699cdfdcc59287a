"""The one table of every key of ``record.toml``.

Reading, checking, writing, the commented template and every form derive from ``FIELDS``: to add a key, add a
row here and an attribute of the same name to the record.
"""

from __future__ import annotations

from typing import Any

from harvest.record.model import (
    CURVES,
    FORMAT,
    NOISE_CONVENTIONS,
    RULES,
    SEASONS,
    SURVEY_KINDS,
    UNITS,
    WITHOUT_COUNT,
)
from harvest.record.schema import (
    ABOVE_ZERO,
    CV_RANGE,
    FIRST_YEAR,
    HISTORY_FILE,
    INSIDE_0_1,
    INSIDE_MINUS_1_1,
    LAST_YEAR,
    NOISE_SD,
    PER_YEAR,
    PROPORTION,
    SHARE,
    ZERO_OR_MORE,
    Field,
    Interval,
    Section,
)

_RATES = "Rates of all curves"
SECTIONS: tuple[Section, ...] = (
    Section("", "The population.", label="Population"),
    Section("survey", "One table for each survey; further [[survey]] tables may follow.", True, 0, 50, True),
    Section(
        "curve",
        "One table for each growth curve that could be true; further [[curve]] tables may follow.",
        True,
        1,
        len(CURVES),
        True,
        label="Growth curve",
    ),
    Section("rates", "Ranges shared by all curves; each is a number, or a range of values.", shown=True, label=_RATES),
    Section("correlation", "Rank correlations between two rates.", True, 0, 50),
    Section("life", "Life-history facts, where known.", shown=True, label="Life history"),
    Section("objectives", "What the quota must respect.", shown=True),
    Section("losses", "From the legal take to all deaths that people cause.", shown=True),
    Section("rule", "The harvest rule to compare with a constant quota.", label="Harvest rule"),
    Section("survey_plan", "The survey in the years ahead."),
    Section("plan", "Texts for the written plan.", shown=True, label="Texts of the plan"),
    Section("private", "What is left out when the record is shared."),
)

_YEARS = "years"
_PER_YEAR = "per year"
#: Stands for animals or tonnes.
OWN_UNIT = "the record's unit"
_KEPT = "kept for the fit to the history, not used yet"
_SHAPED = ("theta-logistic", "gompertz", "allee", "ricker", "beverton-holt")
#: Adult survival: 0 is a population whose adults all die after breeding.
_SURVIVAL = Interval(0, 1, high_open=True)
_MAX_GROWTH = "Greatest growth per head per year (Fox, Gompertz: growth at low abundance)"


def _between(low: float, high: float) -> dict[str, Any]:
    return {"distribution": "90% between", "low": low, "high": high}


# fmt: off
FIELDS: tuple[Field, ...] = (
    Field("", "format", "whole number", "Version of this file format.", True, within=Interval(1, FORMAT),
          example=FORMAT),
    Field("", "name", "text", "Name of the population.", True, example="Example herd (invented)"),
    Field("", "species", "text", "Species.", default="", example="red deer"),
    Field("", "place", "text", "Where the population lives.", default="", example="Nowhere Valley"),
    Field("", "unit", "choice", "Unit of abundance, removals and quota.", True, choices=UNITS,
          example="animals", label="Counted in"),
    Field("", "season", "choice", "Whether the take falls in a short season or runs all year.", True,
          choices=SEASONS, example="short"),
    Field("", "count_when", "choice", "When the count happens: before or after a short season; at the "
          "start of an all-year season's year.", True,
          choices=("before", "after", "start"), example="before", label="When counts happen"),
    Field("", "lag", "whole number", "Years from the count to the quota that it serves.", True,
          within=Interval(0, 5), unit=_YEARS, example=0, label="Years from the count to its quota"),
    Field("", "history", "file name", "File of the yearly history.", default=HISTORY_FILE,
          example=HISTORY_FILE, shown=True),
    Field("", "first_quota_year", "whole number",
          "First year that needs a quota; left out, it follows from the history and the lag.",
          within=Interval(FIRST_YEAR, LAST_YEAR + 6), example=2026),
    Field("", "present_quota", "number", "The quota in force today.", within=ZERO_OR_MORE, unit=OWN_UNIT,
          example=90, shown=True),
    Field("", "noise", "choice", "Whether the environment's yearly factor has mean one or median one.",
          default="mean one", choices=NOISE_CONVENTIONS, example="mean one", label="Mean of the environment's factor"),

    Field("survey", "name", "text", "Name of the survey.", True, example="aerial count"),
    Field("survey", "column", "text", "Column of the history that holds the counts.", True,
          example="aerial_count", label="Column of the counts"),
    Field("survey", "kind", "choice", "Absolute (estimates abundance) or index (follows it).", True,
          choices=SURVEY_KINDS, example="absolute"),
    Field("survey", "when", "choice",
          "When this survey happens, where it differs from count_when; mean of year for an index only.",
          choices=("before", "after", "start", "mean of year"), example="before", label="When this survey happens"),
    Field("survey", "cv", "CV", "Coefficient of variation of every count, where it is always the same.",
          within=CV_RANGE, example=0.15, label="Coefficient of variation (CV)"),
    Field("survey", "cv_column", "text",
          "Column of the history that holds each count's coefficient of variation.", example="aerial_cv",
          shown=True, label="Column of the CVs"),
    Field("survey", "bias", "distribution", "Count divided by abundance, on average: below 1 where "
          "animals are missed, above 1 where some are counted twice.", default=1.0,
          within=Interval(0, 10, low_open=True), example=_between(0.8, 0.95), label="Bias: count divided by abundance"),
    Field("survey", "detection_limit", "number", "A count of zero means fewer than this.",
          within=ABOVE_ZERO, unit=OWN_UNIT, example=10),

    Field("curve", "name", "choice", "Growth curve.", True, choices=CURVES, example="logistic"),
    Field("curve", "weight", "number", "Weight of this curve against the others.", default=1.0,
          within=Interval(0, 1e6, low_open=True), example=1.0),
    Field("curve", "shape", "distribution", "Theta of the theta-logistic (above 0), b of the Gompertz "
          "map, A/K of the Allee curve (both between 0 and 1), or the yearly survival of adults without removals of "
          "Ricker and Beverton-Holt (from 0, where all die after breeding, to below 1).",
          within=Interval(0, 100), only_for=_SHAPED,
          needed_for=("theta-logistic", "allee"),
          within_for=(("theta-logistic", Interval(0, 100, low_open=True)), ("gompertz", INSIDE_0_1),
                      ("allee", INSIDE_0_1), ("ricker", _SURVIVAL), ("beverton-holt", _SURVIVAL)),
          example={"distribution": "triangular", "low": 1.0, "mode": 1.5, "high": 3.0}),
    Field("curve", "growth_rate", "distribution", "This curve's own growth rate r.", within=PER_YEAR,
          unit=_PER_YEAR, example=_between(0.2, 0.4)),
    Field("curve", "max_growth", "distribution", "This curve's own greatest growth per head.",
          within=PER_YEAR, unit=_PER_YEAR, example=_between(0.2, 0.4)),
    Field("curve", "carrying_capacity", "distribution", "This curve's own carrying capacity.",
          within=ABOVE_ZERO, unit=OWN_UNIT, example=_between(800, 1500)),
    Field("curve", "process_noise", "distribution", "This curve's own process noise.", within=NOISE_SD,
          unit="sd of log abundance", example=0.1),

    Field("rates", "growth_rate", "distribution",
          "Growth rate r of the curve; give this or max_growth, not both.", within=PER_YEAR,
          unit=_PER_YEAR, example=_between(0.2, 0.4), label="Growth rate at low abundance"),
    Field("rates", "max_growth", "distribution", f"{_MAX_GROWTH}; give this or growth_rate, not both.",
          within=PER_YEAR, unit=_PER_YEAR, example=_between(0.2, 0.4), shown=True,
          label="Greatest growth per head (max growth)"),
    Field("rates", "carrying_capacity", "distribution", "Abundance without removals.", within=ABOVE_ZERO,
          unit=OWN_UNIT, example=_between(800, 1500), shown=True),
    Field("rates", "process_noise", "distribution",
          "Good and bad years: standard deviation of log abundance from year to year.", within=NOISE_SD,
          unit="sd of log abundance", example={"distribution": "uniform", "low": 0.05, "high": 0.15},
          shown=True, label="Good and bad years (process noise)"),
    Field("rates", "demographic_noise", "distribution",
          "Chance births and deaths, which matter in small populations.", within=Interval(0, 20),
          unit="sd of log abundance at one animal", example=0.5),
    Field("rates", "autocorrelation", "distribution", "How far a good year follows a good year.",
          within=INSIDE_MINUS_1_1, example=0.2),
    Field("rates", "low_abundance", "proportion",
          "The low abundance at which max_growth of Fox and Gompertz is meant.", default=0.05,
          within=INSIDE_0_1, unit="fraction of carrying capacity", example=0.05,
          label="Low abundance meant by max growth"),

    Field("correlation", "between", "list of names", "The two rates.", True,
          example=["max_growth", "carrying_capacity"], label="Between"),
    Field("correlation", "value", "number", "Spearman rank correlation.", True, within=INSIDE_MINUS_1_1,
          example=-0.3, label="Rank correlation"),

    Field("life", "age_first_breeding", "number", f"Age at first breeding; {_KEPT}.",
          within=Interval(0, 200), unit=_YEARS, example=2),
    Field("life", "adult_survival", "proportion", f"Survival of adults without removals; {_KEPT}.",
          within=SHARE, unit=_PER_YEAR, example=0.9),
    Field("life", "body_mass", "number", "Mean body mass.", within=Interval(0, 1e6, low_open=True),
          unit="kg", example=80),

    Field("objectives", "limit", "level", "Abundance below which the population must not fall.",
          within=ABOVE_ZERO, unit=OWN_UNIT, example=300, shown=True, label="Limit: never below"),
    Field("objectives", "target", "level", "Abundance to aim for.", within=ABOVE_ZERO,
          unit=OWN_UNIT, example=600, label="Target: aim for"),
    Field("objectives", "ceiling", "level", "Upper bound of abundance that a cull serves.",
          within=ABOVE_ZERO, unit=OWN_UNIT, example=1000, label="Ceiling: hold below"),
    Field("objectives", "collapse", "level",
          "Abundance that counts as collapsed; left out, 10% of carrying capacity.", within=ABOVE_ZERO,
          unit=OWN_UNIT, example={"of_capacity": 0.1}, label="Counts as collapsed below"),
    Field("objectives", "horizon", "whole number", "Years over which risk is judged.", default=20,
          within=Interval(1, 200), unit=_YEARS, example=20, shown=True),
    Field("objectives", "tolerance", "proportion",
          "Accepted chance of ever falling below the limit within the horizon.", default=0.05,
          within=INSIDE_0_1, example=0.05, shown=True, label="Risk tolerance"),
    Field("objectives", "recovery", "years and chance",
          "Be back above the limit within so many years with this chance; needs limit.",
          example={"years": 10, "chance": 0.8}, label="Recovery: back above the limit"),
    Field("objectives", "reduction", "years and chance",
          "Be below the ceiling within so many years with this chance; needs ceiling.",
          example={"years": 5, "chance": 0.8}, label="Reduction: down below the ceiling"),
    Field("objectives", "plan_years", "whole number", "Years that the quota table covers.", default=5,
          within=Interval(1, 10), unit=_YEARS, example=5, label="Years in the quota table"),
    Field("objectives", "recovery_factor", "number", "Recovery factor of potential biological removal.",
          default=0.5, within=Interval(0.1, 1), example=0.5),

    Field("losses", "wounding", "distribution", "Animals lost to wounding for each one retrieved.",
          default=0.0, within=Interval(0, 10),
          example={"distribution": "triangular", "low": 0.03, "mode": 0.06, "high": 0.12}, shown=True,
          label="Wounding loss"),
    Field("losses", "unreported", "distribution", "Unreported take for each legal one.", default=0.0,
          within=Interval(0, 10), example={"distribution": "uniform", "low": 0.02, "high": 0.08},
          label="Unreported take"),
    Field("losses", "other", "distribution", "Other deaths that people cause, a year.", default=0.0,
          within=ZERO_OR_MORE, unit=OWN_UNIT, example=5, label="Other deaths caused by people"),
    Field("losses", "implementation_cv", "CV", "Yearly error of the legal take around the quota.",
          default=0.0, within=Interval(0, 2), example=0.1, label="Error of the take around the quota (CV)"),

    Field("rule", "name", "choice", "Harvest rule.", True, choices=RULES, example="fixed share"),
    Field("rule", "quota", "number", "Quota of a fixed quota.", within=ZERO_OR_MORE, unit=OWN_UNIT,
          example=50, only_for=("fixed quota",), needed_for=("fixed quota",)),
    Field("rule", "escapement", "number", "Abundance that is left in peace.", within=ZERO_OR_MORE,
          unit=OWN_UNIT, example=500, only_for=("escapement",), needed_for=("escapement",)),
    Field("rule", "lower", "number", "Count below which nothing is taken.", within=ZERO_OR_MORE,
          unit=OWN_UNIT, example=300, only_for=("ramp",), needed_for=("ramp",)),
    Field("rule", "upper", "number", "Count from which the full share is taken.", within=ABOVE_ZERO,
          unit=OWN_UNIT, example=600, only_for=("ramp",), needed_for=("ramp",)),
    Field("rule", "share", "proportion", "Share of the count to take.", within=SHARE,
          only_for=("fixed share", "ramp"), needed_for=("fixed share", "ramp"), example=0.1),
    Field("rule", "without_count", "proportion",
          f"Share of the last quota in a year without a count; left out, {WITHOUT_COUNT:g}.",
          within=PROPORTION, example=WITHOUT_COUNT),

    Field("survey_plan", "cv", "CV",
          "Coefficient of variation of the counts to come; left out, that of the latest count.",
          within=CV_RANGE, example=0.15, label="CV of the counts to come"),
    Field("survey_plan", "every", "whole number", "Years from one count to the next.", default=1,
          within=Interval(1, 20), unit=_YEARS, example=1, label="Years between counts"),

    Field("plan", "author", "text", "Who wrote the plan.", example="A. Nobody"),
    Field("plan", "office", "text", "The office that answers for it.", example="Office of Nowhere Valley"),
    Field("plan", "contact", "text", "How to reach it.", example="nobody@example.org"),
    Field("plan", "purpose", "long text", "What the management is for.",
          example="Keep the herd healthy and the forest growing.", shown=True),
    Field("plan", "background", "long text", "What a reader must know about the population.",
          example="Counted since 2020."),
    Field("plan", "methods", "long text", "How counts and removals were obtained.",
          example="Two flights each winter."),
    Field("plan", "review", "long text", "When and by whom the plan is looked at again.",
          example="Each spring, by the office."),

    Field("private", "fields", "list of names",
          "Names, surveys and texts that are left out of what the program writes for others.", True,
          example=["plan.author"], label="Kept private"),
)
# fmt: on

#: Columns of the history that ``private.fields`` may list.
HISTORY_NAMES = ("history.note", "history.removals")
#: Rates that a correlation may name.
CORRELATED = (
    "growth_rate",
    "max_growth",
    "carrying_capacity",
    "shape",
    "process_noise",
    "demographic_noise",
    "autocorrelation",
)


def fields_of(section: str) -> tuple[Field, ...]:
    """The fields of one section, in the order of the file."""
    return tuple(f for f in FIELDS if f.section == section)


def field_at(path: str) -> Field:
    """The field with a dotted path; KeyError for an unknown one."""
    return {f.path: f for f in FIELDS}[path]


def private_names() -> tuple[str, ...]:
    """Everything that ``private.fields`` may name: what can be hidden without hiding what the quota rests on."""
    plan = (f.path for f in FIELDS if f.section == "plan")
    return ("name", "species", "place", "survey", "life", "plan", *plan, *HISTORY_NAMES)
