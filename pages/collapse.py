"""Thresholds: what collapses the population under a constant quota."""

from __future__ import annotations

import streamlit as st

from harvest.charts import draw_equilibria
from harvest.desk import frame, show
from harvest.desk.answers import rates_of, thresholds_of, yields_of
from harvest.desk.cards import between
from harvest.desk.figure import picture
from harvest.plan import words
from harvest.plan.spreads import HEADINGS
from harvest.plan.threshold_words import beyond, levels, threshold_rows
from harvest.record.model import Record


def quota_to_examine(record: Record) -> float:
    """The legal quota of the slider: the present one to begin with, up to well beyond the fold."""
    fold = yields_of(record).spreads["msy"]
    start = record.present_quota if record.present_quota is not None else fold.median / 2
    top = frame.nice_top(max(1.5 * fold.high90, 1.2 * start, 1.0), record.unit)
    return frame.quota_slider(
        "examined quota", f"Legal quota to examine, {frame.unit_a_year(record)}", record, start, top
    )


def main() -> None:
    """The page."""
    record = frame.sound_record()
    if record is None:
        return
    frame.kicker(record)
    top = st.container()
    quota = quota_to_examine(record)
    found = thresholds_of(record, quota)
    unit, spreads = record.unit, found.spreads
    asked = f"{words.number(quota, unit)} {frame.unit_a_year(record)}"
    with top:
        show.title(f"At {asked} the chance of a decline without return is {words.probability(found.doomed)}")
        show.say(
            "A decline without return: the quota is beyond the fold, where no abundance can hold it, or today's "
            "abundance is below the lower equilibrium, from where the same quota drives the population down.",
            " ".join(beyond(found)),
        )
        names = (
            ("fold_quota", "The fold, as a legal quota"),
            ("margin_to_fold", "Margin to the fold, removals"),
            ("upper_equilibrium", "Settles at"),
            ("lower_equilibrium", "Declines below"),
        )
        show.figures((label, words.number(spreads[n].median, unit), between(spreads[n], unit)) for n, label in names)
    rates = rates_of(record)
    drawn = draw_equilibria(record, rates, found)
    picture(drawn, unit, frame.population(record), lambda: draw_equilibria(record, rates, found, public=True))
    show.head("The values behind it")
    show.spread_table(HEADINGS, threshold_rows(record, found))
    show.note(levels(record))
    frame.notes(record)


main()
