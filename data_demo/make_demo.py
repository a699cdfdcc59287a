"""Write the three demo records. All populations and places are invented; the truth behind each is stated here.

Run from anywhere: ``python data_demo/make_demo.py``. Uses numpy only, not the program, so that the demos stay
what they are when the program changes. Invented data show how the program works; they are no evidence.
"""

from __future__ import annotations

import csv
import math
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import numpy as np

HERE = Path(__file__).parent


@dataclass(frozen=True)
class Truth:
    """What nature does in a demo: yearly growth g(N), noise, and the share of deaths that is not reported."""

    growth: Callable[[float], float]
    noise: float
    start: float
    losses: float
    other: float
    seed: int


#: Deer: theta-logistic, r 0.36 a year, K 4,000, θ 1.3; noise sd 0.08; aerial counts see 92%; deaths beyond the
#: reported cull: 11% of it and 15 a year.
DEER = Truth(lambda n: 0.36 * n * (1 - (n / 4000) ** 1.3), 0.08, 2900.0, 0.11, 15.0, 11)

#: Lake: Fox curve, r 0.40 a year, K 620 tonnes; noise sd 0.15; catch per effort = 0.07 × the year's mean abundance
#: with CV 25%; the absolute survey is unbiased with CV 20%; deaths beyond the reported catch: 6% of it.
LAKE = Truth(lambda n: 0.40 * n * math.log(620 / n), 0.15, 430.0, 0.06, 0.0, 23)

#: Geese: Gompertz map, b 0.10, K 27,000; noise sd 0.07; winter counts after the season see 95% with CV 8%; deaths
#: beyond the reported bag: 15% of it and 100 a year.
GEESE = Truth(lambda n: n**0.90 * 27000**0.10 - n, 0.07, 9000.0, 0.15, 100.0, 37)


def environment(rng: np.random.Generator, noise: float) -> float:
    """One year's environment, mean one."""
    return math.exp(noise * rng.standard_normal() - noise * noise / 2)


def observed(rng: np.random.Generator, value: float, cv: float, digits: int) -> float:
    """A count or index with lognormal error (median unbiased), rounded to significant digits."""
    seen = value * math.exp(math.sqrt(math.log1p(cv * cv)) * rng.standard_normal())
    return round(seen, digits - 1 - math.floor(math.log10(seen)))


def cell(value: float | None) -> str:
    """A number as a cell; nothing for a gap."""
    return "" if value is None else f"{value:g}" if value < 1e5 else f"{value:.0f}"


def write(folder: str, header: list[str], rows: list[list[object]], record: str) -> None:
    """Write one record's two files."""
    place = HERE / folder
    place.mkdir(exist_ok=True)
    with (place / "history.csv").open("w", newline="", encoding="utf-8") as stream:
        csv.writer(stream, lineterminator="\n").writerows([header, *rows])
    (place / "record.toml").write_text(record, encoding="utf-8")


def deer() -> None:
    """Ostrel Ridge red deer: a short cull, an aerial count before it in most years."""
    t, rng, rows = DEER, np.random.default_rng(DEER.seed), []
    x = t.start
    culls = [250, 260, 270, 280, 290, 300, 300, 310, 310, 315, 310, 315]
    for i, year in enumerate(range(2014, 2027)):
        cv = float(rng.choice([0.12, 0.14, 0.16]))
        count = observed(rng, 0.92 * x, cv, 4)
        flown, last = year not in (2017, 2021, 2022), year == 2026
        note = "" if flown else "no flight: fog"
        rows.append([year, "" if last else culls[i], cell(count if flown else None), cv if flown else "", note])
        if not last:
            left = x - culls[i] * (1 + t.losses) - t.other
            x = (left + t.growth(left)) * environment(rng, t.noise)
    write("deer", ["year", "removals", "aerial_count", "aerial_cv", "note"], rows, DEER_RECORD)


def lake() -> None:
    """Lake Orvenna whitefish: catch all year, catch per effort every year, an absolute survey every third."""
    t, rng, rows = LAKE, np.random.default_rng(LAKE.seed), []
    x = t.start
    catches = [48, 52, 57, 61, 64, 66, 70, 72, 69, 71, 68, 66, 64, 65, 62, 60, 61, 58, 59, 57]
    for i, year in enumerate(range(2006, 2026)):
        after = max(1.0, (x + t.growth(x) - catches[i] * (1 + t.losses)) * environment(rng, t.noise))
        index = observed(rng, 0.07 * (x + after) / 2, 0.25, 3)
        survey = observed(rng, x, 0.20, 3)
        rows.append([year, catches[i], cell(index), cell(survey) if (year - 2007) % 3 == 0 else ""])
        x = after
    write("lake", ["year", "removals", "catch_per_effort", "survey_tonnes"], rows, LAKE_RECORD)


def geese() -> None:
    """Sellan Marshes geese: a bag in autumn, a count in winter after it; a growing population above its ceiling."""
    t, rng, rows = GEESE, np.random.default_rng(GEESE.seed), []
    x = t.start
    bags = [300, 300, 350, 400, 400, 500, 600, 600, 700, 800, 800, 900]
    for i, year in enumerate(range(2014, 2026)):
        left = x - bags[i] * (1 + t.losses) - t.other
        rows.append([year, bags[i], cell(observed(rng, 0.95 * left, 0.08, 4))])
        x = (left + t.growth(left)) * environment(rng, t.noise)
    write("geese", ["year", "removals", "winter_count"], rows, GEESE_RECORD)


