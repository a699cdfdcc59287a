"""Numbers and sentences as a manager reads them: thousands separated, probabilities in two figures."""

from __future__ import annotations

import math

from harvest.record.model import Level, Record
from harvest.record.private import PRIVATE


def number(value: float, unit: str = "animals") -> str:
    """A quantity: whole animals, or tonnes to three significant figures; "never" for infinity, "none" for NaN."""
    if math.isnan(value):
        return "none"
    if math.isinf(value):
        return "never"
    if unit == "animals" or value == 0.0:
        return f"{round(value) + 0:,}"
    digits = max(0, 2 - math.floor(math.log10(abs(value)) + 1e-9))
    return f"{value:,.{digits}f}"


def small(value: float) -> str:
    """A rate or a share in three significant figures."""
    return "none" if math.isnan(value) else f"{value:.3g}"


def percent(value: float) -> str:
    """A stated share as a percentage, as it was stated: 5%, 12.5%."""
    return "none" if math.isnan(value) else f"{100.0 * value:.3g}%"


def probability(p: float) -> str:
    """A probability in two significant figures; never 0% or 100% unless it is counted as such."""
    if math.isnan(p):
        return "none"
    if p < 0.001:
        return "fewer than 1 in 1,000"
    if p > 0.999:
        return "more than 999 in 1,000"
    return _two_figures(100.0 * p) + "%"


def short_probability(p: float) -> str:
    """A probability for a narrow table cell."""
    if p < 0.001:
        return "<0.1%"
    return ">99.9%" if p > 0.999 else _two_figures(100.0 * p) + "%"


def _two_figures(value: float) -> str:
    if value == 0.0:
        return "0"
    digits = max(0, 1 - math.floor(math.log10(abs(value)) + 1e-9))
    if abs(value) > 90.0:
        digits = 1 if abs(value) < 99.95 else 0
    return f"{value:.{digits}f}"


def error(se: float) -> str:
    """A Monte Carlo standard error of a probability, in percentage points."""
    return f"±{float(f'{100.0 * se:.1g}'):g}%" if se >= 0.00005 else "<0.01%"


def kind(record: Record) -> str:
    """What is counted: "red deer", "tonnes of whitefish", "animals"; the unit alone where the species is private."""
    species = "" if record.species == PRIVATE else record.species
    if record.unit == "tonnes":
        return f"tonnes of {species}" if species else "tonnes"
    return species or "animals"


def moment(record: Record) -> str:
    """When abundance is told."""
    if record.season == "short":
        return "before the season" if record.count_when == "before" else "after the season"
    return "at the start of the year"


def level(record: Record, given: Level) -> str:
    """An abundance level in words."""
    if given.of_capacity:
        return f"{percent(given.value)} of the carrying capacity"
    return f"{number(given.value, record.unit)} {kind(record)}"


def limit_words(record: Record) -> str:
    """The lower limit in words, or what stands in for it."""
    if record.objectives.limit is not None:
        return level(record, record.objectives.limit)
    return f"the collapse level ({collapse_words(record)}; no limit is stated)"


def collapse_words(record: Record) -> str:
    """The collapse level in words."""
    if record.objectives.collapse is not None:
        return level(record, record.objectives.collapse)
    higher = ", or the Allee threshold where that is higher" if any(c.name == "allee" for c in record.curves) else ""
    return f"10% of the carrying capacity{higher}"


def years(n: int) -> str:
    """A number of years: "1 year", "20 years"."""
    return f"{n} year{'' if n == 1 else 's'}"


def years_words(first: int, years: int) -> str:
    """A span of quota years."""
    return f"{first}" if years == 1 else f"{first} to {first + years - 1}"
