"""Checking that each growth curve has the rates it needs, and that the correlations fit together."""

from __future__ import annotations

import math
from collections.abc import Sequence

from harvest.record.fields import CORRELATED
from harvest.record.reporting import Report, listed, nearest, show
from harvest.record.tables import Values, get, place

_GROWTH = ("growth_rate", "max_growth")
#: Curves whose shape is the survival of adults.
_SURVIVING = ("ricker", "beverton-holt")


def check_curves(values: Values, report: Report) -> None:
    """Each curve, with the shared rates behind its own, states its growth once and has all else it needs."""
    shared = values["rates"]
    if all(key in shared for key in _GROWTH):
        _report_both("rates", report)
    seen: set[str] = set()
    for number, curve in enumerate(values["curve"], start=1):
        name = get(curve, "name")
        where = f"curve {number}"
        if name is None:
            continue
        if name in seen:
            cure = "Put the two together; a range of shapes can be a distribution."
            report.error(place(where, "name"), show(name), "each curve stands once", cure)
        seen.add(name)
        _check_growth(name, curve, shared, f"{where} ({name})", report)
        if name in _SURVIVING:
            _check_survival(name, curve, values["life"], where, report)
        for key in ("carrying_capacity", "process_noise"):
            if key not in curve and key not in shared:
                _report_missing(f"{where} ({name})", key, report)


def _check_growth(name: str, curve: Values, shared: Values, where: str, report: Report) -> None:
    own = [key for key in _GROWTH if key in curve]
    if len(own) == 2:
        _report_both(where, report)
    if name == "gompertz":
        _check_gompertz(curve, shared, where, report)
    elif not own and not any(key in shared for key in _GROWTH):
        report.error(
            where,
            "neither growth_rate nor max_growth",
            "a curve needs one of the two",
            "Add max_growth (or growth_rate) to [rates], or to this curve alone.",
        )


def _check_gompertz(curve: Values, shared: Values, where: str, report: Report) -> None:
    """The Gompertz map takes its own shape, else its own or the shared max_growth."""
    if "growth_rate" in curve:
        cure = "Take it out and give shape or max_growth."
        report.error(place(where, "growth_rate"), "growth_rate", "the Gompertz map has no growth_rate", cure)
    elif "shape" in curve and "max_growth" in curve:
        cure = "Keep the one that is better known."
        report.error(where, "both shape and max_growth", "the Gompertz map takes one of the two", cure)
    elif "shape" not in curve and "max_growth" not in curve and "max_growth" not in shared:
        cure = "Add shape (b, between 0 and 1) to this curve, or max_growth to it or to [rates]."
        report.error(where, "neither shape nor max_growth", "the Gompertz map needs one of the two", cure)


def _check_survival(name: str, curve: Values, life: Values, where: str, report: Report) -> None:
    """Ricker and Beverton–Holt state adult survival; that of the life history is suggested, never taken in silence."""
    shape = get(curve, "shape")
    if "shape" not in curve:
        stated = get(life, "adult_survival")
        cure = "Add shape = …, a number at least 0 and below 1, or a range; 0 where all adults die after breeding."
        if stated is not None and stated < 1.0:
            cure = f"Add shape = {stated:g} if adult_survival of [life] is meant, or a range around it."
        rule = f'the shape of "{name}" is the yearly survival of adults without removals, and is needed'
        report.error(place(where, "shape"), "nothing", rule, cure)
    elif shape is not None and shape.kind == "90% between" and not shape["high"] < 1.0:
        rule = 'both ends of "90% between" must lie inside 0 and 1 for a proportion'
        report.error(place(where, "shape"), str(shape), rule, "Give an upper end below 1.")


def _report_both(where: str, report: Report) -> None:
    report.error(
        where,
        "both growth_rate and max_growth",
        "growth is stated once",
        "Keep max_growth where it comes from demography, growth_rate where it is the curve's parameter r.",
    )


