"""What stands around a page: the population it is about, what must be mended first, and the way on."""

from __future__ import annotations

import math

import streamlit as st

from harvest.desk import show
from harvest.desk.session import ADDRESS, Hand, in_hand
from harvest.plan import words
from harvest.plan.card import nice_step
from harvest.record.model import Record
from harvest.record.private import is_private

START, RECORD, BRING = "start.py", "record.py", "bring.py"


def sound_record() -> Record | None:
    """The record in hand for a page that computes; where there is none or it is faulty, what to do about it."""
    hand = in_hand()
    if hand is None:
        show.title("No record is open")
        show.say("Open a demo or your own data first.")
        link(START, "Open a record")
        return None
    if hand.record is None:
        show.kicker(hand.draft.name or "Unnamed record")
        show.title(f"{faults(hand)} to mend first")
        show.say("Nothing is computed from a record with errors. Each of them is shown where it is, with its cure.")
        problems(hand)
        link(RECORD, "Mend the record")
        return None
    return hand.record


def cannot(reason: str) -> None:
    """What stands in place of a result that cannot be had."""
    show.title("This cannot be computed yet")
    show.say(*(line[:1].upper() + line[1:] for line in reason.splitlines()))


def faults(hand: Hand) -> str:
    """The number of errors in words."""
    n = len(hand.errors)
    return f"{n} thing{'' if n == 1 else 's'}"


def problems(hand: Hand, most: int = 12) -> None:
    """Errors and warnings of the record, the first of them."""
    told = sorted(hand.problems, key=lambda p: p.severity != "error")
    for problem in told[:most]:
        show.problem(problem)
    if len(told) > most:
        show.note(f"And {len(told) - most} more.")


def kicker(record: Record) -> None:
    """The population, the year and where the rates come from."""
    from harvest.desk.answers import rates_of
    from harvest.plan.assumptions import rates_words

    rates = rates_of(record)
    show.kicker(f"{record.name} · quota of {rates.first_year} · rates {rates_words(rates)}")


def notes(record: Record) -> None:
    """What must be known about the draws before trusting what follows from them."""
    from harvest.desk.answers import rates_of

    for text in rates_of(record).notes:
        show.note(f"Note: {text}")


def unit_a_year(record: Record) -> str:
    """ "red deer a year"."""
    return f"{words.kind(record)} a year"


def link(page: str, label: str, icon: str | None = ":material/arrow_forward:") -> None:
    """A link to another page, about the same record."""
    here = st.session_state.get(ADDRESS)
    about = {ADDRESS: here} if here else None
    st.page_link(st.session_state["pages"][page], label=label, icon=icon, query_params=about)


def population(record: Record) -> str:
    """What files are named after: the population's name, unless it is private."""
    return "population" if is_private(record, "name") else record.name


def nice_top(value: float, unit: str) -> float:
    """Where a slider ends: the value rounded up to a whole step of it."""
    step = slider_step(value, unit)
    return step * math.ceil(value / step)


def slider_step(top: float, unit: str) -> float:
    """A step of one animal, or a round one that cuts the slider into some hundreds."""
    step = nice_step(top, 400)
    return max(1.0, step) if unit == "animals" else step


def quota_slider(key: str, label: str, record: Record, start: float, top: float) -> float:
    """A slider for a legal quota, and a cell beside it for an exact number; both show the same."""
    step = slider_step(top, record.unit)
    name = f"{key} {record.digest()}"
    chosen = st.session_state.get(name)
    at = min(max(start if chosen is None else chosen, 0.0), top)
    number_key, slider_key = f"{name} number", f"{name} slider"

    def took(source: str) -> None:
        given = float(st.session_state[source])
        st.session_state[name] = float(round(given)) if record.unit == "animals" else given
        for other in (number_key, slider_key):
            st.session_state[other] = st.session_state[name]

    st.session_state.setdefault(slider_key, at)
    st.session_state.setdefault(number_key, at)
    form = "%.0f" if record.unit == "animals" else "%.4g"
    left, right = st.columns([4, 1], vertical_alignment="bottom")
    with left:
        st.slider(
            show.literal(label), 0.0, top, step=step, format=form, key=slider_key, on_change=took, args=(slider_key,)
        )
    with right:
        st.number_input("Exactly", 0.0, top, step=step, format=form, key=number_key, on_change=took, args=(number_key,))
    return float(st.session_state[number_key])
