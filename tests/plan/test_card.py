from __future__ import annotations

import numpy as np
import pytest

from harvest.futures import Rule
from harvest.futures.rounding import round_down
from harvest.plan.card import nice_step
from tests.plan.conftest import table_of

RULES = [
    Rule("fixed share", (0.12,)),
    Rule("escapement", (2000.0,)),
    Rule("ramp", (1200.0, 2200.0, 0.15), without_count=0.5),
]


@pytest.mark.parametrize("rule", RULES, ids=lambda r: r.name)
def test_bands_cover_every_count_and_give_the_quota_of_their_lower_edge(demos, rule):
    table = table_of(demos["deer"], rule=rule)
    card = table.card
    bands, gap = card.iloc[:-1], card.iloc[-1]
    assert bands["count_from"].iloc[0] == 0.0
    assert np.array_equal(bands["count_below"].iloc[:-1], bands["count_from"].iloc[1:])
    assert np.isnan(bands["count_below"].iloc[-1])
    for _, band in bands.iterrows():
        expected = round_down(float(rule.quota(band["count_from"] / table.count_bias)[0]), "animals")
        assert band["quota"] == expected
    assert bands["quota"].is_monotonic_increasing
    assert bands["quota"].is_unique
    assert np.isnan(gap["count_from"])
    assert np.isnan(gap["quota"])
    assert gap["share_of_last"] == rule.without_count
    assert 4 <= len(bands) <= 25


def test_no_count_within_a_band_would_get_less_than_the_card_gives(demos):
    """A board that follows the card never takes more than the rule at the count itself."""
    rule = RULES[2]
    table = table_of(demos["deer"], rule=rule)
    bands = table.card.iloc[:-1]
    counts = np.linspace(0.0, 6000.0, 1201)
    place = np.searchsorted(bands["count_from"].to_numpy(), counts, side="right") - 1
    assert (bands["quota"].to_numpy()[place] <= rule.quota(counts / table.count_bias) + 1e-9).all()


@pytest.mark.parametrize(("demo", "level"), [("deer", 1200.0), ("geese", 9000.0)])
def test_a_constant_quota_stops_under_the_limit_or_the_ceiling_it_serves(tables, demo, level):
    table = tables[demo]
    quota = table.recommendation.quota
    assert list(table.card["quota"]) == [0.0, quota, quota]
    edge = table.card["count_from"].iloc[1]
    assert edge == table.card["count_below"].iloc[0] == np.ceil(level * table.count_bias)
    assert list(table.card["when"]) == ["count", "count", "no count made"]


@pytest.mark.parametrize(
    ("span", "step"), [(16.0, 1.0), (17.0, 2.0), (33.0, 2.5), (48.0, 3.0), (50.0, 4.0), (1600.0, 100.0), (0.5, 0.04)]
)
def test_steps_are_round(span, step):
    assert nice_step(span) == pytest.approx(step)