DEER_RECORD = """\
# An invented population in a place that does not exist, written by ../make_demo.py, which states the truth.
format = 1
name = "Ostrel Ridge red deer"
species = "red deer"
place = "Ostrel Ridge"
unit = "animals"
season = "short"
count_when = "before"
lag = 0
history = "history.csv"
present_quota = 315

[[survey]]
name = "aerial count"
column = "aerial_count"
kind = "absolute"
cv_column = "aerial_cv"
bias = { distribution = "90% between", low = 0.86, high = 0.98 }
detection_limit = 20

[[curve]]
name = "logistic"
weight = 0.5

[[curve]]
name = "theta-logistic"
weight = 0.5
shape = { distribution = "triangular", low = 1.0, mode = 1.3, high = 2.0 }

[rates]
max_growth = { distribution = "90% between", low = 0.28, high = 0.44 }
carrying_capacity = { distribution = "90% between", low = 3200, high = 4900 }
process_noise = { distribution = "uniform", low = 0.05, high = 0.12 }
demographic_noise = 0.5
autocorrelation = 0.2

[[correlation]]
between = ["max_growth", "carrying_capacity"]
value = -0.4

[life]
age_first_breeding = 2
adult_survival = 0.93
body_mass = 95

[objectives]
limit = 1200
target = 2200
collapse = { of_capacity = 0.1 }
horizon = 20
tolerance = 0.05
recovery = { years = 10, chance = 0.8 }
plan_years = 5
recovery_factor = 0.5

[losses]
wounding = { distribution = "triangular", low = 0.03, mode = 0.06, high = 0.12 }
unreported = { distribution = "uniform", low = 0.02, high = 0.08 }
other = 15
implementation_cv = 0.08

[plan]
author = "Wildlife office of Ostrel Ridge"
purpose = "Hold the herd above 1,200 before the season and keep damage to young forest low."

[private]
fields = ["plan.author"]
"""

LAKE_RECORD = """\
# An invented population in a place that does not exist, written by ../make_demo.py, which states the truth.
format = 1
name = "Lake Orvenna whitefish"
species = "whitefish"
place = "Lake Orvenna"
unit = "tonnes"
season = "all year"
count_when = "start"
lag = 1
history = "history.csv"
present_quota = 57

[[survey]]
name = "catch per effort"
column = "catch_per_effort"
kind = "index"
when = "mean of year"
cv = 0.25

[[survey]]
name = "echo survey"
column = "survey_tonnes"
kind = "absolute"
cv = 0.20

[[curve]]
name = "fox"
weight = 0.6

[[curve]]
name = "logistic"
weight = 0.4

[rates]
max_growth = { distribution = "90% between", low = 0.5, high = 1.2 }
carrying_capacity = { distribution = "90% between", low = 450, high = 800 }
process_noise = { distribution = "uniform", low = 0.10, high = 0.20 }
low_abundance = 0.1

[life]
age_first_breeding = 3
body_mass = 0.4

[objectives]
limit = { of_capacity = 0.2 }
target = { of_capacity = 0.4 }
horizon = 20
tolerance = 0.10
plan_years = 6

[losses]
unreported = { distribution = "triangular", low = 0.0, mode = 0.05, high = 0.15 }
implementation_cv = 0.05

[rule]
name = "ramp"
lower = 100
upper = 220
share = 0.18
without_count = 1.0

[survey_plan]
every = 3

[plan]
purpose = "A steady catch for the village nets without bringing the stock below a fifth of its capacity."
"""

GEESE_RECORD = """\
# An invented population in a place that does not exist, written by ../make_demo.py, which states the truth.
format = 1
name = "Sellan Marshes geese"
species = "geese"
place = "Sellan Marshes"
unit = "animals"
season = "short"
count_when = "after"
lag = 1
history = "history.csv"
present_quota = 900

[[survey]]
name = "winter count"
column = "winter_count"
kind = "absolute"
cv = 0.08
bias = { distribution = "90% between", low = 0.90, high = 1.0 }

[[curve]]
name = "gompertz"
weight = 0.5

[[curve]]
name = "logistic"
weight = 0.5
growth_rate = { distribution = "90% between", low = 0.12, high = 0.22 }

[rates]
max_growth = { distribution = "90% between", low = 0.25, high = 0.45 }
carrying_capacity = { distribution = "90% between", low = 21000, high = 34000 }
process_noise = { distribution = "uniform", low = 0.04, high = 0.10 }

[objectives]
limit = 3000
collapse = 1500
ceiling = 9000
horizon = 15
tolerance = 0.05
reduction = { years = 5, chance = 0.8 }
plan_years = 5

[losses]
wounding = { distribution = "triangular", low = 0.05, mode = 0.12, high = 0.25 }
unreported = { distribution = "uniform", low = 0.0, high = 0.05 }
other = 100
implementation_cv = 0.15

[plan]
purpose = "Bring the wintering flock under 9,000 within five years to limit damage to winter wheat."
"""

if __name__ == "__main__":
    deer()
    lake()
    geese()
