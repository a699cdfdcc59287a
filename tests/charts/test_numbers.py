"""What is drawn and told is what the library computed."""

from __future__ import annotations

import math

import numpy as np
import pytest

from harvest.charts import draw_probabilities, draw_risk, mark_quota
from harvest.charts.probabilities import AIMS, RISKS
from harvest.errors import SettingsError
from harvest.plan import words
from harvest.plan.layout import parts
from tests.charts.conftest import DEMOS, layers_of, texts_of

KINDS = {"text", "year", "amount", "probability", "error", "share", "index"}


@pytest.fixture(params=DEMOS)
def case(request, cases):
    return cases[request.param]


def close(rows, name, values):
    assert [r[name] for r in rows] == pytest.approx(list(values), rel=1e-4, abs=1e-9)


def test_every_picture_is_whole(case):
    for name, picture in case.pictures().items():
        assert picture.name == name
        assert picture.sentence[:-1]
        assert picture.sentence.endswith(".")
        assert picture.chart.to_dict()["description"] == picture.description
        assert picture.sentence in picture.description
        assert [heading for heading, _ in picture.columns] == list(picture.table.columns)
        assert {kind for _, kind in picture.columns} <= KINDS
        assert len(picture.table) > 0


def test_the_specification_stays_small(case):
    for picture in case.pictures().values():
        assert len(picture.chart.to_json(indent=None)) < 40_000


def test_history_holds_counts_with_their_lognormal_interval(cases):
    picture = cases["deer"].pictures()["history"]
    latest = picture.table[picture.table["What"] == "aerial count"].iloc[-1]
    spread = math.exp(1.6448536269514722 * math.sqrt(math.log(1 + 0.16**2)))
    assert latest.tolist()[2:] == pytest.approx([2348.0, 2348.0 / spread, 2348.0 * spread])
    _, rows = layers_of(picture, "bar")[0]
    assert [r["y"] for r in rows] == [250, 260, 270, 280, 290, 300, 300, 310, 310, 315, 310, 315]
    assert "the latest, of 2026, is 2,348 red deer" in picture.sentence
    assert "315 in 2025" in picture.sentence
    assert texts_of(picture) == ["limit 1,200", "target 2,200", "removals"]


def test_an_index_has_a_picture_of_its_own(cases):
    picture = cases["lake"].pictures()["indices"]
    survey = cases["lake"].record.surveys[0]
    assert picture.table["Index"].tolist() == list(survey.values)
    assert "indices" not in cases["deer"].pictures()


def test_the_yield_curve_is_the_summary_s(case):
    picture = case.pictures()["yield-curve"]
    _, rows = layers_of(picture, "line")[0]
    close(rows, "x", case.summary.curve["abundance"])
    close(rows, "y", case.summary.curve["median"])
    assert picture.table["90% to"].tolist() == case.summary.curve["high90"].tolist()
    held = case.summary.spreads["sustainable_today"].median
    assert f"Total removals of {words.number(held, case.record.unit)} (50%" in picture.sentence
    present = np.median(case.rates.total_removals(case.summary.present_removals))
    assert f"present {words.number(present, case.record.unit)}" in texts_of(picture)


def test_equilibria_end_where_few_draws_have_them(case):
    picture, branches = case.pictures()["equilibria"], case.thresholds.branches
    sure = branches[branches["share"] >= 0.5]
    (_, upper), (_, thin), (_, lower), _ = layers_of(picture, "line")
    close(upper, "y", sure["upper_median"])
    close(lower, "y", sure["lower_median"])
    few = branches[(branches["share"] >= 0.05) & (branches["share"] < 0.5)]
    close(thin[1:], "y", few["upper_median"])
    hidden = picture.table[picture.table["Draws with equilibria"] < 0.05]
    assert len(hidden) > 0
    assert hidden.iloc[:, 2:].isna().all(axis=None)
    fold = case.thresholds.spreads["fold_quota"].median
    assert f"fold {words.number(fold, case.record.unit)}" in texts_of(picture)
    assert f"beyond the fold is {words.probability(case.thresholds.beyond_fold)}" in picture.sentence


