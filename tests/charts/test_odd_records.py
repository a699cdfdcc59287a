"""Records at the edge draw without an error, and say what is missing."""

from __future__ import annotations

import subprocess
import sys
from dataclasses import replace

import pytest

from harvest.charts import draw_history, draw_indices, draw_probabilities, draw_risk, files, mark_quota
from harvest.charts.risk import grows_suddenly
from harvest.futures import find_quota, fixed_quota, project
from harvest.record.model import ByYear, Level, Objectives
from tests.builders import make_record, make_survey, spread
from tests.charts.conftest import layers_of, make_case, texts_of

RATES = {
    "growth_rate": spread("90% between", low=0.2, high=0.4),
    "carrying_capacity": spread("90% between", low=1300, high=1700),
    "process_noise": spread("fixed", value=0.1),
}


def drawn(case):
    pictures = case.pictures()
    for picture in pictures.values():
        assert files.svg(picture)
    return pictures


def test_one_year_without_removals_levels_or_a_present_quota():
    pictures = drawn(make_case(make_record(rates=RATES)))
    assert "No removals are on record." in pictures["history"].sentence
    assert "One count, of 2020: 1,000 animals (90%: 722 to 1,385)." in pictures["history"].sentence
    assert "Present removals are not shown." not in pictures["yield-curve"].sentence
    assert "No present removals are on record." in pictures["yield-curve"].sentence
    assert "risks-by-year" in pictures
    assert list(pictures["risks-by-year"].table.columns)[1] == "Ever collapsed"
    assert "the collapse level" in pictures["years-ahead"].sentence
    title = pictures["risk-against-quota"].chart.to_dict()["layer"][0]["encoding"]["y"]["title"]
    assert title == "Chance of ever being below the collapse level in 20 years"


def test_a_record_without_counts_or_removals_says_so():
    picture = draw_history(make_record(surveys=()))
    assert picture.title == "No counts and no removals yet"
    assert "No absolute count is on record." in picture.sentence
    assert len(picture.table) == 0
    assert files.svg(picture)
    assert draw_indices(make_record(surveys=())) is None


def test_a_count_of_zero_is_fewer_than_the_detection_limit():
    survey = make_survey({2019: 400.0, 2020: 0.0}, (2019, 2020), detection_limit=25.0)
    picture = draw_history(make_record(years=(2019, 2020), surveys=(survey,)))
    assert "is fewer than 25 animals." in picture.sentence
    (mark, rows) = layers_of(picture, "point")[1]
    assert mark["shape"] == "triangle-down"
    assert rows == [{"x": 2020, "y": 25}]


def test_several_surveys_are_named_and_their_shapes_differ():
    years = (2018, 2019, 2020)
    surveys = tuple(
        make_survey({2018: n, 2020: n + 30}, years, name=name, column=name, kind=kind)
        for name, n, kind in (("air", 800.0, "absolute"), ("foot", 820.0, "absolute"), ("pellets", 3.0, "index"))
    )
    record = make_record(years=years, surveys=(*surveys, replace(surveys[2], name="tracks")))
    history, indices = draw_history(record), draw_indices(record)
    assert texts_of(history) == ["air", "foot"]
    shapes = [mark["shape"] for mark, _ in layers_of(history, "point") if mark["opacity"]]
    assert shapes == ["circle", "square"]
    assert texts_of(indices) == ["mean", "pellets", "tracks"]
    assert indices.table["Index"].tolist() == [3.0, 3.0, 33.0, 33.0]


def test_an_index_of_zeros_can_be_drawn():
    survey = make_survey({2020: 0.0}, (2020,), kind="index")
    assert files.svg(draw_indices(make_record(surveys=(survey,))))


