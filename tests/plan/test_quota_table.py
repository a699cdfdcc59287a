from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from harvest.errors import SettingsError
from harvest.futures import Rule, fixed_quota
from harvest.futures.rounding import round_down
from harvest.plan.rows import compare_quotas
from harvest.plan.sentences import findings, headline
from harvest.record.model import ByYear, Distribution, Level, Objectives, fixed
from tests.builders import make_record
from tests.plan.conftest import table_of


def test_the_demos_ask_the_three_kinds_of_question(tables):
    asked = {name: t.recommendation.criterion.question for name, t in tables.items()}
    assert asked == {"deer": "limit", "lake": "limit", "geese": "reduction"}
    assert not tables["deer"].rule.feedback
    assert tables["lake"].rule.feedback


@pytest.mark.parametrize("demo", ["deer", "lake", "geese"])
def test_zero_the_present_and_the_recommended_quota_are_always_shown(tables, demo):
    table = tables[demo]
    shown = table.compared.set_index("quota")["what"]
    assert shown[0.0] == "no take"
    assert "present quota" in shown[table.record.present_quota]
    assert "recommended" in shown[table.recommendation.quota]
    assert list(table.compared["quota"]) == sorted(set(table.compared["quota"]))
    assert table.curve.quotas[0] == 0.0
    assert table.record.present_quota in table.curve.quotas


def test_the_recommended_quota_keeps_the_risk_within_tolerance_and_the_next_grid_quota_does_not(tables):
    table = tables["deer"]
    advice, curve = table.recommendation, table.curve
    risk = curve.probability["ever_below_limit"][:, 19]
    assert risk[curve.quotas <= advice.quota].max() <= 0.05
    assert risk[curve.quotas > advice.exact].min() > 0.05
    p, se = table.rule_risk
    assert abs(p - advice.probability) < 4 * se + 0.002


def test_the_smallest_cull_reaches_the_ceiling_in_time_and_a_smaller_one_does_not(tables):
    table = tables["geese"]
    advice, curve = table.recommendation, table.curve
    chance = curve.probability["under_ceiling"][:, 4]
    assert advice.quota == np.ceil(advice.exact - 1e-9)
    assert chance[curve.quotas >= advice.quota].min() >= 0.8
    assert chance[curve.quotas < advice.exact].max() < 0.8
    assert headline(table).startswith("Take at least")


def test_rows_are_the_projection_and_quotas_are_rounded(tables):
    for name, table in tables.items():
        years = table.future.by_year.head(len(table.rows))
        assert len(table.rows) == table.record.objectives.plan_years
        assert list(table.rows["quota_year"]) == list(
            range(table.rates.first_year, table.rates.first_year + len(years))
        )
        for column, source in (("removals", "removals_mean"), ("abundance", "abundance_median")):
            assert np.array_equal(table.rows[column], years[source])
        for column in ("below_limit", "ever_below_limit", "ever_collapsed"):
            assert np.array_equal(table.rows[column], years[column])
        for quota in table.rows["quota"]:
            assert quota == round_down(quota, table.record.unit), name


def test_the_first_year_under_a_rule_is_the_rule_at_the_count_on_record(demos):
    deer = demos["deer"]
    rule = Rule("ramp", (1200.0, 2200.0, 0.15))
    table = table_of(deer, rule=rule)
    bias = table.count_bias
    expected = round_down(float(rule.quota(2348.0 / bias)[0]), "animals")
    first = table.rows.iloc[0]
    assert first["quota"] == first["quota_low90"] == first["quota_high90"] == expected
    assert table.rows.iloc[1]["quota_low90"] < table.rows.iloc[1]["quota_high90"]
    assert table.steps["value"].iloc[-1] == expected
    assert table.steps["value"].iloc[0] == 2348.0


def test_without_a_count_the_first_quota_is_a_share_of_the_present_one(demos):
    deer = demos["deer"]
    survey = deer.surveys[0]
    gap = replace(survey, values=(*survey.values[:-1], None), cvs=(*survey.cvs[:-1], None))
    record = replace(deer, surveys=(gap,))
    table = table_of(record, rule=Rule("fixed share", (0.1,), without_count=0.8))
    assert table.rows["quota"].iloc[0] == 252.0 == 0.8 * record.present_quota
    assert "no count was made in 2026" in table.steps["why"].iloc[0]
    with pytest.raises(SettingsError, match="present_quota"):
        table_of(replace(record, present_quota=None), rule=Rule("fixed share", (0.1,)))


