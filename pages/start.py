"""This season: the answer in one sentence, what is missing, and the way in for a demo or one's own data."""

from __future__ import annotations

import streamlit as st

from harvest.charts import draw_future, draw_history, draw_indices, draw_risk
from harvest.desk import frame, opening, show
from harvest.desk.answers import table_of, thresholds_of, yields_of
from harvest.desk.figure import picture
from harvest.desk.session import in_hand
from harvest.errors import HarvestError
from harvest.record.model import Record


def answer(record: Record) -> None:
    """The quota, its risk and the figures behind it."""
    from harvest.desk.cards import season_cards
    from harvest.plan.sentences import findings, headline

    table = table_of(record)
    if table is None:
        return
    frame.kicker(record)
    show.title(headline(table))
    show.say(*findings(table))
    show.figures(season_cards(record, table, yields_of(record), thresholds_of(record, table.first_quota)))
    name, unit = frame.population(record), record.unit
    left, right = st.columns(2, gap="large")
    with left:
        advice = table.recommendation
        risk = draw_risk(record, table.curve, advice)
        picture(risk, unit, name, lambda: draw_risk(record, table.curve, advice, public=True))
    with right:
        future = draw_future(record, table.rates, table.future)
        picture(future, unit, name, lambda: draw_future(record, table.rates, table.future, public=True))
    frame.notes(record)


def main() -> None:
    """The page."""
    hand = in_hand()
    if hand is None:
        opening.welcome()
        return
    if hand.record is None:
        frame.sound_record()
        opening.other_records()
        return
    record = hand.record
    top = st.container()
    picture(draw_history(record), record.unit, frame.population(record), lambda: draw_history(record, public=True))
    indices = draw_indices(record)
    if indices is not None:
        picture(indices, record.unit, frame.population(record), lambda: draw_indices(record, public=True))
    with top:
        try:
            answer(record)
        except HarvestError as error:
            frame.cannot(str(error))
            frame.link(frame.RECORD, "Look at the record")
    with st.container(horizontal=True):
        frame.link("risk.py", "See the risk and move the quota")
        frame.link("quota.py", "Take the table into the plan")
    if hand.problems:
        show.head("What to look at")
        frame.problems(hand)
    opening.other_records()


main()
