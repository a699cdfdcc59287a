"""What a population can sustain, in rows and sentences, for the command and the page."""

from __future__ import annotations

from harvest.plan import words
from harvest.plan.spreads import row
from harvest.rates import Rates
from harvest.record.model import Record
from harvest.yields import YieldSummary
from harvest.yields.summary import standing_year

REMOVALS_ARE = "removals are all deaths that people cause, legal take and losses together"


def yield_rows(record: Record, rates: Rates, summary: YieldSummary) -> list[list[str]]:
    """Rows of :func:`harvest.plan.spreads.row`."""
    s, unit, moment = summary.spreads, record.unit, words.moment(record)
    return [
        row(f"Abundance {moment}, {standing_year(record, rates)}", s["abundance"], unit),
        row("Carrying capacity", s["K"], unit),
        row("Greatest per-head growth, a year", s["greatest_growth"], "rate", absent="no upper bound"),
        row("Greatest sustainable yield (MSY), total removals a year", s["msy"], unit),
        row(f"Abundance that gives it, {moment}", s["msy_abundance"], unit),
        row("Harvest rate that gives it (share of the season's start)", s["msy_share"], "rate"),
        row("At least 80% of it: abundance from", s["good_low"], unit),
        row("... to", s["good_high"], unit),
        row("Total removals that hold today's abundance", s["sustainable_today"], unit),
    ]


def standing(record: Record, summary: YieldSummary) -> list[str]:
    """Where the population stands, and the bound on removals from one count."""
    unit = record.unit
    told = [f"Chance that abundance is below the one that gives MSY: {words.probability(summary.below_msy_abundance)}."]
    if summary.above_msy_rate is not None and summary.present_removals is not None:
        present = words.number(summary.present_removals, unit)
        told.append(
            f"Chance that present removals (latest legal take, {present} a year, with losses) are above the rate "
            f"that gives MSY: {words.probability(summary.above_msy_rate)}."
        )
    if summary.declines_unharvested > 0.0005:
        told.append(
            "Chance that the population declines even unharvested (above its carrying capacity, or below an Allee "
            f"threshold): {words.probability(summary.declines_unharvested)}."
        )
    if summary.unstable >= 0.001:
        told.append(
            f"Warning: in {words.probability(summary.unstable)} of the draws growth is so strong that the yearly "
            "step overshoots and does not settle (May 1976); check the growth rate and the shape."
        )
    bound = summary.removal_bound
    told.append(
        f"Potential biological removal (Wade 1998): {words.number(bound.value, unit)} {words.kind(record)} a year of "
        f"all human-caused deaths = {words.number(bound.n_min, unit)} (20th percentile of the count of {bound.year}) "
        f"× ½ × {bound.r_max:.3g} × {bound.recovery_factor:g}."
    )
    return told