def test_steps_fall_from_the_yield_to_the_printed_quota(tables):
    steps = tables["deer"].steps
    assert list(steps["step"]) == [
        "Greatest sustainable yield",
        "Uncertain rates",
        "Limit, abundance and bad years",
        "Losses",
        "Rounding",
    ]
    assert steps["value"].is_monotonic_decreasing
    assert steps["value"].iloc[-1] == tables["deer"].recommendation.quota
    msy = tables["deer"].rates.closed_form("msy")
    assert steps["value"].iloc[0] == np.median(msy)
    assert steps["value"].iloc[1] == np.quantile(msy, 0.05)


def test_losses_explain_the_step_from_removals_to_legal_take(tables):
    """With 11% losses and 15 other deaths the legal take is about (removals − 15) / 1.12."""
    values = tables["deer"].steps["value"].to_numpy()
    assert values[3] == pytest.approx((values[2] - 15.0) / 1.12, rel=0.02)


def test_below_the_limit_the_question_is_recovery(demos):
    record = replace(
        demos["deer"],
        objectives=replace(demos["deer"].objectives, limit=Level(3000.0), recovery=ByYear(8, 0.7), target=None),
    )
    table = table_of(record)
    advice = table.recommendation
    assert advice.criterion.question == "recovery"
    assert advice.qualifies
    chance = table.curve.probability["back_above_limit"][:, 7]
    assert chance[table.curve.quotas <= advice.quota].min() >= 0.7
    assert chance[table.curve.quotas > advice.exact].max() < 0.7
    assert "being back above" in " ".join(findings(table))


def test_nothing_within_tolerance_is_a_closure_with_its_miss(demos):
    objectives = replace(demos["deer"].objectives, limit=Level(2200.0), target=None)
    table = table_of(replace(demos["deer"], objectives=objectives))
    advice = table.recommendation
    assert not advice.qualifies
    assert advice.quota == 0.0
    assert advice.miss == pytest.approx(advice.zero[1] - 0.05)
    assert headline(table).startswith("Close the season: no quota of red deer, and not even closure")
    assert "percentage points above the tolerance" in " ".join(findings(table))


def test_a_tight_aim_extends_the_curve_until_a_cull_reaches_it(demos):
    objectives = replace(demos["geese"].objectives, ceiling=Level(200.0), limit=None, reduction=ByYear(1, 0.99))
    losses = replace(demos["geese"].losses, implementation_cv=0.8)
    table = table_of(replace(demos["geese"], objectives=objectives, losses=losses))
    advice = table.recommendation
    assert advice.qualifies
    assert advice.probability >= 0.99
    assert advice.quota > 10_000
    assert "but that risks falling below the collapse level" in headline(table)


def test_where_no_cull_reaches_the_ceiling_none_is_recommended(tables):
    table = tables["geese"]
    failed = replace(table, recommendation=replace(table.recommendation, qualifies=False), rule=fixed_quota(900.0))
    assert "No cull examined" in headline(failed)
    named = compare_quotas(failed.record, failed.curve, failed.recommendation, failed.horizon)
    assert "recommended" not in "".join(named["what"])


def test_a_rule_is_judged_by_what_is_asked_of_the_population(demos):
    geese = table_of(demos["geese"], rule=Rule("fixed share", (0.02,)))
    assert "its chance of being under 9,000 geese within 5 years is" in headline(geese)
    aims = replace(demos["deer"].objectives, limit=Level(3000.0), recovery=ByYear(8, 0.7), target=None)
    below = table_of(replace(demos["deer"], objectives=aims), rule=fixed_quota(20.0))
    assert headline(below) == "A legal quota of 20 red deer a year, as asked."
    assert "chance of collapse" in " ".join(findings(below))


