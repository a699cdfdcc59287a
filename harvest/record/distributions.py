"""Checking a range for a rate: a number, or a table that names a distribution and its parameters."""

from __future__ import annotations

import math
from typing import Any

from harvest.record.model import Distribution
from harvest.record.reporting import Report, listed, nearest, show
from harvest.record.schema import DISTRIBUTIONS, MAX_NUMBER, Field, Interval

#: Standard deviations to either side that must fit into the allowed range, or a warning is given.
_TAIL = 3.0


def check_distribution(field: Field, raw: Any, where: str, report: Report) -> Distribution | None:
    """The distribution that ``raw`` states, or None with its faults in ``report``."""
    if not isinstance(raw, dict):
        return _check_fixed(field, raw, where, report)
    kind = _check_kind(raw, where, report)
    if kind is None:
        return None
    values = _check_parameters(kind, raw, where, report)
    if values is None:
        return None
    if kind == "fixed":
        return _check_fixed(field, raw["value"], f"{where}.value", report)
    within = field.within or Interval(-MAX_NUMBER)
    fault = _find_shape_fault(kind, values) or _find_range_fault(field, kind, values, within)
    if fault is not None:
        found = listed(f"{name} = {value:g}" for name, value in values.items())
        report.error(where, f"{kind} with {found}", *fault)
        return None
    _warn_of_tails(kind, values, within, where, report)
    return Distribution(kind, tuple((name, values[name]) for name in DISTRIBUTIONS[kind]))


def _check_fixed(field: Field, raw: Any, where: str, report: Report) -> Distribution | None:
    value = plain_number(raw)
    if value is None or (field.within is not None and value not in field.within):
        report.error(where, show(raw), f"it must be {field.rule()}", _cure_for(raw))
        return None
    return Distribution("fixed", (("value", value),))


def _cure_for(raw: Any) -> str:
    if isinstance(raw, str):
        return "Write a number without quotes, or a table with a distribution and its parameters."
    return "Write a number in the allowed range, or a distribution; rates are proportions, not percentages."


def plain_number(raw: Any) -> float | None:
    """A TOML number as a float, or None for anything else, infinity and oversized numbers."""
    if isinstance(raw, bool) or not isinstance(raw, int | float):
        return None
    if not abs(raw) <= MAX_NUMBER:  # also catches NaN
        return None
    return float(raw) + 0.0


def _check_kind(raw: dict[str, Any], where: str, report: Report) -> str | None:
    kind = raw.get("distribution")
    known = listed(f'"{k}"' for k in DISTRIBUTIONS)
    if isinstance(kind, str) and kind in DISTRIBUTIONS:
        return kind
    guess = nearest(kind, DISTRIBUTIONS) if isinstance(kind, str) else None
    cure = f'Was "{guess}" meant?' if guess else 'Write for example { distribution = "uniform", low = …, high = … }.'
    report.error(f"{where}.distribution", show(kind), f"the distribution must be one of {known}", cure)
    return None


def _check_parameters(kind: str, raw: dict[str, Any], where: str, report: Report) -> dict[str, float] | None:
    names = DISTRIBUTIONS[kind]
    needs = f'"{kind}" takes {" and ".join(names)}'
    values: dict[str, float] = {}
    sound = True
    for name in names:
        value = plain_number(raw.get(name))
        if value is None:
            sound = False
            cure = "Write a plain number." if name in raw else f"Add {name} = … to the table."
            report.error(f"{where}.{name}", show(raw.get(name)), needs, cure)
        else:
            values[name] = value
    unknown = [key for key in raw if key not in (*names, "distribution")]
    for key in unknown[:5]:
        sound = False
        guess = nearest(key, [n for n in names if n not in raw])
        cure = f"Was {guess} meant?" if guess else "Take it out."
        report.error(where, f"the unknown parameter {show(key)}", needs, cure)
    return values if sound else None


def _find_shape_fault(kind: str, values: dict[str, float]) -> tuple[str, str] | None:
    """The rule and the cure, where the parameters do not make a distribution."""
    if "low" in values and not values["low"] < values["high"]:
        return (
            "low must be below high",
            "Swap the two, or write a single number where the rate is known exactly.",
        )
    if kind == "triangular" and not values["low"] <= values["mode"] <= values["high"]:
        return "mode must lie between low and high", "Correct the mode, which is the most likely value."
    for name in ("sd", "sd_log", "median", "a", "b"):
        if name in values and values[name] <= 0:
            return (
                f"{name} must be above 0",
                f"Correct {name}, or write a single number where the rate is known.",
            )
    if values.get("sd_log", 0) > 5:
        return (
            "sd_log must be at most 5",
            "It is the standard deviation of the natural logarithm: 0.2 is about 20 percent.",
        )
    return None


def _find_range_fault(field: Field, kind: str, values: dict[str, float], within: Interval) -> tuple[str, str] | None:
    """The rule and the cure, where the distribution lies outside the allowed range."""
    if kind == "90% between":
        other = 'Use "triangular" or "uniform" for a range that touches this bound.'
        if field.is_proportion and not 0 < values["low"] < values["high"] < 1:
            return 'both ends of "90% between" must lie inside 0 and 1 for a proportion', other
        if field.is_positive and values["low"] <= 0:
            return '"90% between" of a rate that cannot be negative must start above 0', other
    points = [values[name] for name in ("low", "high", "mean", "median") if name in values]
    outside = [p for p in points if p not in within.closed]
    if outside:
        return (
            f"the values must be {within}",
            f"Correct {outside[0]:g}; rates are proportions, not percentages.",
        )
    return None


def _warn_of_tails(kind: str, values: dict[str, float], within: Interval, where: str, report: Report) -> None:
    if kind == "normal":
        ends = values["mean"] - _TAIL * values["sd"], values["mean"] + _TAIL * values["sd"]
    elif kind == "lognormal":
        spread = math.exp(_TAIL * values["sd_log"])
        ends = values["median"] / spread, values["median"] * spread
    else:
        return
    if not all(end in within.closed for end in ends):
        report.warning(
            where,
            f"a {kind} range that reaches from {ends[0]:.3g} to {ends[1]:.3g}",
            f"the values must be {within}",
            'A part of the range is impossible; "triangular", "uniform" or "90% between" would stay inside.',
        )