def test_a_quota_beyond_the_fold_of_every_draw_is_told():
    aims = Objectives(limit=Level(300.0), target=Level(700.0), horizon=10, recovery=ByYear(5, 0.8))
    case = make_case(make_record(rates=RATES, objectives=aims, present_quota=600.0), quota=600.0)
    pictures = drawn(case)
    assert case.thresholds.beyond_fold == 1.0
    assert "fewer than 1 draw in 20 has an equilibrium" in pictures["equilibria"].sentence
    assert case.future.by_year["ever_collapsed"].iloc[-1] == 1.0
    assert "of having collapsed: more than 999 in 1,000" in pictures["years-ahead"].sentence
    assert pictures["years-ahead"].table["90% to"].iloc[-1] == 0.0


def test_a_recovery_is_read_by_its_own_event():
    aims = Objectives(limit=Level(1200.0), horizon=10, recovery=ByYear(5, 0.8))
    record = make_record(rates=RATES, objectives=aims, present_quota=0.0)
    case = make_case(record)
    pictures = drawn(case)
    assert case.advice.criterion.question == "recovery"
    assert "at least 80%" in texts_of(pictures["risk-against-quota"])
    assert "being back above 1,200 animals" in pictures["risk-against-quota"].sentence
    assert "Back above limit" in pictures["chances-by-year"].table


def test_a_season_that_must_be_closed():
    aims = Objectives(limit=Level(980.0), horizon=10)
    case = make_case(make_record(rates=RATES, objectives=aims, present_quota=0.0))
    picture = drawn(case)["risk-against-quota"]
    assert case.advice.quota == 0.0
    assert not case.advice.qualifies
    assert "closure and present 0" in texts_of(picture)
    assert "No quota examined meets that." in picture.sentence
    assert files.svg(mark_quota(picture, case.record, case.curve, case.advice.criterion, 0.0))


def test_one_year_ahead_is_a_point():
    aims = Objectives(limit=Level(300.0), horizon=1)
    case = make_case(make_record(rates=RATES, objectives=aims))
    picture = draw_probabilities(case.record, project(case.record, case.rates, fixed_quota(50.0), 1))
    assert [len(rows) for mark, rows in layers_of(picture, "point") if mark["opacity"]] == [1, 1, 1]
    assert files.svg(picture)


def test_a_curve_of_one_quota_can_be_drawn():
    record = make_record(rates=RATES, objectives=Objectives(limit=Level(300.0), horizon=5), unit="tonnes")
    case = make_case(record)
    curve, advice = find_quota(record, case.rates, "limit", tolerance=0.5, horizon=3, points=2)
    assert files.svg(draw_risk(record, curve, advice))


@pytest.mark.parametrize(
    ("p", "sudden"),
    [
        ([0.0, 0.01, 0.02, 0.05, 0.6], True),
        ([0.0, 0.2, 0.4, 0.6, 0.8], False),
        ([0.1, 0.1, 0.1, 0.1, 0.9], False),
        ([0.0, 0.01, 0.02, 0.05, 0.4], False),
        ([0.04, 0.01, 0.02, 0.05, 0.9], False),
    ],
)
def test_risk_grows_suddenly_only_where_it_does(p, sudden):
    import numpy as np

    assert grows_suddenly(np.arange(5.0), np.array(p)) is sudden


HISTORY_ALONE = """
import sys, types, pathlib, harvest
plan = types.ModuleType("harvest.plan")
plan.__path__ = [str(pathlib.Path(harvest.__file__).parent / "plan")]
sys.modules["harvest.plan"] = plan
from harvest.charts import draw_history, draw_indices
from harvest.record import demo_folder, read_record
record = read_record(demo_folder("lake"))
draw_history(record).chart.to_dict(), draw_history(record, public=True), draw_indices(record)
assert "altair" in sys.modules
print(*{"numba", "scipy", "vl_convert"} & set(sys.modules))
"""


def test_the_history_asks_for_no_kernel():
    """What ``harvest.plan`` itself loads on import is not the charts' doing, and is left out here."""
    done = subprocess.run([sys.executable, "-c", HISTORY_ALONE], capture_output=True, text=True, check=False)
    assert (done.returncode, done.stderr, done.stdout.split()) == (0, "", [])
