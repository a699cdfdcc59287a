"""Reading the recommended quota off a risk curve, and rounding it."""

from __future__ import annotations

import itertools
from decimal import ROUND_CEILING, ROUND_FLOOR, Decimal

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from harvest.errors import SettingsError
from harvest.futures import RiskCurve, pick_question, recommend_quota, trace_risk
from harvest.futures.project import EVENT_COLUMNS
from harvest.futures.recommend import qualifying_runs
from harvest.futures.risk import highest_quota
from harvest.futures.rounding import round_down, round_up
from harvest.record.model import ByYear, Level, Objectives

from ..builders import make_rates, make_record


def make_curve(quotas, risk, event="ever_below_limit", years=20):
    """A risk curve whose one event has the given probabilities in every year."""
    quotas = np.asarray(quotas, float)
    table = {name: np.zeros((quotas.size, years)) for name in EVENT_COLUMNS}
    table[event] = np.repeat(np.asarray(risk, float)[:, None], years, axis=1)
    return RiskCurve(quotas, table, {k: np.full_like(v, 0.01) for k, v in table.items()}, 2021, 100, 1, 0, True, "none")


LIMIT = make_record(objectives=Objectives(limit=Level(300.0), tolerance=0.1))
TONNES = make_record(unit="tonnes", objectives=Objectives(limit=Level(300.0), tolerance=0.1))


def test_interpolated_between_the_last_that_qualifies_and_the_next():
    got = recommend_quota(LIMIT, make_curve([0, 10, 20, 30], [0.0, 0.05, 0.2, 0.5]), "limit")
    assert got.exact == pytest.approx(10 + 10 * 0.05 / 0.15)
    assert got.quota == 13.0
    assert got.probability == pytest.approx(0.05 + 0.3 * 0.15)
    assert (got.qualifies, got.at_edge, got.miss, got.further_runs) == (True, False, 0.0, ())
    assert got.se == pytest.approx(0.01)
    assert got.zero == (0.0, 0.0, pytest.approx(0.01))
    exactly = recommend_quota(LIMIT, make_curve([0, 10, 20], [0.0, 0.1, 0.2]), "limit")
    assert exactly.quota == 10.0, "at the tolerance is within it"


def test_lowest_run_is_recommended_and_further_runs_are_mentioned():
    got = recommend_quota(LIMIT, make_curve([0, 10, 20, 30, 40, 50], [0.05, 0.15, 0.05, 0.05, 0.3, 0.05]), "limit")
    assert got.exact == pytest.approx(5.0)
    assert got.further_runs == (pytest.approx((15.0, 32.0)), pytest.approx((48.0, 50.0)))


def test_nothing_qualifies_is_a_closure_and_says_by_how_much():
    got = recommend_quota(LIMIT, make_curve([0, 10, 20], [0.25, 0.3, 0.6]), "limit")
    assert (got.qualifies, got.quota, got.exact) == (False, 0.0, 0.0)
    assert got.miss == pytest.approx(0.15)
    assert got.probability == 0.25


def test_a_run_that_starts_above_zero_is_mentioned_not_recommended():
    got = recommend_quota(LIMIT, make_curve([0, 10, 20], [0.25, 0.05, 0.6]), "limit")
    assert (got.qualifies, got.quota) == (False, 0.0)
    assert got.miss > 0
    assert len(got.further_runs) == 1


def test_at_the_edge_the_true_answer_is_at_least_this():
    got = recommend_quota(LIMIT, make_curve([0, 10, 20], [0.01, 0.02, 0.03]), "limit")
    assert (got.quota, got.at_edge) == (20.0, True)


risks = st.lists(st.floats(0, 1), min_size=2, max_size=14)
tolerances = st.tuples(st.floats(0.001, 0.999), st.floats(0.001, 0.999)).map(sorted)


@given(risks, tolerances, st.sampled_from([LIMIT, TONNES]), st.booleans())
def test_quota_never_rises_when_the_tolerance_falls(risk, two, record, monotone):
    """On any curve, also one where risk falls with the quota."""
    risk = sorted(risk) if monotone else risk
    curve = make_curve(np.linspace(0, 173.3, len(risk)), risk)
    strict, lenient = (recommend_quota(record, curve, "limit", tolerance=t) for t in two)
    assert strict.quota <= lenient.quota
    assert strict.exact <= lenient.exact + 1e-9
    for got in (strict, lenient):
        if got.qualifies:
            assert got.probability <= got.criterion.bound + 1e-6
            assert got.quota <= got.exact * (1 + 1e-9) + 1e-6
        else:
            assert (got.quota, got.miss > 0) == (0.0, True)