def test_no_cull_is_needed_where_the_population_is_under_its_ceiling(demos):
    aims = replace(demos["geese"].objectives, ceiling=Level(60_000.0))
    table = table_of(replace(demos["geese"], objectives=aims), question="reduction")
    assert headline(table) == "No cull is needed to get under the ceiling in time."


def test_the_tolerance_and_horizon_given_are_the_ones_used(demos):
    strict = table_of(demos["deer"], tolerance=0.01)
    loose = table_of(demos["deer"], tolerance=0.2)
    short = table_of(demos["deer"], horizon=5)
    assert strict.recommendation.quota < loose.recommendation.quota
    assert short.recommendation.quota > strict.recommendation.quota
    assert short.horizon == 5
    assert "in 5 years" in " ".join(findings(short))


def test_a_stated_quota_is_shown_with_its_own_risk(demos):
    table = table_of(demos["deer"], rule=fixed_quota(320.0))
    told = " ".join(findings(table))
    assert "as asked" in headline(table)
    assert "With 320 a year" in told
    assert "above your tolerance" in told
    assert (table.rows["quota"] == 320.0).all()


@pytest.mark.parametrize("years", [0, 11])
def test_plan_years_are_one_to_ten(demos, years):
    with pytest.raises(SettingsError, match="plan years"):
        table_of(demos["deer"], plan_years=years)


def test_a_harmless_limit_extends_the_curve_until_the_risk_shows(demos):
    objectives = replace(demos["deer"].objectives, limit=Level(1.0), target=None, horizon=1, recovery=None)
    table = table_of(replace(demos["deer"], objectives=objectives))
    assert not table.recommendation.at_edge
    assert table.recommendation.quota > 1000


def test_a_count_of_zero_closes_the_season_under_a_rule_and_is_told(demos):
    deer = demos["deer"]
    survey = deer.surveys[0]
    record = replace(deer, surveys=(replace(survey, values=(*survey.values[:-1], 0.0)),))
    table = table_of(record, rule=Rule("ramp", (1200.0, 2200.0, 0.15)))
    assert table.first_quota == 0.0
    assert table.rates.count_year == 2025
    (note,) = table.rates.notes
    assert note.startswith("an absolute count of zero in 2026 (fewer than 20) cannot be used")
    assert "far too high" in note


def test_the_answer_does_not_depend_on_the_present_quota_nor_on_a_wide_curve(demos):
    """The curve is refined where the answer lies, so that a far-off present quota cannot move it."""
    deer = demos["deer"]
    advised = {p: table_of(replace(deer, present_quota=p)).recommendation for p in (0.0, 315.0, 31_500.0, 3.15e6)}
    quotas = {a.quota for a in advised.values()}
    assert len(quotas) == 1
    wide = Distribution("90% between", (("low", 3200.0), ("high", 60_000.0)))
    rates = tuple((n, wide if n == "carrying_capacity" else d) for n, d in deer.rates)
    for table in (table_of(replace(deer, rates=rates)), table_of(replace(deer, present_quota=31_500.0))):
        advice, curve = table.recommendation, table.curve
        assert advice.quota in curve.quotas
        assert advice.quota + 1.0 in curve.quotas or advice.exact == advice.quota
        assert table.rule_risk == (advice.probability, advice.se)
        assert advice.probability <= 0.05


def test_before_the_count_the_quota_awaits_it(demos):
    """History complete to last year, count before the season still to come: the card decides, not a made-up number."""
    deer = demos["deer"]
    years = deer.history.years[:-1]
    history = replace(deer.history, years=years, removals=deer.history.removals[:-1], notes=deer.history.notes[:-1])
    survey = replace(deer.surveys[0], values=deer.surveys[0].values[:-1], cvs=deer.surveys[0].cvs[:-1])
    record = replace(deer, history=history, surveys=(survey,), first_quota_year=2026)
    table = table_of(record, rule=Rule("ramp", (1200.0, 2200.0, 0.1)))
    assert table.awaits_count
    assert headline(table).startswith("The quota of 2026 follows from the count of 2026, by the lookup card")
    first = table.rows.iloc[0]
    assert first["quota_low90"] < first["quota"] < first["quota_high90"]
    assert "not on record yet" in table.steps["why"].iloc[0]
    assert table.steps["value"].iloc[-1] == first["quota"]


