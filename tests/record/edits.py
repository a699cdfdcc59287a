"""A sound record as text, and edits of it."""

from __future__ import annotations

from harvest.errors import Problem
from harvest.record.check import check_texts

TOML = """\
format = 1
name = "Test herd"
unit = "animals"
season = "short"
count_when = "before"
lag = 0

[[survey]]
name = "ground"
column = "ground"
kind = "absolute"
cv_column = "ground_cv"

[[survey]]
name = "pellets"
column = "pellets"
kind = "index"
cv = 0.3

[[curve]]
name = "logistic"

[rates]
max_growth = { distribution = "uniform", low = 0.2, high = 0.4 }
carrying_capacity = { distribution = "90% between", low = 800, high = 1500 }
process_noise = 0.1

[objectives]
limit = 300
target = 600

[rule]
name = "ramp"
lower = 300
upper = 600
share = 0.1
"""
CSV = """\
year,removals,ground,ground_cv,pellets,note
2019,80,690,0.15,11,
2020,85,,,12.5,no count
2021,90,720,0.14,,
2022,90,700,0.16,10,
2023,,735,0.15,11,
"""


def edited(text: str, old: str, new: str) -> str:
    """The text with one place changed, which must be there."""
    if old not in text:
        raise ValueError(f"{old!r} is not in the text")
    return text.replace(old, new, 1)


def problems_of(toml: str = TOML, csv: str = CSV) -> tuple[Problem, ...]:
    """The problems of two texts, once it is seen that a record comes back exactly when there is no error."""
    record, problems = check_texts(toml, csv)
    has_error = any(p.severity == "error" for p in problems)
    if (record is None) != has_error:
        raise AssertionError(f"a record {'and' if record else 'nor'} an error: {problems}")
    return problems


def told(problems: tuple[Problem, ...], severity: str, *words: str) -> bool:
    """Whether one problem of this severity holds all the words."""
    return any(p.severity == severity and all(word in str(p) for word in words) for p in problems)