@given(risks, st.floats(0.01, 0.99))
def test_runs_hold_exactly_the_quotas_that_qualify(risk, tolerance):
    quotas = np.arange(len(risk), dtype=float)
    excess = np.array(risk) - tolerance
    runs = qualifying_runs(quotas, excess)
    inside = np.zeros(len(risk), bool)
    for low, high in runs:
        inside |= (quotas >= low - 1e-9) & (quotas <= high + 1e-9)
    assert (inside == (excess <= 1e-9)).all() or np.abs(excess[inside != (excess <= 0)]).max() < 1e-6
    for (_, high), (low, _) in itertools.pairwise(runs):
        assert high < low
    for edge in (e for run in runs for e in run if 0 < e < len(risk) - 1):
        assert np.interp(edge, quotas, excess) == pytest.approx(0, abs=1e-9)


def test_recovery_is_the_largest_quota_that_still_recovers():
    record = make_record(objectives=Objectives(limit=Level(300.0), recovery=ByYear(8, 0.7)))
    curve = make_curve([0, 10, 20, 30], [0.9, 0.8, 0.6, 0.1], "back_above_limit")
    got = recommend_quota(record, curve, "recovery")
    assert got.exact == pytest.approx(15.0)
    assert (got.criterion.year, got.criterion.bound, got.quota) == (8, 0.7, 15.0)
    assert got.probability == pytest.approx(0.7)
    none = recommend_quota(record, make_curve([0, 10], [0.5, 0.4], "back_above_limit"), "recovery")
    assert (none.qualifies, none.quota, none.miss) == (False, 0.0, pytest.approx(0.2))
    default = recommend_quota(make_record(objectives=Objectives(limit=Level(300.0))), curve, "recovery")
    assert (default.criterion.year, default.criterion.bound, default.criterion.assumed) == (10, 0.8, True)
    assert not got.criterion.assumed
    with pytest.raises(SettingsError, match="needs a limit"):
        recommend_quota(make_record(), curve, "recovery")


CULL = make_record(objectives=Objectives(ceiling=Level(500.0), reduction=ByYear(5, 0.8)))


def test_reduction_is_the_smallest_cull_rounded_up():
    got = recommend_quota(CULL, make_curve([0, 10, 20, 30], [0.1, 0.5, 0.9, 1.0], "under_ceiling"), "reduction")
    assert got.exact == pytest.approx(17.5)
    assert got.quota == 18.0
    assert got.probability >= 0.8
    already = recommend_quota(CULL, make_curve([0, 10], [0.85, 0.9], "under_ceiling"), "reduction")
    assert (already.quota, already.qualifies) == (0.0, True)
    none = recommend_quota(CULL, make_curve([0, 10, 20], [0.1, 0.3, 0.6], "under_ceiling"), "reduction")
    assert (none.quota, none.qualifies, none.miss) == (20.0, False, pytest.approx(0.2))
    with pytest.raises(SettingsError, match="ceiling"):
        recommend_quota(make_record(), make_curve([0, 1], [0, 0]), "reduction")


@pytest.mark.parametrize("top", [103.7, 60.0, 19.9])
@pytest.mark.parametrize("reaches", [True, False])
def test_a_cull_is_whole_animals_on_the_curve_wherever_the_curve_ends(top, reaches):
    got = recommend_quota(CULL, make_curve([0, top], [0.0, 0.8 if reaches else 0.5], "under_ceiling"), "reduction")
    assert got.quota == int(got.quota)
    assert top - 1 < got.quota <= top
    assert got.qualifies == reaches


def test_the_curve_ends_on_a_quota_that_can_be_printed():
    rates = make_rates(r=[0.31, 0.35], K=[977.0, 1013.0], abundance=900.0, wounding=0.13)
    for unit in ("animals", "tonnes"):
        record = make_record(unit=unit, objectives=Objectives(ceiling=Level(333.0)))
        top = highest_quota(record, rates)
        assert round_up(top, unit) == round_down(top, unit) == top
        assert trace_risk(record, rates, years=1, points=3).quotas[-1] == top


