"""Risk and quota: move the quota and the tolerance, and read the risk off one stored curve."""

from __future__ import annotations

import streamlit as st

from harvest.charts import draw_future, draw_probabilities, draw_risk, mark_quota
from harvest.charts.probabilities import AIMS, RISKS, meaningful
from harvest.desk import frame, show
from harvest.desk.answers import advice_of, future_of, risk_of, table_of
from harvest.desk.figure import picture
from harvest.plan import words
from harvest.plan.sentences import headline
from harvest.plan.table import QuotaTable
from harvest.record.model import Record


@st.fragment
def try_quotas(record: Record, table: QuotaTable) -> None:
    """The slider, what the stored curve says there, and the pictures that follow it."""
    unit, curve, aim = record.unit, table.curve, table.recommendation.criterion
    top = float(curve.quotas[-1])
    start = table.recommendation.quota if table.rule.feedback else table.first_quota
    quota = frame.quota_slider("tried quota", f"Legal quota to try, {frame.unit_a_year(record)}", record, start, top)
    said = st.container()
    name, advice = frame.population(record), table.recommendation
    drawn = mark_quota(risk_of(record, table), record, curve, aim, quota)
    picture(drawn, unit, name, lambda: draw_risk(record, curve, advice, marked_quota=quota, public=True))
    with said:
        risk, se = curve.at("ever_below_limit", quota, table.horizon)
        collapsed, _ = curve.at("ever_collapsed", quota, table.horizon)
        told = (
            f"With {words.number(quota, unit)} {frame.unit_a_year(record)} the chance of ever being below "
            f"{words.limit_words(record)} in {words.years(table.horizon)} is {words.probability(risk)} "
            f"({words.error(se)} Monte Carlo), and of ever collapsing (below {words.collapse_words(record)}) "
            f"{words.probability(collapsed)}."
        )
        if aim.question != "limit":
            chance, error = curve.at(aim.event, quota, aim.year)
            goal = "back above the limit" if aim.question == "recovery" else "under the ceiling"
            told = (
                f"The chance of being {goal} within {words.years(aim.year)} is {words.probability(chance)} "
                f"({words.error(error)} Monte Carlo). {told}"
            )
        show.say(told)
    future = future_of(record, quota)
    drawn = draw_future(record, table.rates, future)
    picture(drawn, unit, name, lambda: draw_future(record, table.rates, future, public=True))
    drawn = draw_probabilities(record, future, events=RISKS)
    picture(drawn, unit, name, lambda: draw_probabilities(record, future, events=RISKS, public=True))
    if set(AIMS) & set(meaningful(record, future)):
        drawn = draw_probabilities(record, future, events=AIMS)
        picture(drawn, unit, name, lambda: draw_probabilities(record, future, events=AIMS, public=True))


@st.fragment
def try_tolerance(record: Record, table: QuotaTable) -> None:
    """What another tolerance would allow, read off the same curve."""
    aim = table.recommendation.criterion
    if aim.question != "limit":
        return
    show.head("Another tolerance")
    shares = [0.01, 0.02, 0.05, 0.1, 0.15, 0.2, 0.25, 0.3, 0.4, 0.5]
    shares = sorted({*shares, table.tolerance})
    tolerance = st.select_slider(
        "Accepted chance of ever falling below the limit",
        shares,
        table.tolerance,
        format_func=words.percent,
        key="tried tolerance",
    )
    advice = advice_of(record, table, tolerance)
    quota = f"{words.number(advice.quota, record.unit)} {frame.unit_a_year(record)}"
    show.say(
        f"A tolerance of {words.percent(tolerance)} allows {quota}."
        if advice.qualifies
        else f"A tolerance of {words.percent(tolerance)} is not met even without a take."
    )
    show.note("Trying changes nothing: the tolerance that counts stands in the record, under Aims.")


def main() -> None:
    """The page."""
    record = frame.sound_record()
    if record is None:
        return
    frame.kicker(record)
    table = table_of(record)
    if table is None:
        return
    show.title(headline(table))
    show.note(
        "Move the quota: the risk is read off one stored curve, between its points by a straight line. The years ahead "
        "below are projected anew for your quota, on the same futures, and can differ in the last digit."
    )
    try_quotas(record, table)
    try_tolerance(record, table)
    frame.notes(record)


main()
