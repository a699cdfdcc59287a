"""How the quota was computed, in one paragraph with the numbers that were used."""

from __future__ import annotations

import numpy as np

from harvest.futures.rounding import precision_words
from harvest.plan import words
from harvest.plan.assumptions import rates_words
from harvest.plan.table import QuotaTable
from harvest.population import BY_NAME
from harvest.rates.approach import latest_usable_count

#: Curves named after people.
_PROPER = {
    "fox": "Fox",
    "gompertz": "Gompertz",
    "allee": "Allee",
    "ricker": "Ricker",
    "beverton-holt": "Beverton–Holt",
}


def method(table: QuotaTable) -> str:
    """The method in one paragraph. For others, of :func:`harvest.plan.assumptions.public` of the table.

    Parameters
    ----------
    table : QuotaTable

    Returns
    -------
    str
        Draws and futures, growth curves with their shares and sources, the yearly step with its noise, the
        count and its bias, losses, horizon and tolerance, how the quota was read off, seeds and version. Medians
        and 90% intervals are over the draws; abundances are in the record's unit.
    """
    told = [_draws(table), _curves(table), _step(table), _start(table), _losses(table), _aim(table), _reading(table)]
    told.append(
        f"Computed with Harvest {table.version}; seed of the rates {table.rates.seed}, of the futures {table.seed}."
    )
    return " ".join(told)


def _range(values: np.ndarray) -> str:
    """A rate over the draws: the one value, or the median with its 90% interval."""
    low, median, high = (words.small(float(q)) for q in np.quantile(values, (0.05, 0.5, 0.95)))
    return median if np.ptp(values) == 0.0 else f"{median} (90% between {low} and {high})"


def _amounts(values: np.ndarray, unit: str) -> str:
    """The same for an amount in the record's unit."""
    low, median, high = (words.number(float(q), unit) for q in np.quantile(values, (0.05, 0.5, 0.95)))
    return median if np.ptp(values) == 0.0 else f"{median} (90% between {low} and {high})"


def _draws(table: QuotaTable) -> str:
    draws, each = len(table.rates), table.future.futures_per_draw
    futures = "1 future" if each == 1 else f"{each:,} futures"
    return (
        f"What is uncertain is carried by {draws:,} draws of the rates ({rates_words(table.rates)}), each with "
        f"{futures} of random years: {draws * each:,} futures in all. Rates and abundances below are medians over "
        "the draws with their 90% intervals."
    )


def _curves(table: QuotaTable) -> str:
    names = table.rates.table["curve"].astype(str)
    shares = [(name, float((names == name).mean())) for name in dict.fromkeys(names)]
    told = [
        f"{_PROPER.get(name, name)} in {words.percent(share)} of the draws [{BY_NAME[name].source}]"
        for name, share in shares
    ]
    return f"Growth curve{'' if len(told) == 1 else 's'}: {', '.join(told)}."


def _step(table: QuotaTable) -> str:
    record, rates = table.record, table.rates
    step = "removals and growth run together"
    if record.season == "short":
        step = "removals fall in one short season, and what is left grows until the next"
    sigma, demographic, rho = (rates.column(name) for name in ("sigma", "sigma_demo", "rho"))
    if not (sigma.any() or demographic.any()):
        return f"One year is one step: {step}, without yearly noise."
    noise = [f"process noise (standard deviation of the logarithm) {_range(sigma)}"] if sigma.any() else []
    if demographic.any():
        noise.append(f"demographic noise (the same, at one animal) {_range(demographic)}")
    if rho.any():
        noise.append(f"autocorrelation {_range(rho)}")
    return (
        f"One year is one step: {step}, and the result is multiplied by lognormal yearly noise with {record.noise}: "
        f"{'; '.join(noise)}."
    )


def _start(table: QuotaTable) -> str:
    record, rates, usable = table.record, table.rates, latest_usable_count(table.record)
    told = (
        f"Each draw's abundance starts from the count of {rates.count_year} ({usable.count:,.10g}, coefficient of "
        f"variation {words.percent(usable.cv)}) divided by a survey bias of {_range(rates.column('bias'))}"
    )
    if rates.carried:
        told += f", and is carried with noise through the removals on record to the season of {rates.first_year}"
    counted = _amounts(rates.column("counted"), record.unit)
    return f"{told}. Quotas start from an abundance of {counted} {words.kind(record)} {words.moment(record)}."


def _losses(table: QuotaTable) -> str:
    rates, unit = table.rates, table.record.unit
    told = f"Total removals are the legal take times {_range(rates.factor)} for wounding and unreported take"
    if rates.column("other").any():
        told += f", plus other human-caused deaths of {_amounts(rates.column('other'), unit)} a year"
    error = table.record.losses.implementation_cv
    if error:
        told += f"; the legal take misses the quota with a coefficient of variation of {words.percent(error)}"
    return f"{told}. Quotas are legal takes, and risk counts total removals."


def _aim(table: QuotaTable) -> str:
    record, aim = table.record, table.recommendation.criterion
    told = (
        f"Risk is the chance of ever being below {words.limit_words(record)}, {words.moment(record)}, in "
        f"{words.years(table.horizon)} of quotas from {table.rates.first_year}; the tolerance is "
        f"{words.percent(table.tolerance)}."
    )
    if aim.question == "limit":
        return told
    goal = "back above the limit" if aim.question == "recovery" else "under the ceiling"
    stated = "assumed" if aim.assumed else "asked for"
    told += f" The quota's aim is a chance of at least {words.percent(aim.bound)} of being {goal} within "
    return f"{told}{words.years(aim.year)} ({stated})."


def _reading(table: QuotaTable) -> str:
    advice, curve, unit = table.recommendation, table.curve, table.record.unit
    last = words.number(float(curve.quotas[-1]), unit)
    told = (
        f"Risk is read off one stored curve of {curve.quotas.size} constant quotas from 0 to {last}, all on the same "
        "futures, whose number was fixed before looking"
    )
    if advice.qualifies:
        reduction = advice.criterion.question == "reduction"
        which, way = ("smallest", "up") if reduction else ("largest", "down")
        goal = "within the tolerance" if advice.criterion.question == "limit" else "that meets the aim"
        quota = words.number(advice.quota, unit)
        told += f"; the {which} quota on it {goal} is {quota} ({precision_words(unit)}, rounded {way})."
    else:
        told += "; no quota on it meets what is asked."
    if not table.is_recommended:
        told += f" What is shown for the rule in force ({table.rule}) is its own projection on those futures."
    return f"{told} Each ± is one Monte Carlo standard error."
