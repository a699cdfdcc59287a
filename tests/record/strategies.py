"""Hypothesis strategies for valid records; any test may draw from them."""

from __future__ import annotations

import unicodedata
from itertools import combinations
from typing import Any

from hypothesis import strategies as st

from harvest.record.fields import CORRELATED, field_at, fields_of, private_names
from harvest.record.model import (
    COUNT_MOMENTS,
    CURVES,
    NOISE_CONVENTIONS,
    RECORD_MOMENTS,
    RULES,
    SEASONS,
    SURVEY_KINDS,
    UNITS,
    ByYear,
    Correlation,
    CurveChoice,
    Distribution,
    History,
    Level,
    LifeHistory,
    Losses,
    Objectives,
    Record,
    RuleChoice,
    Survey,
    SurveyPlan,
)
from harvest.record.schema import Field, Interval

_PLAIN = st.characters(exclude_categories=("Cc", "Cs"), exclude_characters="\ufffe\uffff")
_RISKY = st.sampled_from(["=", "+", "-", "@", "\t", "\n", "'", "＝", ",", '"', "#", "\\", " "])
texts = st.one_of(st.text(_PLAIN, max_size=20), st.sampled_from(["", "Ostrel Ridge", "Ørsta, west", '"']))
notes = st.one_of(
    texts,
    st.sampled_from(["''=", "'=1", "''", "'x"]),
    st.builds(lambda start, rest: start + rest, _RISKY, texts),
    st.text(_PLAIN | _RISKY, max_size=8),
)
names = texts.filter(lambda text: bool(text.strip()))
_COLUMN_START = st.characters(categories=("Lu", "Ll", "Nd"))
columns = st.builds(lambda start, rest: (start + rest).strip(), _COLUMN_START, st.text(_PLAIN, max_size=8)).filter(
    lambda name: name not in ("year", "removals", "note") and unicodedata.category(name[0]) in ("Lu", "Ll", "Nd")
)
cvs = st.floats(0.0001, 2.0)
amounts = st.one_of(st.integers(1, 10**6).map(float), st.floats(1.0, 1e9))


def numbers(within: Interval) -> st.SearchStrategy[float]:
    """Numbers inside an interval, not too near an open end."""
    high = min(within.high, 1e6)
    edge = 1e-3 * (high - within.low)
    return st.floats(within.low + (edge if within.low_open else 0.0), high - (edge if within.high_open else 0.0)).map(
        lambda value: value + 0.0
    )


@st.composite
def distributions(draw: st.DrawFn, field: Field) -> Distribution:
    """A distribution that a field allows."""
    within = field.within
    assert within is not None
    inside = Interval(within.low, within.high, True, True)
    kind = draw(st.sampled_from(["fixed", "uniform", "triangular", "90% between", "normal", "lognormal", "beta"]))
    if kind == "beta":
        shape = st.floats(0.1, 20)
        return Distribution("beta", (("a", draw(shape)), ("b", draw(shape))))
    if kind in ("fixed", "normal", "lognormal"):
        if kind == "lognormal" and within.low < 0:
            inside = Interval(0, within.high, True, True)
        value = draw(numbers(within if kind == "fixed" else inside))
        spread = draw(st.floats(0.001, 1.0))
        return {
            "fixed": Distribution("fixed", (("value", value),)),
            "normal": Distribution("normal", (("mean", value), ("sd", spread))),
            "lognormal": Distribution("lognormal", (("median", value), ("sd_log", spread))),
        }[kind]
    low, mode, high = sorted(draw(st.lists(numbers(inside), min_size=3, max_size=3, unique=True)))
    if kind == "triangular":
        return Distribution(kind, (("low", low), ("mode", mode), ("high", high)))
    return Distribution(kind, (("low", low), ("high", high)))