def test_the_question_follows_from_todays_abundance():
    aims = Objectives(limit=Level(300.0), ceiling=Level(800.0))
    record = make_record(objectives=aims)
    for counted, question in ((200.0, "recovery"), (500.0, "limit"), (900.0, "reduction")):
        assert pick_question(record, make_rates(draws=3, counted=counted)) == question
    assert pick_question(make_record(), make_rates(draws=3, counted=1.0)) == "limit"


def test_horizon_and_tolerance_are_checked_not_replaced():
    curve = make_curve([0, 10], [0.0, 0.3], years=5)
    for wrong in (
        {"horizon": 0},
        {"horizon": -1},
        {"horizon": 6},
        {"horizon": 5, "tolerance": 0.0},
        {"horizon": 5, "tolerance": 1.0},
    ):
        with pytest.raises(SettingsError):
            recommend_quota(LIMIT, curve, "limit", **wrong)
    with pytest.raises(SettingsError):
        recommend_quota(LIMIT, curve, "no such question")
    assert recommend_quota(LIMIT, curve, "limit", horizon=5).criterion.year == 5


def test_present_quota_and_its_risk_are_told():
    record = make_record(present_quota=15.0, objectives=Objectives(tolerance=0.1))
    got = recommend_quota(record, make_curve([0, 10, 20], [0.0, 0.1, 0.2]), "limit")
    assert got.present == (15.0, pytest.approx(0.15), pytest.approx(0.01))
    with pytest.raises(SettingsError, match="not on the risk curve"):
        make_curve([0, 10], [0, 0]).at("ever_below_limit", 11.0, 1)


def three_figures(value: float, direction: str) -> float:
    """Rounding to three significant figures in exact decimal arithmetic."""
    d = Decimal(value)
    step = Decimal(1).scaleb(d.adjusted() - 2)
    return float((d / step).to_integral_value(direction) * step)


def test_rounding_of_whole_animals():
    assert round_down(0.29 * 100, "animals") == 29.0
    assert round_up(0.29 * 100, "animals") == 29.0
    assert round_up(1.1 * 10, "animals") == 11.0
    assert (round_down(28.999, "animals"), round_up(28.001, "animals")) == (28.0, 29.0)
    assert round_down(0.0, "animals") == round_up(0.0, "animals") == round_down(0.4, "animals") == 0.0


def test_rounding_of_tonnes():
    assert round_down(0.29 * 100, "tonnes") == 29.0
    cases = {
        1234.5: (1230.0, 1240.0),
        0.0123456: (0.0123, 0.0124),
        99.95: (99.9, 100.0),
        1e6: (1e6, 1e6),
        0.0: (0.0, 0.0),
    }
    for value, (down, up) in cases.items():
        assert (round_down(value, "tonnes"), round_up(value, "tonnes")) == (down, up)
    assert round_down(999.9999995, "tonnes") == 999.0, "the step is that of the number itself"
    assert str(round_down(0.3 * 3, "tonnes")) == "0.9"


@given(st.floats(1e-6, 1e12))
def test_rounding_agrees_with_exact_decimals_away_from_the_slack(value):
    down, up = round_down(value, "tonnes"), round_up(value, "tonnes")
    place = Decimal(value).scaleb(-(Decimal(value).adjusted() - 2)) % 1
    assume(Decimal("1e-8") < place < 1 - Decimal("1e-8"))
    assert down == pytest.approx(three_figures(value, ROUND_FLOOR), rel=1e-12)
    assert up == pytest.approx(three_figures(value, ROUND_CEILING), rel=1e-12)


amounts = st.one_of(st.just(0.0), st.floats(1e-9, 1e12))


@given(amounts, st.sampled_from(["animals", "tonnes"]))
def test_rounding_is_idempotent_and_ordered(value, unit):
    down, up = round_down(value, unit), round_up(value, unit)
    assert down <= up
    for rounded in (down, up):
        assert round_down(rounded, unit) == round_up(rounded, unit) == rounded
    slack = 1e-9 * max(1.0, value)
    assert down <= value + slack
    assert up >= value - slack
    assert up - down <= max(1.0 if unit == "animals" else 0, 0.011 * value) + slack


@given(amounts, amounts, st.sampled_from(["animals", "tonnes"]))
def test_rounding_keeps_order(a, b, unit):
    low, high = sorted((a, b))
    assert round_down(low, unit) <= round_down(high, unit)
    assert round_up(low, unit) <= round_up(high, unit)