def test_a_rule_that_breaks_the_tolerance_says_so_in_the_headline(demos):
    table = table_of(demos["deer"], rule=Rule("fixed share", (0.4,)))
    assert "is above your tolerance of 5%" in headline(table)
    mild = table_of(demos["deer"], rule=Rule("fixed share", (0.02,)))
    assert "tolerance" not in headline(mild)


def test_the_tolerance_given_is_the_one_a_rule_is_judged_by(demos):
    table = table_of(demos["lake"], tolerance=0.01)
    assert "above your tolerance of 1%" in " ".join([headline(table), *findings(table)])
    assert "tolerance of 10%" not in " ".join([headline(table), *findings(table)])


@pytest.mark.parametrize("levels", [{"limit": Level(1200.0)}, {"ceiling": Level(700.0)}], ids=["recovery", "reduction"])
def test_an_aim_that_is_assumed_may_lie_beyond_the_horizon(levels):
    """The assumed aim is ten years ahead; a horizon of five must not cut the curve short."""
    record = make_record(objectives=Objectives(horizon=5, **levels))
    advice = table_of(record).recommendation
    assert advice.criterion.assumed
    assert advice.criterion.year == 10
    assert advice.qualifies


def test_recovery_is_not_asked_of_a_population_above_its_limit(demos):
    with pytest.raises(SettingsError, match="above its limit"):
        table_of(demos["deer"], question="recovery")


def test_the_table_ends_with_the_horizon_and_with_a_cull_s_aim(demos):
    short = table_of(demos["deer"], horizon=2)
    assert len(short.rows) == 2
    assert "for 2 years" in headline(short)
    assert "the table ends there" in " ".join(findings(short))
    aims = replace(demos["geese"].objectives, reduction=ByYear(3, 0.5))
    assert len(table_of(replace(demos["geese"], objectives=aims)).rows) == 3


def test_less_than_one_animal_a_year_is_told_as_such(demos):
    deer = demos["deer"]
    small = tuple(
        (
            n,
            Distribution("fixed", (("value", 40.0 if n == "carrying_capacity" else 0.02),))
            if n != "autocorrelation"
            else d,
        )
        for n, d in deer.rates
        if n in ("max_growth", "carrying_capacity", "process_noise")
    )
    survey = replace(deer.surveys[0], values=(*deer.surveys[0].values[:-1], 36.0))
    losses = replace(deer.losses, other=fixed(0.0))
    aims = replace(deer.objectives, limit=Level(25.0), target=None)
    record = replace(deer, rates=small, correlations=(), surveys=(survey,), objectives=aims, losses=losses)
    table = table_of(record)
    advice = table.recommendation
    assert (advice.quota, advice.qualifies) == (0.0, True)
    assert "less than one animal a year" in headline(table)


def test_overshooting_growth_is_told_beside_the_quota(demos):
    deer = demos["deer"]
    rates = tuple((n, Distribution("fixed", (("value", 2.4),)) if n == "max_growth" else d) for n, d in deer.rates)
    table = table_of(replace(deer, rates=rates, correlations=()))
    assert any("overshoots" in note for note in table.rates.notes)
    told = " ".join(findings(table))
    assert "the growth curve itself falls to zero" in told
    assert "the risk is least at a quota of" in told
    assert "least risk" in "".join(table.compared["what"])


def test_a_tolerance_finer_than_the_draws_can_tell_is_refused(demos):
    with pytest.raises(SettingsError, match="draw at least 100,000"):
        table_of(demos["deer"], tolerance=0.0001)


def test_a_quota_that_cannot_be_printed_is_refused(demos):
    with pytest.raises(SettingsError, match="whole animals, such as 300"):
        table_of(demos["deer"], rule=fixed_quota(300.7))


def test_the_chance_of_standing_at_the_target_is_told(tables):
    table = tables["deer"]
    p, _ = table.rule_chance("at_target", 20)
    assert 0.3 < p < 1.0
    assert "at or above the target of 2,200 red deer at the end of 20 years" in " ".join(findings(table))