@st.composite
def surveys(draw: st.DrawFn, season: str, count_when: str, years: int, pool: dict[str, list[float]]) -> Survey:
    """A survey of a season, with its CVs from one number or from a column of the pool."""
    kind = draw(st.sampled_from(SURVEY_KINDS))
    moments = COUNT_MOMENTS[season] if kind == "index" else (count_when,)
    limit = draw(st.none() | amounts)
    count = amounts if limit is None else st.just(0.0) | amounts
    values = tuple(draw(st.lists(st.none() | count, min_size=years, max_size=years)))
    cv_column = draw(st.none() | st.sampled_from(sorted(pool)))
    cv = None if cv_column else draw(cvs)
    stated = pool[cv_column] if cv_column else [cv] * years
    return Survey(
        name=draw(names),
        column=draw(columns),
        kind=kind,
        when=draw(st.sampled_from(moments)),
        values=values,
        cvs=tuple(None if v is None else c for v, c in zip(values, stated, strict=True)),
        cv=cv,
        cv_column=cv_column,
        bias=draw(distributions(field_at("survey.bias"))),
        detection_limit=limit,
    )


@st.composite
def curve_sets(draw: st.DrawFn) -> tuple[tuple[CurveChoice, ...], tuple[tuple[str, Distribution], ...]]:
    """Curves and shared rates that go together."""
    chosen = draw(st.lists(st.sampled_from(CURVES), min_size=1, max_size=3, unique=True))
    growth = draw(st.sampled_from(["growth_rate", "max_growth", "own"]))
    shared_capacity, shared_noise = draw(st.booleans()), draw(st.booleans())

    def rates(section: str, keys: list[str], name: str | None = None) -> tuple[tuple[str, Distribution], ...]:
        order = [f for f in fields_of(section) if f.key in keys]
        return tuple((f.key, draw(distributions(f.narrowed(name)))) for f in order)

    curves = []
    for name in chosen:
        own = draw(st.booleans())
        keys = ["shape"] if name in ("theta-logistic", "allee", "ricker", "beverton-holt") else []
        if name == "gompertz":
            keys.append("shape" if growth != "max_growth" or own else "max_growth")
        elif growth == "own" or own:
            keys.append(draw(st.sampled_from(["growth_rate", "max_growth"])))
        keys += [] if shared_capacity and not own else ["carrying_capacity"]
        keys += [] if shared_noise and not own else ["process_noise"]
        curves.append(CurveChoice(name, draw(numbers(Interval(0, 100, True))), rates("curve", keys, name)))
    shared = [] if growth == "own" else [growth]
    shared += ["carrying_capacity"] if shared_capacity else []
    shared += ["process_noise"] if shared_noise else []
    shared += draw(st.lists(st.sampled_from(["demographic_noise", "autocorrelation"]), unique=True))
    return tuple(curves), rates("rates", shared)


@st.composite
def objectives(draw: st.DrawFn) -> Objectives:
    """Objectives whose levels rise in order."""
    fractions = draw(st.booleans())
    level = numbers(Interval(0, 1, True)) if fractions else amounts
    values = sorted(draw(st.lists(level, min_size=4, max_size=4)))
    keep = draw(st.lists(st.booleans(), min_size=4, max_size=4))
    collapse, limit, target, ceiling = (Level(v, fractions) if k else None for v, k in zip(values, keep, strict=True))
    aims = st.none() | st.builds(ByYear, st.integers(1, 200), st.floats(0.01, 0.99))
    return Objectives(
        limit=limit,
        target=target,
        ceiling=ceiling,
        collapse=collapse,
        horizon=draw(st.integers(1, 200)),
        tolerance=draw(st.floats(1e-6, 0.999)),
        recovery=draw(aims) if limit else None,
        reduction=draw(aims) if ceiling else None,
        plan_years=draw(st.integers(1, 10)),
        recovery_factor=draw(st.floats(0.1, 1.0)),
    )


