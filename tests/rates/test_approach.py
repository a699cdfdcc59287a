"""This year's abundance: from the latest count through the recorded removals, with noise, to the quota."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from scipy import stats

from harvest.errors import RatesError
from harvest.rates import draw_rates
from harvest.rates.approach import latest_usable_count, stated_bias
from harvest.rates.losses import removals_factor, total_removals
from harvest.record.counts import absolute_counts, latest_absolute_count
from harvest.record.model import LifeHistory, Losses, fixed

from ..builders import make_record, make_survey, spread

STRICT = 4.5


@pytest.mark.parametrize("cv", [0.05, 0.3, 1.0])
@pytest.mark.parametrize("bias", [0.6, 1.0, 1.3])
def test_count_is_median_unbiased_with_log_variance_from_its_cv(cv, bias):
    n = 40_000
    logs = np.log(draw_rates(make_record(cv=cv, bias=fixed(bias)), draws=n).column("abundance"))
    sd = np.sqrt(np.log(1 + cv**2))
    assert logs.mean() == pytest.approx(np.log(1000 / bias), abs=STRICT * sd / np.sqrt(n))
    assert logs.std() == pytest.approx(sd, rel=STRICT / np.sqrt(2 * n))
    assert stats.kstest((logs - np.log(1000 / bias)) / sd, "norm").pvalue > 1e-3


def test_uncertain_bias_widens_abundance_and_stays_with_its_draw():
    n = 40_000
    rates = draw_rates(make_record(cv=0.1, bias=spread("lognormal", median=0.8, sd_log=0.3)), draws=n)
    logs, bias = np.log(rates.column("abundance")), np.log(rates.column("bias"))
    assert logs.var() == pytest.approx(np.log(1.01) + 0.09, rel=STRICT * np.sqrt(2 / n))
    assert (logs + bias).std() == pytest.approx(np.sqrt(np.log(1.01)), rel=STRICT / np.sqrt(2 * n))


YEARS = (2018, 2019, 2020, 2021, 2022)


def test_latest_usable_count_skips_zero_missing_and_prefers_the_smaller_cv():
    a = make_survey({2019: 500.0, 2021: 0.0}, YEARS, name="a", column="a")
    b = make_survey({2019: 700.0, 2020: 650.0}, YEARS, 0.1, name="b", column="b")
    c = make_survey({2020: 900.0, 2022: 3.1}, YEARS, 0.4, name="c", column="c")
    index = replace(c, kind="index", name="d")
    usable = latest_usable_count(make_record(years=YEARS, surveys=(a, b, index)))
    assert (usable.survey.name, usable.row, usable.count, usable.cv) == ("b", 2, 650.0, 0.1)
    only = replace(c, values=(None, None, 900.0, None, None), cvs=(None, None, 0.4, None, None))
    assert latest_usable_count(make_record(years=YEARS, surveys=(only, b, a))).survey.name == "b"


@pytest.mark.parametrize("kind", ["index", "zero", "none", "no cv"])
def test_no_usable_absolute_count_is_refused(kind):
    survey = {
        "index": make_survey({2020: 9.0}, YEARS, kind="index"),
        "zero": make_survey({2020: 0.0}, YEARS, detection_limit=5.0),
        "none": make_survey({}, YEARS),
        "no cv": replace(make_survey({2020: 9.0}, YEARS), cvs=(None,) * 5),
    }[kind]
    with pytest.raises(RatesError, match="no usable absolute count"):
        draw_rates(make_record(years=YEARS, surveys=(survey,)), draws=10)


def history(season, when, lag, *, removals=None, first_quota_year=None, **more):
    taken = {2018: 50.0, 2019: 80.0, 2020: 0.0, 2021: 120.0, 2022: 60.0} if removals is None else removals
    return make_record(
        season,
        when,
        counts={2019: 900.0},
        removals=taken,
        years=YEARS,
        lag=lag,
        first_quota_year=first_quota_year,
        **more,
    )


@pytest.mark.parametrize("missing", [2019, 2020, 2021, 2022])
def test_missing_removals_on_the_way_are_an_error_naming_the_year(missing):
    taken = {2018: 50.0, 2019: 80.0, 2020: 0.0, 2021: 120.0, 2022: 60.0}
    taken[missing] = None
    record = history("short", "before", 0, removals=taken, first_quota_year=2023)
    with pytest.raises(RatesError, match=f"removals of {missing} are missing"):
        draw_rates(record, draws=10)
    after = history("short", "after", 1, removals=taken, first_quota_year=2023)
    if missing == 2019:
        draw_rates(after, draws=10)  # a count after that season has seen its removals
    else:
        with pytest.raises(RatesError, match=str(missing)):
            draw_rates(after, draws=10)


def test_a_quota_year_beyond_the_history_needs_removals_too():
    with pytest.raises(RatesError, match="removals of 2023 are missing"):
        draw_rates(history("short", "before", 2), draws=10)


def g(n):
    return 0.3 * n * (1 - n / 1500)


def by_hand(season, seen_after, x):
    """X at the start of each year and B after each take, from a count of 2019."""
    taken = {2019: 80.0, 2020: 0.0, 2021: 120.0, 2022: 60.0}
    total = {y: h * (1 + 0.2 + 0.1) + 7.0 for y, h in taken.items()}
    start, left = {}, {}
    if seen_after:
        left[2019] = x
        start[2020] = x + g(x)
    else:
        start[2019] = x
    for year in range(2020 if seen_after else 2019, 2023):
        if season == "short":
            left[year] = np.maximum(0, start[year] - total[year])
            start[year + 1] = left[year] + g(left[year])
        else:
            start[year + 1] = np.maximum(0, start[year] + g(start[year]) - total[year])
    return start, left


LOSSES = Losses(wounding=fixed(0.2), unreported=fixed(0.1), other=fixed(7.0))


@pytest.mark.parametrize(("season", "when"), [("short", "before"), ("short", "after"), ("all year", "start")])
@pytest.mark.parametrize("lag", [1, 2, 3])
def test_without_noise_abundance_is_the_recursion_through_recorded_removals(season, when, lag):
    record = history(season, when, lag, losses=LOSSES, first_quota_year=2023)
    rates = draw_rates(record, draws=50)
    alone = replace(
        record, history=replace(record.history, years=(2018, 2019), removals=(50.0, 80.0)), first_quota_year=None
    )
    survey = record.surveys[0]
    alone = replace(alone, surveys=(replace(survey, values=survey.values[:2], cvs=survey.cvs[:2]),))
    seen = draw_rates(replace(alone, first_quota_year=2020 if when == "after" else 2019), draws=50).column("counted")
    start, left = by_hand(season, when == "after", seen)
    np.testing.assert_allclose(rates.column("abundance"), start[2023], rtol=1e-12)
    shown = left if when == "after" else start
    np.testing.assert_allclose(rates.column("counted"), shown[2022 if when == "after" else 2023], rtol=1e-12)
    assert rates.recent.shape == (lag, 50)
    for back in range(1, lag + 1):
        np.testing.assert_allclose(rates.recent[lag - back], shown[2023 - back], rtol=1e-12)
    assert (rates.first_year, rates.count_year, rates.carried) == (2023, 2019, True)


@pytest.mark.parametrize(("seen_when", "shown_when"), [("after", "before"), ("before", "after")])
def test_a_count_at_another_moment_than_the_records_is_refused(seen_when, shown_when):
    """The checks of a record refuse it too; moments are never mixed."""
    survey = make_survey({2019: 900.0}, YEARS, 0.1, when=seen_when)
    record = history("short", shown_when, 1, losses=LOSSES, first_quota_year=2023, surveys=(survey,))
    with pytest.raises(RatesError, match=f'2019 is made "{seen_when}"'):
        draw_rates(record, draws=50)


@pytest.mark.parametrize(
    ("season", "when", "latest"), [("short", "before", 2021), ("short", "after", 2019), ("all year", "start", 2021)]
)
def test_a_count_that_is_made_after_the_quota_is_set_is_not_used(season, when, latest):
    counts = {2019: 900.0, 2021: 800.0, 2022: 700.0}
    record = replace(history(season, when, 1, first_quota_year=2021), surveys=())
    record = replace(record, surveys=(make_survey(counts, YEARS, when=when),))
    assert YEARS[latest_usable_count(record).row] == latest
    found = latest_absolute_count(record)
    assert (found, draw_rates(record, draws=5).count_year) == (latest_usable_count(record), latest)
    early = replace(record, first_quota_year=2018)
    assert latest_absolute_count(early) is None
    with pytest.raises(RatesError, match="known by the quota of 2018"):
        draw_rates(early, draws=5)


def test_a_count_above_zero_stands_for_its_year_before_a_more_precise_zero():
    zero = make_survey({2019: 0.0, 2021: 0.0}, YEARS, 0.1, name="zero", detection_limit=20.0)
    more = make_survey({2019: 40.0}, YEARS, 0.5, name="more")
    record = make_record(years=YEARS, surveys=(zero, more), removals=dict.fromkeys(YEARS, 0.0))
    assert {y: (c.survey.name, c.count) for y, c in absolute_counts(record).items()} == {
        2019: ("more", 40.0),
        2021: ("zero", 0.0),
    }
    (note,) = draw_rates(record, draws=5).notes
    assert note.startswith("an absolute count of zero in 2021 (fewer than 20) cannot be used")
    assert "zero" not in note.replace("count of zero", ""), "the name of a survey can be private"


@pytest.mark.parametrize(("season", "when"), [("short", "before"), ("short", "after"), ("all year", "start")])
def test_removals_that_leave_nothing_in_any_draw_are_an_error(season, when):
    taken = dict.fromkeys(YEARS, 0.0) | {2021: 1e6}
    record = history(season, when, 1, removals=taken, first_quota_year=2023)
    with pytest.raises(RatesError, match="removals on record since the count of 2019 are more than any draw held"):
        draw_rates(record, draws=40)


def test_draws_that_die_out_of_themselves_are_not_laid_to_the_removals():
    """N + 2N(1 − N/K) is below zero from 1.5 K on, and a demographic draw below one animal is gone."""
    record = make_record(
        years=YEARS,
        counts={2019: 900.0},
        removals=dict.fromkeys(YEARS, 0.0),
        rates={"growth_rate": fixed(2.0), "carrying_capacity": fixed(50.0)},
    )
    with pytest.raises(RatesError, match="took all there was in 0% of draws, and the rest died out"):
        draw_rates(record, draws=40)


@pytest.mark.parametrize(("taken", "told"), [(120.0, False), (1100.0, True)])
def test_a_note_tells_how_many_draws_the_removals_emptied(taken, told):
    n = 4000
    record = history("short", "before", 1, removals=dict.fromkeys(YEARS, 0.0) | {2022: taken}, first_quota_year=2023)
    rates = draw_rates(record, draws=n)
    gone = (rates.column("abundance") == 0).mean()
    if not told:
        assert (gone <= 0.01, rates.notes) == (True, ())
        return
    assert 0.01 < gone < 0.99
    (note,) = rates.notes
    assert note == (
        f"in {gone:.1%} of draws nothing is left by the season of 2023: removals on record since the count of 2019 "
        "took all there was"
    )


CASES = {
    "short, before": ("short", "before", 0, "mean one", 0.0, 0.0, "animals"),
    "short, before, autocorrelated, median one": ("short", "before", 1, "median one", 0.7, 0.0, "animals"),
    "short, after, demographic": ("short", "after", 2, "mean one", 0.0, 3.0, "animals"),
    "all year, both noises": ("all year", "start", 1, "mean one", 0.5, 2.0, "animals"),
    "all year, tonnes": ("all year", "start", 1, "mean one", -0.4, 2.0, "tonnes"),
}


@pytest.mark.parametrize("name", CASES)
def test_with_noise_abundance_agrees_with_independent_simulation(name):
    season, when, lag, noise, rho, demo, unit = CASES[name]
    n, sigma = 30_000, 0.25
    ranges = {"process_noise": fixed(sigma), "autocorrelation": fixed(rho), "demographic_noise": fixed(demo)}
    record = history(
        season,
        when,
        lag,
        losses=LOSSES,
        first_quota_year=2023,
        noise=noise,
        rates=ranges,
        unit=unit,
        bias=spread("lognormal", median=0.9, sd_log=0.1),
        cv=0.3,
        life=LifeHistory(body_mass=200.0),
    )
    rates = draw_rates(record, seed=3, draws=n)

    rng = np.random.default_rng(99)
    per_unit, half = (5.0 if unit == "tonnes" else 1.0), (0.5 if noise == "mean one" else 0.0)
    x = 900 / (0.9 * np.exp(0.1 * rng.standard_normal(n))) * np.exp(np.sqrt(np.log(1.09)) * rng.standard_normal(n))
    eps, left = None, x
    total = {y: h * 1.3 + 7.0 for y, h in ((2019, 80.0), (2020, 0.0), (2021, 120.0), (2022, 60.0))}
    for year in range(2019, 2023):
        if season == "short":
            left = x if (when == "after" and year == 2019) else np.maximum(0, x - total[year])
            parent, after = left, left + g(left)
        else:
            parent, after = x, np.maximum(0, x + g(x) - total[year])
        fresh = rng.standard_normal(n)
        eps = fresh if eps is None else rho * eps + np.sqrt(1 - rho**2) * fresh
        extra = demo**2 / np.maximum(parent * per_unit, 1)
        x = np.maximum(after, 0) * np.exp(
            sigma * eps + np.sqrt(extra) * rng.standard_normal(n) - half * (sigma**2 + extra)
        )
        if demo > 0:
            x = np.where(x * per_unit < 1, 0, x)
    shown = left if when == "after" else x
    for mine, theirs in ((x, rates.column("abundance")), (shown, rates.column("counted"))):
        assert stats.ks_2samp(mine, theirs).pvalue > 1e-3
        error = np.hypot(mine.std(), theirs.std()) / np.sqrt(n)
        assert theirs.mean() == pytest.approx(mine.mean(), abs=STRICT * error)
    assert stats.kstest(rates.column("weather"), "norm").pvalue > 1e-3
    mine, theirs = (
        np.corrcoef(eps, np.log(x + 1))[0, 1],
        np.corrcoef(rates.column("weather"), np.log(rates.column("abundance") + 1))[0, 1],
    )
    assert theirs == pytest.approx(mine, abs=STRICT * np.sqrt(2 / n))


def test_no_years_between_count_and_quota_carry_no_weather():
    rates = draw_rates(make_record(lag=0), draws=20)
    assert not rates.carried
    assert (rates.column("weather") == 0).all()
    assert (rates.first_year, rates.recent.shape) == (2020, (0, 20))


def test_a_count_after_the_last_season_is_todays_abundance_and_what_a_rule_sees_next():
    record = make_record("short", "after", counts={2020: 900.0}, years=(2018, 2019, 2020), lag=2)
    record = replace(record, first_quota_year=2021)
    rates = draw_rates(record, draws=30)
    seen = rates.column("counted")
    np.testing.assert_array_equal(rates.recent[1], seen)
    assert np.isnan(rates.recent[0]).all(), "2019 is on record or was not counted"
    np.testing.assert_allclose(rates.column("abundance"), seen + g(seen), rtol=1e-12)


def test_the_stated_bias_is_its_median():
    assert stated_bias(make_survey({2020: 1.0}, YEARS, bias=fixed(0.8))) == 0.8
    assert stated_bias(make_survey({2020: 1.0}, YEARS, bias=spread("uniform", low=0.5, high=0.9))) == pytest.approx(0.7)


def test_total_removals_follow_one_formula():
    rates = draw_rates(make_record(losses=LOSSES), draws=4)
    assert removals_factor(rates.table) == pytest.approx(np.full(4, 1.3))
    assert total_removals(rates.table, 10.0) == pytest.approx(np.full(4, 20.0))
    np.testing.assert_array_equal(rates.factor, removals_factor(rates.table))
    legal = np.array([[0.0], [5.0]])
    np.testing.assert_array_equal(rates.total_removals(legal), total_removals(rates.table, legal))