def test_the_future_starts_today_and_ends_with_the_projection(case):
    picture, table = case.pictures()["years-ahead"], case.future.by_year
    assert picture.table["Median"].iloc[0] == np.quantile(case.rates.column("counted"), 0.5)
    assert picture.table["Median"].tolist()[1:] == table["abundance_median"].tolist()
    assert picture.table["90% from"].tolist()[1:] == table["abundance_low90"].tolist()
    last = words.number(table["abundance_median"].iloc[-1], case.record.unit)
    assert f"is {last} {words.kind(case.record)}" in picture.sentence
    assert words.probability(table["ever_below_limit"].iloc[-1]) in picture.sentence


def test_single_futures_go_on_from_their_own_draw(case):
    lines = layers_of(case.pictures()["years-ahead"], "line")
    thin = [rows for mark, rows in lines if mark.get("strokeWidth") == 0.8]
    assert len(thin) == 4
    for rows, i in zip(thin, (0, 2, 4, 7), strict=True):
        close(rows, "y", [case.rates.column("counted")[i], *case.future.paths[2, :, i]])


def test_the_risk_is_the_stored_curve_s(case):
    picture, aim = case.pictures()["risk-against-quota"], case.advice.criterion
    p, se = (of[aim.event][:, aim.year - 1] for of in (case.curve.probability, case.curve.se))
    _, rows = layers_of(picture, "line")[0]
    close(rows, "x", case.curve.quotas)
    close(rows, "y", p)
    _, bands = layers_of(picture, "area")[0]
    close(bands, "high", np.minimum(1.0, p + 1.96 * se))
    quota = words.number(case.advice.quota, case.record.unit)
    assert f"recommended {quota}" in texts_of(picture)
    assert f"With {quota} {words.kind(case.record)} a year" in picture.sentence
    assert words.probability(case.advice.probability) in picture.sentence


def test_a_mark_is_three_layers_on_top_and_leaves_the_picture_as_it_was(case):
    picture, aim = case.pictures()["risk-against-quota"], case.advice.criterion
    before = picture.chart.to_dict()
    quota = 0.4 * float(case.curve.quotas[-1])
    marked = mark_quota(picture, case.record, case.curve, aim, quota)
    assert picture.chart.to_dict() == before
    after = marked.chart.to_dict()
    assert after["layer"][:-3] == before["layer"]
    assert len(after["layer"]) == len(before["layer"]) + 3
    p, _ = case.curve.at(aim.event, quota, aim.year)
    text = f"{words.number(quota, case.record.unit)}: {words.short_probability(p)}"
    assert texts_of(marked)[-1] == text
    same = draw_risk(case.record, case.curve, case.advice, marked_quota=quota)
    assert same.chart.to_dict() == after


def test_a_mark_outside_the_curve_is_refused(case):
    with pytest.raises(SettingsError, match="not on the risk curve"):
        draw_risk(case.record, case.curve, case.advice, marked_quota=1e9)


def test_chances_by_year_are_the_projection_s(case):
    picture = case.pictures()["chances-by-year"]
    for _, rows in layers_of(picture, "line"):
        assert len(rows) == len(case.future.by_year)
    for heading, event in (("Ever below limit", "ever_below_limit"), ("Ever collapsed", "ever_collapsed")):
        assert picture.table[heading].tolist() == case.future.by_year[event].tolist()
        assert picture.table[f"{heading}, standard error"].tolist() == case.future.by_year[f"{event}_se"].tolist()


def test_risks_alone_have_an_axis_of_their_own(cases):
    case = cases["deer"]
    risks = draw_probabilities(case.record, case.future, events=RISKS)
    assert risks.name == "risks-by-year"
    assert "At target" not in risks.table
    highest = case.future.by_year["ever_below_limit"].max()
    scale = risks.chart.to_dict()["layer"][0]["encoding"]["y"]["scale"]
    assert highest < scale["domain"][1] < 1.4 * highest
    assert draw_probabilities(case.record, case.future, events=AIMS).name == "aims-by-year"
    with pytest.raises(SettingsError, match="none of the events"):
        draw_probabilities(case.record, case.future, events=("under_ceiling",))


def test_kinds_are_those_of_the_quota_table(case):
    from harvest.plan import make_quota_table

    used = {kind for part in parts(make_quota_table(case.record, case.rates)) for kind in part.kinds}
    assert used <= KINDS