@st.composite
def rules(draw: st.DrawFn) -> RuleChoice:
    """A rule with its settings in the order of the table of fields."""
    name = draw(st.sampled_from(RULES))
    lower = draw(amounts)
    values: dict[str, float] = {
        "quota": draw(amounts),
        "escapement": draw(amounts),
        "lower": lower,
        "upper": lower * 2,
        "share": draw(st.floats(0.001, 1.0)),
    }
    if draw(st.booleans()):
        values["without_count"] = draw(st.floats(0.0, 1.0))
    used = [f for f in fields_of("rule") if f.key in values and (not f.only_for or name in f.only_for)]
    return RuleChoice(name, tuple((f.key, values[f.key]) for f in used))


@st.composite
def _histories(draw: st.DrawFn) -> History:
    count = draw(st.integers(1, 6))
    first = draw(st.integers(1600, 2201 - count))
    removals = tuple(draw(st.lists(st.none() | st.just(0.0) | amounts, min_size=count, max_size=count)))
    written = tuple(draw(st.lists(notes, min_size=count, max_size=count))) if draw(st.booleans()) else ()
    return History(tuple(range(first, first + count)), removals, written)


def _quota_years(history: History, found: tuple[Survey, ...]) -> st.SearchStrategy[int | None]:
    taken = [y + 1 for y, h in zip(history.years, history.removals, strict=True) if h is not None]
    counted = [
        y + (s.when == "after")
        for s in found
        if s.kind == "absolute"
        for y, v in zip(history.years, s.values, strict=True)
        if v is not None
    ]
    earliest = max([history.years[0], *taken, *counted])
    return st.none() | st.integers(earliest, history.years[-1] + 6)


@st.composite
def records(draw: st.DrawFn) -> Record:
    """A valid record, with every optional part sometimes there."""
    season = draw(st.sampled_from(SEASONS))
    count_when = draw(st.sampled_from(RECORD_MOMENTS[season]))
    history = draw(_histories())
    years = len(history.years)
    pool = draw(st.dictionaries(columns, st.lists(cvs, min_size=years, max_size=years), min_size=1, max_size=2))
    drawn = draw(st.lists(surveys(season, count_when, years, pool), max_size=3, unique_by=lambda s: s.name))
    found = tuple({s.column: s for s in drawn if s.column not in pool}.values())
    curves, rates = draw(curve_sets())
    stated = {name for name, _ in rates}.union(*({name for name, _ in c.rates} for c in curves))
    pairs = [p for p in combinations(CORRELATED, 2) if set(p) <= stated and set(p) != {"growth_rate", "max_growth"}]
    correlations: tuple[Correlation, ...] = ()
    if pairs and draw(st.booleans()):
        correlations = (Correlation(*draw(st.sampled_from(pairs)), draw(st.floats(-0.95, 0.95))),)
    optional: dict[str, Any] = {
        "species": draw(texts),
        "place": draw(texts),
        "present_quota": draw(st.none() | st.just(0.0) | amounts),
        "plan": tuple((f.key, draw(texts)) for f in fields_of("plan") if draw(st.booleans())),
        "private": tuple(draw(st.lists(st.sampled_from(private_names()), max_size=3, unique=True))),
    }
    return Record(
        name=draw(names),
        unit=draw(st.sampled_from(UNITS)),
        season=season,
        count_when=count_when,
        lag=draw(st.integers(0 if count_when in ("before", "start") else 1, 5)),
        history=history,
        surveys=found,
        curves=curves,
        rates=rates,
        first_quota_year=draw(_quota_years(history, found)),
        noise=draw(st.sampled_from(NOISE_CONVENTIONS)),
        low_abundance=draw(st.floats(0.001, 0.999)),
        correlations=correlations,
        life=LifeHistory(draw(st.none() | st.floats(0, 200)), draw(st.none() | st.floats(0.01, 1)), 80.0),
        objectives=draw(objectives()),
        losses=Losses(
            draw(distributions(field_at("losses.wounding"))),
            draw(distributions(field_at("losses.unreported"))),
            draw(distributions(field_at("losses.other"))),
            draw(st.floats(0, 2)),
        ),
        rule=draw(st.none() | rules()),
        survey_plan=SurveyPlan(draw(st.none() | cvs), draw(st.integers(1, 20))),
        **optional,
    )
