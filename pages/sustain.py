"""Yield: what the population can sustain, and where it stands."""

from __future__ import annotations

from harvest.charts import draw_yield
from harvest.desk import frame, show
from harvest.desk.answers import rates_of, yields_of
from harvest.desk.cards import between
from harvest.desk.figure import picture
from harvest.plan import words
from harvest.plan.spreads import HEADINGS
from harvest.plan.yield_words import REMOVALS_ARE, standing, yield_rows


def main() -> None:
    """The page."""
    record = frame.sound_record()
    if record is None:
        return
    frame.kicker(record)
    rates, summary = rates_of(record), yields_of(record)
    msy, what, unit = summary.spreads["msy"], words.kind(record), record.unit
    show.title(f"It can sustain at most about {words.number(msy.median, unit)} {what} a year")
    show.say(
        f"That is the greatest sustainable yield (MSY), all deaths that people cause together: {between(msy, unit)}. "
        "It is a ceiling for an average year, not a quota: the quota must also survive bad years and wrong counts."
    )
    names = (("msy_abundance", f"Abundance that gives it, {words.moment(record)}"), ("K", "Carrying capacity"))
    today, held = summary.spreads["abundance"], summary.spreads["sustainable_today"]
    show.figures(
        [
            ("Abundance today", words.number(today.median, unit), between(today, unit)),
            ("Removals that hold it, a year", words.number(held.median, unit), between(held, unit)),
            *(
                (label, words.number(summary.spreads[n].median, unit), between(summary.spreads[n], unit))
                for n, label in names
            ),
        ]
    )
    draw = draw_yield(record, rates, summary)
    picture(draw, unit, frame.population(record), lambda: draw_yield(record, rates, summary, public=True))
    show.head("Where it stands")
    show.say(*standing(record, summary))
    show.head("The values behind it")
    show.spread_table(HEADINGS, yield_rows(record, rates, summary))
    show.note(f"In {what}; {REMOVALS_ARE}.")
    frame.notes(record)


main()
