"""Chances by year under a rule: below the limit, collapsed, at the target, under the ceiling, recovered."""

from __future__ import annotations

from collections.abc import Collection, Sequence

from harvest.charts import marks
from harvest.charts.axes import Axes, chance_axis, year_axis
from harvest.charts.hiding import drawable
from harvest.charts.palette import ABUNDANCE, CEILING, DASHED, DOTTED, INK, LONG, RISK, Dash
from harvest.charts.phrases import capital, listed, under
from harvest.charts.picture import Picture, assemble
from harvest.errors import SettingsError
from harvest.futures import Future
from harvest.plan import words
from harvest.record.model import Record

#: Each event: its label, its colour and its dash.
LINES: dict[str, tuple[str, str, Dash]] = {
    "below_limit": ("below limit then", RISK, DASHED),
    "ever_below_limit": ("ever below limit", RISK, None),
    "ever_collapsed": ("ever collapsed", INK, DOTTED),
    "at_target": ("at target", ABUNDANCE, LONG),
    "back_above_limit": ("back above limit", ABUNDANCE, None),
    "under_ceiling": ("been under ceiling", CEILING, None),
}
#: What one wants to avoid, and what one wants to reach.
RISKS = ("below_limit", "ever_below_limit", "ever_collapsed")
AIMS = ("at_target", "back_above_limit", "under_ceiling")


def draw_probabilities(
    record: Record, future: Future, *, events: Collection[str] = tuple(LINES), public: bool = False
) -> Picture:
    """The chance of each event by year: those that the record's levels give a meaning.

    Parameters
    ----------
    events : collection of str
        Of :data:`LINES`, those to draw: :data:`RISKS` alone shows small risks that :data:`AIMS` would press down.
    public : bool
        Leave out what the record keeps private, for a file that others see.
    """
    record = drawable(record, public)
    shown, table = [e for e in meaningful(record, future) if e in events], future.by_year
    check_events(shown)
    years = table["count_year"].to_numpy()
    highest = max(float(table[e].max()) for e in shown)
    axes = Axes(year_axis("Year of the count", int(years[0]), int(years[-1])), chance_axis("Chance", highest))
    layers, ends = [], []
    for event in shown:
        name, colour, dash = LINES[event]
        p = table[event].to_numpy()
        layers.append(marks.line(axes, years, p, colour, dash))
        if years.size == 1:
            layers.append(marks.points(axes, years, p, colour))
        ends.append((float(p[-1]), f"{name.replace(' limit', '')} {words.short_probability(p[-1])}", colour))
    for event in shown:
        name = LINES[event][0]
        p, se = table[event], table[f"{event}_se"]
        told = {"Year": [f"{y}" for y in years], name.capitalize(): [words.short_probability(v) for v in p]}
        layers.append(marks.hover(axes, years, p.to_numpy(), told | {"Monte Carlo": [words.error(v) for v in se]}))
    columns = [("Year of the count", "year", years)]
    for event in shown:
        columns.append((LINES[event][0].capitalize(), "probability", table[event].to_numpy()))
        columns.append((f"{LINES[event][0].capitalize()}, standard error", "error", table[f"{event}_se"].to_numpy()))
    return assemble(
        *_names(shown),
        _sentence(record, future, shown),
        [*layers, *marks.end_labels(axes, ends)],
        columns,
    )


def check_events(shown: Sequence[str]) -> None:
    """At least one event is left to draw.

    Raises
    ------
    SettingsError
        Where the record's levels give none of the events a meaning.
    """
    if not shown:
        raise SettingsError(
            "none of the events asked for has a meaning for this record: state a limit, a target or a ceiling in its "
            f"objectives, or ask for others of {', '.join(LINES)}"
        )


def _names(shown: Sequence[str]) -> tuple[str, str]:
    """Name and title."""
    if set(shown) <= set(RISKS):
        return "risks-by-year", "Risks by year"
    return ("aims-by-year", "Aims by year") if set(shown) <= set(AIMS) else ("chances-by-year", "Chances by year")


def meaningful(record: Record, future: Future) -> list[str]:
    """Events that the record gives a meaning; recovery where most futures are below the limit in the first year."""
    aims, first = record.objectives, future.by_year.iloc[0]
    events = ["below_limit", "ever_below_limit", "ever_collapsed"] if aims.limit is not None else ["ever_collapsed"]
    if aims.limit is not None and first["below_limit"] > 0.5:
        events.append("back_above_limit")
    if aims.target is not None:
        events.append("at_target")
    return [*events, "under_ceiling"] if aims.ceiling is not None else events


def _sentence(record: Record, future: Future, events: Sequence[str]) -> str:
    row = future.by_year.iloc[-1]
    told = listed(f"{LINES[e][0]} {words.probability(row[e])} ({words.error(row[f'{e}_se'])})" for e in events)
    when = f"by the count of {int(row['count_year'])}"
    limit = f"the limit is {words.limit_words(record)}, " if record.objectives.limit is not None else ""
    levels = f"{limit}collapsed is below {words.collapse_words(record)}"
    return f"{under(record, future.rule)}, {when}: {told}; in brackets the Monte Carlo error. {capital(levels)}."
