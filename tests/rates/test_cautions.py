"""What a reader is told about doubtful draws, and what the two names of the growth rate share."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from scipy import stats

from harvest.rates import draw_rates
from harvest.record.model import Correlation, CurveChoice, Level, Objectives, fixed

from ..builders import make_record, spread


def notes(**given):
    return " | ".join(draw_rates(make_record(**given), draws=2000).notes)


def test_sound_draws_have_no_notes():
    assert notes() == ""


@pytest.mark.parametrize(
    ("given", "told"),
    [
        ({"rates": {"growth_rate": fixed(2.2)}}, "in all draws growth is so strong that the yearly step overshoots"),
        ({"rates": {"carrying_capacity": fixed(100.0)}}, "the growth curve falls to zero in one year"),
        ({"rates": {"carrying_capacity": fixed(400.0)}}, "more than twice the carrying capacity"),
        ({"objectives": Objectives(limit=Level(100.0))}, "the collapse level lies above the limit"),
    ],
)
def test_doubtful_draws_are_told_with_their_share(given, told):
    assert told in notes(**given)


def test_the_share_is_that_of_the_draws_concerned():
    """r uniform from 1.5 to 2.5: half of the draws are at or above 2, where S'(K) = 1 − r ≤ −1."""
    told = notes(rates={"growth_rate": spread("uniform", low=1.5, high=2.5)})
    share = float(told.split("in ", 1)[1].split("%", 1)[0]) / 100.0
    assert abs(share - 0.5) < 4 * np.sqrt(0.25 / 2000)


def test_a_stated_correlation_holds_under_either_name_of_the_growth_rate():
    """The Gompertz curve takes max_growth, the logistic states growth_rate of its own: both follow the correlation."""
    own = (("growth_rate", spread("90% between", low=0.1, high=0.4)),)
    record = replace(
        make_record(),
        curves=(CurveChoice("gompertz", 1.0), CurveChoice("logistic", 1.0, own)),
        rates=(
            ("max_growth", spread("90% between", low=0.2, high=0.5)),
            ("carrying_capacity", spread("90% between", low=1000, high=3000)),
        ),
        correlations=(Correlation("max_growth", "carrying_capacity", -0.6),),
    )
    table = draw_rates(record, seed=3, draws=20_000).table
    for curve, column in (("gompertz", "shape"), ("logistic", "r")):
        mine = table[table["curve"] == curve]
        assert abs(stats.spearmanr(mine[column], mine["K"]).statistic + 0.6) < 0.03, curve