def _report_missing(where: str, key: str, report: Report) -> None:
    hint = "; 0 if the years are to be all alike" if key == "process_noise" else ""
    report.error(where, f"no {key}", f"a curve needs {key}", f"Add {key} to [rates], or to this curve alone{hint}.")


def merged_rate(name: str) -> str:
    """The growth rate goes by two names, one a curve states; for correlations they are the same rate."""
    return "max_growth" if name in _GROWTH else name


def check_correlations(values: Values, report: Report) -> None:
    """Correlations name two rates of the record, each pair once, and make a possible matrix together."""
    stated = set(values["rates"]).union(*values["curve"]) & set(CORRELATED)
    given: set[frozenset[str]] = set()
    pairs: dict[frozenset[str], float] = {}
    sound = True
    for number, correlation in enumerate(values["correlation"], start=1):
        where = place(f"correlation {number}", "between")
        names, value = get(correlation, "between"), get(correlation, "value")
        if names is None or not _check_pair(names, stated, where, report):
            sound = False
            continue
        if frozenset(names) in given:
            sound = False
            report.error(where, listed(names), "each pair of rates stands once", "Take out one of the two.")
            continue
        given.add(frozenset(names))
        if value is None:
            sound = False
            continue
        merged = frozenset(map(merged_rate, names))
        if pairs.setdefault(merged, value) != value:
            sound = False
            report.error(
                where,
                f"{listed(names)} = {value:g}, elsewhere {pairs[merged]:g}",
                "growth_rate and max_growth are one rate under two names, so both have the same correlations",
                "Give both the same value, or take out one of the two.",
            )
    if sound and pairs and not _is_possible(pairs):
        report.error(
            "correlation",
            "correlations that contradict each other",
            "together they must make a positive definite matrix",
            "Bring the values closer to 0: two rates that both follow a third cannot run against each other.",
        )


def _check_pair(names: Sequence[str], stated: set[str], where: str, report: Report) -> bool:
    if len(names) != 2 or names[0] == names[1]:
        report.error(
            where, listed(names) or "an empty list", "a correlation is between two different rates", "Name two rates."
        )
        return False
    if set(names) == set(_GROWTH):
        cure = "Take the correlation out: wherever both are stated, each curve by one of them, they share their draw."
        report.error(where, listed(names), "growth_rate and max_growth are one rate under two names", cure)
        return False
    sound = True
    for name in names:
        if name in stated:
            continue
        sound = False
        if name in CORRELATED:
            cure = "Add a range for it, or take the correlation out."
            report.error(where, show(name), "the rate must be stated in [rates] or a [[curve]]", cure)
        else:
            guess = nearest(name, CORRELATED)
            cure = f"Was {guess} meant?" if guess else "Name one of these."
            report.error(where, show(name), f"the rates are {listed(CORRELATED)}", cure)
    return sound


def _is_possible(pairs: dict[frozenset[str], float]) -> bool:
    """Whether the matrix is positive definite once Spearman's correlations are Pearson's: 2 sin(π ρ/6)."""
    names = sorted(set().union(*pairs))

    def pearson(first: str, second: str) -> float:
        if first == second:
            return 1.0
        return 2 * math.sin(math.pi * pairs.get(frozenset((first, second)), 0.0) / 6)

    return is_positive_definite([[pearson(a, b) for b in names] for a in names])


def is_positive_definite(matrix: Sequence[Sequence[float]]) -> bool:
    """Whether a symmetric matrix has a Cholesky factor with a diagonal above 1e-9."""
    lower: list[list[float]] = []
    for i, row in enumerate(matrix):
        line: list[float] = []
        for j in range(i):
            line.append((row[j] - sum(a * b for a, b in zip(line, lower[j], strict=False))) / lower[j][j])
        rest = row[i] - sum(a * a for a in line)
        if rest <= 1e-9:
            return False
        lower.append([*line, math.sqrt(rest)])
    return True
