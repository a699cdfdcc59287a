"""The analyses that pages show, each computed once for a record; the long one with progress and a way to stop it.

Seed and draws are the command line's defaults, so that the page and the command give the same numbers.
"""

from __future__ import annotations

from collections.abc import Callable, Hashable
from typing import TYPE_CHECKING, TypeVar

import streamlit as st

from harvest.desk import show
from harvest.desk.results import results
from harvest.errors import HarvestError
from harvest.record.model import Record

if TYPE_CHECKING:
    from harvest.charts.picture import Picture
    from harvest.futures.project import Future
    from harvest.futures.recommend import Recommendation
    from harvest.plan.table import QuotaTable, Report
    from harvest.rates import Rates
    from harvest.yields import Thresholds, YieldSummary

SEED, DRAWS = 0, 10_000
#: Sample paths that a fan of futures shows.
PATHS = 6
T = TypeVar("T")


def rates_of(record: Record) -> Rates:
    """The draws."""
    from harvest.rates import draw_rates

    return _at_once(("rates", record.digest()), lambda: draw_rates(record, SEED, DRAWS))


def yields_of(record: Record) -> YieldSummary:
    """What the population can sustain."""
    from harvest.yields import summarise_yield

    return _at_once(("yield", record.digest()), lambda: summarise_yield(record, rates_of(record)))


def thresholds_of(record: Record, quota: float | None = None) -> Thresholds:
    """What collapses the population under a legal quota; None for the one in force."""
    from harvest.yields import find_thresholds

    def make() -> Thresholds:
        known = None if quota is None else thresholds_of(record).branches
        return find_thresholds(record, rates_of(record), quota, branches=known)

    return _at_once(("thresholds", record.digest(), quota), make)


def future_of(record: Record, quota: float) -> Future:
    """The years ahead under a constant legal quota."""
    from harvest.futures import fixed_quota, project

    key = ("future", record.digest(), quota)
    make = lambda: project(record, rates_of(record), fixed_quota(quota), paths=PATHS)  # noqa: E731
    return results().get(key, make)


def table_of(record: Record) -> QuotaTable | None:
    """The quota table, shown in progress where it is not there yet; None where the user stopped it."""

    def make(report: Report) -> QuotaTable:
        from harvest.plan import make_quota_table

        return make_quota_table(record, rates, report=report)

    rates = rates_of(record)
    return _at_work(("table", record.digest()), "the quota and its risk: some seconds", make)


def risk_of(record: Record, table: QuotaTable) -> Picture:
    """The picture of risk against quota, without a marked quota."""
    from harvest.charts import draw_risk

    key = ("risk", record.digest(), table.tolerance, table.horizon)
    return results().get(key, lambda: draw_risk(record, table.curve, table.recommendation))


def advice_of(record: Record, table: QuotaTable, tolerance: float) -> Recommendation:
    """The recommended quota at another tolerance, its curve refined for it as the quota table's was for its own."""
    from harvest.futures.find import find_quota

    def make() -> Recommendation:
        rates, horizon, seed = table.rates, table.horizon, table.seed
        return find_quota(record, rates, "limit", tolerance=tolerance, horizon=horizon, seed=seed)[1]

    return results().get(("advice", record.digest(), table.horizon, tolerance), make)


def _at_work(key: Hashable, label: str, make: Callable[[Report], T]) -> T | None:
    """The result; on the way a bar, and a button that stops the work as any other click does."""
    found: T | None = results().find(key)
    if found is not None:
        return found
    stopped = st.session_state.setdefault("stopped", set())
    if key in stopped:
        show.say("The computation was stopped; nothing else is lost.")
        st.button("Compute it", key="compute", on_click=stopped.discard, args=(key,), type="primary")
        return None
    place = st.empty()
    with place.container():
        _announce(label)
        bar = st.progress(0.0)
        st.button("Stop", key="stop", on_click=stopped.add, args=(key,))

    def report(what: str, done: int, total: int) -> None:
        bar.progress(done / total, f"{what[:1].upper()}{what[1:]}")

    try:
        value = make(report)
    except HarvestError:
        place.empty()
        raise
    results().keep(key, value)
    place.empty()
    return value


def _at_once(key: Hashable, make: Callable[[], T]) -> T:
    """A result that takes a moment: announced only where the program must compile itself first."""
    from harvest.kernels.compiling import is_warm

    if results().find(key) is not None or is_warm():
        return results().get(key, make)
    place = st.empty()
    with place.container():
        _announce("what is asked here")
    try:
        return results().get(key, make)
    finally:
        place.empty()


def _announce(label: str) -> None:
    from harvest.kernels.compiling import is_warm

    if is_warm():
        show.note(f"Computing {label}.")
    else:
        show.note(
            f"Computing {label}. This is the first run on this machine: the program compiles itself first, once, "
            "which takes some 20 seconds. What is on the page already can be read meanwhile."
        )
