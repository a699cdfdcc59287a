"""Checking keys of ``record.toml`` against each other: season, surveys, levels, rule, private fields."""

from __future__ import annotations

from itertools import combinations

from harvest.record.fields import private_names
from harvest.record.model import COUNT_MOMENTS, RECORD_MOMENTS, Level
from harvest.record.reporting import Report, nearest, show
from harvest.record.schema import NOTE, REMOVALS, YEAR
from harvest.record.tables import Values, get, place


def check_season(values: Values, report: Report) -> None:
    """The moment of the count fits the season, and the lag fits the moment."""
    top = values[""]
    season, when, lag = get(top, "season"), get(top, "count_when"), get(top, "lag")
    if season is not None and when is not None and when not in RECORD_MOMENTS[season]:
        _report_moment("count_when", season, when, RECORD_MOMENTS[season], report)
    if when == "after" and lag == 0:
        report.error(
            "lag",
            "0",
            f'with count_when "{when}" the lag is at least 1',
            "Such a count is known only after the season, so it serves the next year's quota: write lag = 1.",
        )


def _report_moment(where: str, season: str, when: str, moments: tuple[str, ...], report: Report) -> None:
    choices = " or ".join(f'"{m}"' for m in moments)
    cure = "Correct this or the season."
    if when == "mean of year":
        cure = 'Write "start" here, and when = "mean of year" in the index survey that it belongs to.'
    report.error(where, show(when), f'with season "{season}" it must be {choices}', cure)


def check_surveys(values: Values, report: Report) -> None:
    """Each survey has its own name and column, one source of its CVs, and a moment that fits."""
    names: set[str] = set()
    columns: set[str] = set()
    for number, survey in enumerate(values["survey"], start=1):
        prefix = f"survey {number}"
        _check_once(get(survey, "name"), names, place(prefix, "name"), report)
        _check_once(get(survey, "column"), columns, place(prefix, "column"), report)
        _check_cv_source(survey, prefix, report)
        _check_moment(survey, values[""], prefix, report)
        if get(survey, "kind") == "index" and "bias" in survey:
            rule = "an index has no bias: its scale is not known in the first place"
            report.warning(place(prefix, "bias"), "a bias", rule, "It will not be used; take it out.")
    for number, survey in enumerate(values["survey"], start=1):
        _check_columns(survey, columns, f"survey {number}", report)


def _check_once(name: str | None, seen: set[str], where: str, report: Report) -> None:
    if name is None:
        return
    if name in seen:
        report.error(where, show(name), "each survey has a name and a column of its own", "Rename or take out one.")
    seen.add(name)


def _check_columns(survey: Values, counts: set[str], prefix: str, report: Report) -> None:
    for key in ("column", "cv_column"):
        column = get(survey, key)
        taken = (YEAR, REMOVALS, NOTE) if key == "column" else (YEAR, REMOVALS, NOTE, *counts)
        if column in taken:
            cure = "Give the survey a column of its own in the history."
            report.error(place(prefix, key), show(column), "this column holds something else", cure)


def _check_cv_source(survey: Values, prefix: str, report: Report) -> None:
    given = [key for key in ("cv", "cv_column") if key in survey]
    if len(given) != 1:
        report.error(
            prefix,
            "both cv and cv_column" if given else "neither cv nor cv_column",
            "the uncertainty of the counts is stated once",
            "Give cv = … where every count has the same coefficient of variation, else cv_column = a column.",
        )


def _check_moment(survey: Values, top: Values, prefix: str, report: Report) -> None:
    season = get(top, "season")
    when = get(survey, "when") if "when" in survey else get(top, "count_when")
    if season is None or when is None:
        return
    where = place(prefix, "when")
    if when not in COUNT_MOMENTS[season]:
        if "when" in survey:
            _report_moment(where, season, when, COUNT_MOMENTS[season], report)
    elif when == "mean of year" and get(survey, "kind") == "absolute":
        report.error(
            where,
            show(when),
            "the mean of the year is for an index only",
            'Write kind = "index", or when = "start" for an absolute survey.',
        )
    elif get(survey, "kind") == "absolute" and when != get(top, "count_when"):
        report.error(
            where,
            show(when),
            f"an absolute count happens when the record says, count_when = {show(get(top, 'count_when'))}",
            "Take out this line, or correct count_when.",
        )


def check_objectives(values: Values, report: Report) -> None:
    """Collapse ≤ limit ≤ target ≤ ceiling among levels of the same sort, and aims have their level."""
    objectives = values["objectives"]
    levels = {key: get(objectives, key) for key in ("collapse", "limit", "target", "ceiling")}
    for (low, below), (high, above) in combinations(levels.items(), 2):
        if _is_above(below, above):
            report.error(
                f"objectives.{high}",
                f"{_show_level(above)}, with {low} = {_show_level(below)}",
                f"{high} must not be below {low}",
                "Correct one of the two: collapse, limit, target and ceiling rise in this order.",
            )
    for aim, level in (("recovery", "limit"), ("reduction", "ceiling")):
        if aim in objectives and level not in objectives:
            cure = f"Add {level} = … to [objectives], or take {aim} out."
            report.error(f"objectives.{aim}", "an aim without its level", f"{aim} needs {level}", cure)


def _is_above(first: Level | None, second: Level | None) -> bool:
    if first is None or second is None or first.of_capacity != second.of_capacity:
        return False
    return first.value > second.value


def _show_level(level: Level | None) -> str:
    if level is None:
        return "nothing"
    return f"{level.value:.15g} of carrying capacity" if level.of_capacity else f"{level.value:.15g}"


def check_rule(values: Values, report: Report) -> None:
    """The settings of the rule fit together."""
    lower, upper = get(values["rule"], "lower"), get(values["rule"], "upper")
    if lower is not None and upper is not None and lower >= upper:
        report.error(
            "rule.lower",
            f"{lower:.15g}, with upper = {upper:.15g}",
            "lower must be below upper",
            "Swap the two, or correct one of them.",
        )


def check_noise(values: Values, report: Report) -> None:
    """Demographic noise is per animal, so tonnes need a body mass."""
    noisy = "demographic_noise" in values["rates"]
    if noisy and get(values[""], "unit") == "tonnes" and "body_mass" not in values["life"]:
        report.error(
            "rates.demographic_noise",
            "demographic noise in tonnes, without a body mass",
            "demographic noise counts animals",
            "Add body_mass (kg) to [life], or take demographic_noise out.",
        )


def check_private(values: Values, report: Report) -> None:
    """Private fields exist, and are named once."""
    seen: set[str] = set()
    known = private_names()
    for name in get(values["private"], "fields") or ():
        guess = nearest(name, known)
        if name not in known:
            cure = f"Was {guess} meant?" if guess else 'Write the keys with their table, such as "plan.author".'
            report.error(
                "private.fields",
                show(name),
                "only names, surveys, texts and columns of the history can be private",
                cure,
            )
        elif name in seen:
            report.error("private.fields", show(name), "each key is named once", "Take out one of the two.")
        seen.add(name)
